package page

import (
	"fmt"
	"math"
	"math/cmplx"
	"strconv"

	"brinkfield/physics/impedance"
	"brinkfield/physics/quantity"
	"brinkfield/physics/study"
)

// ohms picks the unit of an impedance plot and its factor.
func ohms(largest float64) (unit string, factor float64) {
	unit = quantity.DisplayUnit(largest, quantity.Resistance)
	return unit, 1 / quantity.Convert(1, quantity.Resistance, unit)
}

// fine is a fine grid of frequencies over the window of a spectrum.
func fine(s impedance.Spectrum, n int) []float64 {
	low, high := s.Window()
	list := make([]float64, n)
	for i := range list {
		list[i] = high * math.Pow(low/high, float64(i)/float64(n-1))
	}
	return list
}

// finePoints makes a model curve smooth on a wide screen.
const finePoints = 240

// planeSpec is the spectrum shown in the complex plane.
func (a *App) planeSpec() *chartSpec {
	e := a.Evidence()
	if e == nil {
		return &chartSpec{Title: "Complex plane", Sub: "no spectra", X: axisSpec{Label: "Z′", Unit: "Ω"}, Y: axisSpec{Label: "−Z″", Unit: "Ω"}, Series: []seriesSpec{}}
	}
	largest := 0.0
	for _, p := range e.Spectrum.Points {
		largest = math.Max(largest, real(p.Z))
	}
	unit, f := ohms(largest)
	spec := &chartSpec{Title: "Spectrum at " + unbroken(study.Celsius(e.Spectrum.T)), Sub: "points measured, line fitted; figures are log₁₀ f/Hz", Equal: true, Zero: true,
		X: axisSpec{Label: "Z′", Unit: unit}, Y: axisSpec{Label: "−Z″", Unit: unit}}
	if e.Fit != nil {
		spec.Series = a.planeModel(e, 1/f)
	}
	spec.Series = append(spec.Series, a.planePoints(e, 1/f))
	return spec
}

// planeModel draws every arc alone, put end to end, and the whole model.
func (a *App) planeModel(e *study.Evidence, by float64) (list []seriesSpec) {
	grid := fine(e.Spectrum, finePoints)
	total, arcs := e.Fit.Curve(grid)
	offset := e.Fit.LeadR.Value
	for k, arc := range e.Fit.Arcs {
		one := seriesSpec{Name: arc.Role.String(), Role: arc.Role.String(), Mark: "line", Faint: true, Legend: ptr(false)}
		top := 0
		for i, z := range arcs[k] {
			one.X = append(one.X, (offset+real(z))*by)
			one.Y = append(one.Y, -imag(z)*by)
			if -imag(z) > -imag(arcs[k][top]) {
				top = i
			}
		}
		if arc.Role == impedance.Unassigned {
			one.Role = "muted"
		}
		one.Label = mark{At: top, Text: arc.Role.String()}
		offset += arc.Arc.R
		list = append(list, one)
	}
	model := seriesSpec{Name: "fit", Role: "model", Mark: "line"}
	for _, z := range total {
		model.X, model.Y = append(model.X, real(z)*by), append(model.Y, -imag(z)*by)
	}
	return append(list, model)
}

func (a *App) planePoints(e *study.Evidence, by float64) seriesSpec {
	s := seriesSpec{Name: measuredName, Role: "measured", Mark: "points", Hollow: true, Muted: a.control().Omit, Decades: decades(e.Spectrum)}
	for _, p := range e.Spectrum.Points {
		s.X, s.Y = append(s.X, real(p.Z)*by), append(s.Y, -imag(p.Z)*by)
		s.Tip = append(s.Tip, pointTip(p))
	}
	return s
}

func pointTip(p impedance.Point) string {
	return fmt.Sprintf("%s\nZ′ %s\n−Z″ %s", quantity.Format(p.F, quantity.Frequency, 4), quantity.Format(real(p.Z), quantity.Resistance, 4), quantity.Format(-imag(p.Z), quantity.Resistance, 4))
}

// decades marks the point nearest to every power of ten of the frequency.
func decades(s impedance.Spectrum) (list []mark) {
	low, high := s.Window()
	for n := int(math.Ceil(math.Log10(low) - 0.05)); float64(n) <= math.Log10(high)+0.05; n++ {
		best, off := -1, 0.1
		for i, p := range s.Points {
			if d := math.Abs(math.Log10(p.F) - float64(n)); d < off {
				best, off = i, d
			}
		}
		if best >= 0 {
			text := strconv.Itoa(n)
			if n < 0 {
				text = "−" + strconv.Itoa(-n)
			}
			list = append(list, mark{At: best, Text: text})
		}
	}
	return list
}

var frequencyAxis = axisSpec{Label: "f", Unit: "Hz", Scale: "log"}

// bode makes a plot of one real quantity of the impedance against frequency.
func (a *App) bode(title string, y axisSpec, zero bool, of func(complex128) float64) *chartSpec {
	spec := &chartSpec{Title: title, Height: 230, Zero: zero, X: frequencyAxis, Y: y, Series: []seriesSpec{}}
	e := a.Evidence()
	if e == nil {
		return spec
	}
	if e.Fit != nil {
		model := seriesSpec{Name: "fit", Role: "model", Mark: "line"}
		for _, f := range fine(e.Spectrum, finePoints/2) {
			model.X, model.Y = append(model.X, f), append(model.Y, of(impedance.Model(*e.Fit, f)))
		}
		spec.Series = append(spec.Series, model)
	}
	points := seriesSpec{Name: measuredName, Role: "measured", Mark: "points", Hollow: true, Muted: a.control().Omit}
	for _, p := range e.Spectrum.Points {
		points.X, points.Y, points.Tip = append(points.X, p.F), append(points.Y, of(p.Z)), append(points.Tip, pointTip(p))
	}
	spec.Series = append(spec.Series, points)
	return spec
}

func (a *App) modulusSpec() *chartSpec {
	spec := a.bode("Modulus", axisSpec{Label: "|Z|", Unit: "Ω", Scale: "log"}, false, cmplx.Abs)
	if len(spec.Series) > 0 {
		spec.Sub = "the other temperatures faint"
		spec.Series = append(a.otherModuli(), spec.Series...)
	}
	return spec
}

// otherModuli are the spectra that are not shown, as faint lines.
func (a *App) otherModuli() (list []seriesSpec) {
	for i, e := range a.Result.Evidence {
		if i == a.Spectrum() {
			continue
		}
		one := seriesSpec{Name: study.Celsius(e.Spectrum.T), Role: "muted", Mark: "line", Faint: true, Legend: ptr(false)}
		for _, p := range e.Spectrum.Points {
			one.X, one.Y = append(one.X, p.F), append(one.Y, cmplx.Abs(p.Z))
		}
		list = append(list, one)
	}
	return list
}

func (a *App) phaseSpec() *chartSpec {
	return a.bode("Phase", axisSpec{Label: "−phase", Unit: "°"}, true, func(z complex128) float64 { return -cmplx.Phase(z) * 180 / math.Pi })
}

// residuals plots relative residuals in percent.
func (a *App) residuals(title, sub string, list []complex128) *chartSpec {
	spec := &chartSpec{Title: title, Sub: sub, Height: 210, X: frequencyAxis, Y: axisSpec{Label: "Δ/|Z|", Unit: "%"}, Series: []seriesSpec{}}
	e := a.Evidence()
	if e == nil || len(list) != len(e.Spectrum.Points) {
		return spec
	}
	re := seriesSpec{Name: "ΔZ′", Role: "interior", Mark: "points", Muted: a.control().Omit}
	im := seriesSpec{Name: "ΔZ″", Role: "contact", Mark: "points", Hollow: true, Muted: a.control().Omit}
	for i, p := range e.Spectrum.Points {
		re.X, re.Y = append(re.X, p.F), append(re.Y, 100*real(list[i]))
		im.X, im.Y = append(im.X, p.F), append(im.Y, 100*imag(list[i]))
	}
	spec.Series = []seriesSpec{{Name: "zero", Role: "muted", Mark: "rule", Y: nums{0}, Legend: ptr(false)}, re, im}
	return spec
}

func (a *App) residualSpec() *chartSpec {
	var list []complex128
	if e := a.Evidence(); e != nil && e.Fit != nil {
		list = e.Fit.Residuals
	}
	return a.residuals("Residuals of the fit", "", list)
}

func (a *App) kramersSpec() *chartSpec {
	var list []complex128
	if e := a.Evidence(); e != nil {
		list = e.Validity.Residuals
	}
	return a.residuals("Residuals of the Kramers–Kronig test", "", list)
}
