package impedance

import (
	"fmt"
	"math"
	"slices"

	"brinkfield/physics/quantity"
)

// settleSign decides how the imaginary part is written and applies it to the rows.
// Ceramics are capacitive at most frequencies, so the sign that makes most points
// capacitive is taken, whatever the header says.
func (r *reader) settleSign() error {
	negatedHead, polar := false, false
	for _, c := range r.out.Columns {
		negatedHead = negatedHead || c.Quantity == NegatedImaginary || c.Quantity == NegatedPhase
		polar = polar || c.Quantity == Modulus
	}
	below := 0
	for _, v := range r.rows {
		if (polar && math.Sin(v.b) < 0) || (!polar && v.b < 0) {
			below++
		}
	}
	percent := 100 * float64(below) / float64(max(len(r.rows), 1))
	head := SignAsIs
	if negatedHead {
		head = SignFlipped
	}
	switch {
	case r.opt.Sign != SignAuto:
		r.out.Sign, r.out.SignHow = r.opt.Sign, "given"
	case r.canonical:
		r.out.Sign, r.out.SignHow = SignAsIs, "stated in the file"
	default:
		r.out.Sign = SignAsIs
		if 2*below < len(r.rows) {
			r.out.Sign, percent = SignFlipped, 100-percent
		}
		r.out.SignHow = fmt.Sprintf("%.0f %% of the points are then capacitive", percent)
		if r.out.Sign != head && r.header >= 0 {
			r.note(percent, "the header names the other sign of the imaginary part; taken is the one that makes %.0f %% of the points capacitive", percent)
		}
	}
	for i := range r.rows {
		v := &r.rows[i]
		if r.out.Sign == SignFlipped {
			v.b = -v.b
		}
		if polar {
			s, c := math.Sincos(v.b)
			v.a, v.b = v.a*c, v.a*s
		}
	}
	return nil
}

// group gathers the rows by temperature.
func (r *reader) group() error {
	r.settleTemperature()
	type key struct {
		block int
		t     float64
	}
	byKey := map[key]*Spectrum{}
	var order []key
	for _, v := range r.rows {
		k := key{t: v.t}
		if r.canonical {
			k.block = v.block // spectra of equal temperature stay apart
		}
		if byKey[k] == nil {
			byKey[k] = &Spectrum{T: v.t, Source: r.name}
			order = append(order, k)
		}
		byKey[k].Points = append(byKey[k].Points, Point{F: v.f, Z: complex(v.a, v.b), Line: v.line})
	}
	for _, k := range order {
		s := byKey[k]
		if len(s.Points) < MinPoints {
			r.dropSmall(s, len(order))
			continue
		}
		if r.out.FrequencyOrder == "" {
			r.out.FrequencyOrder = frequencyOrder(s.Points)
		}
		s.Sort()
		for i := 1; i < len(s.Points); i++ {
			if s.Points[i].F == s.Points[i-1].F {
				r.out.Duplicates++
			}
		}
		r.out.Spectra = append(r.out.Spectra, *s)
	}
	if len(r.out.Spectra) == 0 {
		return r.fail(0, 0, fmt.Sprintf("too few points in a spectrum (%d rows, %d temperatures)", len(r.rows), len(order)), fmt.Sprintf("at least %d at one temperature", MinPoints))
	}
	sortSpectra(r.out.Spectra)
	for _, s := range r.out.Spectra {
		r.out.Groups = append(r.out.Groups, Group{T: s.T, Points: len(s.Points)})
	}
	if r.out.Duplicates > 0 {
		r.note(float64(r.out.Duplicates), "%d points repeat a frequency at the same temperature; all are kept", r.out.Duplicates)
	}
	slices.SortStableFunc(r.out.Skipped, func(a, b Skipped) int { return a.Line - b.Line })
	return nil
}

func (r *reader) dropSmall(s *Spectrum, groups int) {
	for _, p := range s.Points {
		r.out.Skipped = append(r.out.Skipped, Skipped{p.Line, fmt.Sprintf("only %d points at %.6g K, %d needed", len(s.Points), s.T, MinPoints)})
	}
	if groups > 1 {
		r.note(float64(len(s.Points)), "%d points at %.6g K are too few for a spectrum and are left out", len(s.Points), s.T)
	}
}

func frequencyOrder(p []Point) string {
	up, down := 0, 0
	for i := 1; i < len(p); i++ {
		switch {
		case p[i].F > p[i-1].F:
			up++
		case p[i].F < p[i-1].F:
			down++
		}
	}
	switch {
	case down == 0 && up > 0:
		return "rising"
	case up == 0 && down > 0:
		return "falling"
	}
	return "mixed"
}

// settleTemperature gives every row its temperature: the column, else what was
// given, else lines of text, else the file name.
func (r *reader) settleTemperature() {
	for _, c := range r.out.Columns {
		if c.Quantity == Temperature {
			r.out.TemperatureSource = fmt.Sprintf("column %d", c.Number)
			if r.opt.Temperature > 0 {
				r.note(r.opt.Temperature, "the given temperature (%.6g K) is not used: the file has a temperature column", r.opt.Temperature)
			}
			r.gather()
			return
		}
	}
	if r.opt.Temperature > 0 {
		r.setAll(r.opt.Temperature, "given")
		return
	}
	inText := len(r.rows) > 0 && r.rows[len(r.rows)-1].t > 0
	for i := r.first - 1; i >= 0; i-- { // the nearest line above the rows
		if t, ok := temperatureIn(r.lines[i].text); ok {
			r.out.TemperatureSource = fmt.Sprintf("line %d", r.lines[i].number)
			for k := range r.rows {
				if r.rows[k].t == 0 {
					r.rows[k].t = t
				}
			}
			return
		}
	}
	if inText && r.rows[0].t > 0 {
		r.out.TemperatureSource = "lines between the rows"
		return
	}
	if t, ok := temperatureOfName(r.name); ok {
		r.setAll(t, "file name")
		return
	}
	r.out.TemperatureMissing = true
	for k := range r.rows {
		r.rows[k].t = 0
	}
	r.note(0, "no temperature was found in a column, the head or the file name")
}

func (r *reader) setAll(t float64, source string) {
	r.out.TemperatureSource = source
	for k := range r.rows {
		r.rows[k].t = t
	}
}

// gatherGap is the step in K that separates two temperatures of a column that
// holds readings rather than set points.
const gatherGap = 4.0

// gather merges temperatures that are readings of one set point: when a column has
// nearly as many values as rows, neighbours closer than gatherGap become one
// temperature, their mean.
func (r *reader) gather() {
	count := map[float64]int{}
	for _, v := range r.rows {
		count[v.t]++
	}
	if len(count)*MinPoints <= len(r.rows) {
		return
	}
	var values []float64
	for t := range count {
		values = append(values, t)
	}
	slices.Sort(values)
	mean := map[float64]float64{}
	clusters := 0
	for i := 0; i < len(values); {
		j, sum, n := i, 0.0, 0
		for ; j < len(values) && (j == i || values[j]-values[j-1] < gatherGap); j++ {
			sum += values[j] * float64(count[values[j]])
			n += count[values[j]]
		}
		for _, t := range values[i:j] {
			mean[t] = math.Round(sum/float64(n)*100) / 100
		}
		clusters++
		i = j
	}
	for k := range r.rows {
		r.rows[k].t = mean[r.rows[k].t]
	}
	r.note(float64(clusters), "the temperature column holds readings: gathered into %d temperatures by gaps of %g K, lowest %.2f °C", clusters, gatherGap, mean[values[0]]-quantity.ZeroCelsius)
}
