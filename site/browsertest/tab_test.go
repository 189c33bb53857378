package browsertest

import (
	"context"
	"encoding/json"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"time"

	"github.com/chromedp/cdproto/cdp"
	"github.com/chromedp/cdproto/page"
	"github.com/chromedp/chromedp"
)

// do runs browser actions; a failure ends the test.
func (b *tab) do(steps ...chromedp.Action[chromedp.Void]) {
	b.t.Helper()
	ctx, end := context.WithTimeout(b.ctx, patience)
	defer end()
	if err := chromedp.Do(ctx, steps...); err != nil {
		b.t.Fatalf("%v; problems so far: %q", err, b.found())
	}
}

// call sends one command of the browser's protocol.
func call[P, R any](b *tab, cmd cdp.Command[P, R], params P) R {
	b.t.Helper()
	r, err := chromedp.Call(b.ctx, cmd, params)
	if err != nil {
		b.t.Fatal(err)
	}
	return r
}

// eval evaluates JavaScript; promises are awaited.
func eval[T any](b *tab, script string) T {
	b.t.Helper()
	ctx, end := context.WithTimeout(b.ctx, patience)
	defer end()
	v, err := chromedp.Run(ctx, chromedp.Evaluate[T](script, chromedp.EvalAwaitPromise))
	if err != nil {
		b.t.Fatalf("%s: %v; problems so far: %q", script, err, b.found())
	}
	return v
}

// wait waits until a JavaScript expression is true, also across a reload.
func (b *tab) wait(expression string) {
	b.t.Helper()
	ctx, end := context.WithTimeout(b.ctx, patience)
	defer end()
	ask := chromedp.Evaluate[bool]("Promise.resolve("+expression+").then(Boolean)", chromedp.EvalAwaitPromise)
	var yes bool
	var err error
	for ctx.Err() == nil {
		if yes, err = chromedp.Run(ctx, ask); yes && err == nil {
			return
		}
		time.Sleep(20 * time.Millisecond)
	}
	b.t.Fatalf("%s did not come true (%v); the page says %q; problems: %q", expression, err, b.body(), b.found())
}

func (b *tab) body() string {
	v, _ := chromedp.Run(b.ctx, chromedp.Evaluate[string](`document.body.innerText.slice(0, 600)`))
	return v
}

// waitText waits until the element's text contains part.
func (b *tab) waitText(selector, part string) {
	b.t.Helper()
	b.wait("document.querySelector(" + quoted(selector) + ")?.textContent.includes(" + quoted(part) + ")")
}

// text is the text of the first element.
func (b *tab) text(selector string) string {
	b.t.Helper()
	return eval[string](b, "document.querySelector("+quoted(selector)+").textContent")
}

// click clicks with the mouse.
func (b *tab) click(selector string) { b.t.Helper(); b.do(chromedp.Click(chromedp.CSS(selector))) }

// keys types into an element, key by key.
func (b *tab) keys(selector, text string) {
	b.t.Helper()
	b.do(chromedp.SendKeys(chromedp.CSS(selector), text))
}

// fill replaces the text of a field, as a person does: select all, type, leave with Tab.
func (b *tab) fill(selector, text string) {
	b.t.Helper()
	b.shownOn(selector)
	b.do(chromedp.Focus(chromedp.CSS(selector)))
	eval[any](b, "document.querySelector("+quoted(selector)+").select()")
	b.do(chromedp.KeyEvent(text), chromedp.KeyEvent("\t"))
}

// shownOn waits until an element stands on the page for a person to see.
func (b *tab) shownOn(selector string) {
	b.t.Helper()
	b.wait("document.querySelector(" + quoted(selector) + ")?.offsetParent")
}

// clear empties a field.
func (b *tab) clear(selector string) {
	b.t.Helper()
	b.shownOn(selector)
	b.do(chromedp.Focus(chromedp.CSS(selector)))
	eval[any](b, "document.querySelector("+quoted(selector)+").select()")
	b.do(chromedp.KeyEvent("\b"))
}

// upload clicks a control that opens the file dialogue and chooses files there.
func (b *tab) upload(selector string, files ...string) {
	b.t.Helper()
	call(b, page.SetInterceptFileChooserDialog, page.SetInterceptFileChooserDialogParams{Enabled: true})
	b.click(selector)
	b.do(chromedp.SetUploadFiles(chromedp.CSS("input.file-picker"), files))
}

// drop drops files on the page; content is by name.
func (b *tab) drop(content map[string]string) {
	b.t.Helper()
	b.transfer("drop", content)
}

func (b *tab) transfer(what string, content map[string]string) {
	list, _ := json.Marshal(content)
	eval[any](b, `(() => {
		const d = new DataTransfer();
		for (const [name, text] of Object.entries(`+string(list)+`)) d.items.add(new File([text], name));
		for (const type of `+quoted(what)+` === "drop" ? ["dragenter", "dragover", "drop"] : [`+quoted(what)+`])
			document.body.dispatchEvent(new DragEvent(type, {bubbles: true, cancelable: true, dataTransfer: d}));
	})()`)
}

// paste pastes text on the element, or on the page for "body".
func (b *tab) paste(selector, text string) {
	b.t.Helper()
	eval[any](b, `(() => {
		const d = new DataTransfer();
		d.setData("text/plain", `+quoted(text)+`);
		document.querySelector(`+quoted(selector)+`).dispatchEvent(new ClipboardEvent("paste", {bubbles: true, cancelable: true, clipboardData: d}));
	})()`)
}

// shot takes a screenshot of the window into BRINKFIELD_SHOTS, if that is set.
func (b *tab) shot(name string) {
	b.t.Helper()
	dir := os.Getenv("BRINKFIELD_SHOTS")
	if dir == "" {
		return
	}
	image, err := chromedp.Run(b.ctx, chromedp.CaptureScreenshot())
	if err != nil {
		b.t.Fatal(err)
	}
	if err := os.MkdirAll(dir, 0o755); err != nil {
		b.t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(dir, name+".png"), image, 0o644); err != nil {
		b.t.Fatal(err)
	}
}

// found returns the console's warnings and errors and the exceptions so far.
func (b *tab) found() []string {
	b.mu.Lock()
	defer b.mu.Unlock()
	return slices.Clone(b.problems)
}

// forgive forgets the problems so far; a test that made them on purpose looks at them first.
func (b *tab) forgive() {
	b.mu.Lock()
	defer b.mu.Unlock()
	b.problems = nil
}

// quiet fails the test if the console complained or anything was requested after the load.
func (b *tab) quiet() {
	b.t.Helper()
	for _, p := range b.found() {
		b.t.Errorf("problem: %s", p)
	}
	b.mu.Lock()
	defer b.mu.Unlock()
	for _, r := range b.requests {
		if !strings.HasPrefix(r, "blob:") && !strings.HasPrefix(r, "data:") { // made and read inside the page
			b.t.Errorf("request after the load: %s", r)
		}
	}
}

func quoted(s string) string {
	b, err := json.Marshal(s)
	if err != nil {
		panic(err)
	}
	return string(b)
}
