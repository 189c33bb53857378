package spacecharge

import (
	"fmt"
	"math"
)

// solve lays the first mesh for ψ₀ and refines until the results agree with
// those of the halved mesh. A closed grain whose core takes nearly all of the
// compensating species is tried with another one.
func (h HalfGrain) solve(psi0 float64, at edge) (*Grain, error) {
	if err := h.check(); err != nil {
		return nil, err
	}
	order := []int{-1}
	if h.Closed {
		order = h.Medium.byCharge()
	}
	var first error
	for _, compensating := range order {
		g, err := h.attempt(psi0, at, compensating)
		if err == nil {
			return g, nil
		}
		if first == nil {
			first = fmt.Errorf("spacecharge: half grain of %.3g m at %.3g V: %w", h.Width, psi0*h.Medium.thermal, err)
		}
	}
	return nil, first
}

func (h HalfGrain) attempt(psi0 float64, at edge, compensating int) (*Grain, error) {
	g, err := h.begin(psi0, at)
	if err == nil {
		err = h.close(g, compensating)
	}
	if err == nil {
		g, err = h.settle(g)
	}
	if err != nil {
		return nil, err
	}
	return h.converge(g)
}

// quick is the number of Newton steps after which a start counts as poor.
const quick = 25

// begin finds a start. A potential that is not given is searched for with the
// interface held at trial values, which settles in a few steps from anywhere:
// Q(ψ₀) rises and the charge to be balanced does not, so the root is bracketed.
func (h HalfGrain) begin(psi0 float64, at edge) (*mesh, error) {
	g := h.firstMesh(psi0)
	g.edge = at
	if at.fixed || g.newton(quick) == nil {
		return g, nil
	}
	high := MaxReduced / g.zmax * (1 - 1e-9)
	low, spent := -high, g.iterations
	for range 100 {
		g = h.firstMesh(psi0)
		g.edge = edge{fixed: true}
		err := g.newton(maxNewton)
		spent += g.iterations
		if err != nil { // too far out for floating point
			if high-low < 1e-9 {
				return nil, err
			}
			if psi0 > 0 {
				high = psi0
			} else {
				low = psi0
			}
			psi0 = (max(low, -math.Abs(psi0)) + min(high, math.Abs(psi0))) / 2
			continue
		}
		q := -g.r[0]
		v, slope := at.charge(psi0, nil)
		f := math.Asinh(q) - math.Asinh(v)
		if f > 0 {
			high = psi0
		} else {
			low = psi0
		}
		reach := max(5/g.zmax, math.Abs(psi0))
		next := psi0 - max(-reach, min(reach, f/(g.pivot/math.Hypot(1, q)-slope/math.Hypot(1, v))))
		if !(next > low && next < high) {
			next = (low + high) / 2
		}
		if math.Abs(next-psi0) < 1e-3*math.Min(1/g.zmax, math.Abs(psi0)) || high-low < 1e-12 {
			break
		}
		psi0 = next
	}
	if g.edge, g.iterations = at, spent; g.zmax*math.Abs(psi0) > 0.999*MaxReduced {
		return nil, &NotConverged{spent, g.lastStep, "a charge that some potential of this grain balances"}
	}
	return g, nil
}

// start returns ψ₀ at which a semi-infinite layer balances a charge that does
// not rise with ψ₀; what the first mesh is laid for. Bisection: it need not be sharp.
func (m *Medium) start(charge func(psi float64) float64) float64 {
	s := m.newSlope()
	high := MaxReduced / m.largestCharge()
	low := -high
	for range 40 {
		psi := (low + high) / 2
		if q := math.Copysign(s.at(psi), psi); q > charge(psi) {
			high = psi
		} else {
			low = psi
		}
	}
	return (low + high) / 2
}

func (h HalfGrain) firstMesh(psi0 float64) *mesh {
	m := h.Medium
	ends, psi := m.grade(psi0, h.Width/m.debye, dropFor(h.tolerance()))
	ends, psi = h.withJoints(ends, psi)
	for _, p := range h.Profiles {
		ends, psi = p.resolve(ends, psi, m.debye)
	}
	ends, psi, core := h.withThick(ends, psi)
	g := m.newMesh(ends, h.phases(len(ends)-1, core, 0, nil))
	g.core = core
	g.spread(psi)
	h.freeze(g)
	return g
}

// phases returns those of n cells, the first of them in a thick core.
func (h HalfGrain) phases(n, core int, psi float64, base []float64) []*phase {
	p, list := h.Medium.newPhase(psi, base), make([]*phase, n)
	for k := range list {
		list[k] = p
	}
	if core > 0 {
		c := h.thick.phase(h.Medium, p)
		for k := range core {
			list[k] = c
		}
	}
	return list
}

// settle solves on the first mesh, moves the reference to the centre where it
// is charged, and mends the mesh where it was laid for another potential.
func (h HalfGrain) settle(g *mesh) (*mesh, error) {
	if err := g.newton(maxNewton); err != nil {
		return nil, err
	}
	for range 6 {
		ends, psi, core, changed := g.divided(dropFor(h.tolerance()))
		centre := g.u[len(g.u)-1]
		shift := g.zmax*math.Abs(centre) > 1e-2 || g.closed.far()
		if !changed && !shift {
			return g, nil
		}
		next := g
		if changed {
			next = g.medium.newMesh(ends, h.phases(len(ends)-1, core, g.reference, g.closed.reference()))
			next.inherit(g)
			next.core = core
			next.closed.apply(next)
			next.spread(psi)
			h.freeze(next)
		}
		if shift {
			h.rebase(next, centre)
		}
		if err := next.newton(maxNewton); err != nil {
			return nil, err
		}
		g = next
	}
	return g, nil
}

// rebase moves the reference potential by a shift.
func (h HalfGrain) rebase(g *mesh, shift float64) {
	g.reference += shift
	for i := range g.u {
		g.u[i] -= shift
	}
	g.closed.rebase()
	copy(g.phase, h.phases(len(g.phase), g.core, g.reference, g.closed.reference()))
	g.closed.apply(g)
}

// maxRounds bounds the refinements; two are usual, more mend a corner that the
// first mesh knew nothing of, by halves.
const maxRounds = 16

// converge halves the mesh, compares, and refines the cells that differ.
func (h HalfGrain) converge(g *mesh) (*Grain, error) {
	coarse := h.results(g)
	for round := 1; ; round++ {
		fine := g.refined(func(int) bool { return true })
		h.freeze(fine)
		start := append([]float64(nil), fine.u...)
		if err := fine.newton(maxNewton); err != nil {
			return nil, err
		}
		better := h.results(fine)
		worst, marked := compare(coarse, better, len(g.phase), h.tolerance())
		out := h.grain(fine, better)
		out.RelativeError, out.PositionError = worst, positionError(fine, start)
		if worst <= h.tolerance() && out.PositionError <= h.tolerance() {
			return out, nil
		}
		if len(fine.phase) > maxCell || round == maxRounds {
			return nil, &NotConverged{fine.iterations, fine.lastStep,
				fmt.Sprintf("relative error below %.1g, reached %.2g", h.tolerance(), math.Max(worst, out.PositionError))}
		}
		if out.PositionError > h.tolerance() || marked == nil {
			g, coarse = fine, better
			continue
		}
		before := g.iterations
		g = g.refined(func(e int) bool { return marked[e] })
		h.freeze(g)
		if err := g.newton(maxNewton); err != nil {
			return nil, err
		}
		g.iterations += fine.iterations - before
		coarse = h.results(g)
	}
}
