package spacecharge

import (
	"fmt"
	"math"

	"brinkfield/physics/numerics"
	q "brinkfield/physics/quantity"
)

// Layer is the solved space charge of one side of an interface.
type Layer struct {
	Medium *Medium
	Phi0   float64 // V, interface against bulk

	Charge      float64 // C/m², the interface charge this side balances: εE(Φ₀)
	Capacitance float64 // F/m², dQ/dΦ₀ = |ρ/E|, small-signal
	Field       float64 // V/m at the interface

	// Excess over the flat bulk, per species, in metres of bulk: ∫(c∞/c − 1)dx
	// across the layer and ∫(c/c∞ − 1)dx along it. Zero for frozen species.
	AcrossLength, AlongLength []float64

	// Across is ∫(1/σ − 1/σ∞)dx in Ω m² with σ summed over the carriers, which
	// holds where they exchange locally; for carriers that do not, use the
	// lengths per species. Along is ∫(σ − σ∞)dx in S. NaN without a carrier.
	Across, Along float64

	RelativeError float64 // largest estimated relative error of the integrals

	psi0 float64
	quad *numerics.Quadrature
}

// tailShare sets where the linear tail is taken over analytically: below it the
// next term of the expansion is 1e-12 of the integral.
const tailShare = 1e-6

// Solve computes the layer for a given potential Φ₀ in V. It returns an error
// when |z e Φ₀/k_BT| exceeds MaxReduced.
func (m *Medium) Solve(phi0 float64) (*Layer, error) {
	l, err := m.open(phi0)
	if err != nil || l.psi0 == 0 {
		return l, err
	}
	return l, l.integrate()
}

// open makes a layer with the results that need no quadrature.
func (m *Medium) open(phi0 float64) (*Layer, error) {
	n := len(m.Species)
	buf := make([]float64, 2*n)
	l := &Layer{Medium: m, Phi0: phi0, psi0: phi0 / m.thermal, AcrossLength: buf[:n], AlongLength: buf[n:],
		Across: math.NaN(), Along: math.NaN(), quad: &numerics.Quadrature{Relative: m.tolerance()}}
	for i, s := range m.Species {
		if t := math.Abs(m.z[i] * l.psi0); s.Mobile && !(t <= MaxReduced) {
			return nil, fmt.Errorf("spacecharge: potential is too high for %s (%g V is %.4g k_BT/e times its charge), expected at most %d",
				s.Name, phi0, t, MaxReduced)
		}
	}
	if m.carriers() > 0 {
		l.Across, l.Along = 0, 0
	}
	if l.psi0 == 0 {
		l.Capacitance = m.epsilon / m.debye
		return l, nil
	}
	st := m.newState()
	m.at(l.psi0, &st)
	l.Field = math.Copysign(m.thermal/m.debye*st.root, phi0)
	l.Charge = m.epsilon * l.Field
	l.Capacitance = math.Abs(m.chargeDensity(&st) / l.Field)
	return l, nil
}

func (m *Medium) carriers() int {
	n := 0
	for _, s := range m.Species {
		if s.Mobile && s.Mobility > 0 {
			n++
		}
	}
	return n
}

// integrate does ∫ f(ψ) dx = λ_D ∫ f(ψ) (ψ/√Π̂) du with u = ln|ψ|.
func (l *Layer) integrate() error {
	m := l.Medium
	n := len(m.Species)
	bulk, total := make([]float64, n), 0.0
	for i, s := range m.Species {
		if s.Mobile {
			bulk[i] = s.Conductivity()
			total += bulk[i]
		}
	}
	st := m.newState()
	excess := func(y []float64) {
		change, sigma := 0.0, 0.0
		for i := range n {
			y[i], y[n+i] = st.resistance(i), st.gain[i]
			change += bulk[i] * st.gain[i]
			sigma += bulk[i] * st.ratio[i]
		}
		y[2*n] = 0
		if total > 0 {
			y[2*n] = -change / (sigma * total)
		}
	}
	sums, err := l.overLayer(&st, excess, 2*n+1)
	if err != nil {
		return err
	}
	copy(l.AcrossLength, sums[:n])
	copy(l.AlongLength, sums[n:2*n])
	if total > 0 {
		l.Across, l.Along = sums[2*n], 0
		for i := range n {
			l.Along += bulk[i] * l.AlongLength[i]
		}
	}
	return nil
}

// overLayer integrates the components that f writes over x = 0…∞, in metres.
// Each must vanish linearly with ψ.
func (l *Layer) overLayer(st *state, f func(y []float64), n int) ([]float64, error) {
	m := l.Medium
	end := tailShare * math.Min(1, math.Abs(l.psi0))
	sums, errs, err := l.quad.Integrate(func(u float64, y []float64) {
		psi := math.Copysign(math.Exp(u), l.psi0)
		m.at(psi, st)
		f(y)
		w := math.Abs(psi) / st.root
		for k := range y {
			y[k] *= w
		}
	}, n, math.Log(end), math.Log(math.Abs(l.psi0)), l.joints()...)
	if err != nil {
		return nil, fmt.Errorf("spacecharge: layer at %g V: %w", l.Phi0, err)
	}
	m.at(math.Copysign(end, l.psi0), st)
	tail := make([]float64, n)
	f(tail)
	for k := range sums {
		if sums[k] != 0 {
			l.RelativeError = max(l.RelativeError, errs[k]/math.Abs(sums[k]))
		}
		sums[k] = m.debye * (sums[k] + tail[k])
	}
	return sums, nil
}

// joints are the places in ln|ψ| where the layer changes character: |zψ| = 1,
// where the tail ends, and a few k_BT below the interface, where a depleted
// carrier's resistance sits. They only save panels.
func (l *Layer) joints() []float64 {
	zmax := 1.0
	for i, s := range l.Medium.Species {
		if s.Mobile {
			zmax = max(zmax, math.Abs(l.Medium.z[i]))
		}
	}
	top := math.Abs(l.psi0)
	if zmax*top < 3 {
		return nil
	}
	list := []float64{math.Log(1 / zmax)}
	for _, below := range []float64{16, 6} {
		if zmax*top > 1.5*below {
			list = append(list, math.Log(top-below/zmax))
		}
	}
	return list
}

// Distance returns how far from the interface the potential has fallen to the
// given fraction of Φ₀ (0 < fraction ≤ 1), in m.
func (l *Layer) Distance(fraction float64) (float64, error) {
	if !(fraction > 0 && fraction <= 1) || l.psi0 == 0 {
		return math.NaN(), fmt.Errorf("spacecharge: no distance for that share of the potential (%g of %g V), expected above 0 and at most 1", fraction, l.Phi0)
	}
	top := math.Log(math.Abs(l.psi0))
	return l.walk(top, top+math.Log(fraction))
}

// walk returns the distance in m from ln|ψ| = from to ln|ψ| = to (to < from: > 0).
func (l *Layer) walk(from, to float64) (float64, error) {
	m, st := l.Medium, l.Medium.newState()
	sum, _, err := l.quad.Integrate(func(u float64, y []float64) {
		psi := math.Copysign(math.Exp(u), l.psi0)
		m.at(psi, &st)
		y[0] = math.Abs(psi) / st.root
	}, 1, to, from)
	if err != nil {
		return math.NaN(), fmt.Errorf("spacecharge: profile at %g V: %w", l.Phi0, err)
	}
	return m.debye * sum[0], nil
}

// PotentialAt returns Δφ(x) in V at a distance x ≥ 0 (m) from the interface, by
// Newton steps on the quadrature x(ln|ψ|), which is nearly straight in the tail.
func (l *Layer) PotentialAt(x float64) (float64, error) {
	if !(x >= 0) {
		return math.NaN(), fmt.Errorf("spacecharge: distance is not usable (%g m), expected 0 or more", x)
	}
	if l.psi0 == 0 || x == 0 {
		return l.Phi0, nil
	}
	m, st := l.Medium, l.Medium.newState()
	u, at := math.Log(math.Abs(l.psi0)), 0.0
	for range 100 {
		psi := math.Copysign(math.Exp(u), l.psi0)
		m.at(psi, &st)
		slope := m.debye * math.Abs(psi) / st.root // −dx/du
		step := -(x - at) / slope
		if bound := -3.0; step < bound {
			step = bound
		}
		if math.Abs(step) < 1e-14 || u+step < -700 {
			return m.thermal * psi * (1 + math.Max(step, -1)), nil
		}
		moved, err := l.walk(u, u+step)
		if err != nil {
			return math.NaN(), err
		}
		u, at = u+step, at+moved
	}
	return math.Copysign(m.thermal*math.Exp(u), l.psi0), nil
}

// Concentration returns c(φ) of one species in m⁻³ at a local potential in V.
func (m *Medium) Concentration(species int, phi float64) float64 {
	st := m.newState()
	m.at(phi/m.thermal, &st)
	return m.Species[species].Bulk * st.ratio[species]
}

// ChargeDensity returns ρ(φ) in C/m³.
func (m *Medium) ChargeDensity(phi float64) float64 {
	st := m.newState()
	m.at(phi/m.thermal, &st)
	return m.chargeDensity(&st)
}

// FieldAt returns |E|(φ) in V/m.
func (m *Medium) FieldAt(phi float64) float64 {
	st := m.newState()
	m.at(phi/m.thermal, &st)
	return m.thermal / m.debye * st.root
}

// Epsilon returns the absolute permittivity in F/m.
func (m *Medium) Epsilon() float64 { return m.Permittivity * q.VacuumPermittivity }
