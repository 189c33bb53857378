package impedance

import (
	"cmp"
	"math"
	"math/cmplx"
	"slices"

	"brinkfield/physics/numerics"
	"gonum.org/v1/gonum/mat"
)

const (
	minExponent = 0.5
	maxExponent = 1.0
	// An arc resistance above openFactor × the largest |Z| changes nothing within
	// any noise: the arc is then a constant-phase element alone.
	openFactor = 1e5
)

// solution is a fit of one number of arcs before it is judged.
type solution struct {
	arcs    int
	p       []float64 // public parameters: ln Q
	sum     float64
	bound   []int
	inverse *mat.SymDense // (JᵀJ)⁻¹ in public parameters, nil when singular
	run     numerics.LeastSquaresResult
	starts  int // how many starts came to this minimum
}

// free counts the parameters that were fitted.
func (s solution) free() int {
	n := 0
	for _, b := range s.bound {
		if b == 0 {
			n++
		}
	}
	return n
}

// hold maps positions of the parameter vector to values, in public parameters.
type hold map[int]float64

// problem builds the box for k arcs in internal parameters; held parameters have
// equal bounds.
func (g grid) problem(k int, ref []float64, h hold) numerics.LeastSquaresProblem {
	n := countParams(k)
	zmin, zmax, lmin := math.Inf(1), 0.0, math.Inf(1)
	for i, z := range g.z {
		a := cmplx.Abs(z)
		zmin, zmax = math.Min(zmin, a), math.Max(zmax, a)
		lmin = math.Min(lmin, a/g.omega[i])
	}
	pr := numerics.LeastSquaresProblem{Count: 2 * g.count(), Lower: make([]float64, n), Upper: make([]float64, n),
		Typical: make([]float64, n), MaxStep: make([]float64, n)}
	set := func(j int, lo, hi, typical, step float64) {
		pr.Lower[j], pr.Upper[j], pr.Typical[j], pr.MaxStep[j] = lo, hi, typical, step
	}
	set(ParamLeadR, 0, math.Inf(1), zmin, zmax)
	set(ParamLeadL, 0, math.Inf(1), lmin, zmax)
	for a := 0; a < k; a++ {
		set(ParamR(a), math.Log(zmin)-math.Log(openFactor), math.Log(zmax)+math.Log(openFactor), 1, 1.5)
		set(ParamQ(a), -math.Log(zmax)-30, -math.Log(zmin)+30, 1, 1.5)
		set(ParamN(a), minExponent, maxExponent, 1, 0.15)
	}
	for j, v := range h {
		if j < n {
			pr.Lower[j], pr.Upper[j] = v, v
		}
	}
	pr.Eval = func(p, r []float64, jac [][]float64) { g.eval(ref, p, r, jac) }
	return pr
}

// refine iterates from public parameters; the result's parameters are public, its
// inverse internal, by the returned ln ωᵣ.
func (g grid) refine(p []float64, h hold, set numerics.LeastSquaresSettings) (numerics.LeastSquaresResult, []float64, error) {
	ref := g.references(p, h)
	res, err := numerics.LeastSquares(g.problem(len(ref), ref, h.internal(ref)), internal(p, ref), set)
	if err == nil && math.IsNaN(res.Sum) {
		err = ErrNoFit
	}
	if err != nil {
		return res, ref, err
	}
	res.Params = public(res.Params, ref)
	return res, ref, nil
}

// references puts ωᵣ of each arc at its top, or at the end of the window nearest to
// it. Where Q is held and n is not, ln ωᵣ = 0: only ln Q itself can then be held.
func (g grid) references(p []float64, h hold) []float64 {
	ref := refsFor(p)
	lo, hi := g.logw[len(g.logw)-1], g.logw[0]
	for a := range ref {
		_, heldQ := h[ParamQ(a)]
		_, heldN := h[ParamN(a)]
		if ref[a] = math.Min(math.Max(ref[a], lo), hi); heldQ && !heldN {
			ref[a] = 0
		}
	}
	return ref
}

// sameMinimum: two runs whose sums agree to this part are one minimum.
const sameMinimum = 1e-3

type roughRun struct {
	p   []float64
	sum float64
}

// candidates runs k arcs roughly from several starts, best first. extra holds
// further starts in public parameters.
func (g grid) candidates(s *startGrid, k int, h hold, extra ...[]float64) []roughRun {
	var runs []roughRun
	for _, p := range append(s.best(k, startKeep), extra...) {
		res, _, err := g.refine(p, h, numerics.LeastSquaresSettings{MaxIterations: 40, StepTolerance: 1e-3})
		if err == nil {
			runs = append(runs, roughRun{res.Params, res.Sum})
		}
	}
	slices.SortStableFunc(runs, func(a, b roughRun) int { return cmp.Compare(a.sum, b.sum) })
	return runs
}

// deepest finishes the first of the runs and returns those that went elsewhere.
func (g grid) deepest(runs []roughRun, h hold) (sol solution, rest []roughRun, ok bool) {
	for len(runs) > 0 && !ok {
		sol, ok = g.finish(runs[0].p, h)
		top := runs[0].sum * (1 + sameMinimum)
		for len(runs) > 0 && runs[0].sum <= top {
			sol.starts++
			runs = runs[1:]
		}
	}
	return sol, runs, ok
}

// withSlowArc adds to a solution the flank of a process below the window, a start
// the grid of time constants may miss because it gains little.
func (g grid) withSlowArc(p []float64) []float64 {
	lowest := g.logw[len(g.logw)-1]
	const share, n = 0.05, 0.85 // of |Z| at the lowest frequency
	lnR := math.Log(share/g.weight[len(g.weight)-1]) + 2*n
	return append(slices.Clone(p), lnR, -lnR-n*(lowest-2), n)
}

// finish iterates to the tight step, with the reference frequency of each arc at its
// own top.
func (g grid) finish(p []float64, h hold) (solution, bool) {
	res, ref, err := g.refine(sortedArcs(p), h, numerics.LeastSquaresSettings{})
	if err != nil {
		return solution{}, false
	}
	return solution{arcs: len(ref), p: res.Params, sum: res.Sum, bound: res.Bound, run: res,
		inverse: publicInverse(res.Inverse, ref, res.Bound)}, true
}

// internal turns ln Q into ln(Q ωᵣⁿ).
func internal(p, ref []float64) []float64 {
	out := slices.Clone(p)
	for a, lr := range ref {
		out[ParamQ(a)] += p[ParamN(a)] * lr
	}
	return out
}

// public is the inverse of internal.
func public(p, ref []float64) []float64 {
	out := slices.Clone(p)
	for a, lr := range ref {
		out[ParamQ(a)] -= p[ParamN(a)] * lr
	}
	return out
}

// internal turns held public values into held internal ones.
func (h hold) internal(ref []float64) hold {
	out := hold{}
	for j, v := range h {
		out[j] = v
	}
	for a, lr := range ref {
		q, heldQ := h[ParamQ(a)]
		n, heldN := h[ParamN(a)]
		if heldQ && heldN {
			out[ParamQ(a)] = q + n*lr
		} // with n free lr is 0, see references
	}
	return out
}

// publicInverse carries (JᵀJ)⁻¹ over: ln Q = q − n ln ωᵣ.
func publicInverse(inv *mat.SymDense, ref []float64, bound []int) *mat.SymDense {
	if inv == nil {
		return nil
	}
	n := inv.SymmetricDim()
	t := mat.NewDense(n, n, nil)
	for j := 0; j < n; j++ {
		t.Set(j, j, 1)
	}
	for a, lr := range ref {
		if bound[ParamN(a)] == 0 {
			t.Set(ParamQ(a), ParamN(a), -lr)
		}
	}
	var tmp, full mat.Dense
	tmp.Mul(t, inv)
	full.Mul(&tmp, t.T())
	out := mat.NewSymDense(n, nil)
	for i := 0; i < n; i++ {
		for j := i; j < n; j++ {
			out.SetSym(i, j, (full.At(i, j)+full.At(j, i))/2)
		}
	}
	return out
}

// refsFor puts ωᵣ of each arc at its top.
func refsFor(p []float64) []float64 {
	var ref []float64
	for a := 0; ParamN(a) < len(p); a++ {
		ref = append(ref, -(p[ParamR(a)]+p[ParamQ(a)])/p[ParamN(a)])
	}
	return ref
}

// sortedArcs orders the arcs by time constant, fastest first.
func sortedArcs(p []float64) []float64 {
	ref := refsFor(p)
	order := make([]int, len(ref))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(ref[b], ref[a]) })
	out := slices.Clone(p[:2])
	for _, a := range order {
		out = append(out, p[ParamR(a):ParamN(a)+1]...)
	}
	return out
}
