package spacecharge

import (
	"fmt"
	"math"
	"slices"

	q "brinkfield/physics/quantity"
)

// freeze writes the changes of frozen profiles at the mesh's points and the
// charge they add to the flat bulk. Cell ends are read from inside the cell, so
// that a profile may jump at a joint.
func (h HalfGrain) freeze(g *mesh) {
	if len(h.Profiles) == 0 {
		return
	}
	m := g.medium
	n := len(g.phase) * points
	buf := make([]float64, n*(1+len(h.Profiles)))
	g.frozen, g.given = buf[:n], nil
	for j, p := range h.Profiles {
		gain := buf[(j+1)*n : (j+2)*n]
		factor := m.z[p.Species] * m.Species[p.Species].Bulk / m.screen
		for e := g.core; e < len(g.phase); e++ {
			inside := 1e-12 * m.debye * (g.ends[e+1] - g.ends[e])
			for k := range points {
				x := g.place(e, k)
				switch k {
				case 0:
					x += inside
				case degree:
					x -= inside
				}
				gain[e*points+k] = p.Excess(x)
				g.frozen[e*points+k] += factor * gain[e*points+k]
			}
		}
		g.given = append(g.given, gain)
	}
}

// withJoints merges the joints of profiles into the mesh; joints closer than a
// tenth of a cell to an end take its place.
func (h HalfGrain) withJoints(ends, psi []float64) ([]float64, []float64) {
	var joints []float64
	width := ends[len(ends)-1]
	for _, p := range h.Profiles {
		for _, x := range p.Joints {
			if x /= h.Medium.debye; x > 0 && x < width {
				joints = append(joints, x)
			}
		}
	}
	if len(joints) == 0 {
		return ends, psi
	}
	slices.Sort(joints)
	all := []float64{0}
	for i, j := 1, 0; i < len(ends); {
		last := all[len(all)-1]
		switch {
		case j < len(joints) && joints[j]-last < 1e-12*width:
			j++
		case j < len(joints) && joints[j] < ends[i]:
			all = append(all, joints[j])
			j++
		default:
			near := j < len(joints) && joints[j]-ends[i] < 0.3*(ends[i]-last)
			if i == len(ends)-1 || !near && ends[i]-last > 0.3*(ends[i]-ends[i-1]) {
				all = append(all, ends[i])
			}
			i++
		}
	}
	return all, resample(ends, psi, all)
}

// resolve halves cells until each carries a given profile without joints to
// 1e-9 of its whole; a charge that the grain holds must not depend on the mesh.
func (p FrozenProfile) resolve(ends, psi []float64, unit float64) ([]float64, []float64) {
	if len(p.Joints) > 0 {
		return ends, psi
	}
	over := func(a, b float64) float64 {
		sum := 0.0
		for k := range points {
			sum += (b - a) / 2 * lobatto.weight[k] * p.Excess(unit*(a+(b-a)*(lobatto.node[k]+1)/2))
		}
		return sum
	}
	whole := 0.0
	for e := range len(ends) - 1 {
		whole += math.Abs(over(ends[e], ends[e+1]))
	}
	all := []float64{ends[0]}
	var split func(a, b float64, depth int)
	split = func(a, b float64, depth int) {
		mid := (a + b) / 2
		if depth > 0 && math.Abs(over(a, mid)+over(mid, b)-over(a, b)) > 1e-9*whole {
			split(a, mid, depth-1)
			split(mid, b, depth-1)
			return
		}
		all = append(all, b)
	}
	for e := range len(ends) - 1 {
		split(ends[e], ends[e+1], 12)
	}
	return all, resample(ends, psi, all)
}

// resample interpolates ψ onto other cell ends, in the logarithm where it can.
func resample(x, y, at []float64) []float64 {
	out := make([]float64, len(at))
	k := 1
	for i, v := range at {
		for k < len(x)-1 && x[k] < v {
			k++
		}
		s := (v - x[k-1]) / (x[k] - x[k-1])
		a, b := y[k-1], y[k]
		out[i] = a + (b-a)*s
		if a*b > 0 {
			out[i] = math.Copysign(math.Exp(math.Log(math.Abs(a))*(1-s)+math.Log(math.Abs(b))*s), a)
		}
	}
	return out
}

// Freeze returns the profile of one species as it is, to be given to a half
// grain of the same width at another temperature. Beyond the mesh it is flat.
func (g *Grain) Freeze(species int) FrozenProfile {
	unit, ends := g.Medium.debye, g.grid.ends
	var joints []float64
	for k := 0; k < len(ends); k += 2 { // the cells before the last halving resolve it
		joints = append(joints, unit*ends[k])
	}
	last := ends[len(ends)-1]
	return FrozenProfile{Species: species, Joints: joints, Excess: func(x float64) float64 {
		return g.excess(species, min(x/unit, last))
	}}
}

// Stage is one temperature on the way down: the medium as it is there, with the
// species that still follow marked mobile, and the core.
type Stage struct {
	Medium *Medium
	Core   Core
}

// Cool solves a restricted equilibrium: the first stage (the freezing
// temperature of what freezes next) as a whole; at each later one the species
// that have stopped being mobile keep the profile and the core occupancy they
// had, and the others and the core equilibrate anew. Media list the same species
// in the same order. The potential may overshoot zero in the frozen tail.
func (h HalfGrain) Cool(stages []Stage) ([]*Grain, []Filled, error) {
	var grains []*Grain
	var cores []Filled
	for k, s := range stages {
		h.Medium = s.Medium
		core := s.Core
		if k > 0 {
			before, now := stages[k-1].Medium.Species, s.Medium.Species
			if len(before) != len(now) || len(core.Sites) != len(stages[k-1].Core.Sites) {
				return nil, nil, fmt.Errorf("spacecharge: stage %d lists other species or core sites than the one before (%d, %d), expected the same", k+1, len(now), len(core.Sites))
			}
			for i := range now {
				if before[i].Mobile && !now[i].Mobile {
					h.Profiles = append(slices.Clone(h.Profiles), grains[k-1].Freeze(i))
				}
			}
			h.Width = grains[k-1].Width
		}
		g, filled, err := h.withFrozenCore(core, cores)
		if err != nil {
			return nil, nil, fmt.Errorf("spacecharge: stage %d at %g K: %w", k+1, s.Medium.Temperature, err)
		}
		grains, cores = append(grains, g), append(cores, filled)
	}
	return grains, cores, nil
}

// withFrozenCore is WithCore where sites of species that no longer move keep
// the occupancy of the stage before: their charge is fixed.
func (h HalfGrain) withFrozenCore(core Core, before []Filled) (*Grain, Filled, error) {
	if len(before) == 0 {
		return h.WithCore(core)
	}
	last := before[len(before)-1].Occupancy
	mobile := core
	mobile.Sites = nil
	for k, s := range core.Sites {
		if s.Species >= 0 && s.Species < len(h.Medium.Species) && !h.Medium.Species[s.Species].Mobile {
			mobile.Fixed += h.Medium.z[s.Species] * q.ElementaryCharge * s.PerArea * last[k]
			continue
		}
		free := 1.0 // sites it shares with frozen ones are fewer now
		for j, o := range core.Sites {
			if j != k && shares(s, o) && !h.Medium.Species[o.Species].Mobile {
				free -= last[j]
			}
		}
		s.PerArea *= free
		mobile.Sites = append(mobile.Sites, s)
	}
	g, filled, err := h.WithCore(mobile)
	if err != nil {
		return nil, Filled{}, err
	}
	theta, next := make([]float64, len(core.Sites)), 0
	for k, s := range core.Sites {
		if !h.Medium.Species[s.Species].Mobile {
			theta[k] = last[k]
			continue
		}
		theta[k] = filled.Occupancy[next] * mobile.Sites[next].PerArea / s.PerArea
		next++
	}
	filled.Occupancy = theta
	return g, filled, nil
}
