package spacecharge

import (
	"fmt"
	"math"
)

// NoBarrier reports an excess resistance that no depletion layer produces.
type NoBarrier struct {
	Asked float64 // what was to be reached
	Why   string
}

func (e *NoBarrier) Error() string {
	return fmt.Sprintf("spacecharge: no barrier gives this excess (%.4g), %s", e.Asked, e.Why)
}

// PotentialForExcess inverts the full Poisson–Boltzmann integral: it returns
// the Φ₀ in V at which one side adds the resistance of `length` metres of bulk
// for the given carrier, ∫(c∞/c − 1)dx = length > 0. The potential has the sign
// of the carrier's charge (it depletes it). near is a starting value in V, 0 for
// none. The error is *NoBarrier when no potential does.
func (m *Medium) PotentialForExcess(carrier int, length, near float64) (float64, error) {
	return m.depleting(carrier, length/m.debye, near, func(_ *state, _, excess float64) (float64, float64) {
		return math.Log(excess), 0
	})
}

// PotentialForShape returns the Φ₀ in V at which ∫(c∞/c − 1)dx · C/ε of one
// side equals ratio. That is R_boundary C_boundary/(R_bulk C_bulk) of a grain
// with the full layer in place of the depletion formulas; it depends on the
// potential alone, not on concentration, permittivity or grain size.
func (m *Medium) PotentialForShape(carrier int, ratio, near float64) (float64, error) {
	log := func(st *state, psi float64) float64 { // ln(C λ_D/ε) = ln|dΠ̂/dψ / 2√Π̂|
		m.at(psi, st)
		return math.Log(math.Abs(m.chargeDensity(st)) / st.root)
	}
	unit := math.Log(m.thermal * m.epsilon / m.debye / m.debye)
	return m.depleting(carrier, ratio, near, func(st *state, psi, excess float64) (float64, float64) {
		h := 1e-4 * psi
		slope := (log(st, psi+h) - log(st, psi-h)) / (2 * h)
		return math.Log(excess) + log(st, psi) - unit, slope * math.Copysign(1, psi)
	})
}

// depleting solves for |ψ₀| the logarithm of a quantity made of the excess
// E = ∫(c∞/c − 1)dx/λ_D by Newton steps. The slope of ln E is f(ψ₀)/(√Π̂ E) and
// needs no quadrature; the logarithm is concave and nearly straight, so the
// search cannot run away. made returns the logarithm and what else adds to its slope.
func (m *Medium) depleting(carrier int, target, near float64, made func(st *state, psi, excess float64) (log, slope float64)) (float64, error) {
	if !(target > 0) || math.IsInf(target, 0) {
		return math.NaN(), &NoBarrier{target, "expected a positive value"}
	}
	sign, z := math.Copysign(1, m.z[carrier]), math.Abs(m.z[carrier])
	psi := math.Abs(near) / m.thermal
	if psi == 0 {
		psi = max(math.Log1p(target), 0.1*math.Min(1, target)) / z
	}
	st := m.newState()
	goal := math.Log(target)
	for range 80 {
		if z*psi > MaxReduced {
			return math.NaN(), &NoBarrier{target, fmt.Sprintf("expected one that stays below %d k_BT/e", MaxReduced)}
		}
		l, err := m.open(sign * psi * m.thermal)
		if err != nil {
			return math.NaN(), err
		}
		sums, err := l.overLayer(&st, func(y []float64) { y[0] = st.resistance(carrier) }, 1)
		if err != nil {
			return math.NaN(), err
		}
		excess := sums[0] / m.debye
		log, more := made(&st, sign*psi, excess)
		m.at(sign*psi, &st)
		step := (goal - log) / (st.resistance(carrier)/st.root/excess + more)
		psi += math.Max(step, -psi/2)
		if math.Abs(step) < 0.01*m.tolerance()*psi {
			return sign * psi * m.thermal, nil
		}
	}
	return math.NaN(), &NoBarrier{target, "expected a search that settles in 80 steps"}
}
