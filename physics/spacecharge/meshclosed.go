package spacecharge

import (
	"cmp"
	"errors"
	"math"
	"slices"
)

// closed adds to the unknowns the shifts y = Δ ln(activity) of the conserved
// species. With c = c∞ e^{y−zψ} the functional
//
//	∫[½κψ′² + Π(ψ, y)]dx + core − Σ N y
//
// is convex in ψ and y together; its derivative by y is the balance ∫c dx +
// core = N. One species is left out, the compensating one: neutrality of the
// whole fixes its amount.
type closed struct {
	species []int     // places among the mobile species
	amount  []float64 // N in screen·λ_D
	y, last []float64 // shifts per mobile species, and where the step started
	base    []float64 // what of y the phases' reference has taken up
	energy  []float64 // shifts of a thick core on top
	r, dy   []float64 // N − content and step, per conserved species
	hess    []float64 // ∂²F/∂y∂y
	cross   [][]float64
}

// byCharge lists the mobile species, the one that holds most charge first.
func (m *Medium) byCharge() []int {
	var list []int
	for i, s := range m.Species {
		if s.Mobile {
			list = append(list, i)
		}
	}
	slices.SortStableFunc(list, func(a, b int) int {
		return cmp.Compare(math.Abs(m.z[b])*m.Species[b].Bulk, math.Abs(m.z[a])*m.Species[a].Bulk)
	})
	return slices.DeleteFunc(list, func(i int) bool { return m.z[i] == 0 })
}

// close prepares the balances of a closed grain; the species left out has its
// activity kept.
func (h HalfGrain) close(g *mesh, left int) error {
	if !h.Closed {
		return nil
	}
	if !(h.Width > 0) {
		return errors.New("spacecharge: a closed grain needs its width (0 m), expected above 0")
	}
	if g.edge.fixed {
		return errors.New("spacecharge: a closed grain takes its potential from its core (Φ₀ given), expected a charge or a core")
	}
	m := h.Medium
	n := len(g.phase[0].z)
	c := &closed{y: make([]float64, n), last: make([]float64, n), base: make([]float64, n)}
	width := h.Width
	if h.thick != nil {
		width += h.thick.half()
		c.energy = append([]float64(nil), g.phase[0].shift...)
	}
	for i, s := range m.Species {
		if s.Mobile && i != left {
			c.species = append(c.species, m.mobilePlace(i))
			c.amount = append(c.amount, s.Bulk*width/(m.screen*m.debye))
		}
	}
	k := len(c.species)
	c.r, c.dy, c.hess = make([]float64, k), make([]float64, k), make([]float64, k*k)
	c.cross = make([][]float64, k)
	g.closed = c
	c.apply(g)
	return nil
}

// apply hands the shifts to the phases.
func (c *closed) apply(g *mesh) {
	if c == nil {
		return
	}
	for e, p := range g.phase {
		if e > 0 && p == g.phase[e-1] {
			continue
		}
		if p.shift == nil {
			p.shift = make([]float64, len(p.z))
		}
		for j := range p.shift {
			p.shift[j] = c.y[j] - c.base[j]
		}
		if e < g.core {
			for j := range c.energy {
				p.shift[j] += c.energy[j]
			}
		}
	}
}

// reference is what the phases take up of the shifts: where hardly anything is
// left of what was weighed in, charges are not to be differences of the latter.
func (c *closed) reference() []float64 {
	if c == nil {
		return nil
	}
	return c.base
}

func (c *closed) rebase() {
	if c != nil {
		copy(c.base, c.y)
	}
}

func (c *closed) far() bool {
	if c == nil {
		return false
	}
	for j, v := range c.y {
		if math.Abs(v-c.base[j]) > 1e-2 {
			return true
		}
	}
	return false
}

// contents writes the concentrations at u in units of screen, and per species
// the mean charge ⟨z⟩ of the sites it shares.
func (p *phase) contents(u float64, conc, mean []float64) {
	for j := range p.z {
		conc[j], mean[j] = p.ref[j]*math.Exp(p.exponent(j, u)), 0
	}
	for _, l := range p.lattices {
		whole, charge := l.empty, 0.0
		for _, j := range l.members {
			whole += conc[j] / l.sites
		}
		for _, j := range l.members {
			conc[j] /= whole
			charge += p.z[j] * conc[j] / l.sites
		}
		for _, j := range l.members {
			mean[j] = charge
		}
	}
}

// evaluate writes r = N − content, its derivatives by y and the cross terms
// ∂²F/∂u∂y = −w c (z − ⟨z⟩).
func (c *closed) evaluate(g *mesh, u []float64) {
	k := len(c.species)
	copy(c.r, c.amount)
	clear(c.hess)
	for a := range c.cross {
		if len(c.cross[a]) != len(u) {
			c.cross[a] = make([]float64, len(u))
		}
		clear(c.cross[a])
	}
	n := len(g.phase[0].z)
	buf := make([]float64, 2*n)
	conc, mean := buf[:n], buf[n:]
	for e, p := range g.phase {
		for i := range points {
			w := (g.ends[e+1] - g.ends[e]) / 2 * lobatto.weight[i]
			p.contents(u[e*degree+i], conc, mean)
			for a, j := range c.species {
				c.r[a] -= w * conc[j]
				c.cross[a][e*degree+i] -= w * conc[j] * (p.z[j] - mean[j])
				c.hess[a*k+a] += w * conc[j]
				if p.lattice[j] < 0 {
					continue
				}
				for b, i := range c.species {
					if p.lattice[i] == p.lattice[j] {
						c.hess[a*k+b] -= w * conc[j] * conc[i] / p.lattices[p.lattice[j]].sites
					}
				}
			}
		}
	}
	if g.edge.sites != nil {
		g.edge.sites.close(g, c)
	}
}

func (c *closed) place(mobile int) int {
	for a, j := range c.species {
		if j == mobile {
			return a
		}
	}
	return -1
}

// border turns the step of ψ alone into that of ψ and y together, by the Schur
// complement of the balances. It returns the largest step of y and the slope of
// the functional along it.
func (c *closed) border(g *mesh) (step, slope float64) {
	k := len(c.species)
	copy(c.last, c.y)
	columns := make([][]float64, k)
	schur, right := append([]float64(nil), c.hess...), append([]float64(nil), c.r...)
	for a := range columns {
		columns[a] = append([]float64(nil), c.cross[a]...)
		g.solve(columns[a], g.finish)
	}
	for a := range k {
		right[a] -= dot(c.cross[a], g.delta)
		for b := range k {
			schur[a*k+b] -= dot(c.cross[a], columns[b])
		}
	}
	eliminate(schur, right)
	copy(c.dy, right)
	for a := range k {
		for i, v := range columns[a] {
			g.delta[i] -= v * c.dy[a]
		}
		step = max(step, math.Abs(c.dy[a])/g.zmax)
	}
	return step, c.slope()
}

func dot(a, b []float64) float64 {
	sum := 0.0
	for i, v := range a {
		sum += v * b[i]
	}
	return sum
}

// eliminate solves the small symmetric positive system in place.
func eliminate(a, b []float64) {
	n := len(b)
	for k := range n {
		for i := k + 1; i < n; i++ {
			f := a[i*n+k] / a[k*n+k]
			for j := k; j < n; j++ {
				a[i*n+j] -= f * a[k*n+j]
			}
			b[i] -= f * b[k]
		}
	}
	for k := n - 1; k >= 0; k-- {
		for j := k + 1; j < n; j++ {
			b[k] -= a[k*n+j] * b[j]
		}
		b[k] /= a[k*n+k]
	}
}

// move goes t of the step from where it started.
func (c *closed) move(g *mesh, t float64) {
	for a, j := range c.species {
		c.y[j] = c.last[j] + t*c.dy[a]
	}
	c.apply(g)
}

// slope of the functional along the step of y, with its sign turned like r.
func (c *closed) slope() float64 {
	if c == nil {
		return 0
	}
	return dot(c.r, c.dy)
}

func (c *closed) accept() {
	if c != nil {
		copy(c.last, c.y)
	}
}
