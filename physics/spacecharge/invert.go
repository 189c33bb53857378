package spacecharge

import (
	"fmt"
	"math"
)

// NoBarrier reports an excess resistance that no depletion layer produces.
type NoBarrier struct {
	Length float64 // m of bulk, what one side should add
	Why    string
}

func (e *NoBarrier) Error() string {
	return fmt.Sprintf("spacecharge: no barrier adds that resistance (%.4g m of bulk a side): %s", e.Length, e.Why)
}

// PotentialForExcess inverts the full Poisson–Boltzmann integral: it returns
// the Φ₀ in V at which one side adds the resistance of `length` metres of bulk
// for the given carrier, ∫(c∞/c − 1)dx = length > 0. The potential has the sign
// of the carrier's charge (it depletes it). Newton in ln(length), whose slope
// f(ψ₀)/√Π̂(ψ₀) needs no quadrature; the function is monotonic and nearly straight.
// near is a starting value in V, 0 for none.
func (m *Medium) PotentialForExcess(carrier int, length, near float64) (float64, error) {
	if !(length > 0) || math.IsInf(length, 0) {
		return math.NaN(), &NoBarrier{length, "a barrier adds resistance, the value is not positive"}
	}
	sign := math.Copysign(1, m.z[carrier])
	z := math.Abs(m.z[carrier])
	// e^a/(2a) = length/λ with a = zψ₀ is the shape of the law; its logarithm starts the search.
	psi := math.Abs(near) / m.thermal
	if psi == 0 {
		psi = max(math.Log1p(length/m.debye), 0.1*math.Min(1, length/m.debye)) / z
	}
	st := m.newState()
	target := math.Log(length)
	for range 60 {
		if z*psi > MaxReduced {
			return math.NaN(), &NoBarrier{length, fmt.Sprintf("it would exceed %d k_BT/e", MaxReduced)}
		}
		l, err := m.open(sign * psi * m.thermal)
		if err != nil {
			return math.NaN(), err
		}
		sums, err := l.overLayer(&st, func(y []float64) { y[0] = st.resistance(carrier) }, 1)
		if err != nil {
			return math.NaN(), err
		}
		m.at(sign*psi, &st)
		slope := m.debye * st.resistance(carrier) / st.root / sums[0] // d ln(length)/dψ₀
		step := (target - math.Log(sums[0])) / slope
		if step < -psi/2 {
			step = -psi / 2
		}
		psi += step
		if math.Abs(step) < 1e-12*psi {
			return sign * psi * m.thermal, nil
		}
	}
	return math.NaN(), &NoBarrier{length, "the search did not settle in 60 steps"}
}
