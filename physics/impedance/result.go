package impedance

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// Role is what an arc stands for.
type Role int

const (
	Unassigned Role = iota
	Interior        // grain interior
	Boundary        // grain boundary
	Contact         // electrode contact
)

// String is the role in one word.
func (r Role) String() string {
	return [...]string{"unassigned", "interior", "boundary", "contact"}[r]
}

// Kind says what sort of statement an Estimate is.
type Kind int

const (
	Measured Kind = iota // value with a 95 % interval
	AtLeast              // Low is the 95 % lower limit; Value is where the fit stands, not a result
	AtMost               // High is the 95 % upper limit; Value likewise
	Held                 // given by the user
	AtBound              // n fixed at the end of its range
)

// String is the kind as a report words it.
func (k Kind) String() string {
	return [...]string{"measured", "at least", "at most", "held", "at bound"}[k]
}

// Estimate is a fitted number with its 95 % interval. Low is 0 and High +Inf on
// the side a bound leaves open.
type Estimate struct {
	Value, Low, High float64
	Kind             Kind
}

// Best is the number to print: the limit where the estimate is a bound.
func (e Estimate) Best() float64 {
	switch e.Kind {
	case AtLeast:
		return e.Low
	case AtMost:
		return e.High
	}
	return e.Value
}

// Resolved reports whether the value may be used as a number.
func (e Estimate) Resolved() bool { return e.Kind != AtLeast && e.Kind != AtMost }

// FittedArc is one arc of a fit. Units: R Ω, Q S sⁿ, C F, Tau s, Peak Hz.
type FittedArc struct {
	Arc          Arc
	Role         Role
	RoleWhy      string
	R, Q, N      Estimate
	C, Tau, Peak Estimate
	PeakInWindow bool
	below        bool // top below the window
}

// Trial is one row of the table of tried numbers of arcs.
type Trial struct {
	Arcs      int
	AICc      float64
	Sigma     float64 // residual standard deviation relative to |Z|, per component
	Inflation float64 // of variances, 1 for white residuals
	Free      int
	Accepted  bool
	Why       string
}

// Note is a remark with the figure it rests on.
type Note struct {
	Text  string
	Value float64
}

// Fit is the outcome for one spectrum.
type Fit struct {
	T            float64 // K
	Arcs         []FittedArc
	LeadR, LeadL Estimate // Ω, H

	// Params and Covariance: order of ParamLeadR, ParamLeadL, ParamR, ParamQ,
	// ParamN. Rows of parameters that were not free are zero.
	Params     []float64
	Free       []bool
	Covariance *mat.SymDense

	Residuals   []complex128 // (model − measured)/|measured|, every point, omitted ones too
	Omitted     []bool
	ChiSquared  float64 // Σ of squared residuals of the used points
	Freedom     int
	Sigma       float64 // √(ChiSquared/Freedom)
	Inflation   float64 // factor on every variance for correlated residuals, 1 for white ones
	Trials      []Trial // empty when the number of arcs was given
	Iterations  int
	Gradient    float64
	Status      string
	StartsAgree string
	Notes       []Note
	lowest      float64 // frequency used, Hz
	ownNotes    int     // notes that do not come from the assignment of roles
}

// Model is the fitted impedance at f in Hz.
func Model(fit Fit, f float64) complex128 { return ModelOf(fit.Params, f) }

// Arc returns the arc with a role, nil if there is none.
func (f *Fit) Arc(role Role) *FittedArc {
	for k := range f.Arcs {
		if f.Arcs[k].Role == role {
			return &f.Arcs[k]
		}
	}
	return nil
}

// Index returns the position of the arc with a role, −1 if there is none.
func (f *Fit) Index(role Role) int {
	for k := range f.Arcs {
		if f.Arcs[k].Role == role {
			return k
		}
	}
	return -1
}

// Correlation returns the correlation of two parameters by position, 0 where one
// was not free.
func (f *Fit) Correlation(i, j int) float64 {
	d := f.Covariance.At(i, i) * f.Covariance.At(j, j)
	if d <= 0 {
		return 0
	}
	return f.Covariance.At(i, j) / math.Sqrt(d)
}

// Draw returns a parameter vector drawn from the fit's normal distribution; normal
// must return independent standard normal numbers. Parameters that were not free
// keep their value; lead terms, n and unresolved resistances are cut at their range.
func (f *Fit) Draw(normal func() float64) []float64 {
	out := append([]float64(nil), f.Params...)
	var idx []int
	for j, free := range f.Free {
		if free {
			idx = append(idx, j)
		}
	}
	l := f.root(idx)
	if l == nil {
		return out
	}
	z := make([]float64, len(idx))
	for a := range z {
		z[a] = normal()
	}
	for a, j := range idx {
		for b := 0; b <= a; b++ {
			out[j] += l.At(a, b) * z[b]
		}
	}
	out[ParamLeadR] = math.Max(out[ParamLeadR], 0)
	out[ParamLeadL] = math.Max(out[ParamLeadL], 0)
	for k := range f.Arcs {
		out[ParamN(k)] = math.Min(math.Max(out[ParamN(k)], minExponent), maxExponent)
		if f.Free[ParamR(k)] {
			out[ParamR(k)] = f.Arcs[k].R.cutLog(out[ParamR(k)])
		}
	}
	return out
}

// cutLog keeps the logarithm of an unresolved resistance on the side of its limit
// and within openFactor of it: the normal distribution knows neither.
func (e Estimate) cutLog(x float64) float64 {
	switch e.Kind {
	case AtLeast:
		low := math.Log(e.Low)
		return math.Min(math.Max(x, low), low+math.Log(openFactor))
	case AtMost:
		high := math.Log(e.High)
		return math.Max(math.Min(x, high), high-math.Log(openFactor))
	}
	return x
}

// root is the Cholesky factor of the free block, factored in units of its own
// standard deviations, for the entries span twenty decades.
func (f *Fit) root(idx []int) *mat.TriDense {
	n := len(idx)
	if n == 0 {
		return nil
	}
	corr := mat.NewSymDense(n, nil)
	sd := make([]float64, n)
	for a, i := range idx {
		sd[a] = math.Sqrt(f.Covariance.At(i, i))
		for b := a; b < n; b++ {
			corr.SetSym(a, b, f.Correlation(i, idx[b]))
		}
	}
	var chol mat.Cholesky
	if !chol.Factorize(corr) {
		return nil
	}
	var l mat.TriDense
	chol.LTo(&l)
	for a := 0; a < n; a++ {
		for b := 0; b <= a; b++ {
			l.SetTri(a, b, l.At(a, b)*sd[a])
		}
	}
	return &l
}

// Curve evaluates the model, and each arc alone, at the given frequencies in Hz.
func (f *Fit) Curve(frequencies []float64) (total []complex128, arcs [][]complex128) {
	arcs = make([][]complex128, len(f.Arcs))
	for _, fr := range frequencies {
		total = append(total, Model(*f, fr))
		for k := range f.Arcs {
			arcs[k] = append(arcs[k], f.Arcs[k].Arc.Impedance(fr))
		}
	}
	return total, arcs
}

func (f *Fit) note(value float64, format string, args ...any) {
	f.Notes = append(f.Notes, Note{Text: fmt.Sprintf(format, args...), Value: value})
}
