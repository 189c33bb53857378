package impedance

import (
	"fmt"
	"math"
	"math/cmplx"
)

// The rule for one more arc. AICc alone takes a spurious arc in about one clean
// spectrum of ten, so an arc must also be visible as one.
const (
	// MinAICcGain is how much AICc must fall.
	MinAICcGain = 10.0
	// MinShare is the least part of |Z| at the arc's own top (or, for an arc
	// whose top lies above the window, at the window's end). A share of the total
	// resistance would refuse the interior of every strongly blocked ceramic.
	MinShare = 0.05
	// MinAutoExponent refuses arcs flatter than this.
	MinAutoExponent = 0.75
	// Two neighbours closer than both factors are one process with a spread of
	// time constants, not two.
	sameTau = 5.0
	sameC   = 4.0
)

// aicc is the small-sample criterion of Hurvich & Tsai, Biometrika 76, 297 (1989),
// for least squares with unknown variance: k counts the variance too.
func aicc(sum float64, count, free int) float64 {
	n, k := float64(count), float64(free+1)
	if n-k-1 <= 0 {
		return math.Inf(1)
	}
	return n*math.Log(sum/n) + 2*k + 2*k*(k+1)/(n-k-1)
}

// choose fits the wanted number of arcs, or every number and picks by the rule.
func (g grid) choose(want int, h hold) (solution, []Trial, error) {
	s := newStartGrid(g)
	if want > 0 {
		if 2*g.count() <= countParams(want)-len(h) {
			return solution{}, nil, fmt.Errorf("%w: %d points for %d arcs", ErrTooFewPoints, g.count(), want)
		}
		sol, ok := g.fitCount(s, want, h, nil)
		if !ok {
			return sol, nil, fmt.Errorf("%w: %d arcs", ErrNoFit, want)
		}
		return sol, nil, nil
	}
	var best solution
	var trials []Trial
	taken := -1
	for k := 1; k <= MaxArcs; k++ {
		if 2*g.count() <= countParams(k)+1 {
			break
		}
		sol, ok := g.fitCount(s, k, h, nil)
		if !ok {
			continue
		}
		free := sol.free()
		tr := Trial{Arcs: k, AICc: aicc(sol.sum, 2*g.count(), free), Free: free,
			Sigma: math.Sqrt(sol.sum / math.Max(1, float64(2*g.count()-free)))}
		why := ""
		if taken >= 0 {
			why = g.refuse(sol, trials[taken].AICc-tr.AICc)
		}
		if why == "" {
			best, taken = sol, len(trials)
		}
		tr.Why = why
		trials = append(trials, tr)
	}
	if taken < 0 {
		return best, nil, ErrNoFit
	}
	for i := range trials {
		switch {
		case i == taken:
			trials[i].Accepted, trials[i].Why = true, "taken"
		case trials[i].Why == "":
			trials[i].Why = fmt.Sprintf("%d arcs lower AICc by %.1f", trials[taken].Arcs, trials[i].AICc-trials[taken].AICc)
		}
	}
	return best, trials, nil
}

// refuse says why a solution with more arcs is not taken, "" if it is.
func (g grid) refuse(sol solution, gain float64) string {
	if !(gain > MinAICcGain) {
		return fmt.Sprintf("AICc falls by %.1f, more than %.0f needed", gain, MinAICcGain)
	}
	low, high := math.Exp(g.logw[len(g.logw)-1])/(2*math.Pi), math.Exp(g.logw[0])/(2*math.Pi)
	arcs := ArcsOf(sol.p)
	for k, a := range arcs {
		peak := a.Peak()
		if peak < low && k == len(arcs)-1 {
			continue // the flank of a slow process: kept so that it does not spoil its neighbours
		}
		at := math.Min(peak, high)
		if share := cmplx.Abs(a.Impedance(at) / ModelOf(sol.p, at)); share < MinShare {
			return fmt.Sprintf("arc %d is %.1f %% of |Z| at its top, %.0f %% needed", k+1, 100*share, 100*MinShare)
		}
		if a.N < MinAutoExponent && !sol.heldN(k) {
			return fmt.Sprintf("arc %d has n = %.2f, %.2f needed", k+1, a.N, MinAutoExponent)
		}
		if k > 0 && closer(arcs[k-1], a) {
			return fmt.Sprintf("arcs %d and %d have time constants within %.1f and capacitances within %.1f of each other: one process with a spread",
				k, k+1, a.Tau()/arcs[k-1].Tau(), a.Capacitance()/arcs[k-1].Capacitance())
		}
	}
	return ""
}

func (s solution) heldN(k int) bool { return s.bound[ParamN(k)] < 0 && s.p[ParamN(k)] > minExponent }

func closer(a, b Arc) bool {
	return math.Abs(math.Log(a.Tau()/b.Tau())) < math.Log(sameTau) &&
		math.Abs(math.Log(a.Capacitance()/b.Capacitance())) < math.Log(sameC)
}
