package impedance

import (
	"maps"
	"math"
	"slices"

	"brinkfield/physics/numerics"
)

// wideFactor: a resistance or capacitance known no better than this factor either
// way is reported as a limit.
const wideFactor = 2.0

// judge fills the estimates: numbers with intervals where the window resolves
// them, limits by profile likelihood where it does not.
func (g grid) judge(fit *Fit, sol solution, h hold) {
	t := quantile95(fit.Freedom)
	low, high := math.Exp(g.logw[len(g.logw)-1])/(2*math.Pi), math.Exp(g.logw[0])/(2*math.Pi)
	fit.lowest = low
	fit.LeadR = g.lead(fit, sol, h, ParamLeadR, t)
	fit.LeadL = g.lead(fit, sol, h, ParamLeadL, t)
	for k, a := range ArcsOf(sol.p) {
		fa := FittedArc{Arc: a}
		fa.N = exponent(fit, h, k, t)
		fa.R = logEstimate(fit, a.R, gradient(fit, k, 1, 0, 0), t)
		fa.Q = logEstimate(fit, a.Q, gradient(fit, k, 0, 1, 0), t)
		fa.C = logEstimate(fit, a.Capacitance(), gradient(fit, k, (1-a.N)/a.N, 1/a.N, -math.Log(a.R*a.Q)/(a.N*a.N)), t)
		fa.Tau = logEstimate(fit, a.Tau(), gradient(fit, k, 1/a.N, 1/a.N, -math.Log(a.R*a.Q)/(a.N*a.N)), t)
		fa.Peak = Estimate{Value: a.Peak(), Low: 1 / (2 * math.Pi * fa.Tau.High), High: 1 / (2 * math.Pi * fa.Tau.Low)}
		fa.PeakInWindow = a.Peak() >= low && a.Peak() <= high
		fa.below = a.Peak() < low
		if _, held := h[ParamR(k)]; held {
			fa.R.Kind = Held
		}
		if _, held := h[ParamQ(k)]; held {
			fa.Q.Kind = Held
		}
		switch {
		case fa.R.Kind == Held:
		case a.Peak() < low || sol.bound[ParamR(k)] > 0:
			g.slow(fit, sol, h, k, &fa)
		case a.Peak() > high:
			g.fast(fit, sol, h, k, &fa)
		case fa.R.High > wideFactor*wideFactor*fa.R.Low || sol.bound[ParamR(k)] < 0:
			g.small(fit, sol, h, k, &fa)
		}
		fit.Arcs = append(fit.Arcs, fa)
	}
}

// gradient is a derivative by ln R, ln Q and n of arc k as a full-length vector.
func gradient(fit *Fit, k int, r, q, n float64) []float64 {
	d := make([]float64, len(fit.Params))
	d[ParamR(k)], d[ParamQ(k)], d[ParamN(k)] = r, q, n
	return d
}

// Spread is the standard deviation of a function of the parameters with gradient d.
func (f *Fit) Spread(d []float64) float64 {
	v := 0.0
	for i, x := range d {
		if x == 0 {
			continue
		}
		for j, y := range d {
			v += x * y * f.Covariance.At(i, j)
		}
	}
	return math.Sqrt(math.Max(v, 0))
}

func logEstimate(fit *Fit, value float64, d []float64, t float64) Estimate {
	e := math.Exp(t * fit.Spread(d))
	return Estimate{Value: value, Low: value / e, High: value * e}
}

func exponent(fit *Fit, h hold, k int, t float64) Estimate {
	j := ParamN(k)
	n := fit.Params[j]
	if _, held := h[j]; held {
		return Estimate{Value: n, Low: n, High: n, Kind: Held}
	}
	if !fit.Free[j] {
		fit.note(n, "n of arc %d is at bound (%g) and left out of the covariance", k+1, n)
		return Estimate{Value: n, Low: n, High: n, Kind: AtBound}
	}
	e := t * math.Sqrt(fit.Covariance.At(j, j))
	return Estimate{Value: n, Low: math.Max(n-e, minExponent), High: math.Min(n+e, maxExponent)}
}

// lead judges a lead term: a number when its interval excludes zero, else a limit.
func (g grid) lead(fit *Fit, sol solution, h hold, j int, t float64) Estimate {
	v := sol.p[j]
	if _, held := h[j]; held {
		return Estimate{Value: v, Low: v, High: v, Kind: Held}
	}
	e := t * math.Sqrt(fit.Covariance.At(j, j))
	if fit.Free[j] && v > e && e > 0 {
		return Estimate{Value: v, Low: v - e, High: v + e}
	}
	if fit.Free[j] && e > 0 {
		return Estimate{Value: v, High: v + e, Kind: AtMost}
	}
	step := fit.Sigma * math.Sqrt(fit.Inflation) / g.leadWeight(j)
	high, _, _ := g.limit(fit, sol, h, j, +1, step)
	return Estimate{Value: v, High: high, Kind: AtMost}
}

// leadWeight is the norm of the Jacobian column of a lead term.
func (g grid) leadWeight(j int) float64 {
	s := 0.0
	for i, w := range g.weight {
		if j == ParamLeadL {
			w *= g.omega[i]
		}
		s += w * w
	}
	return math.Sqrt(s)
}

// slow: the top of the arc lies below the window, only its flank is seen: the
// resistance is at least what the flank demands. C grows with R, so it is a lower
// limit as well unless the arc is a capacitor.
func (g grid) slow(fit *Fit, sol solution, h hold, k int, fa *FittedArc) {
	v, p, _ := g.limit(fit, sol, h, ParamR(k), -1, 0.3)
	low := math.Exp(v)
	fa.R = Estimate{Value: fa.Arc.R, Low: low, High: math.Inf(1), Kind: AtLeast}
	at := ArcsOf(p)[k]
	fa.C = Estimate{Value: fa.Arc.Capacitance(), Low: at.Capacitance(), High: math.Inf(1), Kind: AtLeast}
	fa.Tau = Estimate{Value: fa.Arc.Tau(), Low: at.Tau(), High: math.Inf(1), Kind: AtLeast}
	fa.Peak = Estimate{Value: fa.Arc.Peak(), High: at.Peak(), Kind: AtMost}
	fit.note(low, "the top of arc %d lies below the window: its resistance is at least %.3g Ω", k+1, low)
}

// fast: the top of the arc lies above the window. The arc is then told from the
// lead only by the assumption of its shape, and the lead takes away from it: the
// resistance is at most what fits with every lead ≥ 0 and n ≤ 1.
func (g grid) fast(fit *Fit, sol solution, h hold, k int, fa *FittedArc) {
	v, p, _ := g.limit(fit, sol, h, ParamR(k), +1, 0.02)
	high := math.Exp(v)
	at := ArcsOf(p)[k]
	fa.R = Estimate{Value: fa.Arc.R, High: high, Kind: AtMost}
	fa.C = Estimate{Value: fa.Arc.Capacitance(), Low: math.Min(at.Capacitance(), fa.C.Low), High: math.Inf(1), Kind: AtLeast}
	fa.Tau = Estimate{Value: fa.Arc.Tau(), High: math.Max(at.Tau(), fa.Tau.High), Kind: AtMost}
	fa.Peak = Estimate{Value: fa.Arc.Peak(), Low: 1 / (2 * math.Pi * fa.Tau.High), High: math.Inf(1), Kind: AtLeast}
	fit.note(high, "the top of arc %d lies above the window: its resistance is at most %.4g Ω", k+1, high)
}

// small: inside the window, but the interval spans more than wideFactor either way.
func (g grid) small(fit *Fit, sol solution, h hold, k int, fa *FittedArc) {
	v, _, _ := g.limit(fit, sol, h, ParamR(k), +1, 0.3)
	fa.R = Estimate{Value: fa.Arc.R, High: math.Exp(v), Kind: AtMost}
	fit.note(fa.R.High, "arc %d is not resolved: its resistance is at most %.3g Ω", k+1, fa.R.High)
}

// limit walks parameter j away from the fit (direction −1 or +1), refitting the
// others, until Σr² has grown by t²σ̂²: the end of the 95 % profile-likelihood
// interval (Venzon & Moolgavkar, Appl. Stat. 37, 87 (1988)). √Δ is nearly linear
// in the parameter, so a secant on it needs a handful of refits. The walk ends
// after a hundred times the first step if Δ never gets there.
func (g grid) limit(fit *Fit, sol solution, h hold, j int, direction, step float64) (x float64, p []float64, ok bool) {
	t := quantile95(fit.Freedom)
	target := t * fit.Sigma * math.Sqrt(fit.Inflation)
	if e := t * math.Sqrt(fit.Covariance.At(j, j)); e > 0 && fit.Free[j] && e < 3*step {
		step = e
	}
	x0, p := sol.p[j], slices.Clone(sol.p)
	if target == 0 || math.IsInf(target, 0) {
		return x0, p, false
	}
	inX, inD := x0, 0.0
	outX, outD := math.NaN(), 0.0
	x = x0 + direction*step
	for i := 0; i < 14; i++ {
		q, sum, good := g.profile(p, j, x, h)
		if !good {
			break
		}
		p = q
		d := math.Sqrt(math.Max(0, sum-sol.sum))
		if math.Abs(d-target) < 2e-3*target {
			return x, p, true
		}
		if d < target {
			inX, inD = x, d
		} else {
			outX, outD = x, d
		}
		switch {
		case math.IsNaN(outX) && math.Abs(inX-x0) > 100*step:
			return x, p, false
		case math.IsNaN(outX):
			grow := 3.0
			if inD > 0.2*target {
				grow = math.Min(grow, 1.1*target/inD)
			}
			x = x0 + (inX-x0)*grow
		default:
			f := (target - inD) / (outD - inD)
			x = inX + (outX-inX)*math.Min(math.Max(f, 0.1), 0.9)
		}
	}
	return x, p, true
}

// profile refits with parameter j held at x.
func (g grid) profile(p []float64, j int, x float64, h hold) ([]float64, float64, bool) {
	held := hold{}
	maps.Copy(held, h)
	held[j] = x
	q := slices.Clone(p)
	q[j] = x
	res, _, err := g.refine(q, held, numerics.LeastSquaresSettings{MaxIterations: 60, StepTolerance: 1e-6})
	if err != nil {
		return nil, 0, false
	}
	return res.Params, res.Sum, true
}
