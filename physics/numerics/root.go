package numerics

import (
	"fmt"
	"math"
)

// NoBracket reports a function that does not change sign where it was looked for.
type NoBracket struct{ Low, High, AtLow, AtHigh float64 }

func (e *NoBracket) Error() string {
	return fmt.Sprintf("numerics: no sign change between %.6g (%.3g) and %.6g (%.3g)", e.Low, e.AtLow, e.High, e.AtHigh)
}

// Root finds the zero of f in low…high, where f changes sign, by Newton steps
// kept inside a shrinking bracket: it bisects whenever a step would leave the
// bracket or gains too little, so it cannot diverge. f returns its value and
// its derivative (a derivative of 0 or NaN means unknown: bisect). Stops when the
// bracket or the step is below tolerance (absolute, in x) or rounding; at most 200 calls.
// Source: Press et al., Numerical Recipes 3rd ed., §9.4 (safeguarded Newton), own code.
func Root(f func(x float64) (value, slope float64), low, high, tolerance float64) (float64, error) {
	fl, _ := f(low)
	fh, _ := f(high)
	switch {
	case fl == 0:
		return low, nil
	case fh == 0:
		return high, nil
	case math.Signbit(fl) == math.Signbit(fh) || math.IsNaN(fl) || math.IsNaN(fh):
		return math.NaN(), &NoBracket{low, high, fl, fh}
	}
	if fl > 0 { // orient: f(low) < 0 < f(high)
		low, high = high, low
	}
	x := low + (high-low)/2
	before := math.Abs(high - low)
	for range 200 {
		v, s := f(x)
		if v == 0 {
			return x, nil
		}
		if v < 0 {
			low = x
		} else {
			high = x
		}
		next := x - v/s
		inside := (next-low)*(next-high) < 0
		if !inside || math.Abs(next-x) > before/2 || math.IsNaN(next) {
			next = low + (high-low)/2
		}
		before = math.Abs(next - x)
		if before <= tolerance || next == x || math.Abs(high-low) <= tolerance {
			return next, nil
		}
		x = next
	}
	return x, nil
}

// Bracket widens from the point start by doubling steps until f changes sign,
// within limit on either side, and returns the bracket. f must be monotonic.
func Bracket(f func(x float64) (value, slope float64), start, step, limit float64) (low, high float64, err error) {
	at, _ := f(start)
	if at == 0 {
		return start, start, nil
	}
	low, high = start, start
	fl, fh := at, at
	for range 200 {
		if high < limit {
			next := min(high+step, limit)
			v, _ := f(next)
			if v == 0 || math.Signbit(v) != math.Signbit(at) {
				return high, next, nil
			}
			high, fh = next, v
		}
		if low > -limit {
			next := max(low-step, -limit)
			v, _ := f(next)
			if v == 0 || math.Signbit(v) != math.Signbit(at) {
				return next, low, nil
			}
			low, fl = next, v
		}
		if high >= limit && low <= -limit {
			break
		}
		step *= 2
	}
	return low, high, &NoBracket{low, high, fl, fh}
}
