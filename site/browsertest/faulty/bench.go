package main

import (
	"context"
	"fmt"
	"time"

	"brinkfield/physics/spacecharge"
	"brinkfield/physics/study"
	"brinkfield/wasm/engine"
)

// Tasks that time the calculation inside the browser's engine and answer
// "name count:microseconds".
func init() {
	count := map[string]int{}
	timed := func(name string, f func(ctx context.Context) (rounds int, err error)) {
		engine.Register("bench/"+name, func(ctx context.Context, _ []byte, _ func(float64, string)) ([]byte, error) {
			start := time.Now()
			rounds, err := f(ctx)
			if err != nil {
				return nil, err
			}
			count[name]++
			return fmt.Appendf(nil, "bench/%s %d:%.3f", name, count[name], float64(time.Since(start).Microseconds())/float64(rounds)), nil
		})
	}
	timed("solve", func(context.Context) (int, error) {
		m, err := spacecharge.NewMedium(573.15, 30, []spacecharge.Species{
			{Name: "vacancy", Charge: 2, Bulk: 1.25e26, Mobile: true, Mobility: 8e-12}, {Name: "acceptor", Charge: -1, Bulk: 2.5e26}})
		if err != nil {
			return 0, err
		}
		const rounds = 500
		for range rounds {
			l, err := m.Solve(0.2217)
			if err != nil {
				return 0, err
			}
			for _, share := range []float64{0.5, 0.01} {
				if _, err := l.Distance(share); err != nil {
					return 0, err
				}
			}
		}
		return rounds, nil
	})
	timed("fit", func(ctx context.Context) (int, error) {
		var fresh study.Runner
		_, err := fresh.Fit(ctx, study.Defaults(), study.Options{})
		return 1, err
	})
	var kept study.Runner
	timed("intervals", func(ctx context.Context) (int, error) {
		_, err := kept.Run(ctx, study.Defaults(), study.Options{Samples: study.DefaultSamples})
		return 1, err
	})
}
