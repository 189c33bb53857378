package browsertest

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func TestAddressBar(t *testing.T) {
	for _, f := range forms {
		t.Run(f.name, func(t *testing.T) {
			b := open(t, options{kind: f.kind, faulty: true, fragment: "b=2%C2%B0", path: "?a=1"})
			want := "b=2%C2%B0"
			if f.kind == hosted {
				want = "a=1&b=2%C2%B0"
			}
			if got := eval[string](b, `location.search + location.hash`); got != "#"+want {
				t.Errorf("address ends in %q, expected %q", got, "#"+want)
			}
			if got := eval[string](b, `document.getElementById("field").value`); got != want {
				t.Errorf("program got %q, expected %q", got, want)
			}
			length := eval[int](b, `history.length`)
			b.fill("#field", "many letters one after another")
			b.wait(`location.hash === "#t=many%20letters%20one%20after%20another"`)
			if n := eval[int](b, `history.length`); n != length {
				t.Errorf("history grew from %d to %d", length, n)
			}
			eval[any](b, `location.hash = "#pasted"`)
			b.wait(`document.getElementById("field").value === "pasted"`)
			b.quiet()
		})
	}
}

// A file's address with a search part is read, though not every browser lets it be removed.
func TestSearchOfFile(t *testing.T) {
	b := open(t, options{kind: single, faulty: true})
	b.navigate("file://" + filepath.Join(dist(t, true), "brinkfield.html") + "?x=3")
	if got := eval[string](b, `document.getElementById("field").value + location.hash`); got != "x=3#x=3" {
		t.Errorf("got %q", got)
	}
	b.quiet()
}

func TestFilesIn(t *testing.T) {
	b := open(t, options{kind: single, faulty: true})
	b.drop(map[string]string{"a.csv": "f,re,im\n1,2,3"})
	b.waitText("#heard", "files a.csv:13")
	if eval[bool](b, `document.documentElement.classList.contains("dropping")`) {
		t.Error("still marked as dropping")
	}
	eval[any](b, `(() => { const d = new DataTransfer(); d.items.add(new File(["x"], "x"));
		document.body.dispatchEvent(new DragEvent("dragenter", {bubbles: true, dataTransfer: d})); })()`)
	b.wait(`document.documentElement.classList.contains("dropping")`)
	b.paste("body", "1 2 3")
	b.waitText("#heard", "text 1 2 3")
	b.paste("#field", "into the field only")
	b.click("#up")
	b.waitText("#count", "1")
	if got := b.text("#heard"); got != "text 1 2 3" {
		t.Errorf("heard %q of a paste into a field", got)
	}
	dir := t.TempDir()
	small, large := filepath.Join(dir, "small.txt"), filepath.Join(dir, "large.csv")
	for name, size := range map[string]int64{small: 5, large: 65 << 20} {
		file, err := os.Create(name)
		if err != nil {
			t.Fatal(err)
		}
		if err := file.Truncate(size); err != nil {
			t.Fatal(err)
		}
		file.Close()
	}
	b.upload("#pick", small, large)
	b.waitText("#heard", "small.txt:5")
	if got := b.text("#heard"); !strings.Contains(got, "[large.csv: file is too large (65 MB), expected at most 64 MB]") {
		t.Errorf("heard %q", got)
	}
	b.quiet()
}

func TestOut(t *testing.T) {
	for _, f := range forms {
		t.Run(f.name, func(t *testing.T) {
			// Downloads and the clipboard are caught on their way to the system.
			b := open(t, options{kind: f.kind, faulty: true, script: `
				HTMLAnchorElement.prototype.click = function () { window.saved = [this.download, this.href]; };
				navigator.clipboard.writeText = async (s) => { window.copied = s; };`})
			b.click("#save")
			b.wait(`window.saved`)
			if got := eval[string](b, `saved[0]`); got != "case.json" || !strings.HasPrefix(eval[string](b, `saved[1]`), "blob:") {
				t.Errorf("saved %q", got)
			}
			b.keys("#field", "T=1")
			b.click("#copy")
			b.waitText("#heard", "copied <nil>")
			if got := eval[string](b, `copied === location.href.split("#")[0] + "#T=1" ? "" : copied`); got != "" {
				t.Errorf("copied %q", got)
			}
		})
	}
}

// Copying falls back to the old way where the clipboard is closed.
func TestCopyWithoutRights(t *testing.T) {
	b := open(t, options{kind: single, faulty: true, script: `navigator.clipboard.writeText = async () => { throw new Error("no"); };`})
	b.click("#copy")
	b.waitText("#heard", "copied <nil>")
}

func TestTheme(t *testing.T) {
	b := open(t, options{kind: hosted, faulty: true})
	eval[any](b, `brinkfield.setTheme("dark")`)
	b.waitText("#heard", "dark")
	b.navigate(b.server.address)
	if got := eval[string](b, `document.documentElement.dataset.theme`); got != "dark" {
		t.Errorf("theme %q after coming back, expected the one chosen", got)
	}
	// Storage may be closed.
	c := open(t, options{kind: hosted, faulty: true, script: `Object.defineProperty(window, "localStorage", {get() { throw new Error("closed"); }});`})
	eval[any](c, `brinkfield.setTheme("dark")`)
	c.waitText("#heard", "dark")
	c.quiet()
}

func TestPlots(t *testing.T) {
	b := open(t, options{kind: single, faulty: true, script: `HTMLAnchorElement.prototype.click = function () { window.saved = [this.download]; };`})
	b.click("#draw")
	b.wait(`document.querySelector("#plot svg")`)
	eval[any](b, `void (window.before = document.querySelector("#plot svg"))`)
	for _, count := range []string{"1", "2"} { // vugu empties the element at each render
		b.click("#up")
		b.waitText("#count", count)
	}
	if !eval[bool](b, `window.before === document.querySelector("#plot .plot-chart svg")`) {
		t.Error("the drawing did not stay through a render that did not concern it")
	}
	for _, format := range []string{"svg", "png"} {
		eval[any](b, `brinkfield.savePlot("plot", "`+format+`", "x.`+format+`")`)
		b.wait(`window.saved?.[0] === "x.` + format + `"`)
	}
	eval[any](b, `document.querySelector("#plot > div").dispatchEvent(new CustomEvent("plotpick", {detail: {series: "a", index: 2, x: 0.5, y: 1, shift: true}}))`)
	b.waitText("#heard", "pick plot a 2 0.5 true")
	b.quiet() // also: no style the policy refuses
}

// Everything shipped is listed, also inside the single file.
func TestLicences(t *testing.T) {
	text, err := os.ReadFile(filepath.Join(dist(t, false), "licences.txt"))
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"The Go programming language", "github.com/vugu/vugu v0.4.0", "@observablehq/plot 0.6.17", "d3-scale"} {
		if !strings.Contains(string(text), want) {
			t.Errorf("licences.txt lacks %s", want)
		}
	}
	b := open(t, options{kind: single})
	if got := eval[string](b, `document.getElementById("licences").textContent`); !strings.Contains(got, "github.com/vugu/vugu") {
		t.Errorf("the single file lacks the licences")
	}
}
