package impedance

import (
	"fmt"
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/mat"
)

// The rule of the test, stated with every result.
const (
	// MuStop is the ratio c of Schönleber et al. at which more elements only
	// describe noise.
	MuStop = 0.85
	// ResidualLimit: a spectrum fails in a range where the residual, smoothed over
	// neighbouring points, is above this part of |Z| and above NoiseMultiple times
	// the noise estimate.
	ResidualLimit = 0.01
	NoiseMultiple = 3.0
	smoothing     = 5
)

// Range is a range of frequency in Hz.
type Range struct{ Low, High float64 }

// Validity is the outcome of the linear Kramers–Kronig test of one spectrum.
type Validity struct {
	Elements int     // M, the number of RC elements
	Mu       float64 // 1 − Σ|R<0| / Σ|R≥0|
	// Residuals, (model − measured)/|measured|, in the order of the points.
	Residuals []complex128
	// Noise is the standard deviation per component relative to |Z|, from
	// differences of neighbouring residuals, so that a slow misfit does not
	// enter it.
	Noise     float64
	RMS       float64 // of all residual components
	Worst     float64 // largest smoothed residual
	Threshold float64 // what it is compared with
	Pass      bool
	Failing   []Range
	Rule      string
}

// KramersKronig tests whether the spectrum can belong to a linear, causal, stable
// system: it fits M fixed time constants spread evenly in ln τ over the window, in
// series with a resistance, an inductance and a capacitance, by linear least
// squares weighted 1/|Z| (Boukamp, J. Electrochem. Soc. 142, 1885 (1995)). Any such
// sum obeys the relations, so what it cannot describe violates them, or is noise.
// M is the least with μ ≤ MuStop (Schönleber, Klotz, Ivers-Tiffée, Electrochim.
// Acta 131, 20 (2014)) whose residual more elements do not lower, at most half the
// points.
func KramersKronig(s Spectrum) (Validity, error) {
	s.Points = append([]Point(nil), s.Points...)
	s.Sort()
	g := newGrid(s, nil)
	if g.count() < MinFitPoints {
		return Validity{}, fmt.Errorf("%w (%d at %g K), expected at least %d", ErrTooFewPoints, g.count(), s.T, MinFitPoints)
	}
	trials := g.seriesTrials()
	if len(trials) == 0 {
		return Validity{}, fmt.Errorf("%w: the test is singular (all points at one frequency, %g Hz)", ErrNoFit, s.Points[0].F)
	}
	best := pickSeries(trials)
	v := Validity{Elements: len(best.x) - 3, Mu: best.mu, Residuals: g.seriesResiduals(best.x)}
	v.judge(g)
	return v, nil
}

// seriesTrial is the fit with one number of elements.
type seriesTrial struct {
	x     []float64 // lead R, lead L, 1/C, element resistances
	mu    float64
	sigma float64 // residual standard deviation with the elements' freedom taken off
}

// seriesTrials fits growing numbers of elements, by one at first and by a tenth
// later.
func (g grid) seriesTrials() []seriesTrial {
	var out []seriesTrial
	most := min(maxElements(g), 2*g.count()-4)
	for m := 3; m <= most; m += max(1, m/8) {
		x, ok := g.series(m)
		if !ok {
			break
		}
		sum := 0.0
		for _, r := range g.seriesResiduals(x) {
			sum += real(r)*real(r) + imag(r)*imag(r)
		}
		out = append(out, seriesTrial{x, mu(x[3:]), math.Sqrt(sum / float64(2*g.count()-m-3))})
	}
	return out
}

// pickSeries takes the fewest elements with μ ≤ MuStop whose residual is within
// sigmaSlack of the least. The second condition is ours: between sharp arcs of very
// different resistance μ falls at five elements already, long before the arcs are
// described.
func pickSeries(trials []seriesTrial) seriesTrial {
	const sigmaSlack = 1.05
	least := math.Inf(1)
	for _, t := range trials {
		least = math.Min(least, t.sigma)
	}
	var first *seriesTrial
	for i := range trials {
		t := &trials[i]
		if t.sigma > sigmaSlack*least+1e-12 {
			continue
		}
		if t.mu <= MuStop {
			return *t
		}
		if first == nil {
			first = t
		}
	}
	return *first
}

// maxElements allows about six elements a decade, and never more than half the points.
func maxElements(g grid) int {
	decades := (g.logw[0] - g.logw[len(g.logw)-1]) / math.Ln10
	return max(3, min(g.count()/2, int(math.Ceil(6*decades))))
}

// series solves for lead R, lead L, 1/C and M element resistances by QR; columns
// are scaled to unit norm first.
func (g grid) series(m int) ([]float64, bool) {
	n := g.count()
	a := mat.NewDense(2*n, m+3, nil)
	b := mat.NewVecDense(2*n, nil)
	tau := g.taus(m)
	for i, w := range g.weight {
		b.SetVec(i, real(g.z[i])*w)
		b.SetVec(n+i, imag(g.z[i])*w)
		for j := 0; j < m+3; j++ {
			z := g.basis(j, i, tau)
			a.Set(i, j, real(z)*w)
			a.Set(n+i, j, imag(z)*w)
		}
	}
	norms := make([]float64, m+3)
	for j := range norms {
		norms[j] = mat.Norm(a.ColView(j), 2)
		for i := 0; i < 2*n; i++ {
			a.Set(i, j, a.At(i, j)/norms[j])
		}
	}
	var qr mat.QR
	qr.Factorize(a)
	x := mat.NewVecDense(m+3, nil)
	if err := qr.SolveVecTo(x, false, b); err != nil {
		return nil, false
	}
	out := make([]float64, m+3)
	for j := range out {
		out[j] = x.AtVec(j) / norms[j]
	}
	return out, true
}

// taus spreads m time constants from 1/ω_max to 1/ω_min.
func (g grid) taus(m int) []float64 {
	hi, lo := g.logw[0], g.logw[len(g.logw)-1]
	out := make([]float64, m)
	for k := range out {
		out[k] = math.Exp(-hi + (hi-lo)*float64(k)/float64(m-1))
	}
	return out
}

// basis is the impedance at point i of unit lead R, L, 1/C and of element j−3 of
// unit resistance.
func (g grid) basis(j, i int, tau []float64) complex128 {
	w := g.omega[i]
	switch j {
	case 0:
		return 1
	case 1:
		return complex(0, w)
	case 2:
		return complex(0, -1/w)
	}
	return 1 / complex(1, w*tau[j-3])
}

func (g grid) seriesResiduals(x []float64) []complex128 {
	tau := g.taus(len(x) - 3)
	out := make([]complex128, g.count())
	for i := range out {
		z := -g.z[i]
		for j, c := range x {
			z += complex(c, 0) * g.basis(j, i, tau)
		}
		out[i] = z * complex(g.weight[i], 0)
	}
	return out
}

// mu is eq. 21 of Schönleber et al.: the share of positive over negative resistances.
func mu(r []float64) float64 {
	neg, pos := 0.0, 0.0
	for _, x := range r {
		if x < 0 {
			neg -= x
		} else {
			pos += x
		}
	}
	if pos == 0 {
		return 0
	}
	return 1 - neg/pos
}

// judge estimates the noise and applies the rule.
func (v *Validity) judge(g grid) {
	n := len(v.Residuals)
	sum, diff := 0.0, 0.0
	for i, r := range v.Residuals {
		sum += real(r)*real(r) + imag(r)*imag(r)
		if i > 0 {
			d := r - v.Residuals[i-1]
			diff += (real(d)*real(d) + imag(d)*imag(d)) / 2
		}
	}
	v.RMS = math.Sqrt(sum / float64(2*n))
	v.Noise = math.Sqrt(diff / float64(2*(n-1)))
	v.Threshold = math.Max(ResidualLimit, NoiseMultiple*v.Noise)
	v.Rule = fmt.Sprintf("fails where the residual, averaged over %d points, exceeds %.2g %% of |Z| (the larger of %.2g %% and %.2g × the noise of %.2g %%)",
		smoothing, 100*v.Threshold, 100*ResidualLimit, NoiseMultiple, 100*v.Noise)
	bad := make([]bool, n)
	for i := range v.Residuals {
		m := cmplx.Abs(smooth(v.Residuals, i))
		v.Worst = math.Max(v.Worst, m)
		bad[i] = m > v.Threshold
	}
	v.Pass = true
	for i := 0; i < n; i++ {
		if !bad[i] {
			continue
		}
		v.Pass = false
		j := i
		for j+1 < n && bad[j+1] {
			j++
		}
		v.Failing = append(v.Failing, Range{Low: g.omega[j] / (2 * math.Pi), High: g.omega[i] / (2 * math.Pi)})
		i = j
	}
}

// smooth is the mean residual over up to `smoothing` points around i.
func smooth(r []complex128, i int) complex128 {
	from, to := max(0, i-smoothing/2), min(len(r), i+smoothing/2+1)
	sum := complex128(0)
	for _, x := range r[from:to] {
		sum += x
	}
	return sum / complex(float64(to-from), 0)
}
