package browser

import (
	"encoding/json"
	"errors"
	"fmt"
	"syscall/js"
)

// Browser is the one the page runs in.
type Browser struct {
	loop     Loop
	fragment string
	plots    map[string]plot // drawings to bring on the page after the next render
	rendered []func()
}

type plot struct {
	kind string
	spec js.Value
}

// New returns the browser; its callbacks go through loop.
func New(loop Loop) *Browser {
	return &Browser{loop: loop, fragment: glue().Call("startFragment").String(), plots: map[string]plot{}}
}

func glue() js.Value { return js.Global().Get("brinkfield") }

// text is a string of JavaScript, or "" for anything else.
func text(v js.Value) string {
	if v.Type() != js.TypeString {
		return ""
	}
	return v.String()
}

func bytesOf(array js.Value) []byte {
	b := make([]byte, array.Length())
	js.CopyBytesToGo(b, array)
	return b
}

func arrayOf(b []byte) js.Value {
	array := js.Global().Get("Uint8Array").New(len(b))
	js.CopyBytesToJS(array, b)
	return array
}

// Fragment is what the page was opened with behind "#", still percent-encoded.
// Parameters behind "?" have been moved in front of it.
func (b *Browser) Fragment() string { return b.fragment }

// ReplaceFragment writes the address bar's part behind "#" once edits pause for a
// third of a second (Chromium silently drops rapid changes). The text must be
// percent-encoded already.
func (b *Browser) ReplaceFragment(s string) { glue().Call("replaceFragment", s) }

// OnFragment is told when a person pastes another link into this tab.
func (b *Browser) OnFragment(f func(fragment string)) {
	glue().Call("onFragment", js.FuncOf(func(_ js.Value, args []js.Value) any {
		s := args[0].String()
		b.loop(func() { f(s) })
		return nil
	}))
}

// Address is the page's own address without parameters, for links to it.
func (b *Browser) Address() string {
	l := js.Global().Get("location")
	if origin := l.Get("origin").String(); origin != "null" && l.Get("protocol").String() != "file:" {
		return origin + l.Get("pathname").String()
	}
	return l.Get("protocol").String() + "//" + l.Get("host").String() + l.Get("pathname").String()
}

// PickFiles opens the browser's file dialogue. It must be called from a handler
// of a click or key. accept is a list like ".csv,.txt,text/plain".
func (b *Browser) PickFiles(accept string, multiple bool, f func([]File)) {
	glue().Call("pick", accept, multiple, b.filesFunc(f))
}

// OnFiles is told about files dropped anywhere on the page or pasted outside of
// its fields, onText about pasted text. While files hang over the page, <html>
// carries the class "dropping".
func (b *Browser) OnFiles(onFiles func([]File), onText func(string)) {
	glue().Call("listenFiles", b.filesFunc(onFiles), js.FuncOf(func(_ js.Value, args []js.Value) any {
		s := args[0].String()
		b.loop(func() { onText(s) })
		return nil
	}))
}

func (b *Browser) filesFunc(f func([]File)) js.Func {
	return js.FuncOf(func(_ js.Value, args []js.Value) any {
		files := make([]File, args[0].Length())
		for i := range files {
			files[i] = fileOf(args[0].Index(i))
		}
		b.loop(func() { f(files) })
		return nil
	})
}

func fileOf(v js.Value) File {
	f := File{Name: v.Get("name").String()}
	if reason := text(v.Get("error")); reason != "" {
		f.Err = fmt.Errorf("%s: %s", f.Name, reason)
		return f
	}
	f.Data = bytesOf(v.Get("data"))
	return f
}

// Download offers data as a file.
func (b *Browser) Download(name, mime string, data []byte) {
	glue().Call("download", name, mime, arrayOf(data))
}

// CopyText puts text on the clipboard. f (may be nil) gets nil or the reason it failed.
func (b *Browser) CopyText(s string, f func(error)) {
	var done js.Func
	done = js.FuncOf(func(_ js.Value, args []js.Value) any {
		reason := args[0].String()
		if f != nil {
			b.loop(func() {
				if reason == "" {
					f(nil)
				} else {
					f(errors.New("clipboard: " + reason))
				}
			})
		}
		done.Release()
		return nil
	})
	glue().Call("copyText", s, done)
}

// Print opens the print dialogue after the next render.
func (b *Browser) Print() {
	b.AfterRender(func() { js.Global().Call("setTimeout", js.Global().Get("print").Call("bind", js.Global()), 50) })
}

// Theme is "light" or "dark".
func (b *Browser) Theme() string { return glue().Call("theme").String() }

// SetTheme takes "light", "dark", or "" for the system's. The choice is kept where
// the browser allows it.
func (b *Browser) SetTheme(name string) { glue().Call("setTheme", name) }

// Offline tells whether the page would open again without a network.
func (b *Browser) Offline() Offline { return Offline(glue().Call("offlineState").String()) }

// OnEnvironment is told when the theme or the offline state changes.
func (b *Browser) OnEnvironment(f func()) {
	changed := js.FuncOf(func(js.Value, []js.Value) any {
		b.loop(f)
		return nil
	})
	glue().Call("onTheme", changed)
	glue().Call("onOffline", changed)
}

// Focus moves the focus to an element by id, after the next render.
func (b *Browser) Focus(id string) {
	b.AfterRender(func() { glue().Call("focusSoon", id, false) })
}

// FocusAndSelect is Focus with the field's text selected.
func (b *Browser) FocusAndSelect(id string) {
	b.AfterRender(func() { glue().Call("focusSoon", id, true) })
}

// Reveal brings an element of a row that scrolls sideways into view, after the next render.
func (b *Browser) Reveal(id string) {
	b.AfterRender(func() { glue().Call("reveal", id) })
}

// Report shows a mistake of the program in the banner; the page goes on.
func (b *Browser) Report(message string) { glue().Call("report", message) }

// DrawPlot draws a plot in the element of that id, after the next render, or after
// the one that brings the element. The element must have no children of its own in
// the markup. Only the last drawing for an id before the render counts. The drawing
// stays through later renders; call again only when it changes.
func (b *Browser) DrawPlot(id, kind string, specJSON []byte) {
	b.plots[id] = plot{kind, arrayOf(specJSON)}
}

// SavePlot downloads a drawn plot; format is "svg" or "png".
func (b *Browser) SavePlot(id, format, filename string) {
	glue().Call("savePlot", id, format, filename)
}

// OnPlotPick is told when a person clicks on a point of a plot.
func (b *Browser) OnPlotPick(f func(Pick)) {
	glue().Call("listenPicks", js.FuncOf(func(_ js.Value, args []js.Value) any {
		p := Pick{Plot: args[0].String()}
		if err := json.Unmarshal([]byte(args[1].String()), &p); err != nil {
			b.Report("plot " + p.Plot + ": " + err.Error())
			return nil
		}
		b.loop(func() { f(p) })
		return nil
	}))
}

// AfterRender runs f once, when the next render is on the page. A render is not
// asked for: in a handler or a callback one follows anyway.
func (b *Browser) AfterRender(f func()) { b.rendered = append(b.rendered, f) }

// Rendered is called by the page's loop after each render.
func (b *Browser) Rendered() {
	glue().Call("keepDrawings")
	for id, p := range b.plots {
		if glue().Call("draw", id, p.kind, p.spec).Bool() {
			delete(b.plots, id)
		}
	}
	queue := b.rendered
	b.rendered = nil
	for _, f := range queue {
		f()
	}
}

// Licences is the text of the licences of everything inside the page.
func (b *Browser) Licences() string {
	return js.Global().Get("document").Call("getElementById", "licences").Get("textContent").String()
}
