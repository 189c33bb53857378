package spacecharge

import "math"

// phase is what a mesh cell is made of: the statistics of the medium, written
// as changes against a reference potential so that nothing cancels where the
// potential hardly moves. Densities are in units of Medium.screen, potentials
// in k_BT/e, lengths in Debye lengths.
type phase struct {
	permittivity float64   // against the medium's
	z            []float64 // charge numbers of the mobile species
	ref          []float64 // their concentrations at the reference
	lattice      []int     // −1: dilute
	lattices     []shared
	charge       float64   // net charge density at the reference
	shift        []float64 // ln of what multiplies e^{−zu}: site energies, closed totals; nil: none
}

// shared is a sublattice of limited sites.
type shared struct {
	sites   float64
	empty   float64   // share of empty sites at the reference
	members []int     // places in phase.z
	weight  []float64 // scratch
}

// newPhase builds the grain's own phase at a reference potential and, in a
// closed grain, at reference shifts of the activities; nil: none.
func (m *Medium) newPhase(psi float64, base []float64) *phase {
	st := m.newState()
	m.compose(psi, base, nil, &st)
	n := len(m.Species)
	p := &phase{permittivity: 1}
	place := make([]int, n)
	for i, s := range m.Species {
		if base == nil { // by neutrality, exact at ψ = 0
			p.charge += m.z[i] * s.Bulk * st.gain[i] / m.screen
		} else {
			p.charge += m.z[i] * s.Bulk * st.ratio[i] / m.screen
		}
		if s.Mobile {
			place[i] = len(p.z)
			p.z, p.ref = append(p.z, m.z[i]), append(p.ref, s.Bulk*st.ratio[i]/m.screen)
			p.lattice = append(p.lattice, m.lattice[i])
		}
	}
	for k, list := range m.members {
		l := shared{sites: m.sites[k] / m.screen, weight: make([]float64, n)}
		empty, grown := 1.0, 0.0
		for _, i := range list {
			share := m.Species[i].Bulk / m.sites[k]
			empty -= share
			t := -m.z[i] * psi
			if base != nil {
				t += base[place[i]]
			}
			grown += share * math.Exp(t)
			l.members = append(l.members, place[i])
		}
		l.empty = empty / (empty + grown)
		p.lattices = append(p.lattices, l)
	}
	return p
}

// density returns the charge density at u = ψ − ψ_ref without the frozen part,
// and the screening −dρ/du ≥ 0, the curvature of the convex functional:
// Σ z²c of dilute species. ok is false where the exponentials overflow.
func (p *phase) density(u float64, grown []float64) (rho, screening float64, ok bool) {
	rho = p.charge
	for j, z := range p.z {
		t := p.exponent(j, u)
		if t > MaxReduced {
			return 0, 0, false
		}
		if t > 0.5 || t < -0.5 {
			grown[j] = math.Exp(t) - 1
		} else {
			grown[j] = math.Expm1(t)
		}
		if p.lattice[j] < 0 {
			change := p.ref[j] * grown[j]
			rho += z * change
			screening += z * z * (p.ref[j] + change)
		}
	}
	for k := range p.lattices {
		r, s := p.lattices[k].density(p, u, grown)
		rho += r
		screening += s
	}
	return rho, screening, true
}

func (p *phase) exponent(j int, u float64) float64 {
	if p.shift == nil {
		return -p.z[j] * u
	}
	return p.shift[j] - p.z[j]*u
}

// density of a sublattice: with s = Σ p_ref(e^{−zu} − 1) the shares of its sites
// are p = p_ref e^{−zu}/(1+s). Its screening N(⟨z²⟩ − ⟨z⟩²) is summed over pairs,
// empty sites being of charge 0, since it all but cancels where one kind fills it.
func (l *shared) density(p *phase, u float64, grown []float64) (rho, screening float64) {
	s, whole := 0.0, l.empty
	for _, j := range l.members {
		s += p.ref[j] / l.sites * grown[j]
		l.weight[j] = p.ref[j] / l.sites * math.Exp(p.exponent(j, u))
		whole += l.weight[j]
	}
	for a, j := range l.members {
		rho += p.z[j] * p.ref[j] * (grown[j] - s) / (1 + s)
		pj := l.weight[j] / whole
		screening += pj * l.empty / whole * p.z[j] * p.z[j]
		for _, i := range l.members[:a] {
			d := p.z[i] - p.z[j]
			screening += pj * l.weight[i] / whole * d * d
		}
	}
	return rho, screening * l.sites
}

// pressure returns the osmotic pressure against the reference in units of
// k_BT·screen, whose derivative is −ρ of the mobile species:
// Σ c_ref(e^{−zu} − 1) + Σ N ln(1 + s).
func (p *phase) pressure(u float64) float64 {
	sum := 0.0
	for j, z := range p.z {
		if p.lattice[j] < 0 {
			sum += p.ref[j] * math.Expm1(-z*u)
		}
	}
	for _, l := range p.lattices {
		s := 0.0
		for _, j := range l.members {
			s += p.ref[j] / l.sites * math.Expm1(-p.z[j]*u)
		}
		sum += l.sites * math.Log1p(s)
	}
	return sum
}

// composition writes c/c∞ and its change at u in a cell; frozen species 1.
func (g *mesh) composition(e int, u float64, st *state) {
	if e >= g.core || g.closed != nil && g.closed.energy == nil {
		g.medium.compose(u+g.reference, g.shifts(), nil, st)
		return
	}
	p := g.phase[e]
	shift := append([]float64(nil), p.shift...)
	if g.closed != nil {
		for j := range shift {
			shift[j] += g.closed.base[j]
		}
	}
	g.medium.compose(u+g.reference, shift, p.lattices, st)
}

// compose writes c/c∞ and its change at ψ with the logarithms shifted; the
// sites of other lattices, a thick core's, may be given.
func (m *Medium) compose(psi float64, shift []float64, other []shared, st *state) {
	if shift == nil {
		m.at(psi, st)
		return
	}
	j := 0
	for i, s := range m.Species {
		st.ratio[i], st.gain[i] = 1, 0
		if !s.Mobile {
			continue
		}
		t := shift[j] - m.z[i]*psi
		st.ratio[i], st.gain[i] = math.Exp(t), math.Expm1(t)
		j++
	}
	for k, list := range m.members {
		whole, s := 1.0, 0.0
		for _, i := range list {
			share := m.Species[i].Bulk / m.sites[k]
			whole -= share
			s += share * st.gain[i]
		}
		for _, i := range list {
			whole += m.Species[i].Bulk / m.sites[k] * st.ratio[i]
		}
		for _, i := range list {
			st.gain[i] = (st.gain[i] - s) / whole
			st.ratio[i] /= whole
			if other != nil {
				st.ratio[i] *= other[k].sites * m.screen / m.sites[k]
				st.gain[i] = st.ratio[i] - 1
			}
		}
	}
}
