package spacecharge

import (
	"fmt"
	"math"
	"sort"
)

// integrals are the parts that each cell adds to the results, [cell][quantity]:
// charge, across and along per species, across of the summed conductivity; then
// charge and contents c/c∞ of a thick core.
type integrals struct {
	n      int // quantities
	parts  []float64
	totals []float64
	flux   float64
	width  float64 // of the grain, in Debye lengths
	stiff  float64
}

// results integrates over the mesh with the weights of its own points.
func (h HalfGrain) results(g *mesh) *integrals {
	m := g.medium
	ns := len(m.Species)
	in := &integrals{n: 3*ns + 3, stiff: g.stiffness, width: g.ends[len(g.ends)-1]}
	in.parts = make([]float64, in.n*len(g.phase))
	in.totals = make([]float64, in.n)
	st := m.newState()
	total := m.totalConductivity()
	for e := range g.phase {
		width := g.ends[e+1] - g.ends[e]
		part := in.parts[e*in.n : (e+1)*in.n]
		for k := range points {
			w := width / 2 * lobatto.weight[k]
			h.local(g, &st, e, k)
			if e < g.core {
				part[2*ns+2] += w * g.rho[e*points+k]
				for i, s := range m.Species {
					if s.Mobile {
						part[2*ns+3+i] += w * st.ratio[i]
					}
				}
				continue
			}
			part[0] -= w * g.rho[e*points+k]
			change, sigma := 0.0, 0.0
			for i := range ns {
				if st.gain[i] == 0 {
					sigma += m.mobileConductivity(i)
					continue
				}
				part[1+i] -= w * st.gain[i] / st.ratio[i]
				part[1+ns+i] += w * st.gain[i]
				s := m.mobileConductivity(i)
				change += s * st.gain[i]
				sigma += s * st.ratio[i]
			}
			if total > 0 {
				part[2*ns+1] -= w * change / (sigma * total)
			}
		}
		for k, v := range part {
			in.totals[k] += v
		}
	}
	_, in.flux = g.charge()
	return in
}

func (m *Medium) mobileConductivity(i int) float64 {
	if !m.Species[i].Mobile {
		return 0
	}
	return m.Species[i].Conductivity()
}

func (m *Medium) totalConductivity() float64 {
	sum := 0.0
	for i := range m.Species {
		sum += m.mobileConductivity(i)
	}
	return sum
}

// local writes c/c∞ and its change at one point of a cell, frozen profiles included.
func (h HalfGrain) local(g *mesh, st *state, e, k int) {
	g.composition(e, g.u[e*degree+k], st)
	for j, p := range h.Profiles {
		st.gain[p.Species] = g.given[j][e*points+k]
		st.ratio[p.Species] = 1 + st.gain[p.Species]
	}
}

// place is x in m of a point.
func (g *mesh) place(e, k int) float64 {
	return g.medium.debye * (g.ends[e] + (g.ends[e+1]-g.ends[e])*(lobatto.node[k]+1)/2)
}

// cancelled is the share of ∫|…| below which a total is judged against that
// share: a total that nearly cancels has no relative error of its own.
const cancelled = 1e-2

// rounding is what c/c∞ − 1 of a flat bulk is off by: an excess over the whole
// width that is smaller cannot be told from none.
const rounding = 2e-15

// compare returns the largest relative difference of a total, and the cells to
// halve: those whose own parts differ by more than their share of it.
func compare(coarse, fine *integrals, cells int, tolerance float64) (float64, []bool) {
	worst := math.Abs(fine.stiff-coarse.stiff) / math.Abs(fine.stiff)
	worst = max(worst, math.Abs(fine.flux-coarse.flux)/max(math.Abs(fine.flux), nothing))
	var marked []bool
	for q := range fine.n {
		sum, abs := 0.0, 0.0
		for e := range 2 * cells {
			abs += math.Abs(fine.parts[e*fine.n+q])
		}
		scale := max(math.Abs(fine.totals[q]), cancelled*abs, nothing)
		if q > 0 {
			scale = max(scale, rounding*fine.width/tolerance)
		}
		for e := range cells {
			d := math.Abs(fine.parts[2*e*fine.n+q] + fine.parts[(2*e+1)*fine.n+q] - coarse.parts[e*coarse.n+q])
			sum += d
			if d > 0.3*tolerance*scale/float64(cells) {
				if marked == nil {
					marked = make([]bool, cells)
				}
				marked[e] = true
			}
		}
		worst = max(worst, sum/scale)
	}
	return worst, marked
}

// noDrop is the drop, in k_BT/e, below which a potential is flat: no position is read off it.
const noDrop = 1e-8

// positionError compares the potential carried over from the coarse mesh with
// the solved one at the new points, both as drops from the interface: δx = δψ/|ψ′|, against the distance, where ψ
// is still a hundredth of its drop.
func positionError(g *mesh, start []float64) float64 {
	worst, first, last := 0.0, g.core*degree, len(g.u)-1
	drop := math.Abs(g.u[first] - g.u[last])
	if drop < noDrop {
		return 0
	}
	for e := g.core; e < len(g.phase); e++ {
		u := g.u[e*degree : e*degree+points]
		if math.Abs(u[degree]-g.u[last]) < 0.01*drop {
			break
		}
		for k := 1; k < points; k++ {
			slope := 0.0
			for j := range points {
				slope += lobatto.slope[k][j] * (u[j] - u[0])
			}
			h := g.ends[e+1] - g.ends[e]
			slope = max(math.Abs(2*slope/h), 0.02*drop/g.ends[e+1]) // an extremum has no position
			worst = max(worst, math.Abs((u[k]-g.u[first])-(start[e*degree+k]-start[first]))/slope/g.ends[e+1])
		}
	}
	return worst
}

// grain turns mesh and integrals into results with units.
func (h HalfGrain) grain(g *mesh, in *integrals) *Grain {
	m := g.medium
	n, first, last := len(m.Species), g.core*degree, len(g.u)-1
	out := &Grain{Medium: m, Width: m.debye * g.ends[len(g.ends)-1], grid: g, profiles: h.Profiles,
		Phi0: m.thermal * (g.u[first] + g.reference), Drop: m.thermal * (g.u[first] - g.u[last]),
		Charge: m.chargeUnit() * in.totals[0], Field: m.thermal / m.debye * in.flux / g.phase[g.core].permittivity,
		Capacitance: m.epsilon / m.debye * g.stiffness,
		Across:      math.NaN(), Along: math.NaN(),
		CoreCharge: m.chargeUnit() * in.totals[2*n+2],
		Closed:     h.Closed, Iterations: g.iterations, Cells: len(g.phase)}
	if g.total > 0 {
		out.Residual = math.Abs(in.flux-in.totals[0]) / g.total
	}
	lengths := make([]float64, 2*n)
	for k := range lengths {
		lengths[k] = m.debye * in.totals[1+k]
	}
	out.AcrossLength, out.AlongLength = lengths[:n], lengths[n:]
	out.Contents, out.CoreContents = make([]float64, n), make([]float64, n)
	for i, s := range m.Species {
		out.CoreContents[i] = s.Bulk*m.debye*in.totals[2*n+3+i] + g.edge.sites.content(i)
		out.Contents[i] = s.Bulk*(out.Width+out.AlongLength[i]) + out.CoreContents[i]
	}
	if m.totalConductivity() > 0 {
		out.Across, out.Along = m.debye*in.totals[2*n+1], 0
		for i := range n {
			out.Along += m.mobileConductivity(i) * out.AlongLength[i]
		}
	}
	return out
}

// PotentialAt returns φ(x) in V against the reservoir, x in m from 0 to Width;
// in a thick core x is negative.
func (g *Grain) PotentialAt(x float64) (float64, error) {
	if !(x >= g.grid.ends[0]*g.Medium.debye && x <= g.Width*(1+1e-12)) {
		return math.NaN(), fmt.Errorf("spacecharge: distance is not in the half grain (%g m), expected 0 to %g", x, g.Width)
	}
	return g.Medium.thermal * (g.grid.value(x/g.Medium.debye) + g.grid.reference), nil
}

func (g *mesh) cell(x float64) int {
	return min(max(sort.SearchFloat64s(g.ends, x)-1, 0), len(g.phase)-1)
}

// value returns u at x in Debye lengths.
func (g *mesh) value(x float64) float64 {
	e := g.cell(x)
	var c [points]float64
	lobatto.cardinals(min(2*(x-g.ends[e])/(g.ends[e+1]-g.ends[e])-1, 1), &c)
	u, d := g.u[e*degree:e*degree+points], 0.0
	for k := 1; k < points; k++ {
		d += c[k] * (u[k] - u[0])
	}
	return u[0] + d
}

// Distance returns how far from the interface the potential has first fallen
// to the given fraction of φ(0), in m; fraction 1 is the interface itself.
func (g *Grain) Distance(fraction float64) (float64, error) {
	grid, m := g.grid, g.Medium
	goal := fraction*g.Phi0/m.thermal - grid.reference
	if fraction == 1 {
		return 0, nil
	}
	for e := grid.core; e < len(grid.phase); e++ {
		if (grid.u[e*degree]-goal)*(grid.u[e*degree+degree]-goal) <= 0 {
			return m.debye * grid.locate(e, goal), nil
		}
	}
	return math.NaN(), fmt.Errorf("spacecharge: potential does not fall to that share in the half grain (%g of %g V), expected at least %.3g", fraction, g.Phi0, 1-g.Drop/g.Phi0)
}

// Points returns the mesh from the interface to the centre: x in m, φ in V
// against the reservoir.
func (g *Grain) Points() (x, phi []float64) {
	for e := range g.grid.phase {
		for k := range points {
			if k == 0 && e > 0 {
				continue
			}
			x = append(x, g.grid.place(e, k))
			phi = append(phi, g.Medium.thermal*(g.grid.u[e*degree+k]+g.grid.reference))
		}
	}
	return x, phi
}

// excess returns c(x)/c∞ − 1 of a species at x in Debye lengths.
func (g *Grain) excess(species int, x float64) float64 {
	for _, p := range g.profiles {
		if p.Species == species {
			return p.Excess(x * g.Medium.debye)
		}
	}
	st := g.Medium.newState()
	e := g.grid.cell(x)
	g.grid.composition(e, g.grid.value(x), &st)
	return st.gain[species]
}

// Concentration returns c of a species in m⁻³ at x in m.
func (g *Grain) Concentration(species int, x float64) float64 {
	return g.Medium.Species[species].Bulk * (1 + g.excess(species, x/g.Medium.debye))
}
