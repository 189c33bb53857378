package spacecharge

import "math"

// Profile is a layer sampled from the interface into the bulk.
type Profile struct {
	X             []float64   // m, ascending from 0
	Phi           []float64   // V against the bulk
	Field         []float64   // V/m, magnitude
	ChargeDensity []float64   // C/m³
	Relative      [][]float64 // c/c∞, [species][point]
}

// gauss5 is the five-point Gauss–Legendre rule on 0…1 (Abramowitz & Stegun, table 25.4).
var gauss5 = [5][2]float64{
	{0.046910077030668, 0.118463442528095}, {0.230765344947158, 0.239314335249683}, {0.5, 0.284444444444444},
	{0.769234655052842, 0.239314335249683}, {0.953089922969332, 0.118463442528095},
}

// Sample returns the profile at n+1 potentials from Φ₀ down to the share end of
// it (end 1e-3, say), spaced evenly in asinh ψ: dense in the tail and in the
// steep part alike. Distances by cumulative Gauss–Legendre, good to 1e-8.
func (l *Layer) Sample(n int, end float64) Profile {
	m, st := l.Medium, l.Medium.newState()
	p := Profile{Relative: make([][]float64, len(m.Species))}
	if l.psi0 == 0 {
		return p
	}
	top, bottom := math.Asinh(math.Abs(l.psi0)/0.1), math.Asinh(end*math.Abs(l.psi0)/0.1)
	potential := func(k float64) float64 {
		return math.Copysign(0.1*math.Sinh(top+(bottom-top)*k/float64(n)), l.psi0)
	}
	x := 0.0
	for k := 0; k <= n; k++ {
		if k > 0 {
			a, b := potential(float64(k-1)), potential(float64(k))
			x += m.gap(&st, a, b)
		}
		psi := potential(float64(k))
		m.at(psi, &st)
		p.X = append(p.X, x)
		p.Phi = append(p.Phi, m.thermal*psi)
		p.Field = append(p.Field, m.thermal/m.debye*st.root)
		p.ChargeDensity = append(p.ChargeDensity, m.chargeDensity(&st))
		for i := range p.Relative {
			p.Relative[i] = append(p.Relative[i], st.ratio[i])
		}
	}
	return p
}

// gap is the distance between two nearby potentials a (nearer the interface) and b.
func (m *Medium) gap(st *state, a, b float64) float64 {
	ua, ub := math.Log(math.Abs(a)), math.Log(math.Abs(b))
	sum := 0.0
	for _, g := range gauss5 {
		psi := math.Exp(ub + (ua-ub)*g[0])
		m.at(math.Copysign(psi, a), st)
		sum += g[1] * psi / st.root
	}
	return m.debye * sum * (ua - ub)
}
