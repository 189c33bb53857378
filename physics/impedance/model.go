package impedance

import (
	"math"
	"math/cmplx"
)

// Arc is one resistance in parallel with a constant-phase element.
type Arc struct {
	R float64 // Ω; +Inf: no leak, the element alone
	Q float64 // S sⁿ
	N float64 // 0.5…1; 1 is a capacitor
}

// Impedance at frequency f in Hz: Z = 1/(1/R + Q (iω)ⁿ).
func (a Arc) Impedance(f float64) complex128 {
	w := 2 * math.Pi * f
	mag := a.Q * math.Exp(a.N*math.Log(w))
	s, c := math.Sincos(a.N * math.Pi / 2)
	return 1 / (complex(1/a.R, 0) + complex(mag*c, mag*s))
}

// Tau is (RQ)^{1/n} in s, the time constant at the top of the arc.
func (a Arc) Tau() float64 { return math.Pow(a.R*a.Q, 1/a.N) }

// Peak is the frequency of the top of the arc, 1/(2π Tau), in Hz.
func (a Arc) Peak() float64 { return 1 / (2 * math.Pi * a.Tau()) }

// Capacitance is (R^{1−n} Q)^{1/n} in F: Hsu & Mansfeld, Corrosion 57, 747 (2001).
func (a Arc) Capacitance() float64 {
	if a.N == 1 {
		return a.Q
	}
	return math.Pow(math.Pow(a.R, 1-a.N)*a.Q, 1/a.N)
}

// Position of the parameters in every parameter vector and covariance of this
// package: lead resistance (Ω), lead inductance (H), then for each arc, fastest
// first, ln(R/Ω), ln(Q/S sⁿ) and n.
const (
	ParamLeadR = 0
	ParamLeadL = 1
)

// ParamR is the position of ln R of arc k.
func ParamR(k int) int { return 2 + 3*k }

// ParamQ is the position of ln Q of arc k.
func ParamQ(k int) int { return 3 + 3*k }

// ParamN is the position of n of arc k.
func ParamN(k int) int { return 4 + 3*k }

func countParams(arcs int) int { return 2 + 3*arcs }

// ArcsOf reads the arcs out of a parameter vector.
func ArcsOf(p []float64) []Arc {
	out := make([]Arc, 0, 3)
	for k := 0; ParamN(k) < len(p); k++ {
		out = append(out, Arc{R: math.Exp(p[ParamR(k)]), Q: math.Exp(p[ParamQ(k)]), N: p[ParamN(k)]})
	}
	return out
}

// ModelOf evaluates a parameter vector at frequency f in Hz.
func ModelOf(p []float64, f float64) complex128 {
	z := complex(p[ParamLeadR], 2*math.Pi*f*p[ParamLeadL])
	for _, a := range ArcsOf(p) {
		z += a.Impedance(f)
	}
	return z
}

// grid holds what a fit needs at every used point. Inside a fit ln Q is replaced
// by ln(Q ωᵣⁿ) with a reference ωᵣ near the arc's top: ln Q and n alone are
// correlated to −0.99 and worse.
type grid struct {
	omega  []float64
	logw   []float64
	z      []complex128
	weight []float64 // 1/|Z|
	index  []int     // position in the spectrum
}

func newGrid(s Spectrum, omit map[int]bool) grid {
	var g grid
	for i, p := range s.Points {
		if omit[i] {
			continue
		}
		w := 2 * math.Pi * p.F
		g.omega = append(g.omega, w)
		g.logw = append(g.logw, math.Log(w))
		g.z = append(g.z, p.Z)
		g.weight = append(g.weight, 1/cmplx.Abs(p.Z))
		g.index = append(g.index, i)
	}
	return g
}

func (g grid) count() int { return len(g.omega) }

// eval is the numerics.Residuals of the model: r = (Z_model − Z)/|Z|, real parts
// first. logRef holds ln ωᵣ per arc.
func (g grid) eval(logRef []float64, p, r []float64, jac [][]float64) {
	n := g.count()
	for i := range g.omega {
		r[i] = p[ParamLeadR]
		r[n+i] = g.omega[i] * p[ParamLeadL]
	}
	for k := range logRef {
		var cols [][]float64
		if jac != nil {
			cols = jac[ParamR(k) : ParamN(k)+1]
		}
		g.addArc(logRef[k], p[ParamR(k):ParamN(k)+1], r, cols)
	}
	for i, wt := range g.weight {
		r[i] = (r[i] - real(g.z[i])) * wt
		r[n+i] = (r[n+i] - imag(g.z[i])) * wt
		if jac != nil {
			jac[ParamLeadR][i], jac[ParamLeadR][n+i] = wt, 0
			jac[ParamLeadL][i], jac[ParamLeadL][n+i] = 0, wt*g.omega[i]
		}
	}
}

// addArc adds one arc and its derivatives: with G = e^{−ln R}, Y = e^q (iω/ωᵣ)ⁿ,
// z = 1/(G+Y): ∂z/∂ln R = z²G, ∂z/∂q = −z²Y, ∂z/∂n = −z²Y (ln(ω/ωᵣ) + iπ/2).
func (g grid) addArc(logRef float64, p, r []float64, jac [][]float64) {
	n := g.count()
	leak := complex(math.Exp(-p[0]), 0)
	sin, cos := math.Sincos(p[2] * math.Pi / 2)
	for i, lw := range g.logw {
		mag := math.Exp(p[1] + p[2]*(lw-logRef))
		y := complex(mag*cos, mag*sin)
		z := 1 / (leak + y)
		r[i] += real(z)
		r[n+i] += imag(z)
		if jac == nil {
			continue
		}
		wt := complex(g.weight[i], 0)
		dq := -z * z * y * wt
		dr := z * z * leak * wt
		dn := dq * complex(lw-logRef, math.Pi/2)
		jac[0][i], jac[0][n+i] = real(dr), imag(dr)
		jac[1][i], jac[1][n+i] = real(dq), imag(dq)
		jac[2][i], jac[2][n+i] = real(dn), imag(dn)
	}
}
