package spacecharge

import (
	"fmt"
	"math"
)

// NotConverged is the typed error of a mesh solve that did not settle.
type NotConverged struct {
	Iterations int
	Step       float64 // last Newton step in k_BT/e
	Why        string
}

func (e *NotConverged) Error() string {
	return fmt.Sprintf("spacecharge: mesh solution did not settle (last step %.3g k_BT/e after %d iterations), expected %s", e.Step, e.Iterations, e.Why)
}

// maxNewton bounds the Newton steps on one mesh. The functional is convex, so
// the steps cannot stall; the bound is there for what rounding may do.
const maxNewton = 400

// nothing is the change, in k_BT/e or Debye lengths, below which a layer counts as none.
const nothing = 1e-13

// edge is what holds the interface end of the mesh: a fixed potential, or a
// charge that falls (or stays) as the potential there rises.
type edge struct {
	fixed  bool
	charge func(psi float64, y []float64) (value, slope float64) // in ε k_BT/(e λ_D)
	sites  *coreSites                                            // what fills it, for closed totals; nil: nothing
}

// mesh is −(κψ′)′ = ρ(x, ψ) on cells from the interface to the grain's centre,
// where the field vanishes. u is ψ less the reference of the phases.
type mesh struct {
	medium    *Medium
	ends      []float64   // cell ends in Debye lengths
	phase     []*phase    // per cell
	reference float64     // ψ_ref
	frozen    []float64   // charge of frozen profiles beyond their bulk, per cell point; nil: none
	given     [][]float64 // c/c∞ − 1 of each profile, per cell point
	u         []float64
	edge      edge
	core      int     // cells of a thick core, before x = 0
	closed    *closed // amounts as weighed in; nil: open

	rho, screening []float64 // per cell point
	r              []float64 // −gradient of the functional per node
	delta, trial   []float64
	lower          []float64 // factors: (degree+1)·points per cell
	stiffness      float64   // dQ/dψ₀ of the grain in the last factorisation
	pivot          float64   // the same at the first node: of core and grain
	total          float64   // Σ w|ρ|
	conc           []float64 // scratch
	zmax           float64
	iterations     int
	lastStep       float64
}

func (m *Medium) newMesh(ends []float64, phases []*phase) *mesh {
	n := len(ends) - 1
	nodes := n*degree + 1
	buf := make([]float64, 4*nodes+2*n*points+n*points*points)
	cut := func(k int) []float64 { s := buf[:k:k]; buf = buf[k:]; return s }
	g := &mesh{medium: m, ends: ends, phase: phases, u: cut(nodes), r: cut(nodes), delta: cut(nodes), trial: cut(nodes),
		rho: cut(n * points), screening: cut(n * points), lower: cut(n * points * points),
		conc: make([]float64, len(m.Species)), zmax: m.largestCharge()}
	return g
}

func (m *Medium) largestCharge() float64 {
	zmax := 0.0
	for i, s := range m.Species {
		if s.Mobile {
			zmax = max(zmax, math.Abs(m.z[i]))
		}
	}
	return zmax
}

// evaluate writes densities and the residual r = wρ − Ku (+ interface charge) at u.
func (g *mesh) evaluate(u []float64) bool {
	clear(g.r)
	g.total = 0
	n := len(g.phase)
	for e := range n {
		p, at := g.phase[e], e*points
		first := 0
		if e > 0 && g.phase[e-1] == p && g.frozen == nil { // the shared node is the same
			g.rho[at], g.screening[at] = g.rho[at-1], g.screening[at-1]
			first = 1
		}
		for k := first; k < points; k++ {
			rho, s, ok := p.density(u[e*degree+k], g.conc)
			if !ok {
				return false
			}
			if g.frozen != nil {
				rho += g.frozen[at+k]
			}
			g.rho[at+k], g.screening[at+k] = rho, s
		}
		g.residual(e, u[e*degree:e*degree+points])
	}
	if !g.edge.fixed {
		q, _ := g.edge.charge(u[0]+g.reference, g.shifts())
		g.r[0] += q
	}
	if g.closed != nil {
		g.closed.evaluate(g, u)
	}
	return !math.IsNaN(g.total) && !math.IsInf(g.total, 0)
}

// residual adds one cell. Differences are taken against the cell's first node,
// where stiffness rows sum to zero anyway, so that a flat potential cancels exactly.
func (g *mesh) residual(e int, u []float64) {
	h := g.ends[e+1] - g.ends[e]
	k := 2 * g.phase[e].permittivity / h
	var d [points]float64
	for i := range points {
		d[i] = u[i] - u[0]
	}
	r, rho := g.r[e*degree:e*degree+points], g.rho[e*points:e*points+points]
	for i := range points {
		sum, row := 0.0, &lobatto.stiff[i]
		for j := 1; j < points; j++ {
			sum += row[j] * d[j]
		}
		w := h / 2 * lobatto.weight[i] * rho[i]
		r[i] += w - k*sum
		g.total += math.Abs(w)
	}
}

// newton minimises the convex functional ∫[½κψ′² + Π(ψ)]dx. A step is halved
// while the functional's slope along it still has changed sign to more than it was.
func (g *mesh) newton(limit int) error {
	if !g.evaluate(g.u) {
		return &NotConverged{0, 0, "a start within the range of floating point"}
	}
	for range limit {
		g.iterations++
		g.factor()
		copy(g.delta, g.r)
		g.solve(g.delta, g.finish)
		step, size, before := 0.0, 0.0, 0.0
		if g.closed != nil {
			step, before = g.closed.border(g)
		}
		for i, d := range g.delta {
			step = max(step, math.Abs(d))
			size = max(size, math.Abs(g.u[i]))
			before += g.r[i] * d
		}
		g.lastStep = step
		if g.charged() {
			step = 0
			for _, d := range g.delta {
				step = max(step, math.Abs(d-g.delta[0]))
			}
		}
		if math.IsNaN(step) || math.IsInf(step, 0) {
			return &NotConverged{g.iterations, step, "a finite step"}
		}
		if g.zmax*size > 4*MaxReduced {
			return &NotConverged{g.iterations, step, fmt.Sprintf("potentials below %d k_BT/e over the charge number", MaxReduced)}
		}
		settled := g.zmax*step <= 1e-6*math.Min(1, g.zmax*size)+nothing
		if !g.advance(math.Min(1, 30/(g.zmax*step)), before, settled) {
			return &NotConverged{g.iterations, step, "a step that lowers the functional"}
		}
		if settled {
			g.factor()
			return nil
		}
	}
	return &NotConverged{g.iterations, g.lastStep, fmt.Sprintf("it within %d", limit)}
}

// charged says whether the charge to be balanced is met to rounding, in which
// case what the potential as a whole still moves by is noise.
func (g *mesh) charged() bool {
	d := math.Abs(g.delta[0])
	return !g.edge.fixed && g.zmax*d < 1e-3 && d*g.pivot < 1e-15*g.total
}

// advance moves along delta by the largest of t, t/2, … that does not overshoot.
func (g *mesh) advance(t, before float64, settled bool) bool {
	for range 60 {
		for i, d := range g.delta {
			g.trial[i] = g.u[i] + t*d
		}
		if g.closed != nil {
			g.closed.move(g, t)
		}
		if g.evaluate(g.trial) {
			after := g.closed.slope()
			for i, d := range g.delta {
				after += g.r[i] * d
			}
			if settled || after >= -0.5*math.Abs(before) {
				copy(g.u, g.trial)
				g.closed.accept()
				return true
			}
		}
		t /= 2
	}
	return false
}

// charge is the charge the grain balances, −Σ wρ, and flux the same from the
// field at the interface; they agree when the solve has converged (Gauss' law).
func (g *mesh) charge() (charge, flux float64) {
	sum := 0.0
	for e := g.core; e < len(g.phase); e++ {
		h := g.ends[e+1] - g.ends[e]
		for k := range points {
			sum += h / 2 * lobatto.weight[k] * g.rho[e*points+k]
		}
	}
	h, at := g.ends[g.core+1]-g.ends[g.core], g.core*degree
	d := 0.0
	for j := 1; j < points; j++ {
		d += lobatto.stiff[0][j] * (g.u[at+j] - g.u[at])
	}
	return -sum, 2*g.phase[g.core].permittivity/h*d - h/2*lobatto.weight[0]*g.rho[g.core*points]
}

// shifts are the logarithms by which closed totals change the activities, per
// mobile species; nil for an open grain.
func (g *mesh) shifts() []float64 {
	if g.closed == nil {
		return nil
	}
	return g.closed.y
}
