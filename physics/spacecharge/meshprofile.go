package spacecharge

import (
	"math"
	"slices"
)

// freeze writes the charge that frozen profiles add to their flat bulk.
func (h HalfGrain) freeze(g *mesh) {
	if len(h.Profiles) == 0 {
		return
	}
	m := g.medium
	g.frozen = make([]float64, len(g.phase)*points)
	for e := range g.phase {
		for k := range points {
			x := g.place(e, k)
			for _, p := range h.Profiles {
				g.frozen[e*points+k] += m.z[p.Species] * m.Species[p.Species].Bulk / m.screen * p.Excess(x)
			}
		}
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
