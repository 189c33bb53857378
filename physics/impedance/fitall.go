package impedance

import (
	"context"
	"fmt"
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
	assign(ptrs, each)
	return fits, nil
}
