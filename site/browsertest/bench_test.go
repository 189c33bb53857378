package browsertest

import (
	"fmt"
	"slices"
	"testing"

	"github.com/chromedp/chromedp"
)

// firstAnswer marks the moment the engine first answers.
const firstAnswer = `window.Worker = class extends window.Worker {
	constructor(...a) {
		super(...a);
		this.addEventListener("message", ({data}) => { if (data.kind === "done") performance.mark("test-answer"); });
	}
};`

// BenchmarkStart is the time from opening the page to its first render and to the
// engine's first answer, in a profile that has never seen it.
func BenchmarkStart(b *testing.B) {
	for _, f := range forms {
		b.Run(f.name, func(b *testing.B) {
			var started, shown, answered []float64
			for b.Loop() {
				tab := open(b, options{kind: f.kind, script: firstAnswer})
				tab.wait(`performance.getEntriesByName("test-answer").length > 0`)
				started = append(started, eval[float64](tab, `performance.getEntriesByName("brinkfield-start")[0].startTime`))
				shown = append(shown, eval[float64](tab, `performance.getEntriesByName("brinkfield-shown")[0].startTime`))
				answered = append(answered, eval[float64](tab, `performance.getEntriesByName("test-answer")[0].startTime`))
				_ = chromedp.Cancel(tab.ctx)
			}
			b.ReportMetric(median(started), "ms-compiled")
			b.ReportMetric(median(shown), "ms-shown")
			b.ReportMetric(median(answered), "ms-answered")
			b.ReportMetric(0, "ns/op")
		})
	}
}

// BenchmarkLoop is what the loop itself costs: a key in a field to the address
// written and the page rendered, on a page that calculates nothing.
func BenchmarkLoop(b *testing.B) {
	tab := open(b, options{kind: single, faulty: true})
	var times []float64
	for b.Loop() {
		times = append(times, redraw(tab, "#up", "", "#count"))
	}
	b.ReportMetric(median(times), "ms-redraw")
	b.ReportMetric(0, "ns/op")
}

// BenchmarkEdit is an edit of the demo case, from the typed text to the change on
// the page, per station.
func BenchmarkEdit(b *testing.B) {
	for _, e := range []struct{ station, fragment, field, text, result string }{
		{"specimen", "", "#grain", "%d nm", "#section"},
		{"boundary", "", "#core_sites", "%de15 m-2", `[data-number="core_occupancy"]`},
		{"profile", "barrier=potential", "#potential", "%d mV", "#section"},
	} {
		b.Run(e.station, func(b *testing.B) {
			tab := open(b, options{kind: single, fragment: e.fragment})
			settled(tab)
			tab.click("#go-" + e.station)
			tab.shownOn(e.field)
			var times []float64
			for i := 0; b.Loop(); i++ {
				times = append(times, redraw(tab, e.field, fmt.Sprintf(e.text, 351+i%9), e.result))
			}
			b.ReportMetric(median(times), "ms-redraw")
			b.ReportMetric(0, "ns/op")
		})
	}
}

// BenchmarkEngine runs the calculation in the browser's own engine: one layer with
// all its results, and the fit of the demo's seven spectra with their test.
func BenchmarkEngine(b *testing.B) {
	for _, task := range []string{"solve", "fit", "intervals"} {
		b.Run(task, func(b *testing.B) {
			tab := open(b, options{kind: single, faulty: true})
			var times []float64
			for i := 0; b.Loop(); i++ {
				tab.fill("#field", "bench/"+task)
				tab.click("#task")
				tab.waitText("#heard", fmt.Sprintf("bench/%s %d:", task, i+1))
				times = append(times, eval[float64](tab, `Number(document.getElementById("heard").textContent.split(":")[1])`))
			}
			b.ReportMetric(median(times)*1000, "ns/op")
			b.ReportMetric(median(times)/1000, "ms-in-engine")
		})
	}
}

// redraw puts value into a field (or clicks, for an empty value) and returns the
// milliseconds until the text under result changes on the page.
func redraw(tab *tab, field, value, result string) float64 {
	return eval[float64](tab, `new Promise((done, fail) => {
		const field = document.querySelector(`+quoted(field)+`), value = `+quoted(value)+`;
		let start = 0;
		const see = new MutationObserver(() => { see.disconnect(); done(performance.now() - start); });
		setTimeout(() => fail(new Error("no change within 10 s")), 10000);
		requestAnimationFrame(() => {
			// looked at from the edit on: what an earlier one still changes does not count
			see.observe(document.querySelector(`+quoted(result)+`), {subtree: true, childList: true, characterData: true});
			start = performance.now();
			if (value === "") { field.click(); return; }
			field.value = value;
			field.dispatchEvent(new Event("input", {bubbles: true}));
			field.dispatchEvent(new Event("change", {bubbles: true}));
		});
	})`)
}

func median(list []float64) float64 {
	s := slices.Clone(list)
	slices.Sort(s)
	return s[len(s)/2]
}
