package browsertest

import (
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"
	"time"

	"github.com/chromedp/chromedp"
	"github.com/chromedp/chromedp/kb"

	"brinkfield/physics/study"
)

// caught keeps downloads and copies on the page instead of handing them to the system.
const caught = `
	window.files = {};
	const download = HTMLAnchorElement.prototype.click;
	HTMLAnchorElement.prototype.click = function () {
		if (!this.download) return download.call(this);
		const name = this.download;
		fetchBlob(this.href).then((text) => { window.files[name] = text; });
	};
	const blobs = new Map(), make = URL.createObjectURL;
	URL.createObjectURL = (blob) => { const url = make.call(URL, blob); blobs.set(url, blob); return url; };
	const fetchBlob = (url) => blobs.get(url).text();
	navigator.clipboard.writeText = async (s) => { window.copied = s; };`

// settled waits until the intervals of the shown case are there.
func settled(b *tab) {
	b.t.Helper()
	b.wait(`document.querySelector('main[aria-busy="false"]') && !document.querySelector(".stations .stale")`)
}

// saved clicks Save and returns the case file.
func saved(b *tab, name string) []byte {
	b.t.Helper()
	eval[any](b, `void (window.files = {})`)
	b.click("#save")
	b.wait(`window.files[` + quoted(name) + `]`)
	return []byte(eval[string](b, `window.files[`+quoted(name)+`]`))
}

const demoFile = "Batch-K7-pellet-3.json"

// answered is what the terminal command prints for a link: the same call, natively.
func answered(t testing.TB, link string) []byte {
	in, problems := study.Parse(link)
	if len(problems) > 0 {
		t.Fatal(problems)
	}
	var rn study.Runner
	r, err := rn.Run(context.Background(), in, study.Options{Samples: study.DefaultSamples})
	if err != nil {
		t.Fatal(err)
	}
	data, err := r.JSON()
	if err != nil {
		t.Fatal(err)
	}
	return data
}

// alike compares two case files: every field, texts to the letter, numbers to 1e-9.
func alike(t testing.TB, where string, a, b any) {
	t.Helper()
	switch x := a.(type) {
	case map[string]any:
		y, ok := b.(map[string]any)
		if !ok || len(x) != len(y) {
			t.Errorf("%s: %d fields against %T", where, len(x), b)
			return
		}
		for k := range x {
			alike(t, where+"."+k, x[k], y[k])
		}
	case []any:
		y, ok := b.([]any)
		if !ok || len(x) != len(y) {
			t.Errorf("%s: %d entries against %v", where, len(x), b)
			return
		}
		for i := range x {
			alike(t, fmt.Sprintf("%s[%d]", where, i), x[i], y[i])
		}
	case float64:
		y, ok := b.(float64)
		if !ok || math.Abs(x-y) > 1e-9*math.Max(math.Abs(x), math.Abs(y)) {
			t.Errorf("%s: %.15g against %v", where, x, b)
		}
	default:
		if !reflect.DeepEqual(a, b) {
			t.Errorf("%s: %v against %v", where, a, b)
		}
	}
}

func compare(t testing.TB, what string, a, b []byte) {
	t.Helper()
	var x, y any
	if err := json.Unmarshal(a, &x); err != nil {
		t.Fatalf("%s: %v", what, err)
	}
	if err := json.Unmarshal(b, &y); err != nil {
		t.Fatalf("%s: %v", what, err)
	}
	alike(t, what, x, y)
}

// The page opens on the demo with the findings that the terminal prints.
func TestDemo(t *testing.T) {
	in := study.Defaults()
	var rn study.Runner
	want, err := rn.Run(context.Background(), in, study.Options{Samples: study.DefaultSamples})
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range forms {
		t.Run(f.name, func(t *testing.T) {
			b := open(t, options{kind: f.kind})
			b.wait(`document.querySelectorAll("#findings-text p").length === ` + fmt.Sprint(len(want.Findings)))
			b.waitText("#findings-text", "(95 %: 0.2216 … 0.2218)")
			got := eval[[]string](b, `[...document.querySelectorAll("#findings-text p")].map((p) => p.textContent)`)
			for i, f := range want.Findings {
				if got[i] != strings.ReplaceAll(f, "_", "") {
					t.Errorf("finding %d: %q, natively %q", i+1, got[i], f)
				}
			}
			b.wait(`document.querySelector("#section svg") && document.querySelector("#spectrum svg")`)
			b.quiet()
		})
	}
}

// One file without a network, hosted page and terminal say the same; a link
// copied from one reproduces the other digit for digit.
func TestSameEverywhere(t *testing.T) {
	data, err := os.ReadFile("../../testdata/spectra/barrier-spread.csv")
	if err != nil {
		t.Fatal(err)
	}
	file := open(t, options{kind: single, script: caught})
	file.drop(map[string]string{"spread.csv": string(data)})
	file.waitText("#preview", "425 °C: 61 points")
	file.click("#accept")
	file.waitText("#findings-text", "No barrier is read at")
	file.click("#go-specimen")
	file.fill("#grain", "600 nm")
	file.fill("#grain_pm", "5 %")
	file.fill("#title", "spread")
	settled(file)
	file.click("#copy-link")
	file.wait(`window.copied`)
	_, fragment, _ := strings.Cut(eval[string](file, `window.copied`), "#")
	one := saved(file, "spread.json")

	host := open(t, options{kind: hosted, fragment: fragment, script: caught})
	settled(host)
	two := saved(host, "spread.json")
	if !bytes.Equal(one, two) {
		t.Error("the case saved from the hosted page differs from the one of the single file")
		compare(t, "hosted", one, two)
	}
	compare(t, "terminal", one, answered(t, fragment))
	file.quiet()
	host.quiet()

	// The saved case opens again to the same case.
	again := open(t, options{kind: single, script: caught})
	again.drop(map[string]string{"spread.json": string(one)})
	again.waitText("#message", "spread.json is open")
	settled(again)
	if three := saved(again, "spread.json"); !bytes.Equal(one, three) {
		t.Error("the case changed by saving and opening")
	}
	// And the demo.
	demo := open(t, options{kind: hosted, script: caught})
	settled(demo)
	compare(t, "demo", saved(demo, demoFile), answered(t, ""))
}

// From a file with decimal commas to the barrier, with nothing corrected by hand.
func TestFileToBarrier(t *testing.T) {
	b := open(t, options{kind: single, phone: true})
	path, err := filepath.Abs("../../testdata/spectra/barrier-commas.csv")
	if err != nil {
		t.Fatal(err)
	}
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	b.click("#go-specimen")
	for field, text := range map[string]string{"#grain": "900 nm", "#dopant": "2 %", "#thickness": "0.9 mm"} {
		b.fill(field, text)
	}
	b.drop(map[string]string{"barrier-commas.csv": string(data)})
	for _, part := range []string{"semicolon between columns, decimal comma", "modulus in kΩ", "phase in deg", "temperature in K", "200 °C: 61 points", "rising"} {
		b.waitText("#preview", part)
	}
	b.shot("preview-phone")
	b.click("#accept")
	b.waitText("#findings-text", "Barrier Φ₀ = 0.1961 V")
	b.quiet()
}

// What cannot be used is said at its place; the last good result stays.
func TestBadInput(t *testing.T) {
	b := open(t, options{kind: single})
	settled(b)
	b.click("#go-specimen")
	before := b.text("#findings-text")
	for _, tt := range []struct{ field, text, says string }{
		{"#grain", "350 V", `"V" is not a unit of length`},
		{"#grain", "", "the field is empty"},
		{"#grain", "350", "the unit is missing"},
		{"#dopant", "200 %", "value is out of range"},
		{"#epsr", "thirty", "no number found"},
		{"#grain_pm", "3 V", "expected a 95 % half-width"},
	} {
		b.shownOn(tt.field)
		former := eval[string](b, `document.querySelector(`+quoted(tt.field)+`).value`)
		b.fill(tt.field, tt.text)
		if tt.text == "" {
			b.clear(tt.field)
		}
		b.waitText(strings.TrimSuffix(tt.field, "_pm")+"-why", tt.says)
		if got := b.text("#findings-text"); got != before {
			t.Errorf("%q in %s changed the findings to %q", tt.text, tt.field, got)
		}
		b.wait(`document.querySelector("#specimen .stale")`)
		if b.fill(tt.field, former); former == "" {
			b.clear(tt.field)
		}
		settled(b)
	}
	b.waitText("#findings-text", before)
	rows := "f,Zre,Zim\n" + strings.Repeat("1,2,-3\n", 20001)
	for name, tt := range map[string]struct{ text, says string }{
		"prose.txt":    {"This is a letter\nabout a pellet.\n", "expected"},
		"one.csv":      {"1\n2\n3\n4\n5\n6\n7\n", "expected"},
		"nan.csv":      {"f,Zre,Zim\n" + strings.Repeat("1,NaN,NaN\n", 9), "expected"},
		"negative.csv": {"f,Zre,Zim\n" + strings.Repeat("-1,2,-3\n", 9), "expected"},
		"binary.csv":   {"\x00\x01\x02\x00\xff\xfe\x00PNG\x00\x00", "expected"},
		"long.csv":     {rows, "20000"},
		"empty.csv":    {"", "expected"},
		"case.json":    {`{"program":"something else"}`, "not a case of this program"},
	} {
		b.drop(map[string]string{name: tt.text})
		b.wait(`(document.querySelector("#preview:not([hidden])")?.textContent + document.querySelector("#message").textContent).includes(` + quoted(name) + `)`)
		said := eval[string](b, `document.querySelector("#preview:not([hidden])")?.textContent + document.querySelector("#message").textContent`)
		if !strings.Contains(strings.ReplaceAll(said, ",", ""), tt.says) {
			t.Errorf("%s: said %q, expected %q in it", name, said, tt.says)
		}
		if got := b.text("#findings-text"); got != before {
			t.Errorf("%s changed the findings", name)
		}
		eval[any](b, `document.querySelector("#discard")?.click()`)
	}
	b.quiet()
}

// Arcs, points, holds and roles set by hand, undo, and what is kept in the link.
func TestFitByHand(t *testing.T) {
	b := open(t, options{kind: single})
	settled(b)
	b.click("#go-spectra")
	b.wait(`document.querySelector("#plane svg")`)
	b.waitText("#fit", "boundary")
	b.click("#arcs-2")
	b.wait(`document.querySelectorAll("#fit tbody tr").length === 4`)
	b.wait(`location.hash.includes("arcs=5:2")`)
	b.click("#undo")
	b.wait(`document.querySelectorAll("#fit tbody tr").length === 5`)
	eval[any](b, `(() => { const s = document.querySelector("#hold-name"); s.value = "boundary.n"; s.dispatchEvent(new Event("change", {bubbles: true})); })()`)
	b.fill("#hold-value", "0.98")
	b.click("#hold")
	b.waitText("#fit", "held")
	b.click(".held .tool")
	b.wait(`!document.querySelector("#fit").textContent.includes("held")`)
	// a real click on the point that stands highest in the complex plane
	at := eval[[]float64](b, `(() => {
		document.querySelector("#plane").scrollIntoView();
		const all = [...document.querySelectorAll("#plane svg circle")].map((c) => c.getBoundingClientRect()).sort((a, b) => a.top - b.top);
		return [all[0].left + all[0].width / 2, all[0].top + all[0].height / 2];
	})()`)
	b.do(chromedp.MouseClickXY(at[0], at[1]))
	b.waitText("#omitted", "1 point is left out")
	b.wait(`/omit=5:\d+/.test(location.hash)`)
	b.click("#take-back")
	b.waitText("#omitted", "Click a point")
	// a range of frequency, without a pointer
	b.fill("#below", "1 Hz")
	b.fill("#above", "1,2 MHz")
	b.click("#trim")
	b.waitText("#omitted", "points are left out")
	b.click("#take-back")
	b.waitText("#omitted", "Click a point")
	b.fill("#below", "1 V")
	b.click("#trim")
	b.waitText("#message", "is not a unit of frequency")
	eval[any](b, `(() => { const s = document.querySelector("#role2"); s.value = "boundary"; s.dispatchEvent(new Event("change", {bubbles: true})); })()`)
	b.wait(`[...document.querySelectorAll("#fit tbody tr")][2].textContent.includes("boundary")`)
	b.click("#undo")
	b.wait(`[...document.querySelectorAll("#fit tbody tr")][2].textContent.includes("contact")`)
	b.quiet()
}

// Table, plots and pictures can be kept.
func TestKeep(t *testing.T) {
	b := open(t, options{kind: hosted, script: caught})
	settled(b)
	b.click("#table")
	b.wait(`Object.keys(window.files).some((n) => n.endsWith(".csv"))`)
	if csv := eval[string](b, `window.files["Batch-K7-pellet-3.csv"]`); !strings.Contains(csv, "boundary,\"Barrier, full layer\",Φ₀,573.15,0.2216") {
		t.Errorf("table: %.300s", csv)
	}
	for _, station := range []string{"spectra", "boundary", "profile"} {
		b.click("#go-" + station)
		b.wait(`(() => { const l = [...document.querySelectorAll("#` + station + ` .drawing")]; return l.length > 1 && l.every((d) => d.querySelector("svg")); })()`)
		n := eval[int](b, `document.querySelectorAll("#`+station+` .drawing").length`)
		eval[any](b, `void (window.files = {}, document.querySelectorAll("#`+station+` .drawing-tools .tool:first-child").forEach((k) => k.click()))`)
		b.wait(fmt.Sprintf(`Object.keys(window.files).length === %d`, n))
		if bad := eval[string](b, `Object.entries(window.files).filter(([n, s]) => !s.includes("<svg") || !s.includes("</svg>") || !n.endsWith(".svg")).map(([n]) => n).join()`); bad != "" {
			t.Errorf("%s: not SVG: %s", station, bad)
		}
	}
	b.quiet()
}

// Every edit can be undone and done again, and the address follows.
func TestUndo(t *testing.T) {
	b := open(t, options{kind: hosted})
	settled(b)
	b.click("#go-specimen")
	b.fill("#grain", "500 nm")
	b.wait(`location.hash === "#grain=500+nm"`)
	b.fill("#epsr", "25")
	b.wait(`location.hash === "#epsr=25&grain=500+nm"`)
	b.click("#undo")
	b.wait(`location.hash === "#grain=500+nm" && document.querySelector("#epsr").value === "30"`)
	b.click("#undo")
	b.wait(`document.querySelector("#grain").value === "350 nm"`)
	b.click("#redo")
	b.wait(`location.hash === "#grain=500+nm"`)
	// a blank survives the renders between two keys
	b.fill("#title", "a")
	for _, key := range []string{" ", "b"} {
		b.keys("#title", key)
		time.Sleep(100 * time.Millisecond)
	}
	b.wait(`document.querySelector("#title").value === "a b"`)
	// dragging a name and the arrow keys vary the value
	eval[any](b, `(() => {
		const label = document.querySelector('label[data-drag="grain"]');
		const at = (type, x) => label.dispatchEvent(new PointerEvent(type, {bubbles: true, clientX: x, button: 0}));
		at("pointerdown", 100); at("pointermove", 100 - 160); at("pointerup", 100 - 160);
	})()`)
	b.wait(`document.querySelector("#grain").value === "184 nm"`)
	b.keys("#grain", kb.ArrowUp)
	b.wait(`document.querySelector("#grain").value === "188 nm"`)
	b.quiet()
}
