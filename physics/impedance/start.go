package impedance

import (
	"cmp"
	"math"
	"slices"
)

// A start is found without iteration: on a grid of time constants, all with one
// middling exponent, lead and arc resistances follow by linear least squares.
// Every combination of K time constants is tried and the best few that differ
// are handed to the iteration.
const (
	startN         = 0.9
	startPerDecade = 2.0
	startMargin    = 1.0 // decades beyond the window, either side
	startKeep      = 4
)

type startGrid struct {
	g      grid
	logTau []float64
	gram   [][]float64 // basis: lead R, lead L, arcs of unit R
	proj   []float64   // basis · data
	unit   []float64   // scale of each basis function
}

func newStartGrid(g grid) *startGrid {
	s := &startGrid{g: g}
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, lw := range g.logw {
		lo, hi = math.Min(lo, lw), math.Max(hi, lw)
	}
	from, to := -hi-startMargin*math.Ln10, -lo+startMargin*math.Ln10
	steps := int(math.Ceil((to - from) / math.Ln10 * startPerDecade))
	n := g.count()
	basis := [][]float64{make([]float64, 2*n), make([]float64, 2*n)}
	for i, w := range g.weight {
		basis[0][i], basis[1][n+i] = w, w*g.omega[i]
	}
	for j := 0; j <= steps; j++ {
		lt := from + (to-from)*float64(j)/float64(steps)
		s.logTau = append(s.logTau, lt)
		col := make([]float64, 2*n)
		g.addArc(-lt, []float64{0, 0, startN}, col, nil)
		for i, w := range g.weight {
			col[i] *= w
			col[n+i] *= w
		}
		basis = append(basis, col)
	}
	s.reduce(basis)
	return s
}

// reduce forms the normal equations of all basis functions, scaled to unit norm.
func (s *startGrid) reduce(basis [][]float64) {
	n := s.g.count()
	data := make([]float64, 2*n)
	for i, z := range s.g.z {
		data[i], data[n+i] = real(z)*s.g.weight[i], imag(z)*s.g.weight[i]
	}
	for _, b := range basis {
		norm := math.Sqrt(dot(b, b))
		s.unit = append(s.unit, norm)
		for i := range b {
			b[i] /= norm
		}
		s.proj = append(s.proj, dot(b, data))
	}
	for _, a := range basis {
		row := make([]float64, len(basis))
		for j, b := range basis {
			row[j] = dot(a, b)
		}
		s.gram = append(s.gram, row)
	}
}

type start struct {
	gain  float64 // part of Σ(z/|z|)² explained
	tau   []int
	coeff []float64 // lead R, lead L, then R per arc
}

// best returns up to keep starts for k arcs, as public parameters.
func (s *startGrid) best(k, keep int) [][]float64 {
	var all []start
	pick := make([]int, k)
	var walk func(level, from int)
	walk = func(level, from int) {
		if level == k {
			if st, ok := s.try(pick); ok {
				all = append(all, st)
			}
			return
		}
		for j := from; j < len(s.logTau); j++ {
			pick[level] = j
			walk(level+1, j+1)
		}
	}
	walk(0, 0)
	slices.SortStableFunc(all, func(a, b start) int { return cmp.Compare(b.gain, a.gain) })
	var kept []start
	for _, st := range all {
		if len(kept) == keep {
			break
		}
		if !slices.ContainsFunc(kept, func(o start) bool { return near(o.tau, st.tau) }) {
			kept = append(kept, st)
		}
	}
	out := make([][]float64, len(kept))
	for i, st := range kept {
		out[i] = s.params(st)
	}
	return out
}

// near: no time constant differs by more than one grid step.
func near(a, b []int) bool {
	for i := range a {
		if d := a[i] - b[i]; d > 1 || d < -1 {
			return false
		}
	}
	return true
}

// try solves for the resistances of one combination; lead terms that come out
// negative are dropped, a negative arc refuses the combination.
func (s *startGrid) try(pick []int) (start, bool) {
	for drop := 0; drop < 4; drop++ {
		var idx [8]int
		m := 0
		for lead := 0; lead < 2; lead++ {
			if drop&(1<<lead) == 0 {
				idx[m] = lead
				m++
			}
		}
		leads := m
		for _, j := range pick {
			idx[m] = 2 + j
			m++
		}
		x, gain, ok := s.solve(idx[:m])
		if !ok {
			continue
		}
		bad := false
		for a := 0; a < leads; a++ {
			bad = bad || x[a] < 0
		}
		if bad {
			continue
		}
		st := start{gain: gain, tau: slices.Clone(pick), coeff: make([]float64, 2, 2+len(pick))}
		for a := 0; a < m; a++ {
			v := x[a] / s.unit[idx[a]]
			if a < leads {
				st.coeff[idx[a]] = v
				continue
			}
			if v <= 0 {
				return start{}, false
			}
			st.coeff = append(st.coeff, v)
		}
		return st, true
	}
	return start{}, false
}

// solve is a Cholesky solution of the picked normal equations, in place and
// without allocation, for it runs a thousand times per spectrum.
func (s *startGrid) solve(idx []int) (x [8]float64, gain float64, ok bool) {
	var l [8][8]float64
	m := len(idx)
	for i := 0; i < m; i++ {
		for j := 0; j <= i; j++ {
			v := s.gram[idx[i]][idx[j]]
			for k := 0; k < j; k++ {
				v -= l[i][k] * l[j][k]
			}
			if i != j {
				l[i][j] = v / l[j][j]
				continue
			}
			if v < 1e-10 {
				return x, 0, false
			}
			l[i][i] = math.Sqrt(v)
		}
	}
	for i := 0; i < m; i++ {
		v := s.proj[idx[i]]
		for k := 0; k < i; k++ {
			v -= l[i][k] * x[k]
		}
		x[i] = v / l[i][i]
		gain += x[i] * x[i]
	}
	for i := m - 1; i >= 0; i-- {
		for k := i + 1; k < m; k++ {
			x[i] -= l[k][i] * x[k]
		}
		x[i] /= l[i][i]
	}
	return x, gain, true
}

func (s *startGrid) params(st start) []float64 {
	p := []float64{st.coeff[0], st.coeff[1]}
	for k, j := range st.tau {
		r := math.Log(st.coeff[2+k])
		p = append(p, r, startN*s.logTau[j]-r, startN) // RQ = τⁿ
	}
	return p
}

func dot(a, b []float64) float64 {
	v := 0.0
	for i := range a {
		v += a[i] * b[i]
	}
	return v
}
