package spacecharge

import (
	"math"
	"slices"
)

// Shape of the first mesh. A cell may hold a change of `drop` in |z|ψ, or that
// many Debye lengths of the tail; behind the tail cells grow by `growth`.
const (
	growth  = 2.5
	faded   = 1e-12 // where the tail counts as over, against ψ₀ or 1
	maxCell = 4000
)

// dropFor is the change per cell that meets a tolerance at first go (measured).
func dropFor(tolerance float64) float64 {
	if tolerance < 1e-7 {
		return 1.5
	}
	return 2.2
}

// grade lays cell ends by marching the first integral of the semi-infinite
// layer, dx = dψ/√Π̂, from ψ₀ into the grain, and returns ψ at them: mesh and
// start in one. width is in Debye lengths, 0: as long as the tail needs.
func (m *Medium) grade(psi0, width, drop float64) (ends, psi []float64) {
	slope := m.newSlope()
	zmax := m.largestCharge()
	x, now, endless := 0.0, math.Abs(psi0), width <= 0
	if endless {
		width = math.Inf(1)
	}
	ends, psi = []float64{0}, []float64{psi0}
	for last := faded * math.Min(1, now); now > last && x < width && len(ends) < maxCell; {
		next := max(now-drop/zmax, now*math.Exp(-drop))
		if now*zmax < drop {
			next = now * math.Exp(-drop)
		}
		step := slope.gap(math.Copysign(now, psi0), math.Copysign(next, psi0))
		x, now = x+step, next
		ends, psi = append(ends, x), append(psi, math.Copysign(now, psi0))
	}
	step := drop
	if n := len(ends); n > 1 {
		step = ends[n-1] - ends[n-2]
	}
	for k := 0; x < width && (!endless || k < 3); k++ {
		x += step
		step *= growth
		ends, psi = append(ends, x), append(psi, 0)
	}
	if endless {
		return ends, psi
	}
	return cutGrid(ends, psi, width)
}

// slope is √Π̂ of the semi-infinite layer at any potential. Medium.at cancels
// the linear terms, which is right for small ψ; where limited sites are full the
// plain sum is.
type slope struct {
	m     *Medium
	st    state
	bulk  *phase
	fixed float64 // charge that does not follow, in units of screen
}

func (m *Medium) newSlope() *slope {
	s := &slope{m: m, st: m.newState(), bulk: m.newPhase(0, nil)}
	for j, z := range s.bulk.z {
		s.fixed -= z * s.bulk.ref[j]
	}
	return s
}

func (s *slope) at(psi float64) float64 {
	if math.Abs(psi)*s.m.largestCharge() > 5 {
		if p := s.bulk.pressure(psi) - s.fixed*psi; p > 0 && !math.IsInf(p, 0) {
			return math.Sqrt(2 * p)
		}
	}
	s.m.at(psi, &s.st)
	return s.st.root
}

// gap is the distance in Debye lengths between two nearby potentials of one sign.
func (s *slope) gap(a, b float64) float64 {
	ua, ub := math.Log(math.Abs(a)), math.Log(math.Abs(b))
	sum := 0.0
	for _, g := range gauss5 {
		psi := math.Exp(ub + (ua-ub)*g[0])
		sum += g[1] * psi / s.at(math.Copysign(psi, a))
	}
	return sum * (ua - ub)
}

// cutGrid ends the mesh at the grain's centre, without a sliver for a last cell.
func cutGrid(ends, psi []float64, width float64) ([]float64, []float64) {
	n := len(ends) - 1
	if n > 1 && width-ends[n-1] < 0.2*(ends[n]-ends[n-1]) {
		n--
	}
	if n > 0 && ends[n] > ends[n-1] {
		share := (width - ends[n-1]) / (ends[n] - ends[n-1])
		psi[n] = psi[n-1] + (psi[n]-psi[n-1])*math.Min(share, 1)
	}
	ends[n] = width
	ends, psi = ends[:n+1], psi[:n+1]
	if n == 1 {
		ends, psi = []float64{0, width / 2, width}, []float64{psi[0], (psi[0] + psi[1]) / 2, psi[1]}
	}
	return ends, psi
}

// spread writes u at the nodes between cell ends: the exponential-in-x that
// joins two values of one sign, a straight line otherwise.
func (g *mesh) spread(psi []float64) {
	for e := range g.phase {
		a, b := psi[e]-g.reference, psi[e+1]-g.reference
		for k := range points {
			s := (lobatto.node[k] + 1) / 2
			v := a + (b-a)*s
			if a*b > 0 && math.Abs(math.Log(a/b)) < 4 {
				v = a * math.Pow(b/a, s)
			}
			g.u[e*degree+k] = v
		}
	}
}

// refined returns the mesh with the marked cells halved and u carried over.
func (g *mesh) refined(mark func(e int) bool) *mesh {
	n := len(g.phase)
	ends, phases := make([]float64, 0, 2*n+1), make([]*phase, 0, 2*n)
	u := make([]float64, 0, 2*n*degree+1)
	ends = append(ends, g.ends[0])
	u = append(u, g.u[0])
	for e := range n {
		old := g.u[e*degree : e*degree+points]
		phases = append(phases, g.phase[e])
		if !mark(e) {
			ends = append(ends, g.ends[e+1])
			u = append(u, old[1:]...)
			continue
		}
		phases = append(phases, g.phase[e])
		ends = append(ends, (g.ends[e]+g.ends[e+1])/2, g.ends[e+1])
		for side := range 2 {
			for k := 1; k < points; k++ {
				d := 0.0
				for j := 1; j < points; j++ {
					d += lobatto.half[side][k][j] * (old[j] - old[0])
				}
				u = append(u, old[0]+d)
			}
		}
	}
	f := g.medium.newMesh(ends, phases)
	copy(f.u, u)
	f.inherit(g)
	for e := range g.core {
		if mark(e) {
			f.core++
		}
	}
	return f
}

// inherit takes over everything but cells and potential.
func (g *mesh) inherit(from *mesh) {
	g.reference, g.edge, g.iterations = from.reference, from.edge, from.iterations
	g.core, g.closed = from.core, from.closed
}

// divided splits every cell whose |z|u changes by far more than drop into
// pieces of equal change; it mends a mesh laid for another potential.
func (g *mesh) divided(drop float64) (ends, psi []float64, core int, changed bool) {
	ends, psi = []float64{g.ends[0]}, []float64{g.u[0] + g.reference}
	for e := range g.phase {
		a, b := g.u[e*degree], g.u[e*degree+degree]
		pieces := int(math.Ceil(g.zmax * math.Abs(b-a) / (1.5 * drop)))
		for k := 1; k < pieces && len(ends) < maxCell; k++ {
			v := a + (b-a)*float64(k)/float64(pieces)
			ends, psi = append(ends, g.locate(e, v)), append(psi, v+g.reference)
			changed = true
		}
		ends, psi = append(ends, g.ends[e+1]), append(psi, b+g.reference)
		if e < g.core {
			core = len(ends) - 1
		}
	}
	if !slices.IsSorted(ends) {
		return g.ends, nil, g.core, false
	}
	return ends, psi, core, changed
}

// locate returns where u takes the value v in a cell whose ends bracket it.
func (g *mesh) locate(e int, v float64) float64 {
	low, high := -1.0, 1.0
	u := g.u[e*degree : e*degree+points]
	sign := math.Copysign(1, u[degree]-u[0])
	var c [points]float64
	for range 60 {
		mid := (low + high) / 2
		lobatto.cardinals(mid, &c)
		s := 0.0
		for k := range points {
			s += c[k] * u[k]
		}
		if (s-v)*sign < 0 {
			low = mid
		} else {
			high = mid
		}
	}
	h := g.ends[e+1] - g.ends[e]
	return g.ends[e] + h*(low+1)/2
}
