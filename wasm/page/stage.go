package page

import (
	"fmt"

	"brinkfield/physics/quantity"
	"brinkfield/physics/study"
)

// Stage is the section drawing with the temperatures beside it.
type Stage struct{ App *App }

// chip is one temperature to show.
type chip struct {
	ID, Text, Class string
	At              string
	Chosen          bool
}

// chips lists the temperatures of the spectra.
func (a *App) chips() (list []chip) {
	shown := a.Spectrum()
	for i, s := range a.Typed.Spectra() {
		one := chip{ID: chipID(i), Text: unbroken(study.Celsius(s.T)), At: quantity.FormatPlain(s.T) + " K", Chosen: i == shown, Class: "chip"}
		if a.Result != nil && i < len(a.Result.Evidence) && a.runner.Fitted(a.Typed) {
			if e := a.Result.Evidence[i]; e.Fit == nil || !e.Validity.Pass {
				one.Class = "chip wrong"
			}
		}
		for n, twin := 2, i-1; twin >= 0 && list[twin].At == one.At; n, twin = n+1, twin-1 {
			one.Text = unbroken(fmt.Sprintf("%s (%d)", study.Celsius(s.T), n))
		}
		list = append(list, one)
	}
	return list
}

func chipID(i int) string { return fmt.Sprintf("chip%d", i) }

// ShowAt shows a temperature in the drawing and the stations.
func (a *App) ShowAt(at string) { a.Edit("at", at) }
