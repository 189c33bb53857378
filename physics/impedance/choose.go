package impedance

import (
	"fmt"
	"math"
	"math/cmplx"
)

// The rule for one more arc. AICc alone takes a spurious arc in about one clean
// spectrum of ten, so an arc must also be visible as one.
const (
	// MinAICcGain is how much AICc must fall. Where residuals hang together the gain
	// is first divided by the inflation of the larger model, for each point then
	// counts several times; not when the residual falls to plainLoss or less.
	MinAICcGain = 10.0
	plainLoss   = 2.0 / 3
	// MinShare is the least part of |Z| at the arc's own top (or, for an arc
	// whose top lies above the window, at the window's end). A share of the total
	// resistance would refuse the interior of every strongly blocked ceramic.
	MinShare = 0.05
	// MinAutoExponent refuses flatter arcs, but for the slowest when it has the
	// capacitance of a contact: a blocking or diffusing contact has n down to 0.5.
	MinAutoExponent = 0.75
	contactLike     = 1e-8 // F
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
		sol, _, ok := g.deepest(g.candidates(s, want, h), h)
		if !ok {
			return solution{}, nil, fmt.Errorf("%w: %d arcs", ErrNoFit, want)
		}
		return sol, nil, nil
	}
	var best solution
	var trials []Trial
	var before []float64
	taken := -1
	for k := 1; k <= MaxArcs && 2*g.count() > countParams(k)+1; k++ {
		var extra [][]float64
		if before != nil {
			extra = append(extra, g.withSlowArc(before))
		}
		runs := g.candidates(s, k, h, extra...)
		var row Trial
		for i := 0; i < minimaTried; i++ {
			sol, rest, ok := g.deepest(runs, h)
			if !ok {
				break
			}
			tr := g.trial(sol)
			if taken >= 0 {
				tr.Why = g.refuse(sol, trials[taken], tr)
			}
			if i == 0 {
				before = sol.p
			}
			if i == 0 || tr.Why == "" {
				row = tr
			}
			if tr.Why == "" {
				best, taken = sol, len(trials)
				break
			}
			runs = rest
			if len(runs) == 0 || trials[taken].AICc-aicc(runs[0].sum, 2*g.count(), sol.free()) < MinAICcGain {
				break // the next minimum gains too little to be worth finishing
			}
		}
		if row.Arcs > 0 {
			trials = append(trials, row)
		}
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

// minimaTried is how many minima of one number of arcs are looked at: the deepest may
// split one process in two where another finds a further process.
const minimaTried = 3

func (g grid) trial(sol solution) Trial {
	free := sol.free()
	factor, _ := inflation(g.residuals(sol.p))
	return Trial{Arcs: sol.arcs, AICc: aicc(sol.sum, 2*g.count(), free), Free: free, Inflation: factor,
		Sigma: math.Sqrt(sol.sum / math.Max(1, float64(2*g.count()-free)))}
}

// refuse says why a solution with more arcs is not taken, "" if it is. When it halves
// the residual, or leaves white ones where the smaller model does not, the data ask
// for it, and its arcs may be flat or small; two that are one process stay refused.
func (g grid) refuse(sol solution, smaller, larger Trial) string {
	gain := smaller.AICc - larger.AICc
	switch {
	case !(gain > MinAICcGain):
		return fmt.Sprintf("AICc falls by %.1f, more than %.0f needed", gain, MinAICcGain)
	case larger.Sigma > plainLoss*smaller.Sigma && !(gain/larger.Inflation > MinAICcGain):
		return fmt.Sprintf("AICc falls by %.1f, but residuals hang together: worth %.1f, more than %.0f needed", gain, gain/larger.Inflation, MinAICcGain)
	}
	asked := larger.Sigma < smaller.Sigma/2 || (larger.Inflation == 1 && smaller.Inflation > 1)
	arcs := ArcsOf(sol.p)
	for k, a := range arcs {
		if k > 0 && closer(arcs[k-1], a) {
			return fmt.Sprintf("arcs %d and %d have time constants within %.1f and capacitances within %.1f of each other: one process with a spread",
				k, k+1, a.Tau()/arcs[k-1].Tau(), a.Capacitance()/arcs[k-1].Capacitance())
		}
		if why := g.unclear(sol, k, a); why != "" && !asked {
			return why
		}
	}
	return ""
}

// unclear says what keeps arc k from being seen as an arc.
func (g grid) unclear(sol solution, k int, a Arc) string {
	low, high := math.Exp(g.logw[len(g.logw)-1])/(2*math.Pi), math.Exp(g.logw[0])/(2*math.Pi)
	slowest := k == sol.arcs-1
	if slowest && a.Peak() < low {
		return "" // the flank of a slow process: kept so that it does not spoil its neighbours
	}
	at := math.Min(a.Peak(), high)
	if share := cmplx.Abs(a.Impedance(at) / ModelOf(sol.p, at)); share < MinShare {
		return fmt.Sprintf("arc %d is %.1f %% of |Z| at its top, %.0f %% needed", k+1, 100*share, 100*MinShare)
	}
	if a.N < MinAutoExponent && !sol.heldN(k) && !(slowest && a.Capacitance() > contactLike) {
		return fmt.Sprintf("arc %d has n = %.2f, %.2f needed", k+1, a.N, MinAutoExponent)
	}
	return ""
}

// residuals of the used points relative to |Z|.
func (g grid) residuals(p []float64) []complex128 {
	out := make([]complex128, g.count())
	for i, w := range g.omega {
		out[i] = (ModelOf(p, w/(2*math.Pi)) - g.z[i]) * complex(g.weight[i], 0)
	}
	return out
}

func (s solution) heldN(k int) bool { return s.bound[ParamN(k)] < 0 && s.p[ParamN(k)] > minExponent }

func closer(a, b Arc) bool {
	return math.Abs(math.Log(a.Tau()/b.Tau())) < math.Log(sameTau) &&
		math.Abs(math.Log(a.Capacitance()/b.Capacitance())) < math.Log(sameC)
}
