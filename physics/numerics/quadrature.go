package numerics

import (
	"fmt"
	"math"
)

// Nodes and weights of the 7-point Gauss rule and its 15-point Kronrod
// extension on −1…1, positive half. Source: Piessens et al., QUADPACK
// (Springer, 1983), routine QK15.
var (
	kronrodNodes = [8]float64{
		0.991455371120812639206854697526329, 0.949107912342758524526189684047851,
		0.864864423359769072789712788640926, 0.741531185599394439863864773280788,
		0.586087235467691130294144691693013, 0.405845151377397166906606412076961,
		0.207784955007898467600689403773245, 0,
	}
	kronrodWeights = [8]float64{
		0.022935322010529224963732008058970, 0.063092092629978553290700663189204,
		0.104790010322250183839876322541518, 0.140653259715525918745189590510238,
		0.169004726639267902826583426598550, 0.190350578064785409913256402421014,
		0.204432940075298892414161999234649, 0.209482141084727828012999174891714,
	}
	gaussWeights = [4]float64{ // at nodes 1, 3, 5, 7 of the list above
		0.129484966168869693270611432679082, 0.279705391489276667901467771423780,
		0.381830050505118944950369775488975, 0.417959183673469387755102040816327,
	}
)

// Integrand writes its components at x into y.
type Integrand func(x float64, y []float64)

// Quadrature integrates adaptively; its zero value is ready to use and it may be
// reused to save allocations. It is not safe for concurrent use.
type Quadrature struct {
	// Relative is the error asked of each component relative to its own
	// integral of |y|; 0 means 1e-11.
	Relative float64
	// MaxPanels bounds the number of panels; 0 means 400.
	MaxPanels int

	panels []panel
	store  []float64
	y      []float64
}

type panel struct {
	a, b     float64
	worst    float64   // largest error of a component relative to its allowance
	sum, err []float64 // per component
	abs      []float64
}

// NotConverged reports an integral whose panels ran out.
type NotConverged struct {
	Panels int
	Ratio  float64 // largest remaining error over what was asked
}

func (e *NotConverged) Error() string {
	return fmt.Sprintf("numerics: integral not converged with %d panels, error is %.3g times what was asked", e.Panels, e.Ratio)
}

// Integrate returns the integrals of n components over a…b and an estimate of
// the error of each. Start gives optional interior points where the integrand
// changes character. The error is *NotConverged; the values are still the best found.
func (q *Quadrature) Integrate(f Integrand, n int, a, b float64, start ...float64) (sum, errs []float64, err error) {
	relative, most := q.Relative, q.MaxPanels
	if relative == 0 {
		relative = 1e-11
	}
	if most == 0 {
		most = 400
	}
	q.panels, q.store = q.panels[:0], q.store[:0]
	if cap(q.y) < 15*n {
		q.y = make([]float64, 15*n)
	}
	at := a
	for _, s := range append(start, b) {
		if s != at {
			q.add(f, n, at, s)
			at = s
		}
	}
	for {
		sum, errs = q.totals(n)
		worst, ratio := q.rank(n, relative)
		if ratio <= 1 {
			return sum, errs, nil
		}
		if len(q.panels) >= most {
			return sum, errs, &NotConverged{len(q.panels), ratio}
		}
		p := q.panels[worst]
		mid := p.a + (p.b-p.a)/2
		if mid == p.a || mid == p.b {
			return sum, errs, &NotConverged{len(q.panels), ratio}
		}
		last := len(q.panels) - 1
		q.panels[worst] = q.panels[last]
		q.panels = q.panels[:last]
		q.add(f, n, p.a, mid)
		q.add(f, n, mid, p.b)
	}
}

func (q *Quadrature) totals(n int) (sum, errs []float64) {
	sum, errs = make([]float64, n), make([]float64, n)
	for _, p := range q.panels {
		for k := range n {
			sum[k] += p.sum[k]
			errs[k] += p.err[k]
		}
	}
	return sum, errs
}

// rank finds the panel to split next and the largest ratio of a component's
// total error to its allowance.
func (q *Quadrature) rank(n int, relative float64) (worst int, ratio float64) {
	best := -1.0
	for k := range n {
		scale, total := 0.0, 0.0
		for _, p := range q.panels {
			scale += p.abs[k]
			total += p.err[k]
		}
		allowed := relative*scale + math.SmallestNonzeroFloat64
		ratio = max(ratio, total/allowed)
		for i, p := range q.panels {
			if r := p.err[k] / allowed; r > best {
				best, worst = r, i
			}
		}
	}
	return worst, ratio
}

func (q *Quadrature) add(f Integrand, n int, a, b float64) {
	mid, half := a+(b-a)/2, (b-a)/2
	y := q.y[:15*n]
	for j, t := range kronrodNodes {
		f(mid-half*t, y[2*j*n:(2*j+1)*n])
		if j < 7 {
			f(mid+half*t, y[(2*j+1)*n:(2*j+2)*n])
		}
	}
	p := panel{a: a, b: b, sum: q.take(n), err: q.take(n), abs: q.take(n)}
	for k := range n {
		kron, gauss, abs := 0.0, 0.0, 0.0
		for j := range kronrodNodes {
			pair, pairAbs := y[2*j*n+k], math.Abs(y[2*j*n+k])
			if j < 7 {
				pair += y[(2*j+1)*n+k]
				pairAbs += math.Abs(y[(2*j+1)*n+k])
			}
			kron += kronrodWeights[j] * pair
			abs += kronrodWeights[j] * pairAbs
			if j%2 == 1 {
				gauss += gaussWeights[j/2] * pair
			}
		}
		p.sum[k], p.abs[k] = half*kron, math.Abs(half)*abs
		p.err[k] = kronrodError(math.Abs(half*(kron-gauss)), p.abs[k])
	}
	q.panels = append(q.panels, p)
}

// kronrodError sharpens |K15 − G7|, which is the error of the Gauss rule, into
// one for the Kronrod rule: QUADPACK's (200 e/scale)^{3/2} law, floored by rounding.
func kronrodError(e, scale float64) float64 {
	if e == 0 || scale == 0 {
		return 0
	}
	e = scale * min(1, math.Pow(200*e/scale, 1.5))
	if floor := 50 * 0x1p-53 * scale; e < floor && floor > math.SmallestNonzeroFloat64*1e3 {
		return min(e, floor)
	}
	return e
}

func (q *Quadrature) take(n int) []float64 {
	if len(q.store)+n > cap(q.store) {
		q.store = make([]float64, 0, max(256, 2*cap(q.store)))
	}
	q.store = q.store[:len(q.store)+n]
	return q.store[len(q.store)-n:]
}
