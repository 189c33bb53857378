package numerics

import (
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"
)

// Status says how an iteration ended.
type Status int

const (
	// Converged: the Gauss–Newton step fell below the step tolerance.
	Converged Status = iota
	// RoundingFloor: steps stopped shrinking above the tolerance but below
	// 1e-7; further digits are lost in the arithmetic.
	RoundingFloor
	// IterationLimit: the budget ran out first.
	IterationLimit
	// Stalled: no step, however short, lowered the sum of squares.
	Stalled
	// NotFinite: the residuals are not finite at the start.
	NotFinite
)

// String names the status for a report.
func (s Status) String() string {
	return [...]string{"converged", "converged to rounding", "iteration limit", "stalled", "not finite"}[s]
}

// ErrProblem is wrapped by every error about a malformed problem.
var ErrProblem = errors.New("numerics: least squares problem is malformed")

// Residuals evaluates r(p). When jac is not nil it also fills the Jacobian:
// jac[j][i] = ∂r_i/∂p_j, one slice per parameter.
type Residuals func(p, r []float64, jac [][]float64)

// LeastSquaresProblem is min ½ Σ r_i(p)² over a box.
type LeastSquaresProblem struct {
	Eval  Residuals
	Count int // number of residuals
	// Lower and Upper bound the parameters; nil means unbounded. A parameter
	// with equal bounds is held.
	Lower, Upper []float64
	// Typical is the size a step of each parameter is compared with (nil: 1,
	// right for logarithms).
	Typical []float64
	// MaxStep limits one step of each parameter (nil: no limit).
	MaxStep []float64
}

// LeastSquaresSettings: the zero value is the documented default.
type LeastSquaresSettings struct {
	MaxIterations int     // 0: 200; as many again may follow where the sum is flat
	StepTolerance float64 // relative to Typical; 0: 1e-12
}

// LeastSquaresResult reports the run.
type LeastSquaresResult struct {
	Params []float64
	Sum    float64 // Σ r²
	// Bound is −1 or +1 where a parameter ended on its lower or upper bound
	// with the gradient pushing outwards (held ones included), else 0.
	Bound []int
	// Inverse is (JᵀJ)⁻¹ over the parameters with Bound 0, zero elsewhere;
	// times the residual variance it is the covariance. Nil if JᵀJ is singular.
	Inverse      *mat.SymDense
	GradientNorm float64 // max |Jᵀr| over free parameters, each per column norm
	LastStep     float64 // relative
	Iterations   int
	Status       Status
}

// LeastSquares minimises a sum of squares by the damped Gauss–Newton method of
// Levenberg (1944) and Marquardt (1963), damping scaled by diag(JᵀJ), with the
// box handled by projection: a parameter on a bound whose gradient points
// outwards rests until it points back. Once the predicted gain is below the
// rounding of the sum, undamped steps run on to the step tolerance, so that two
// machines whose exp differs in the last bit end at the same answer.
func LeastSquares(pr LeastSquaresProblem, start []float64, set LeastSquaresSettings) (LeastSquaresResult, error) {
	w, err := newWorkspace(pr, start, set)
	if err != nil {
		return LeastSquaresResult{}, err
	}
	return w.run(), nil
}

type workspace struct {
	LeastSquaresProblem
	maxIter  int
	tol      float64
	p, trial []float64
	r, rt    []float64
	jac      [][]float64
	grad     []float64
	jtj      []float64 // n×n, row-major
	bound    []int
	free     []int
	sum      float64
	step     []float64
	iter     int
	normal   *mat.SymDense
	rhs, sol *mat.VecDense
}

func newWorkspace(pr LeastSquaresProblem, start []float64, set LeastSquaresSettings) (*workspace, error) {
	n := len(start)
	for _, s := range [][]float64{pr.Lower, pr.Upper, pr.Typical, pr.MaxStep} {
		if s != nil && len(s) != n {
			return nil, fmt.Errorf("%w: a slice has %d entries, expected %d", ErrProblem, len(s), n)
		}
	}
	if n == 0 || pr.Eval == nil || pr.Count < 1 {
		return nil, fmt.Errorf("%w: %d parameters and %d residuals, expected at least one of each and a function", ErrProblem, n, pr.Count)
	}
	w := &workspace{LeastSquaresProblem: pr, maxIter: set.MaxIterations, tol: set.StepTolerance,
		p: make([]float64, n), trial: make([]float64, n), r: make([]float64, pr.Count), rt: make([]float64, pr.Count),
		jac: make([][]float64, n), grad: make([]float64, n), jtj: make([]float64, n*n),
		bound: make([]int, n), step: make([]float64, n)}
	if w.maxIter == 0 {
		w.maxIter = 200
	}
	if w.tol == 0 {
		w.tol = 1e-12
	}
	back := make([]float64, n*pr.Count)
	for j := range w.jac {
		w.jac[j] = back[j*pr.Count : (j+1)*pr.Count]
		lo, hi := w.box(j)
		if !(lo <= hi) {
			return nil, fmt.Errorf("%w: bounds of parameter %d are %g and %g, expected lower ≤ upper", ErrProblem, j, lo, hi)
		}
		w.p[j] = math.Min(math.Max(start[j], lo), hi)
	}
	return w, nil
}

func (w *workspace) box(j int) (lo, hi float64) {
	lo, hi = math.Inf(-1), math.Inf(1)
	if w.Lower != nil {
		lo = w.Lower[j]
	}
	if w.Upper != nil {
		hi = w.Upper[j]
	}
	return lo, hi
}

func (w *workspace) run() LeastSquaresResult {
	w.linearise()
	if !finiteSum(w.sum) {
		return w.result(NotFinite, math.NaN())
	}
	damping, last := 1e-3, math.Inf(1)
	for w.iter = 1; w.iter <= w.maxIter; w.iter++ {
		if len(w.free) == 0 {
			return w.result(Converged, 0)
		}
		gain, ok := w.solve(damping)
		if !ok {
			damping = math.Max(10*damping, 1e-9)
			if damping > 1e16 {
				return w.result(Stalled, last)
			}
			continue
		}
		if gain < 1e-12*w.sum || w.sum == 0 {
			return w.polish()
		}
		size := w.move()
		w.Eval(w.trial, w.rt, nil)
		sum := floats.Dot(w.rt, w.rt)
		if finiteSum(sum) && sum < w.sum {
			w.p, w.trial = w.trial, w.p
			quality := (w.sum - sum) / gain
			w.linearise()
			last = size
			if size < w.tol {
				return w.result(Converged, size)
			}
			if quality > 0.25 {
				damping = math.Max(damping/10, 1e-15)
			}
			continue
		}
		damping *= 8
		if damping > 1e16 || size < 1e-15 {
			return w.result(Stalled, last)
		}
	}
	w.iter = w.maxIter
	return w.result(IterationLimit, last)
}

// polish runs on when the sum can no longer tell better from worse but the gradient
// still can: undamped, or, where large residuals on a curved surface make the
// undamped step grow, with as much damping as makes it shrink.
func (w *workspace) polish() LeastSquaresResult {
	last, damping := math.Inf(1), 0.0
	for end := w.iter + w.maxIter; w.iter <= end; w.iter++ {
		if _, ok := w.solve(damping); !ok {
			return w.result(Stalled, last)
		}
		size := w.move()
		if size >= 0.9*last {
			if size < 1e-8 {
				return w.result(RoundingFloor, size)
			}
			damping = math.Max(4*damping, 0.1)
			if damping > 1e6 {
				return w.result(Stalled, last)
			}
			last = math.Inf(1)
			continue
		}
		w.p, w.trial = w.trial, w.p
		w.linearise()
		last = size
		if size < w.tol || len(w.free) == 0 {
			return w.result(Converged, size)
		}
	}
	return w.result(IterationLimit, last)
}

// linearise evaluates residuals, Jacobian, gradient and normal matrix at p and
// decides which parameters rest on a bound.
func (w *workspace) linearise() {
	w.Eval(w.p, w.r, w.jac)
	w.sum = floats.Dot(w.r, w.r)
	n := len(w.p)
	w.free = w.free[:0]
	for j := range w.p {
		w.grad[j] = floats.Dot(w.jac[j], w.r)
		lo, hi := w.box(j)
		w.bound[j] = 0
		switch {
		case w.p[j] <= lo && (w.grad[j] >= 0 || lo == hi):
			w.bound[j] = -1
		case w.p[j] >= hi && w.grad[j] <= 0:
			w.bound[j] = 1
		default:
			w.free = append(w.free, j)
		}
	}
	for a, i := range w.free {
		for _, j := range w.free[a:] {
			v := floats.Dot(w.jac[i], w.jac[j])
			w.jtj[i*n+j], w.jtj[j*n+i] = v, v
		}
	}
}

// solve fills step with the damped step and returns the gain in Σ r² the linear
// model predicts. Columns are scaled to unit norm before the Cholesky factorisation.
func (w *workspace) solve(damping float64) (gain float64, ok bool) {
	n, m := len(w.p), len(w.free)
	if w.normal == nil || w.normal.SymmetricDim() != m {
		w.normal, w.rhs, w.sol = mat.NewSymDense(m, nil), mat.NewVecDense(m, nil), mat.NewVecDense(m, nil)
	}
	scale := make([]float64, m)
	for a, j := range w.free {
		scale[a] = math.Sqrt(w.jtj[j*n+j])
		if scale[a] == 0 {
			scale[a] = 1
		}
	}
	for a, i := range w.free {
		for b := a; b < m; b++ {
			w.normal.SetSym(a, b, w.jtj[i*n+w.free[b]]/(scale[a]*scale[b]))
		}
		w.normal.SetSym(a, a, w.normal.At(a, a)+damping)
		w.rhs.SetVec(a, -w.grad[i]/scale[a])
	}
	var chol mat.Cholesky
	if !chol.Factorize(w.normal) {
		return 0, false
	}
	if err := chol.SolveVecTo(w.sol, w.rhs); err != nil && damping > 0 {
		return 0, false
	}
	for j := range w.step {
		w.step[j] = 0
	}
	for a, j := range w.free {
		s := w.sol.AtVec(a)
		w.step[j] = s / scale[a]
		gain += s * (w.rhs.AtVec(a) + damping*s) // r² − |r + Js|² = s·(g + λs)
	}
	return gain, finiteSum(gain)
}

// move puts the limited, projected step into trial and returns its relative size.
func (w *workspace) move() float64 {
	shrink := 1.0
	if w.MaxStep != nil {
		for _, j := range w.free {
			if s := math.Abs(w.step[j]); s*shrink > w.MaxStep[j] {
				shrink = w.MaxStep[j] / s
			}
		}
	}
	size := 0.0
	for j, v := range w.p {
		lo, hi := w.box(j)
		t := math.Min(math.Max(v+shrink*w.step[j], lo), hi)
		w.trial[j] = t
		typical := 1.0
		if w.Typical != nil {
			typical = w.Typical[j]
		}
		size = math.Max(size, math.Abs(t-v)/math.Max(typical, math.Abs(v)))
	}
	return size
}

func (w *workspace) result(status Status, last float64) LeastSquaresResult {
	res := LeastSquaresResult{Params: w.p, Sum: w.sum, Bound: w.bound, LastStep: last, Iterations: w.iter, Status: status}
	if status == NotFinite {
		return res
	}
	for _, j := range w.free {
		if norm := math.Sqrt(floats.Dot(w.jac[j], w.jac[j])); norm > 0 {
			res.GradientNorm = math.Max(res.GradientNorm, math.Abs(w.grad[j])/norm)
		}
	}
	res.Inverse = w.inverse()
	return res
}

// inverse returns (JᵀJ)⁻¹ over the free parameters by way of the scaled matrix.
func (w *workspace) inverse() *mat.SymDense {
	n := len(w.p)
	out := mat.NewSymDense(n, nil)
	if len(w.free) == 0 {
		return out
	}
	if _, ok := w.solve(0); !ok {
		return nil
	}
	var chol mat.Cholesky
	var inv mat.SymDense
	if !chol.Factorize(w.normal) {
		return nil
	}
	if err := chol.InverseTo(&inv); err != nil {
		return nil
	}
	for a, i := range w.free {
		for b := a; b < len(w.free); b++ {
			j := w.free[b]
			out.SetSym(i, j, inv.At(a, b)/math.Sqrt(w.jtj[i*n+i]*w.jtj[j*n+j]))
		}
	}
	return out
}

func finiteSum(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }
