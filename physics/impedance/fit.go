package impedance

import (
	"errors"
	"fmt"
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distuv"
)

// Limits of a fit.
const (
	MaxArcs      = 3
	MinFitPoints = 6
)

// Quantity names a parameter that can be held.
type Quantity int

const (
	LeadResistance Quantity = iota // Ω
	LeadInductance                 // H
	ArcResistance                  // Ω
	ArcQ                           // S sⁿ
	ArcExponent                    // 1
)

// Hold fixes one parameter. The arc is named by its role, or, with Role
// Unassigned, by its place, 0 being the fastest.
type Hold struct {
	Quantity Quantity
	Role     Role
	Arc      int
	Value    float64
}

// Controls steer a fit; the zero value decides everything from the data.
type Controls struct {
	Arcs         int          // 0: chosen by AICc and the rule of choose; 1…MaxArcs
	Omit         []int        // positions in Spectrum.Points left out
	OmitHz       []float64    // frequencies left out, matched to 1e-6
	Hold         []Hold       // parameters held
	Assign       map[int]Role // roles given by place, 0 the fastest
	CellConstant float64      // thickness/area, 1/m; 0 unknown
}

// Errors of a fit; each is wrapped with the figures.
var (
	ErrTooFewPoints = errors.New("impedance: too few points for a fit")
	ErrControls     = errors.New("impedance: fit controls are not usable")
	ErrNoFit        = errors.New("impedance: no fit was found")
)

// FitArcs fits lead resistance and inductance in series with one to three arcs
// by complex least squares with residuals divided by |Z|.
func FitArcs(s Spectrum, c Controls) (Fit, error) {
	fit, err := fitOnce(s, c, nil)
	if err != nil {
		return Fit{}, err
	}
	if needsRoles(c) {
		return fitOnce(s, c, &fit)
	}
	return fit, nil
}

// fitOnce fits with holds by role resolved through an earlier fit, if there is one.
func fitOnce(s Spectrum, c Controls, earlier *Fit) (Fit, error) {
	if err := c.check(); err != nil {
		return Fit{}, err
	}
	s.Points = append([]Point(nil), s.Points...)
	s.Sort()
	omit := c.omitted(s)
	g := newGrid(s, omit)
	if g.count() < MinFitPoints {
		return Fit{}, fmt.Errorf("%w (%d used at %g K), expected at least %d", ErrTooFewPoints, g.count(), s.T, MinFitPoints)
	}
	h, notes := c.holds(earlier)
	if earlier != nil && c.Arcs == 0 {
		c.Arcs = len(earlier.Arcs) // holding a value must not change the number
	}
	sol, trials, err := g.choose(c.Arcs, h)
	if err != nil {
		return Fit{}, fmt.Errorf("%w at %g K", err, s.T)
	}
	fit := g.report(sol, h, s, omit)
	fit.Notes = append(notes, fit.Notes...)
	fit.Trials = trials
	if earlier != nil {
		fit.Trials = earlier.Trials
	}
	fit.ownNotes = len(fit.Notes)
	assign([]*Fit{&fit}, []Controls{c})
	return fit, nil
}

func (c Controls) check() error {
	if c.Arcs < 0 || c.Arcs > MaxArcs {
		return fmt.Errorf("%w: number of arcs (%d), expected 0 (choose) to %d", ErrControls, c.Arcs, MaxArcs)
	}
	if math.IsNaN(c.CellConstant) || c.CellConstant < 0 || math.IsInf(c.CellConstant, 0) {
		return fmt.Errorf("%w: thickness over area (%g 1/m), expected a positive number or 0", ErrControls, c.CellConstant)
	}
	for _, h := range c.Hold {
		lo, hi := 0.0, math.Inf(1)
		if h.Quantity == ArcExponent {
			lo, hi = minExponent, maxExponent
		}
		lead := h.Quantity == LeadResistance || h.Quantity == LeadInductance
		if !(h.Value >= lo && h.Value <= hi) || math.IsInf(h.Value, 1) || (!lead && h.Value == 0) {
			return fmt.Errorf("%w: held value (%g), expected %g to %g", ErrControls, h.Value, lo, hi)
		}
		if h.Arc < 0 || h.Arc >= MaxArcs {
			return fmt.Errorf("%w: held arc (%d), expected 0 to %d", ErrControls, h.Arc, MaxArcs-1)
		}
	}
	return nil
}

func (c Controls) omitted(s Spectrum) map[int]bool {
	omit := map[int]bool{}
	for _, i := range c.Omit {
		omit[i] = true
	}
	for _, f := range c.OmitHz {
		for i, p := range s.Points {
			if math.Abs(p.F-f) <= 1e-6*f {
				omit[i] = true
			}
		}
	}
	return omit
}

func needsRoles(c Controls) bool {
	for _, h := range c.Hold {
		if h.Role != Unassigned && h.Quantity >= ArcResistance {
			return true
		}
	}
	return false
}

// holds turns the list into positions of the parameter vector.
func (c Controls) holds(earlier *Fit) (hold, []Note) {
	h := hold{}
	var notes []Note
	for _, x := range c.Hold {
		k := x.Arc
		if x.Role != Unassigned {
			if earlier == nil && x.Quantity >= ArcResistance {
				continue
			}
			if earlier != nil {
				k = earlier.Index(x.Role)
			}
		}
		if k < 0 {
			notes = append(notes, Note{Text: fmt.Sprintf("a value is held for the %s arc, but there is none here", x.Role), Value: x.Value})
			continue
		}
		switch x.Quantity {
		case LeadResistance:
			h[ParamLeadR] = x.Value
		case LeadInductance:
			h[ParamLeadL] = x.Value
		case ArcResistance:
			h[ParamR(k)] = math.Log(x.Value)
		case ArcQ:
			h[ParamQ(k)] = math.Log(x.Value)
		case ArcExponent:
			h[ParamN(k)] = x.Value
		}
	}
	return h, notes
}

// report turns a solution into a Fit.
func (g grid) report(sol solution, h hold, s Spectrum, omit map[int]bool) Fit {
	fit := Fit{T: s.T, Params: sol.p, ChiSquared: sol.sum, Iterations: sol.run.Iterations,
		Gradient: sol.run.GradientNorm, Status: sol.run.Status.String(), Freedom: 2*g.count() - sol.free()}
	fit.StartsAgree = fmt.Sprintf("%d starts reached this minimum", max(sol.starts, 1))
	if fit.Freedom > 0 {
		fit.Sigma = math.Sqrt(sol.sum / float64(fit.Freedom))
	}
	n := len(sol.p)
	fit.Free = make([]bool, n)
	fit.Covariance = mat.NewSymDense(n, nil)
	for j := range sol.p {
		fit.Free[j] = sol.bound[j] == 0
	}
	for i, p := range s.Points {
		fit.Residuals = append(fit.Residuals, (ModelOf(sol.p, p.F)-p.Z)/complex(cmplx.Abs(p.Z), 0))
		fit.Omitted = append(fit.Omitted, omit[i])
	}
	fit.inflate()
	if sol.inverse != nil {
		fit.Covariance.ScaleSym(fit.Sigma*fit.Sigma*fit.Inflation, sol.inverse)
	} else {
		fit.note(float64(sol.free()), "the data do not fix all %d parameters: no intervals", sol.free())
	}
	g.judge(&fit, sol, h)
	return fit
}

// correlated is the correlation of neighbouring residuals from which on they are
// taken as misfit: white noise of 61 points stays below it in 999 cases of 1000.
const correlated = 0.3

// inflate widens the variances when neighbouring residuals hang together: the arcs
// then miss something and there are fewer independent points than points. It covers
// the scatter a misfit brings, not its bias.
func (f *Fit) inflate() {
	var used []complex128
	for i, r := range f.Residuals {
		if !f.Omitted[i] {
			used = append(used, r)
		}
	}
	var rho float64
	f.Inflation, rho = inflation(used)
	if f.Inflation > 1 {
		f.note(rho, "the arcs do not describe the spectrum fully: residuals of %.2g %% hang together (%.2f from point to point), intervals are widened %.1f times",
			100*f.Sigma, rho, math.Sqrt(f.Inflation))
	}
}

// inflation is the factor (1+ρ)/(1−ρ) on a variance for a first-order
// autocorrelation ρ (Bartlett, J. R. Stat. Soc. 98, 536 (1935)), 1 for white noise.
func inflation(r []complex128) (factor, rho float64) {
	var now, next float64
	for i, x := range r {
		if i > 0 {
			next += real(x)*real(r[i-1]) + imag(x)*imag(r[i-1])
		}
		now += real(x)*real(x) + imag(x)*imag(x)
	}
	if len(r) < MinFitPoints || now == 0 {
		return 1, 0
	}
	rho = next / now * float64(len(r)) / float64(len(r)-1)
	if rho <= correlated {
		return 1, rho
	}
	rho = math.Min(rho, 0.95)
	return (1 + rho) / (1 - rho), rho
}

// quantile95 is the two-sided 95 % point of Student's t.
func quantile95(freedom int) float64 {
	if freedom < 1 {
		return math.Inf(1)
	}
	return distuv.StudentsT{Mu: 0, Sigma: 1, Nu: float64(freedom)}.Quantile(0.975)
}
