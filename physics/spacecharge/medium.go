package spacecharge

import (
	"errors"
	"fmt"
	"math"

	q "brinkfield/physics/quantity"
)

// Species is one kind of charged particle in the medium.
type Species struct {
	Name       string
	Charge     int     // effective charge number z
	Bulk       float64 // c∞, m⁻³, > 0
	Mobile     bool    // follows the potential; otherwise frozen and flat
	Sites      float64 // sites of its sublattice, m⁻³; 0: dilute
	Sublattice string  // species with one non-empty name share its sites
	Mobility   float64 // u, m²/(V s); 0: does not conduct
}

// Conductivity returns |z| e u c∞ in S/m.
func (s Species) Conductivity() float64 {
	return math.Abs(float64(s.Charge)) * q.ElementaryCharge * s.Mobility * s.Bulk
}

// MaxReduced bounds |zψ₀|: beyond it e^|zψ| leaves the range of floating point.
const MaxReduced = 700

// NeutralityTolerance is how far the bulk charge may be from zero, relative to
// the sum of its absolute parts: the rounding of entered concentrations.
const NeutralityTolerance = 1e-9

// ErrNotNeutral is wrapped by the error of a bulk that carries charge.
var ErrNotNeutral = errors.New("spacecharge: bulk is not neutral")

// Medium is a neutral bulk at one temperature.
type Medium struct {
	Temperature  float64 // K
	Permittivity float64 // relative
	Species      []Species

	// Tolerance is the relative error asked of integrals and inversions; 0 means
	// 1e-10. Sampling of uncertainties may ask less.
	Tolerance float64

	epsilon float64   // absolute permittivity, F/m
	thermal float64   // k_BT/e, V
	screen  float64   // Σ z²c of the linearised charge, m⁻³
	debye   float64   // √(ε k_BT/(e² screen)), m
	z       []float64 // charge numbers
	lattice []int     // index into lattices, −1: dilute
	lattices
}

// lattices are the shared sublattices: sites and the members of each.
type lattices struct {
	sites   []float64
	members [][]int
}

// NewMedium checks the bulk and prepares it. Errors name the species and the
// value; ErrNotNeutral is wrapped when the charges do not cancel.
func NewMedium(temperature, permittivity float64, species []Species) (*Medium, error) {
	if !(temperature > 0) || math.IsInf(temperature, 0) {
		return nil, fmt.Errorf("spacecharge: temperature is not usable (%g K), expected above 0 K", temperature)
	}
	if !(permittivity > 0) || math.IsInf(permittivity, 0) {
		return nil, fmt.Errorf("spacecharge: permittivity is not usable (%g), expected above 0", permittivity)
	}
	m := &Medium{Temperature: temperature, Permittivity: permittivity, Species: species,
		epsilon: permittivity * q.VacuumPermittivity, thermal: q.ThermalVoltage(temperature)}
	if err := m.checkCharge(); err != nil {
		return nil, err
	}
	if err := m.groupSites(); err != nil {
		return nil, err
	}
	m.screen = m.screening()
	if !(m.screen > 0) {
		return nil, errors.New("spacecharge: nothing mobile carries charge, expected at least one mobile charged species")
	}
	m.debye = math.Sqrt(m.epsilon * m.thermal / (q.ElementaryCharge * m.screen))
	return m, nil
}

func (m *Medium) checkCharge() error {
	sum, abs := 0.0, 0.0
	for _, s := range m.Species {
		if !(s.Bulk > 0) || math.IsInf(s.Bulk, 0) {
			return fmt.Errorf("spacecharge: concentration of %s is not usable (%g m⁻³), expected above 0", s.Name, s.Bulk)
		}
		m.z = append(m.z, float64(s.Charge))
		sum += float64(s.Charge) * s.Bulk
		abs += math.Abs(float64(s.Charge)) * s.Bulk
	}
	if math.Abs(sum) > NeutralityTolerance*abs {
		return fmt.Errorf("%w (net charge %.3g e/m³ of %.3g), expected zero", ErrNotNeutral, sum, abs)
	}
	return nil
}

func (m *Medium) groupSites() error {
	named := map[string]int{}
	m.lattice = make([]int, len(m.Species))
	for i, s := range m.Species {
		m.lattice[i] = -1
		if s.Sites == 0 || !s.Mobile {
			continue
		}
		k, shared := named[s.Sublattice]
		if !shared || s.Sublattice == "" {
			k = len(m.sites)
			m.sites = append(m.sites, s.Sites)
			m.members = append(m.members, nil)
			named[s.Sublattice] = k
		}
		if s.Sites != m.sites[k] {
			return fmt.Errorf("spacecharge: sites of %s (%g m⁻³) differ from those of its sublattice, expected %g", s.Name, s.Sites, m.sites[k])
		}
		m.lattice[i] = k
		m.members[k] = append(m.members[k], i)
	}
	for k, list := range m.members {
		sum := 0.0
		for _, i := range list {
			sum += m.Species[i].Bulk
		}
		if !(sum < m.sites[k]) {
			return fmt.Errorf("spacecharge: sublattice of %s is overfull (%.4g of %.4g m⁻³), expected fewer particles than sites",
				m.Species[list[0]].Name, sum, m.sites[k])
		}
	}
	return nil
}

// screening returns Σ z²c over mobile species; a sublattice contributes
// Σ z²c − (Σ zc)²/N, the curvature of its log-sum.
func (m *Medium) screening() float64 {
	sum := 0.0
	for i, s := range m.Species {
		if s.Mobile {
			sum += m.z[i] * m.z[i] * s.Bulk
		}
	}
	for k, list := range m.members {
		charge := 0.0
		for _, i := range list {
			charge += m.z[i] * m.Species[i].Bulk
		}
		sum -= charge * charge / m.sites[k]
	}
	return sum
}

func (m *Medium) tolerance() float64 {
	if m.Tolerance > 0 {
		return m.Tolerance
	}
	return 1e-10
}

// Debye returns λ_D = √(ε k_BT/(e² Σ z²c∞)) over all mobile species, in m: the
// length over which the tail of the layer decays (IUPAC Gold Book T06343).
func (m *Medium) Debye() float64 { return m.debye }

// DebyeMajority returns λ = √(ε k_BT/(2 z² e² c∞)) of one species, in m: the
// length of the Gouy–Chapman and Mott–Schottky formulas (Maier 1995).
func (m *Medium) DebyeMajority(species int) float64 {
	z, c := m.z[species], m.Species[species].Bulk
	return math.Sqrt(m.epsilon * m.thermal / (2 * z * z * q.ElementaryCharge * c))
}

// ThermalVoltage returns k_BT/e of the medium in V.
func (m *Medium) ThermalVoltage() float64 { return m.thermal }

// Reduced returns ψ = eφ/k_BT.
func (m *Medium) Reduced(phi float64) float64 { return phi / m.thermal }
