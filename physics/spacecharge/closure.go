package spacecharge

import (
	"fmt"
	"math"

	"brinkfield/physics/numerics"
	q "brinkfield/physics/quantity"
)

// Sides says how many layers balance the charge of the core.
type Sides int

// A grain boundary has a layer on either side, a free surface or a contact has one.
const (
	Surface  Sides = 1
	Boundary Sides = 2
)

// CoreSites are the sites of one species in the core of the interface.
type CoreSites struct {
	Species     int     // index into the medium's species
	PerArea     float64 // N_c, m⁻²
	Segregation float64 // Δg, J; negative: attracted
	Shared      string  // species with one non-empty name compete for the same sites
	Sites       float64 // N of the species' own sublattice in the grain, m⁻³
}

// Core is what charges the interface: a fixed charge and sites that fill from the grain.
type Core struct {
	Sides Sides
	Fixed float64 // C/m², independent of the potential
	Sites []CoreSites
}

// Filled is the core in equilibrium with its layers.
type Filled struct {
	Phi0      float64   // V
	Charge    float64   // C/m² of the whole core
	Occupancy []float64 // θ per entry of Core.Sites
}

// PotentialForCharge returns Φ₀ in V of a layer that balances the given charge
// in C/m² on one side. Q(Φ₀) is strictly increasing, so the root is bracketed.
func (m *Medium) PotentialForCharge(charge float64) (float64, error) {
	return m.balance(func(float64) (float64, float64) { return charge, 0 }, 1)
}

// Fill solves Q_core(Φ₀) = s·Q(Φ₀). With k_BT ln[θ/(1−θ)] + Δg + zeΦ₀ =
// k_BT ln[c∞/(N−c∞)] the core's charge falls with Φ₀ and the layer's rises:
// one root, bracketed, never guessed. Entries that share sites compete:
// θ_i = K_i/(1 + Σ K_j) (Fermi–Langmuir occupancy; Maier, Prog. Solid State Chem.
// 23, 171 (1995), memory).
func (m *Medium) Fill(core Core) (Filled, error) {
	if core.Sides != Surface && core.Sides != Boundary {
		return Filled{}, fmt.Errorf("spacecharge: number of layers is not usable (%d), expected 1 or 2", core.Sides)
	}
	affinity, err := m.affinities(core)
	if err != nil {
		return Filled{}, err
	}
	theta := make([]float64, len(core.Sites))
	charge := func(psi float64) (value, slope float64) {
		m.occupy(core, affinity, psi, theta)
		value = core.Fixed
		for k, s := range core.Sites {
			z := m.z[s.Species]
			value += z * q.ElementaryCharge * s.PerArea * theta[k]
			mean := m.meanCharge(core, theta, k)
			slope -= z * q.ElementaryCharge * s.PerArea * theta[k] * (z - mean)
		}
		return value, slope / m.thermal
	}
	phi, err := m.balance(func(phi float64) (float64, float64) { return charge(phi / m.thermal) }, float64(core.Sides))
	if err != nil {
		return Filled{}, err
	}
	total, _ := charge(phi / m.thermal)
	return Filled{Phi0: phi, Charge: total, Occupancy: theta}, nil
}

// affinities returns ln K_i at Φ₀ = 0: ln[c∞/(N−c∞)] − Δg/k_BT.
func (m *Medium) affinities(core Core) ([]float64, error) {
	list := make([]float64, len(core.Sites))
	for k, s := range core.Sites {
		if s.Species < 0 || s.Species >= len(m.Species) {
			return nil, fmt.Errorf("spacecharge: core sites name a species that is not there (%d), expected 0 to %d", s.Species, len(m.Species)-1)
		}
		sp := m.Species[s.Species]
		if !(s.Sites > sp.Bulk) {
			return nil, fmt.Errorf("spacecharge: site density of %s is too low for its core sites (%.4g m⁻³), expected above its concentration %.4g", sp.Name, s.Sites, sp.Bulk)
		}
		if !(s.PerArea > 0) {
			return nil, fmt.Errorf("spacecharge: core sites of %s are not usable (%g m⁻²), expected above 0", sp.Name, s.PerArea)
		}
		list[k] = math.Log(sp.Bulk/(s.Sites-sp.Bulk)) - s.Segregation/(q.Boltzmann*m.Temperature)
	}
	return list, nil
}

// occupy writes θ for all entries at ψ₀, scaled so that no exponential overflows.
func (m *Medium) occupy(core Core, affinity []float64, psi float64, theta []float64) {
	for k, s := range core.Sites {
		own := affinity[k] - m.z[s.Species]*psi
		top := math.Max(0, own)
		for j, o := range core.Sites {
			if j != k && shares(s, o) {
				top = math.Max(top, affinity[j]-m.z[o.Species]*psi)
			}
		}
		sum := math.Exp(-top) + math.Exp(own-top)
		for j, o := range core.Sites {
			if j != k && shares(s, o) {
				sum += math.Exp(affinity[j] - m.z[o.Species]*psi - top)
			}
		}
		theta[k] = math.Exp(own-top) / sum
	}
}

// meanCharge is Σ z θ over the sites that entry k competes for.
func (m *Medium) meanCharge(core Core, theta []float64, k int) float64 {
	sum := m.z[core.Sites[k].Species] * theta[k]
	for j, o := range core.Sites {
		if j != k && shares(core.Sites[k], o) {
			sum += m.z[o.Species] * theta[j]
		}
	}
	return sum
}

func shares(a, b CoreSites) bool { return a.Shared != "" && a.Shared == b.Shared }

// balance finds Φ₀ where the charge of the core equals that of its layers. The
// comparison is made on a logarithmic scale, where Q(Φ₀) is nearly straight.
func (m *Medium) balance(core func(phi float64) (charge, slope float64), sides float64) (float64, error) {
	unit := m.epsilon * m.thermal / m.debye // C/m², charge of a layer at ψ₀ ≈ 1
	f := func(phi float64) (float64, float64) {
		l, err := m.open(phi)
		if err != nil {
			return math.NaN(), 0
		}
		qc, slope := core(phi)
		a, b := sides*l.Charge/unit, qc/unit
		return math.Asinh(a) - math.Asinh(b),
			sides*l.Capacitance/unit/math.Hypot(1, a) - slope/unit/math.Hypot(1, b)
	}
	limit := m.potentialLimit()
	low, high, err := numerics.Bracket(f, 0, 4*m.thermal, limit)
	if err != nil {
		return math.NaN(), fmt.Errorf("spacecharge: no potential balances the core's charge within ±%.3g V: %w", limit, err)
	}
	if low == high {
		return low, nil
	}
	return numerics.Root(f, low, high, 1e-13*m.thermal)
}

// potentialLimit is the largest |Φ₀| the medium can be evaluated at, in V.
func (m *Medium) potentialLimit() float64 {
	zmax := 0.0
	for i, s := range m.Species {
		if s.Mobile {
			zmax = max(zmax, math.Abs(m.z[i]))
		}
	}
	return MaxReduced / zmax * m.thermal * (1 - 1e-12)
}
