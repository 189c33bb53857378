package spacecharge

import (
	"fmt"
	"math"

	q "brinkfield/physics/quantity"
)

// HalfGrain is a grain from its interface (x = 0) to its centre (x = Width),
// where the field vanishes. It is solved on a mesh, for what the quadrature of
// Medium.Solve cannot do: layers that overlap, frozen profiles c(x).
//
// The grain is open, in equilibrium with a neutral bulk reservoir of the
// medium's concentrations, against which potentials count, or closed. Model: cells with
// polynomials of degree 8 through Gauss–Lobatto points, each point's charge
// weighed in its own volume (charge is conserved as in finite volumes), Newton's
// method on the convex functional ∫[½εφ′² + Π(φ)]dx. Cells follow the local
// Debye length; every result is computed on a mesh and on its halves.
//
//	g, err := spacecharge.HalfGrain{Medium: m, Width: 10e-9}.AtPotential(0.3)
type HalfGrain struct {
	Medium   *Medium
	Width    float64 // m, half the grain; 0: so wide that the layers do not meet
	Profiles []FrozenProfile

	// Closed: grain and core hold the mobile species as weighed in, at the
	// medium's concentrations over Width, and potentials count against what the
	// compensating species would have; use Drop. Otherwise open.
	Closed bool

	Tolerance float64 // relative, of all results; 0: 1e-6

	thick *ThickCore
}

// FrozenProfile is the given concentration of a species that does not follow
// the potential. The species must be listed as not mobile.
type FrozenProfile struct {
	Species int
	Excess  func(x float64) float64 // c(x)/c∞ − 1 at x in m, ≥ −1
	Joints  []float64               // places in m where it bends; cells end there
}

// Grain is a solved half grain. One side only, like Layer.
type Grain struct {
	Medium *Medium
	Width  float64 // m; that of the mesh when none was given

	Phi0   float64 // V, φ(0) against the reservoir
	Drop   float64 // V, φ(0) − φ(centre): the Φ₀ of layers that overlap
	Charge float64 // C/m² that this side balances: −∫ρ dx
	Field  float64 // V/m at x = 0, from the slope of the potential

	Capacitance float64 // F/m², dQ/dΦ₀

	// As in Layer, over x = 0…Width against the reservoir's concentrations; a
	// frozen profile has lengths too, a flat frozen species has none.
	AcrossLength, AlongLength []float64
	Across, Along             float64 // Ω m² and S of the summed σ; NaN without a carrier

	// Contents per species in m⁻², what grain and core of this side hold; of the
	// core's own cells or sites in CoreContents. CoreCharge in C/m² is that of a
	// thick core's cells.
	Contents, CoreContents []float64
	CoreCharge             float64

	Closed bool // conserved totals; otherwise in equilibrium with a reservoir

	RelativeError float64 // largest difference of a result between mesh and halved mesh
	PositionError float64 // the same of positions, against their distance
	Residual      float64 // |charge − εE| over ∫|ρ|dx
	Iterations    int     // Newton steps, all meshes
	Cells         int     // of the last mesh

	grid     *mesh
	profiles []FrozenProfile
}

// OverlapFlag is the part of Φ₀ left at the centre above which layers overlap.
const OverlapFlag = 1e-3

// Overlap returns φ(centre)/φ(0), and whether it is so large that the grain has
// no bulk and Drop is to be shown in place of Phi0.
func (g *Grain) Overlap() (share float64, flagged bool) {
	if g.Phi0 == 0 {
		return 0, false
	}
	share = (g.Phi0 - g.Drop) / g.Phi0
	return share, math.Abs(share) > OverlapFlag
}

// AtPotential solves for a given φ(0) against the reservoir, in V.
func (h HalfGrain) AtPotential(phi0 float64) (*Grain, error) {
	if math.IsNaN(phi0) {
		return nil, fmt.Errorf("spacecharge: potential is not usable (%g V), expected a number", phi0)
	}
	if _, err := h.Medium.open(phi0); err != nil {
		return nil, err
	}
	return h.solve(phi0/h.Medium.thermal, edge{fixed: true})
}

// AtCharge solves for a given interface charge of this side, in C/m².
func (h HalfGrain) AtCharge(charge float64) (*Grain, error) {
	if math.IsNaN(charge) || math.IsInf(charge, 0) {
		return nil, fmt.Errorf("spacecharge: charge is not usable (%g C/m²), expected a finite number", charge)
	}
	value := charge / h.Medium.chargeUnit()
	at := edge{charge: func(float64, []float64) (float64, float64) { return value, 0 }}
	return h.solve(h.Medium.start(func(float64) float64 { return value }), at)
}

// WithCore solves for core sites in equilibrium with the grain, and returns
// their occupancies beside it. Core.Sides shares the core's charge out.
func (h HalfGrain) WithCore(core Core) (*Grain, Filled, error) {
	m := h.Medium
	if core.Sides != Surface && core.Sides != Boundary {
		return nil, Filled{}, fmt.Errorf("spacecharge: number of layers is not usable (%d), expected 1 or 2", core.Sides)
	}
	affinity, err := m.affinities(core)
	if err != nil {
		return nil, Filled{}, err
	}
	c := &coreSites{m: m, core: core, affinity: affinity, theta: make([]float64, len(core.Sites)), shifted: make([]float64, len(affinity))}
	psi0 := m.start(func(psi float64) float64 { v, _ := c.charge(psi, nil); return v })
	g, err := h.solve(psi0, edge{charge: c.charge, sites: c})
	if err != nil {
		return nil, Filled{}, err
	}
	value, _ := c.charge(g.Phi0/m.thermal, g.grid.shifts())
	return g, Filled{Phi0: g.Phi0, Charge: value * m.chargeUnit() * float64(core.Sides), Occupancy: c.theta}, nil
}

// coreSites is a core in equilibrium with the grain at ψ₀ and the activities there.
type coreSites struct {
	m                        *Medium
	core                     Core
	affinity, theta, shifted []float64
}

// charge returns the core's charge of one side in units of chargeUnit and its
// slope with ψ₀; y shifts the logarithm of the activities of mobile species.
func (c *coreSites) charge(psi float64, y []float64) (value, slope float64) {
	copy(c.shifted, c.affinity)
	if y != nil {
		for k, s := range c.core.Sites {
			if j := c.m.mobilePlace(s.Species); j >= 0 {
				c.shifted[k] += y[j]
			}
		}
	}
	c.m.occupy(c.core, c.shifted, psi, c.theta)
	value, slope = c.m.siteCharge(c.core, c.theta)
	unit := c.m.chargeUnit() * float64(c.core.Sides)
	return value / unit, slope * c.m.thermal / unit
}

// mobilePlace is the place of a species among the mobile ones, −1 for a frozen one.
func (m *Medium) mobilePlace(species int) int {
	if !m.Species[species].Mobile {
		return -1
	}
	n := 0
	for _, s := range m.Species[:species] {
		if s.Mobile {
			n++
		}
	}
	return n
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

// siteCharge returns the core's charge at given occupancies and its slope per
// volt, dθ_i/dψ = −θ_i (z_i − Σ z_j θ_j) over the sites shared.
func (m *Medium) siteCharge(core Core, theta []float64) (value, slope float64) {
	value = core.Fixed
	for k, s := range core.Sites {
		z := m.z[s.Species]
		value += z * q.ElementaryCharge * s.PerArea * theta[k]
		slope -= z * q.ElementaryCharge * s.PerArea * theta[k] * (z - m.meanCharge(core, theta, k))
	}
	return value, slope / m.thermal
}

// chargeUnit is ε k_BT/(e λ_D) in C/m².
func (m *Medium) chargeUnit() float64 { return m.epsilon * m.thermal / m.debye }

func (h HalfGrain) check() error {
	if !(h.Width >= 0) || math.IsInf(h.Width, 0) {
		return fmt.Errorf("spacecharge: half width of the grain is not usable (%g m), expected 0 or more", h.Width)
	}
	for _, p := range h.Profiles {
		if p.Species < 0 || p.Species >= len(h.Medium.Species) || p.Excess == nil {
			return fmt.Errorf("spacecharge: frozen profile names a species that is not there (%d), expected 0 to %d and a profile", p.Species, len(h.Medium.Species)-1)
		}
		if s := h.Medium.Species[p.Species]; s.Mobile {
			return fmt.Errorf("spacecharge: species %s has a frozen profile but is mobile (%d), expected a frozen species", s.Name, p.Species)
		}
	}
	return nil
}

func (h HalfGrain) tolerance() float64 {
	if h.Tolerance > 0 {
		return h.Tolerance
	}
	return 1e-6
}

// solve lays the first mesh for ψ₀ and refines until the results agree with
// those of the halved mesh.
func (h HalfGrain) solve(psi0 float64, at edge) (*Grain, error) {
	if err := h.check(); err != nil {
		return nil, err
	}
	g, err := h.begin(psi0, at)
	if err == nil {
		err = h.close(g)
	}
	if err == nil {
		g, err = h.settle(g)
	}
	if err != nil {
		return nil, fmt.Errorf("spacecharge: half grain of %.3g m at %.3g V: %w", h.Width, psi0*h.Medium.thermal, err)
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
		if err := g.newton(maxNewton); err != nil {
			return nil, err
		}
		spent += g.iterations
		q := -g.r[0]
		v, slope := at.charge(psi0, nil)
		f := math.Asinh(q) - math.Asinh(v)
		if f > 0 {
			high = psi0
		} else {
			low = psi0
		}
		next := psi0 - f/(g.pivot/math.Hypot(1, q)-slope/math.Hypot(1, v))
		if !(next > low && next < high) {
			next = (low + high) / 2
		}
		if math.Abs(next-psi0) < 1e-3*math.Min(1/g.zmax, math.Abs(psi0)) || high-low < 1e-12 {
			break
		}
		psi0 = next
	}
	g.edge, g.iterations = at, spent
	return g, nil
}

func (h HalfGrain) firstMesh(psi0 float64) *mesh {
	m := h.Medium
	ends, psi := m.grade(psi0, h.Width/m.debye, dropFor(h.tolerance()))
	ends, psi = h.withJoints(ends, psi)
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
			return nil, fmt.Errorf("spacecharge: half grain: %w", &NotConverged{fine.iterations, fine.lastStep,
				fmt.Sprintf("relative error below %.1g, reached %.2g", h.tolerance(), math.Max(worst, out.PositionError))})
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
