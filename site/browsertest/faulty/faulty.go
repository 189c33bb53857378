// Command faulty is a page of mistakes: every way a program on this page is known
// to break, behind a button. The browser tests run it through the same loop,
// guards and packaging as the real page and look that the page survives.
package main

import (
	"context"
	"errors"
	"fmt"
	"strings"
	"time"

	"github.com/vugu/vugu"

	"brinkfield/wasm/browser"
	"brinkfield/wasm/engine"
	"brinkfield/wasm/page"
)

func init() {
	engine.Register("faulty/echo", func(_ context.Context, in []byte, progress func(float64, string)) ([]byte, error) {
		progress(1, "done")
		return append([]byte("echo "), in...), nil
	})
	engine.Register("faulty/panic", func(context.Context, []byte, func(float64, string)) ([]byte, error) {
		panic("inside a task")
	})
	engine.Register("faulty/crash", func(context.Context, []byte, func(float64, string)) ([]byte, error) {
		go panic("in a goroutine nobody recovers")
		select {}
	})
	engine.Register("faulty/deaf", func(context.Context, []byte, func(float64, string)) ([]byte, error) {
		for {
			time.Now()
		}
	})
	engine.Register("faulty/polite", func(ctx context.Context, _ []byte, progress func(float64, string)) ([]byte, error) {
		for i := 0; ctx.Err() == nil; i++ {
			progress(0.5, "halfway")
		}
		return nil, ctx.Err()
	})
}

// Faulty is the root of the page of mistakes.
type Faulty struct {
	Count  int
	Heard  string
	Text   string
	Long   string
	host   page.Host
	engine *browser.Engine
	cancel func()

	breakBuild, misname bool
}

// NewRoot wires everything the page can be told.
func NewRoot(h page.Host) vugu.Builder {
	c := &Faulty{host: h, engine: h.NewEngine(), Text: h.Fragment(), cancel: func() {}}
	h.OnFragment(func(s string) { c.Text = s })
	h.OnFiles(c.files, func(s string) { c.Heard = "text " + s })
	h.OnPlotPick(func(p browser.Pick) {
		c.Heard = fmt.Sprintf("pick %s %s %d %g %v", p.Plot, p.Series, p.Index, p.X, p.Shift)
	})
	h.OnEnvironment(func() { c.Heard = h.Theme() + " " + string(h.Offline()) })
	return c
}

// BeforeBuild breaks the build when asked to.
func (c *Faulty) BeforeBuild() {
	if c.breakBuild {
		c.breakBuild = false
		panic(errors.New("while building"))
	}
}

func (c *Faulty) Up()         { c.Count++ }
func (c *Faulty) Panic()      { panic("in a handler") }
func (c *Faulty) Later()      { c.host.AfterRender(func() { panic("in a callback") }) }
func (c *Faulty) BreakBuild() { c.breakBuild = true; c.Count++ }
func (c *Faulty) Lengthen()   { c.Long = strings.Repeat("x", 20_000); c.Count++ }
func (c *Faulty) Misname()    { c.misname = true; c.Count++ }
func (c *Faulty) End()        { go panic("the end") }
func (c *Faulty) Jump()       { c.host.Focus("field"); c.Count++ }
func (c *Faulty) Focused()    { c.Heard = "focused" }
func (c *Faulty) Leave()      { c.Count = 1000 }

// Odd is an attribute with a name no browser accepts, once.
func (c *Faulty) Odd() vugu.VGAttributeListerFunc {
	return func() []vugu.VGAttribute {
		if !c.misname {
			return nil
		}
		c.misname = false
		return []vugu.VGAttribute{{Key: "1 <", Val: "x"}}
	}
}

// Edit takes what is typed into the field to the address bar.
func (c *Faulty) Edit(e vugu.DOMEvent) {
	c.Text = e.PropString("target", "value")
	c.host.ReplaceFragment("t=" + c.Text)
}

// Call runs a task and shows what comes back.
func (c *Faulty) Call(task string) {
	c.cancel = c.engine.Call(task, []byte(c.Text),
		func(_ float64, what string) { c.Heard = what },
		func(b []byte, err error) {
			c.Heard = string(b)
			if err != nil {
				c.Heard = err.Error()
			}
		})
}

func (c *Faulty) Cancel() { c.cancel(); c.Heard = "cancelled" }
func (c *Faulty) Pick()   { c.host.PickFiles(".csv,.txt", true, c.files) }
func (c *Faulty) Save()   { c.host.Download("case.json", "application/json", []byte(`{"a":1}`)) }

// Copy puts the page's address on the clipboard.
func (c *Faulty) Copy() {
	c.host.CopyText(c.host.Address()+"#"+c.Text, func(err error) { c.Heard = fmt.Sprint("copied ", err) })
}

// Draw draws the smallest chart.
func (c *Faulty) Draw() {
	c.host.DrawPlot("plot", "chart", []byte(`{"title":"a chart","height":200,"x":{"label":"x","unit":"m","scale":"linear"},"y":{"label":"y","unit":"s","scale":"linear"},
		"series":[{"name":"a","role":"measured","mark":"points","x":[1,2,3],"y":[1,4,9]}]}`))
}

func (c *Faulty) files(list []browser.File) {
	c.Heard = "files"
	for _, f := range list {
		if f.Err != nil {
			c.Heard += " [" + f.Err.Error() + "]"
			continue
		}
		c.Heard += fmt.Sprintf(" %s:%d", f.Name, len(f.Data))
	}
}
