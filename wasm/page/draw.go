package page

import (
	"bytes"
	"fmt"
	"math"
	"strings"

	"brinkfield/physics/quantity"
	"brinkfield/physics/study"
)

// measuredName is the series whose points a person can leave out.
const measuredName = "measured"

// plots are the drawings of every station: element, how it is made.
var plots = map[string][]struct {
	id   string
	make func(*App) *chartSpec
}{
	"spectra": {{"plane", (*App).planeSpec}, {"modulus", (*App).modulusSpec}, {"phase", (*App).phaseSpec},
		{"residuals", (*App).residualSpec}, {"kramers", (*App).kramersSpec}},
	"boundary": {{"spectrum", (*App).planeSpec}, {"arrhenius", (*App).arrheniusSpec}, {"widths", (*App).widthSpec}, {"barriers", (*App).barrierSpec}},
	"profile":  {{"potentials", (*App).potentialSpec}, {"carriers", (*App).carrierSpec}},
}

// draw redraws what changed: the section always, the plots of the open stations.
func (a *App) draw() {
	if a.Result == nil {
		return
	}
	a.put("section", "section", encode(a.sectionSpec()))
	for station, list := range plots {
		if !a.Shows(station) {
			continue
		}
		for _, p := range list {
			if key := a.dependsOn(station, p.id); key == "" || a.keys[p.id] != key {
				a.keys[p.id] = key
				a.put(p.id, "chart", encode(p.make(a)))
			}
		}
	}
}

// dependsOn names what the plots of a spectrum depend on: not on the specimen, so
// that an edit of it need not draw them anew. Empty: on everything.
func (a *App) dependsOn(station, id string) string {
	if station != "spectra" && id != "spectrum" {
		return ""
	}
	return fmt.Sprintf("%p %d %v", a.Result.Evidence, a.Spectrum(), a.control().Omit)
}

func (a *App) put(id, kind string, spec []byte) {
	if bytes.Equal(a.drawn[id], spec) {
		return
	}
	a.drawn[id] = spec
	a.Host.DrawPlot(id, kind, spec)
}

// reach is how far the section is drawn, in widths of the layer.
const reach = 2.4

// sectionSpec is the drawing across the page.
func (a *App) sectionSpec() sectionSpec {
	v := a.Result.View
	s := sectionSpec{Temperature: unbroken(study.Celsius(v.Temperature)), Stale: a.Stale(), Debye: num(v.Debye * 1e9),
		DebyeText: "λ_D = " + unbroken(quantity.Format(v.Debye, quantity.Length, 2))}
	if v.Missing != "" {
		s.Note = v.Missing
		s.X, s.Potential = nums{0, v.Debye * 1e10}, nums{0, 0} // ten Debye lengths
		return s
	}
	end := 10 * v.Debye
	if !math.IsNaN(v.Width) {
		end = math.Max(end, reach*v.Width)
	}
	end = math.Min(end, v.HalfGrain)
	s.Phi0, s.PhiText = num(v.Phi0), "Φ₀ = "+unbroken(quantity.FormatIn(v.Phi0, quantity.Potential, "V", 3))
	if n := a.Result.Number("phi0", 0); n != nil && n.HasInterval() {
		value, interval, _ := n.Texts()
		s.PhiText, s.Interval = "Φ₀ = "+value+"\u00a0V", "95 %: "+interval
	}
	cut := len(v.Profile.X)
	for cut > 2 && v.Profile.X[cut-1] > end {
		cut--
	}
	s.X, s.Potential = scaled(v.Profile.X[:cut], 1e9), scaled(v.Profile.Phi[:cut], 1)
	last := v.Profile.X[cut-1]
	if last < end { // the tail beyond the last sample is flat at this scale
		s.X = append(s.X, end*1e9)
		s.Potential = append(s.Potential, 0)
	}
	if v.HalfGrain <= end {
		s.Half = ptr(num(v.HalfGrain * 1e9))
	}
	s.Core = coreSpec{Width: num(end * 1e9 * 0.05), Sign: int(math.Copysign(1, v.CoreCharge)),
		Charge: "core " + signedText(quantity.Format(v.CoreCharge, quantity.SurfaceCharge, 3))}
	if v.Occupancy >= 0 && v.Occupancy <= 1 {
		s.Core.Occupancy = ptr(num(v.Occupancy))
	}
	if !math.IsNaN(v.Width) && v.Width/2 < end {
		s.Width, s.WidthText = ptr(num(v.Width/2*1e9)), "depleted width 2λ* = "+unbroken(quantity.Format(v.Width, quantity.Length, 3))
	}
	role := 1
	for i, b := range v.Carriers {
		c := carrierSpec{Name: b.Name, Mobile: b.Mobile, Bulk: unbroken(quantity.Format(b.Bulk, quantity.NumberDensity, 3)), Role: "dopant"}
		if b.Mobile {
			c.Role = map[bool]string{true: "carrier", false: fmt.Sprintf("carrier%d", role)}[role == 1]
			role++
		}
		c.Relative = scaled(v.Profile.Relative[i][:cut], 1)
		if len(c.Relative) < len(s.X) {
			c.Relative = append(c.Relative, 1)
		}
		s.Carriers = append(s.Carriers, c)
	}
	return s
}

func signedText(text string) string {
	if strings.HasPrefix(text, "−") {
		return unbroken(text)
	}
	return "+" + unbroken(text)
}
