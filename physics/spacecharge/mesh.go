package spacecharge

import (
	"fmt"
	"math"
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
	// medium's concentrations over Width (and a thick core's). Potentials then
	// count against an arbitrary zero: use Drop. Otherwise open.
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
		for k := range 17 {
			x := h.Width * float64(k) / 16
			if v := p.Excess(x); !(v >= -1) || math.IsInf(v, 0) {
				return fmt.Errorf("spacecharge: frozen profile of %s is not usable at %g m (c/c∞ − 1 = %g), expected -1 or more", h.Medium.Species[p.Species].Name, x, v)
			}
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
