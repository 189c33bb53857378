package engine

import (
	"context"

	"brinkfield/physics/study"
)

// The tasks of the calculation. Both take the parameters of a link as payload.
const (
	// TaskFit fits the spectra and returns study.EncodeEvidence.
	TaskFit = "fit"
	// TaskIntervals returns the interval ends of all numbers, study.EncodeEnds.
	TaskIntervals = "intervals"
)

// desk remembers the fits of the last spectra.
var desk study.Runner

func init() {
	Register(TaskFit, func(ctx context.Context, payload []byte, progress Progress) ([]byte, error) {
		in, err := inputsOf(payload)
		if err != nil {
			return nil, err
		}
		list, err := desk.Fit(ctx, in, study.Options{Progress: doubled(progress)})
		if err != nil {
			return nil, err
		}
		return study.EncodeEvidence(list)
	})
	Register(TaskIntervals, func(ctx context.Context, payload []byte, progress Progress) ([]byte, error) {
		in, err := inputsOf(payload)
		if err != nil {
			return nil, err
		}
		result, err := desk.Run(ctx, in, study.Options{Samples: study.DefaultSamples, Progress: progress})
		if err != nil {
			return nil, err
		}
		return study.EncodeEnds(result.Intervals()), nil
	})
}

// doubled stretches the first half of a whole run over the bar of a fit alone.
func doubled(progress Progress) Progress {
	return func(fraction float64, what string) { progress(2*fraction, what) }
}

func inputsOf(payload []byte) (study.Inputs, error) {
	in, problems := study.Parse(string(payload))
	if len(problems) > 0 {
		return in, problems
	}
	return in, nil
}
