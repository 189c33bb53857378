package spacecharge

import (
	"fmt"
	"math"

	q "brinkfield/physics/quantity"
)

// ThickCore is a core of finite width with its own permittivity and site
// energies, in equilibrium with the grain: c = c∞ exp(−zψ − g/k_BT), site-limited
// by its own sites where the species is in the grain. Frozen species are not in
// it; their charge there belongs to Fixed.
type ThickCore struct {
	Sides        Sides         // Boundary: the field vanishes in its middle; Surface: at its outer face
	Width        float64       // m, all of it
	Permittivity float64       // relative; 0: the grain's
	Fixed        float64       // C/m³
	Species      []CoreSpecies // those not listed: as in the grain
}

// CoreSpecies is a mobile species in a thick core.
type CoreSpecies struct {
	Species int
	Energy  float64 // J against the grain; negative: attracted
	Sites   float64 // m⁻³, of its sublattice there; 0: as in the grain
}

// WithThickCore solves core and grain together. Phi0 is the potential at the
// core's edge, x = 0; the core lies at x < 0.
func (h HalfGrain) WithThickCore(core ThickCore) (*Grain, error) {
	if err := core.check(h.Medium); err != nil {
		return nil, err
	}
	h.thick = &core
	m := h.Medium
	p := core.phase(m, m.newPhase(0, nil))
	width, scratch := core.half()/m.debye, make([]float64, len(m.Species))
	psi0 := m.start(func(psi float64) float64 { // as if the potential were flat in it
		rho, _, ok := p.density(psi, scratch)
		if !ok {
			return math.Copysign(math.Inf(1), -psi)
		}
		return width * rho
	})
	return h.solve(psi0, edge{charge: func(float64, []float64) (float64, float64) { return 0, 0 }})
}

// half is the width that belongs to one side.
func (c *ThickCore) half() float64 { return c.Width / float64(c.Sides) }

func (c *ThickCore) check(m *Medium) error {
	if c.Sides != Surface && c.Sides != Boundary {
		return fmt.Errorf("spacecharge: number of layers is not usable (%d), expected 1 or 2", c.Sides)
	}
	if !(c.Width > 0) || math.IsInf(c.Width, 0) {
		return fmt.Errorf("spacecharge: width of the core is not usable (%g m), expected above 0", c.Width)
	}
	if !(c.Permittivity >= 0) || math.IsInf(c.Permittivity, 0) {
		return fmt.Errorf("spacecharge: permittivity of the core is not usable (%g), expected above 0, or 0 for the grain's", c.Permittivity)
	}
	for _, s := range c.Species {
		if s.Species < 0 || s.Species >= len(m.Species) || !m.Species[s.Species].Mobile {
			return fmt.Errorf("spacecharge: core names a species that is not mobile (%d), expected a mobile one of 0 to %d", s.Species, len(m.Species)-1)
		}
		if !(s.Sites >= 0) || s.Sites > 0 && m.lattice[s.Species] < 0 {
			return fmt.Errorf("spacecharge: core sites of %s are not usable (%g m⁻³), expected 0 for a dilute species", m.Species[s.Species].Name, s.Sites)
		}
	}
	return nil
}

// phase turns the grain's phase into the core's.
func (c *ThickCore) phase(m *Medium, grain *phase) *phase {
	p := *grain
	p.ref = append([]float64(nil), grain.ref...)
	p.shift = make([]float64, len(p.z))
	p.lattices = append([]shared(nil), grain.lattices...)
	if c.Permittivity > 0 {
		p.permittivity = c.Permittivity / m.Permittivity
	}
	for k := range p.lattices {
		p.lattices[k].weight = make([]float64, len(m.Species))
	}
	for _, s := range c.Species {
		j := m.mobilePlace(s.Species)
		p.shift[j] = -s.Energy / (q.Boltzmann * m.Temperature)
		if s.Sites > 0 {
			p.lattices[p.lattice[j]].sites = s.Sites / m.screen
		}
	}
	p.charge = c.Fixed / (q.ElementaryCharge * m.screen)
	for k := range p.lattices {
		for _, j := range p.lattices[k].members {
			p.ref[j] *= p.lattices[k].sites / grain.lattices[k].sites
		}
	}
	for j, z := range p.z {
		p.charge += z * p.ref[j]
	}
	return &p
}

// withThick puts the core's cells before the grain's, fine towards its edge.
func (h HalfGrain) withThick(ends, psi []float64) (all, at []float64, core int) {
	if h.thick == nil {
		return ends, psi, 0
	}
	width := h.thick.half() / h.Medium.debye
	var list []float64 // distances from the edge
	for x, step := 0.0, math.Min(width/2, ends[1]); x < width; step *= growth {
		x += step
		if width-x < 0.5*step {
			x = width
		}
		list = append(list, x)
	}
	for k := len(list) - 1; k >= 0; k-- {
		all, at = append(all, -list[k]), append(at, psi[0])
	}
	return append(all, ends...), append(at, psi...), len(list)
}
