package impedance

import (
	"context"
	"fmt"
	"math"
	"slices"
)

// Progress reports that done of total spectra are finished; may be nil.
type Progress func(done, total int)

// FitAll fits every spectrum, then assigns the roles together. controls holds one
// entry per spectrum, or one for all, or none. It stops between spectra when ctx
// ends and returns its error.
func FitAll(ctx context.Context, spectra []Spectrum, controls []Controls, progress Progress) ([]Fit, error) {
	each := make([]Controls, len(spectra))
	switch len(controls) {
	case 0:
	case 1:
		for i := range each {
			each[i] = controls[0]
		}
	case len(spectra):
		copy(each, controls)
	default:
		return nil, fmt.Errorf("%w: %d for %d spectra, expected one each, one for all or none", ErrControls, len(controls), len(spectra))
	}
	fits := make([]Fit, len(spectra))
	ptrs := make([]*Fit, len(spectra))
	for i, s := range spectra {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		f, err := FitArcs(s, each[i])
		if err != nil {
			return nil, err
		}
		fits[i], ptrs[i] = f, &fits[i]
		if progress != nil {
			progress(i+1, len(spectra))
		}
	}
	Assign(ptrs, each)
	return fits, nil
}

// Assign gives roles to the arcs of fits that belong together, one entry of
// controls each: a role keeps its capacitance over the temperatures. It also notes
// resistances that stand out from the other temperatures. FitAll does this itself.
func Assign(fits []*Fit, controls []Controls) {
	assign(fits, controls)
	for _, role := range []Role{Interior, Boundary, Contact} {
		offTheLine(fits, role)
	}
}

// offLine is the factor off the common Arrhenius line that is remarked upon: a
// wrong role or a bad fit, rarely the material.
const offLine = 2.0

// offTheLine notes resistances far off the line of ln R over 1/T through the other
// temperatures, drawn by the median of slopes (Theil 1950, Sen 1968).
func offTheLine(fits []*Fit, role Role) {
	var x, y []float64
	var who []*Fit
	for _, f := range fits {
		if a := f.Arc(role); a != nil && a.R.Kind == Measured && f.T > 0 {
			x, y, who = append(x, 1/f.T), append(y, math.Log(a.R.Value)), append(who, f)
		}
	}
	if len(x) < 4 {
		return
	}
	var slopes []float64
	for i := range x {
		for j := range i {
			if x[i] != x[j] {
				slopes = append(slopes, (y[i]-y[j])/(x[i]-x[j]))
			}
		}
	}
	if len(slopes) == 0 {
		return
	}
	slope := median(slopes)
	rest := make([]float64, len(x))
	for i := range x {
		rest[i] = y[i] - slope*x[i]
	}
	level := median(slices.Clone(rest))
	for i, f := range who {
		if off := math.Exp(rest[i] - level); off > offLine || off < 1/offLine {
			f.note(off, "the %s resistance is %.2g times what the other temperatures lead to expect", role, off)
		}
	}
}

func median(v []float64) float64 {
	slices.Sort(v)
	return v[len(v)/2]
}
