package spacecharge

import (
	"math"

	q "brinkfield/physics/quantity"
)

// state is the medium at one reduced potential ψ.
type state struct {
	root  float64   // √Π̂, with Π̂ = Π/(k_BT Σz²c/2) → ψ² for small ψ
	ratio []float64 // c/c∞ per species
	gain  []float64 // c/c∞ − 1 without cancellation
}

func (m *Medium) newState() state {
	n := len(m.Species)
	buf := make([]float64, 2*n)
	return state{ratio: buf[:n], gain: buf[n:]}
}

// at evaluates the first integral ½εE² = Π(ψ) with its linear terms cancelled
// analytically (the bulk is neutral), so that nothing is lost as ψ → 0:
//
//	Π/k_BT = Σ_mobile c∞ g(−zψ) + Σ_lattices N [ln(1+s) − s],
//	g(t) = eᵗ − 1 − t,  s = Σ_j (c_j∞/N)(e^{−z_jψ} − 1).
//
// The frozen species enter through neutrality alone.
func (m *Medium) at(psi float64, st *state) {
	pi := 0.0
	for i := range m.Species {
		if !m.Species[i].Mobile {
			st.ratio[i], st.gain[i] = 1, 0
			continue
		}
		t := -m.z[i] * psi
		grown := math.Expm1(t)
		pi += m.Species[i].Bulk * expExcess(t, grown)
		st.gain[i], st.ratio[i] = grown, grown+1
		if t < -1 { // grown+1 has lost digits
			st.ratio[i] = math.Exp(t)
		}
	}
	for k, list := range m.members {
		s := 0.0
		for _, i := range list {
			s += m.Species[i].Bulk / m.sites[k] * st.gain[i]
		}
		pi += m.sites[k] * logExcess(s)
		for _, i := range list { // c/c∞ = e^{−zψ}/(1+s)
			st.gain[i] = (st.gain[i] - s) / (1 + s)
			st.ratio[i] /= 1 + s
		}
	}
	st.root = math.Sqrt(max(pi, 0) * 2 / m.screen)
}

// chargeDensity returns ρ in C/m³; by neutrality it is the sum of the changes.
func (m *Medium) chargeDensity(st *state) float64 {
	sum := 0.0
	for i, s := range m.Species {
		sum += m.z[i] * s.Bulk * st.gain[i]
	}
	return q.ElementaryCharge * sum
}

// resistance returns c∞/c − 1 of one species, and along with it nothing is lost
// at either end: it is −gain/ratio.
func (st *state) resistance(i int) float64 { return -st.gain[i] / st.ratio[i] }

// expExcess returns eᵗ − 1 − t given expm1(t); the series below |t| = 0.5 keeps
// all digits where the difference would cancel.
func expExcess(t, grown float64) float64 {
	if math.Abs(t) > 0.5 {
		return grown - t
	}
	sum := 1.0
	for n := 15; n >= 3; n-- {
		sum = 1 + t/float64(n)*sum
	}
	return t * t / 2 * sum
}

// logExcess returns ln(1+s) − s, by series below |s| = 0.1.
func logExcess(s float64) float64 {
	if math.Abs(s) > 0.1 {
		return math.Log1p(s) - s
	}
	sum := 0.0
	for n := 17; n >= 2; n-- {
		sum = 1/float64(n) - s*sum
	}
	return -s * s * sum
}
