package spacecharge

import q "brinkfield/physics/quantity"

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

// close adds the core's sites to the balances; charge has just been called.
func (s *coreSites) close(g *mesh, c *closed) {
	k, m := len(c.species), s.m
	unit := float64(s.core.Sides) * m.screen * m.debye
	for e, one := range s.core.Sites {
		a := c.place(m.mobilePlace(one.Species))
		if a < 0 {
			continue
		}
		n := one.PerArea * s.theta[e] / unit
		c.r[a] -= n
		c.cross[a][0] -= n * (m.z[one.Species] - m.meanCharge(s.core, s.theta, e))
		c.hess[a*k+a] += n
		for f, other := range s.core.Sites {
			b := c.place(m.mobilePlace(other.Species))
			if b >= 0 && (f == e || shares(one, other)) {
				c.hess[a*k+b] -= n * s.theta[f]
			}
		}
	}
}

// content is what the core's sites of one side hold of a species, m⁻².
func (s *coreSites) content(species int) float64 {
	if s == nil {
		return 0
	}
	sum := 0.0
	for k, one := range s.core.Sites {
		if one.Species == species {
			sum += one.PerArea * s.theta[k] / float64(s.core.Sides)
		}
	}
	return sum
}
