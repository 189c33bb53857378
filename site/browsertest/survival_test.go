package browsertest

import (
	"strings"
	"testing"
	"time"
)

// watchWorkers lets a test see the workers the page starts.
const watchWorkers = `window.testWorkers = []; window.Worker = class extends window.Worker {
	constructor(...a) { super(...a); testWorkers.push(this); }
	terminate() { this.ended = true; super.terminate(); }
};`

// Whatever breaks is said in the banner, and the page goes on: the counter still counts.
func TestMistakesAreSurvived(t *testing.T) {
	for _, c := range []struct{ button, says string }{
		{"#panic", "in a handler"},
		{"#later", "in a callback"},
		{"#build", "while building"},
		{"#long", "too long (20000 bytes)"},
		{"#name", "not a valid attribute name"},
	} {
		t.Run(strings.Trim(c.button, "#"), func(t *testing.T) {
			b := open(t, options{kind: single, faulty: true})
			b.keys("#field", "kept")
			b.click(c.button)
			b.waitText("#banner", c.says)
			if !eval[bool](b, `getComputedStyle(document.getElementById("banner")).display !== "none"`) {
				t.Error("the banner is not to be seen")
			}
			b.click("#banner button")
			b.forgive()
			count := eval[int](b, `Number(document.getElementById("count").textContent)`)
			b.click("#up")
			b.click("#up")
			b.wait(`Number(document.getElementById("count").textContent) >= ` + string(rune('0'+count+2)))
			if got := eval[string](b, `document.getElementById("field").value`); got != "kept" {
				t.Errorf("field %q, expected what was typed before", got)
			}
			b.quiet()
		})
	}
}

// When the program ends all the same, the inputs are in the address bar and one
// click brings them back.
func TestProgramEnds(t *testing.T) {
	for _, f := range forms {
		t.Run(f.name, func(t *testing.T) {
			b := open(t, options{kind: f.kind, faulty: true})
			b.keys("#field", "dopant")
			b.click("#end") // well before the address bar's pause is over
			b.waitText("#banner", "panic: the end")
			b.wait(`location.hash === "#t=dopant"`)
			b.click("#banner button")
			b.wait(`performance.getEntriesByName("brinkfield-shown").length > 0 && document.getElementById("field")?.value === "t=dopant"`)
		})
	}
}

// Events fired while the program is busy would deadlock it.
func TestEventsWhileBusy(t *testing.T) {
	b := open(t, options{kind: single, faulty: true})
	b.click("#jump")
	b.waitText("#heard", "focused")
	b.keys("#leaving", "x") // its key handler removes it, which fires blur while rendering
	b.wait(`!document.getElementById("leaving")`)
	b.click("#up")
	b.waitText("#count", "1001")
	// Straight from JavaScript, inside a handler of the program's own.
	eval[any](b, `document.getElementById("up").addEventListener("click", () => document.getElementById("field").focus(), {once: true})`)
	b.click("#up")
	b.waitText("#count", "1002")
	// An event for a handler that is gone.
	eval[any](b, `(() => { const up = document.getElementById("up"); const old = up.cloneNode(true); up.replaceWith(old); up.click(); })()`)
	b.click("#jump")
	b.quiet()
}

func TestEngine(t *testing.T) {
	for _, f := range forms {
		t.Run(f.name, func(t *testing.T) {
			b := open(t, options{kind: f.kind, faulty: true, script: watchWorkers})
			b.keys("#field", "0.1 V")
			b.click("#call")
			b.waitText("#heard", "echo 0.1 V")
			b.click("#unknown")
			b.waitText("#heard", "unknown task (no/such/task)")
			b.quiet()
			b.click("#inside")
			b.waitText("#heard", "inside a task")
			if n := eval[int](b, `testWorkers.length`); n != 1 {
				t.Errorf("%d workers, expected one that lives on", n)
			}
			b.click("#crash")
			b.waitText("#heard", "panic: in a goroutine nobody recovers")
			b.click("#call")
			b.waitText("#heard", "echo 0.1 V")
			b.forgive() // the crash wrote to the console
			eval[any](b, `testWorkers.at(-1).postMessage({kind: "call", id: "no number"})`)
			b.wait(`testWorkers.length === 3`) // found dead, replaced
			b.click("#unknown")
			b.waitText("#heard", "unknown task")
			if eval[bool](b, `!document.getElementById("banner").hidden`) {
				t.Errorf("banner: %s", b.text("#banner"))
			}
		})
	}
}

func TestEngineCancel(t *testing.T) {
	b := open(t, options{kind: single, faulty: true, script: watchWorkers})
	b.click("#polite")
	b.waitText("#heard", "halfway")
	b.click("#cancel")
	time.Sleep(500 * time.Millisecond)
	if n := eval[int](b, `testWorkers.filter((w) => w.ended).length`); n != 0 {
		t.Errorf("%d workers ended for a task that can be cancelled", n)
	}
	b.click("#deaf")
	time.Sleep(100 * time.Millisecond)
	b.click("#cancel")
	b.waitText("#heard", "cancelled")
	b.wait(`testWorkers.filter((w) => w.ended).length === 1`)
	b.click("#call")
	b.waitText("#heard", "echo")
	b.quiet()
}
