package study

import (
	"context"
	"fmt"
	"math"
	"strings"
	"sync"

	"brinkfield/physics/impedance"
	q "brinkfield/physics/quantity"
	"brinkfield/testdata/spectra"
)

// demoSpectra reads the demo data once.
var demoSpectra = sync.OnceValue(func() []impedance.Spectrum {
	reading, err := impedance.Read("barrier-demo.csv", spectra.Demo, impedance.ReadOptions{})
	if err != nil {
		panic(err) // the demo is part of the program
	}
	return reading.Spectra
})

// fitCell is thickness over area as the assignment of arcs sees it: to a tenth of
// a decade, for capacitances are told apart by decades and a finer value would
// fit all spectra again at every edit of the geometry.
func fitCell(s specimen) float64 {
	return math.Pow(10, math.Round(10*math.Log10(s.brick.CellConstant()))/10)
}

// fitKey names what the fits depend on.
func fitKey(in Inputs) string {
	read, _ := in.Check()
	parts := []string{in.Get("spectra"), in.Text["data"], in.Get("arcs"), in.Get("omit"), in.Get("hold"), in.Get("assign"),
		fmt.Sprintf("%.6g", fitCell(specimenOf(in, read)))}
	return strings.Join(parts, "\x00")
}

// fit fits the spectra unless the runner remembers them.
func (r *run) fit(ctx context.Context) error {
	all := r.in.Spectra()
	if len(all) == 0 {
		r.Runner.key, r.Runner.evidence = "", nil
		return nil
	}
	key := fitKey(r.in)
	if r.Runner.key == key {
		return nil
	}
	list := make([]Evidence, len(all))
	wishes, cell := r.in.ControlsOf(), fitCell(r.specimen)
	var fits []*impedance.Fit
	var controls []impedance.Controls
	for i, s := range all {
		if err := ctx.Err(); err != nil {
			return err
		}
		r.progress(0.5*float64(i)/float64(len(all)), "fit, spectrum %d of %d", i+1, len(all))
		list[i] = Evidence{Spectrum: s}
		c := wishes[i].forFit(cell)
		if err := list[i].fit(c); err != nil {
			list[i].Refused = plainError(err)
			continue
		}
		fits, controls = append(fits, list[i].Fit), append(controls, c)
	}
	impedance.Assign(fits, controls)
	r.Runner.key, r.Runner.evidence = key, list
	return nil
}

// fit tests and fits one spectrum.
func (e *Evidence) fit(c impedance.Controls) error {
	validity, err := impedance.KramersKronig(e.Spectrum)
	if err != nil {
		return err
	}
	fit, err := impedance.FitArcs(e.Spectrum, c)
	if err != nil {
		return err
	}
	e.Validity, e.Fit = validity, &fit
	return nil
}

// spectraStation adds the fitted numbers of every spectrum.
func (r *run) spectraStation() {
	valid := 0
	for i, e := range r.evidence {
		if e.Validity.Pass {
			valid++
		}
		if e.Fit == nil {
			continue
		}
		t := Float(e.Spectrum.T)
		fitted := func(id, label, symbol string, kind q.Kind, est impedance.Estimate) {
			r.add(fittedNumber(Number{ID: id, Station: "spectra", Label: label, Symbol: symbol, Kind: kind, Temperature: t, Spectrum: i + 1}, est))
		}
		for _, a := range e.Fit.Arcs {
			if a.Role == impedance.Unassigned {
				continue
			}
			role := a.Role.String()
			short := map[impedance.Role]string{impedance.Interior: "int", impedance.Boundary: "gb", impedance.Contact: "el"}[a.Role]
			name := strings.ToUpper(role[:1]) + role[1:]
			fitted("r_"+role, name+" resistance, arc", "R_"+short, q.Resistance, a.R)
			fitted("c_"+role, name+" capacitance, arc", "C_"+short, q.Capacitance, a.C)
			fitted("n_"+role, name+" exponent", "n_"+short, q.Number, a.N)
		}
		fitted("lead_r", "Lead resistance", "R_lead", q.Resistance, e.Fit.LeadR)
		fitted("lead_l", "Lead inductance", "L_lead", q.Inductance, e.Fit.LeadL)
		r.add(Number{ID: "noise", Station: "spectra", Label: "Scatter about the fit", Symbol: "s", Kind: q.Fraction, Temperature: t, Spectrum: i + 1,
			Value: Float(e.Fit.Sigma), Source: Fitted})
	}
	switch n := len(r.evidence); {
	case n == 0:
		r.headline("spectra", "none loaded")
	case valid == n:
		r.headline("spectra", fmt.Sprintf("%d temperatures, valid", n))
	default:
		r.headline("spectra", fmt.Sprintf("%d temperatures, %d not valid", n, n-valid))
	}
}

// fittedNumber carries an estimate of the fit over to a number.
func fittedNumber(n Number, e impedance.Estimate) Number {
	n.Source, n.Value, n.Low, n.High = Fitted, Float(e.Best()), Float(e.Low), Float(e.High)
	switch e.Kind {
	case impedance.AtLeast:
		n.Bound = AtLeast
	case impedance.AtMost:
		n.Bound = AtMost
	case impedance.Held:
		n.Bound, n.Source = Held, Entered
	case impedance.AtBound:
		n.Bound = AtBound
	}
	if strings.HasPrefix(n.ID, "c_") {
		n.Equation = "capacitance"
	}
	return n
}
