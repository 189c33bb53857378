package page

import (
	"context"
	"fmt"
	"strconv"
	"strings"
	"time"

	"brinkfield/physics/study"
	"brinkfield/wasm/browser"
	"brinkfield/wasm/engine"
)

// App is the state of the page: what is typed, what was understood of it, and
// the last good result. Components read it and call its methods; it holds no
// formula.
type App struct {
	Host Host

	Typed    study.Inputs                // as typed, perhaps not usable
	Read     map[string]study.Understood // of the fields that can be read
	Problems study.Problems
	Result   *study.Result // the last good one; nil before the first
	Station  string        // the station that is open
	Message  string        // of the banner
	Good     bool          // the message is good news
	Work     Work
	Preview  *Preview
	Pasted   string // in the field for pasted spectra
	Printing bool

	open     map[string]bool // derived numbers that are opened
	history  history
	runner   study.Runner
	calc     *superseding
	settled  []func()          // wait for the intervals
	drawn    map[string][]byte // last drawing per element
	keys     map[string]string // what it depended on
	loadedOn string            // the fragment the page was opened with
}

// Work is a calculation under way.
type Work struct {
	What     string // empty: none
	Fraction float64
	Began    time.Time
}

// newApp opens the case that the address holds, or the demo.
func newApp(h Host) *App {
	a := &App{Host: h, Station: "boundary", open: map[string]bool{}, drawn: map[string][]byte{}, keys: map[string]string{}}
	a.calc = &superseding{engine: h.NewEngine(), after: h.After}
	a.loadedOn = h.Fragment()
	a.openLink(a.loadedOn)
	h.OnFragment(a.openLink)
	h.OnFiles(a.takeFiles, a.takeText)
	h.OnPlotPick(a.pick)
	h.OnEnvironment(func() {})
	return a
}

// openLink takes the parameters of a link.
func (a *App) openLink(fragment string) {
	in, problems := study.Parse(fragment)
	if len(problems) > 0 {
		a.problem("The link was read but for this: " + problems.Error()[len("study: inputs are not usable: "):])
	}
	a.set(in, "")
}

// Edit takes what is typed into a field.
func (a *App) Edit(param, text string) {
	if _, typed := a.Typed.Text[param]; typed && a.Typed.Get(param) == text {
		return
	}
	in := a.Typed.With(param, text)
	if other := map[string]string{"area": "diameter", "diameter": "area"}[param]; other != "" && strings.TrimSpace(text) != "" {
		in = in.With(other, "").With(other+"_pm", "")
	}
	a.set(in, param)
}

// New begins an empty case.
func (a *App) New() {
	a.set(study.NewCase(), "")
	a.Station = "specimen"
	a.tell("A new case. Its specimen still holds the demo's values until you type over them; Undo brings the former case back.")
}

// set makes these the inputs. what names the edit; edits of one name in a row are
// one step of undo.
func (a *App) set(in study.Inputs, what string) {
	if len(a.Problems) == 0 { // undo leads to what was usable, not to a field half typed
		a.history.push(a.Typed, what)
	}
	a.show(in)
}

// Undo goes back one edit, Redo forward.
func (a *App) Undo() {
	if in, ok := a.history.back(a.Typed); ok {
		a.show(in)
	}
}

// Redo is the counterpart of Undo.
func (a *App) Redo() {
	if in, ok := a.history.forth(a.Typed); ok {
		a.show(in)
	}
}

// show reads the inputs, computes what can be computed at once, and asks the
// engine for the rest.
func (a *App) show(in study.Inputs) {
	a.Typed = in
	a.Read, a.Problems = in.Check()
	a.Host.ReplaceFragment(in.Link())
	if len(a.Problems) > 0 {
		return // the last good result stays, and its intervals may still come
	}
	if a.Result != nil && a.Work.What == "" && a.Result.Inputs.Link() == in.Link() {
		return // what is shown belongs to these inputs
	}
	a.calc.stop()
	a.Work = Work{}
	if a.runner.Fitted(in) {
		a.compute(in)
		a.askIntervals(in)
		return
	}
	a.askFits(in)
}

// compute runs the quick part of the chain here and now.
func (a *App) compute(in study.Inputs) {
	result, err := a.runner.Run(context.Background(), in, study.Options{})
	if err != nil {
		a.problem(plain(err))
		return
	}
	if a.Result == nil || a.Result.View.Spectrum != result.View.Spectrum {
		a.Host.Reveal(chipID(result.View.Spectrum))
	}
	if a.Result == nil {
		a.Host.Reveal("go-" + a.Station)
	}
	a.Result = result
}

// askFits has the engine fit the spectra; the chain follows.
func (a *App) askFits(in study.Inputs) {
	a.begin("reading the spectra")
	a.calc.Call(engine.TaskFit, []byte(in.Link()), a.progress, func(data []byte, err error) {
		a.Work = Work{}
		if err == nil {
			var list []study.Evidence
			if list, err = study.DecodeEvidence(data, in.Spectra()); err == nil {
				a.runner.Prime(in, list)
				a.compute(in)
				a.askIntervals(in)
				return
			}
		}
		a.problem(plain(err))
	})
}

// askIntervals has the engine draw the uncertainties once edits pause.
func (a *App) askIntervals(in study.Inputs) {
	result := a.Result
	a.calc.Call(engine.TaskIntervals, []byte(in.Link()), nil, func(data []byte, err error) {
		var ends []float64
		if err == nil {
			ends, err = study.DecodeEnds(data)
		}
		if err == nil {
			err = result.SetIntervals(ends)
		}
		if err != nil {
			a.problem(plain(err))
			return
		}
		waiting := a.settled
		a.settled = nil
		for _, f := range waiting {
			f()
		}
	})
}

func (a *App) begin(what string) { a.Work = Work{What: what, Began: time.Now()} }

// progress takes a report; one that arrives after the end is late and says nothing.
func (a *App) progress(fraction float64, what string) {
	if a.Work.What != "" {
		a.Work.Fraction, a.Work.What = fraction, what
	}
}

// Cancel stops the calculation under way; the last good result stays.
func (a *App) Cancel() {
	a.calc.stop()
	a.Work = Work{}
	a.problem("The calculation was cancelled; what is shown is the last good result. Edit a field to start again.")
}

// Percent is how far the calculation is.
func (w Work) Percent() int { return int(100 * w.Fraction) }

// Left says how long the calculation will still take.
func (w Work) Left() string {
	spent := time.Since(w.Began)
	if w.Fraction < 0.05 || spent < 300*time.Millisecond {
		return ""
	}
	left := time.Duration(float64(spent) * (1 - w.Fraction) / w.Fraction)
	return fmt.Sprintf("about %.0f s left", max(1, left.Seconds()))
}

// Stale reports that the result does not belong to what is typed.
func (a *App) Stale() bool { return len(a.Problems) > 0 || a.Work.What != "" }

// Busy tells whether a result or its intervals are still to come, for aria-busy.
func (a *App) Busy() string {
	return strconv.FormatBool(a.Result == nil || a.Work.What != "" || !a.Result.Settled())
}

// whenSettled runs f when the result is complete with its intervals. It says why
// not when there is nothing good to wait for.
func (a *App) whenSettled(f func()) {
	switch {
	case len(a.Problems) > 0:
		a.problem("First mend the field: " + a.Problems[0].Param + ": " + a.Problems[0].Text)
	case a.Busy() == "true":
		a.settled = append(a.settled, f)
	default:
		f()
	}
}

// problem shows what went wrong.
func (a *App) problem(text string) { a.Message, a.Good = text, false }

// tell shows good news, which goes by itself.
func (a *App) tell(format string, args ...any) {
	text := fmt.Sprintf(format, args...)
	a.Message, a.Good = text, true
	a.Host.After(8*time.Second, func() {
		if a.Message == text {
			a.Message = ""
		}
	})
}

// BannerClass tells good news from a problem.
func (a *App) BannerClass() string {
	if a.Good {
		return "banner notice"
	}
	return "banner"
}

// plain drops the package names from an error.
func plain(err error) string { return study.Plain(err) }

// Title is the name of the case for files.
func (a *App) fileName(suffix string) string {
	name := strings.Map(func(r rune) rune {
		switch {
		case r >= 'a' && r <= 'z', r >= 'A' && r <= 'Z', r >= '0' && r <= '9', r == '-', r == '_':
			return r
		}
		return '-'
	}, a.Typed.Get("title"))
	if name = strings.Trim(strings.ReplaceAll(name, "--", "-"), "-"); name == "" {
		name = "case"
	}
	return name + suffix
}

// Save offers the case as one JSON file.
func (a *App) Save() {
	a.whenSettled(func() {
		data, err := a.Result.JSON()
		if err != nil {
			a.problem(plain(err))
			return
		}
		a.Host.Download(a.fileName(".json"), "application/json", data)
	})
}

// SaveTable offers all numbers as CSV.
func (a *App) SaveTable() {
	a.whenSettled(func() { a.Host.Download(a.fileName(".csv"), "text/csv", a.Result.CSV()) })
}

// CopyLink puts the link on the clipboard.
func (a *App) CopyLink() {
	if len(a.Problems) > 0 {
		a.problem("First mend the field: " + a.Problems[0].Param + ": " + a.Problems[0].Text)
		return
	}
	link := a.Host.Address() + "#" + a.Typed.Link()
	a.Host.CopyText(link, func(err error) {
		if err != nil {
			a.problem("The link could not be copied (" + err.Error() + "); copy it from the address bar.")
			return
		}
		a.tell("The link is copied (%d characters). It holds the inputs and the measured data and goes to no server.", len(link))
	})
}

// PickCase opens a case file or spectra.
func (a *App) PickCase() {
	a.Host.PickFiles(".json,.csv,.txt,.dat,.tsv,text/plain,application/json", true, a.takeFiles)
}

// printing is how long every station stays on the page for the print dialogue,
// which holds the clock while it is open.
const printing = 2 * time.Second

// Print shows every station and opens the print dialogue.
func (a *App) Print() {
	a.whenSettled(func() {
		a.Printing = true
		a.Host.Print()
		a.Host.After(printing, func() { a.Printing = false })
	})
}

// Printed is the line at the head of a printed page: when, and how to come back.
func (a *App) Printed() string {
	if !a.Printing {
		return ""
	}
	in := a.Typed.With("data", "")
	text := "Printed " + time.Now().Format("2006-01-02 15:04") + ". Inputs: " + in.Link()
	if a.Typed.Get("spectra") == "data" {
		text += " (the measured data are in the saved case)"
	}
	return text + "."
}

// ToggleTheme switches between light and dark.
func (a *App) ToggleTheme() {
	if a.Host.Theme() == "dark" {
		a.Host.SetTheme("light")
	} else {
		a.Host.SetTheme("dark")
	}
}

// OfflineText is the mark in the masthead.
func (a *App) OfflineText() string {
	switch a.Host.Offline() {
	case browser.OfflineFile, browser.OfflineReady:
		return "works offline"
	case browser.OfflineLoading:
		return "getting ready for offline"
	}
	return "needs the network to open"
}

// OfflineReady reports that the page opens without a network.
func (a *App) OfflineReady() bool {
	o := a.Host.Offline()
	return o == browser.OfflineFile || o == browser.OfflineReady
}

// Go opens a station.
func (a *App) Go(station string) {
	a.Station = station
	a.Host.Reveal("go-" + station)
}

// Shows reports whether a station is on the page.
func (a *App) Shows(station string) bool { return a.Printing || a.Station == station }

// Toggle opens or closes the origin of a number.
func (a *App) Toggle(id string) { a.open[id] = !a.open[id] }

// Opened reports whether the origin of a number is open.
func (a *App) Opened(id string) bool { return a.open[id] }
