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
// The grain is open: in equilibrium with a neutral bulk reservoir of the
// medium's concentrations, against which potentials count. Model: cells with
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

	Tolerance float64 // relative, of all results; 0: 1e-6
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
	m := h.Medium
	phi, err := m.PotentialForCharge(charge)
	if err != nil {
		return nil, err
	}
	value := charge / m.chargeUnit()
	return h.solve(phi/m.thermal, edge{charge: func(float64) (float64, float64) { return value, 0 }})
}

// WithCore solves for core sites in equilibrium with the grain, and returns
// their occupancies beside it. Core.Sides shares the core's charge out.
func (h HalfGrain) WithCore(core Core) (*Grain, Filled, error) {
	m := h.Medium
	start, err := m.Fill(core)
	if err != nil {
		return nil, Filled{}, err
	}
	charge, theta, err := m.coreCharge(core)
	if err != nil {
		return nil, Filled{}, err
	}
	unit := float64(core.Sides) * m.chargeUnit()
	g, err := h.solve(start.Phi0/m.thermal, edge{charge: func(psi float64) (float64, float64) {
		value, slope := charge(psi)
		return value / unit, slope * m.thermal / unit
	}})
	if err != nil {
		return nil, Filled{}, err
	}
	total, _ := charge(g.Phi0 / m.thermal)
	return g, Filled{Phi0: g.Phi0, Charge: total, Occupancy: theta}, nil
}

// coreCharge returns the charge of the core in C/m² at ψ₀ with its slope per
// volt, and the occupancies that the last call left.
func (m *Medium) coreCharge(core Core) (func(psi float64) (float64, float64), []float64, error) {
	affinity, err := m.affinities(core)
	theta := make([]float64, len(core.Sites))
	return func(psi float64) (value, slope float64) {
		m.occupy(core, affinity, psi, theta)
		return m.siteCharge(core, theta)
	}, theta, err
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
	g := h.firstMesh(psi0)
	g.edge = at
	g, err := h.settle(g)
	if err != nil {
		return nil, fmt.Errorf("spacecharge: half grain of %.3g m at %.3g V: %w", h.Width, psi0*h.Medium.thermal, err)
	}
	return h.converge(g)
}

func (h HalfGrain) firstMesh(psi0 float64) *mesh {
	m := h.Medium
	ends, psi := m.grade(psi0, h.Width/m.debye, dropFor(h.tolerance()))
	ends, psi = h.withJoints(ends, psi)
	g := m.newMesh(ends, m.uniform(len(ends)-1, 0))
	g.spread(psi)
	h.freeze(g)
	return g
}

// uniform returns one phase for n cells.
func (m *Medium) uniform(n int, psi float64) []*phase {
	p, list := m.newPhase(psi), make([]*phase, n)
	for k := range list {
		list[k] = p
	}
	return list
}

// settle solves on the first mesh, moves the reference to the centre where it
// is charged, and mends the mesh where it was laid for another potential.
func (h HalfGrain) settle(g *mesh) (*mesh, error) {
	if err := g.newton(); err != nil {
		return nil, err
	}
	for range 6 {
		ends, psi, changed := g.divided(dropFor(h.tolerance()))
		centre := g.u[len(g.u)-1]
		shift := g.zmax*math.Abs(centre) > 1e-2
		if !changed && !shift {
			return g, nil
		}
		next := g
		if changed {
			next = g.medium.newMesh(ends, g.medium.uniform(len(ends)-1, g.reference))
			next.reference, next.edge, next.iterations = g.reference, g.edge, g.iterations
			next.spread(psi)
			h.freeze(next)
		}
		if shift {
			next.rebase(centre)
		}
		if err := next.newton(); err != nil {
			return nil, err
		}
		g = next
	}
	return g, nil
}

// rebase moves the reference potential by a shift.
func (g *mesh) rebase(shift float64) {
	g.reference += shift
	for i := range g.u {
		g.u[i] -= shift
	}
	copy(g.phase, g.medium.uniform(len(g.phase), g.reference))
}

// converge halves the mesh, compares, and refines the cells that differ.
func (h HalfGrain) converge(g *mesh) (*Grain, error) {
	coarse := h.results(g)
	for {
		fine := g.refined(func(int) bool { return true })
		h.freeze(fine)
		start := append([]float64(nil), fine.u...)
		if err := fine.newton(); err != nil {
			return nil, err
		}
		better := h.results(fine)
		worst, marked := compare(coarse, better, len(g.phase), h.tolerance())
		out := h.grain(fine, better)
		out.RelativeError, out.PositionError = worst, positionError(fine, start)
		if worst <= h.tolerance() && out.PositionError <= h.tolerance() {
			return out, nil
		}
		if len(fine.phase) > maxCell {
			return nil, fmt.Errorf("spacecharge: half grain: %w", &NotConverged{fine.iterations, fine.lastStep,
				fmt.Sprintf("relative error below %.1g, reached %.2g", h.tolerance(), math.Max(worst, out.PositionError))})
		}
		if out.PositionError > h.tolerance() || marked == nil {
			g, coarse = fine, better
			continue
		}
		g = g.refined(func(e int) bool { return marked[e] })
		h.freeze(g)
		if err := g.newton(); err != nil {
			return nil, err
		}
		g.iterations += fine.iterations
		coarse = h.results(g)
	}
}
