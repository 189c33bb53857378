package numerics

import (
	"errors"
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
)

// Closed forms from analysis; the last row against gonum's fixed Gauss–Legendre rule.
func TestIntegrate(t *testing.T) {
	legendre := quad.Fixed(func(x float64) float64 { return math.Exp(-x*x) * math.Cos(9*x) }, 0, 3, 200, quad.Legendre{}, 0)
	tests := []struct {
		name string
		f    func(float64) float64
		a, b float64
		want float64
	}{
		{"exp", math.Exp, 0, 1, math.E - 1},
		{"reversed", math.Exp, 1, 0, 1 - math.E},
		{"peak", func(x float64) float64 { return 1 / (1e-6 + x*x) }, -1, 1, 2e3 * math.Atan(1e3)},
		{"root", math.Sqrt, 0, 1, 2.0 / 3},
		{"steep", func(x float64) float64 { return math.Exp(-50 * x) }, 0, 40, 0.02},
		{"gonum", func(x float64) float64 { return math.Exp(-x*x) * math.Cos(9*x) }, 0, 3, legendre},
	}
	var q Quadrature
	for _, tt := range tests {
		got, est, err := q.Integrate(func(x float64, y []float64) { y[0] = tt.f(x) }, 1, tt.a, tt.b)
		if err != nil || math.Abs(got[0]-tt.want) > 1e-10*math.Abs(tt.want)+1e-13 {
			t.Errorf("%s: got %.15g ± %.1g (%v), want %.15g", tt.name, got[0], est[0], err, tt.want)
		}
	}
}

func TestIntegrateSeveral(t *testing.T) {
	var q Quadrature
	got, _, err := q.Integrate(func(x float64, y []float64) { y[0], y[1] = math.Exp(30*x), 1e-20*x }, 2, 0, 1)
	want0, want1 := math.Expm1(30)/30, 0.5e-20
	if err != nil || math.Abs(got[0]/want0-1) > 1e-10 || math.Abs(got[1]/want1-1) > 1e-10 {
		t.Errorf("got %g %v, want %g %g", got, err, want0, want1)
	}
}

func TestIntegrateGivesUp(t *testing.T) {
	q := Quadrature{MaxPanels: 20}
	_, _, err := q.Integrate(func(x float64, y []float64) { y[0] = math.Sin(1/x) / x }, 1, 1e-9, 1)
	var nc *NotConverged
	if !errors.As(err, &nc) || nc.Panels < 20 {
		t.Errorf("got %v, want NotConverged", err)
	}
}

func TestRoot(t *testing.T) {
	cubic := func(x float64) (float64, float64) { return x*x*x - 2, 3 * x * x }
	x, err := Root(cubic, 0, 5, 1e-15)
	if err != nil || math.Abs(x-math.Cbrt(2)) > 4e-16 {
		t.Errorf("got %.17g, %v", x, err)
	}
	flat := func(x float64) (float64, float64) { return math.Tanh(1e3 * (x - 0.3)), 0 }
	if x, err = Root(flat, -1e3, 1e3, 1e-14); err != nil || math.Abs(x-0.3) > 1e-13 {
		t.Errorf("without a slope: got %.17g, %v", x, err)
	}
	var nb *NoBracket
	if _, err = Root(cubic, 2, 5, 0); !errors.As(err, &nb) {
		t.Errorf("got %v, want NoBracket", err)
	}
	low, high, err := Bracket(cubic, 0, 0.01, 100)
	if err != nil || low > math.Cbrt(2) || high < math.Cbrt(2) {
		t.Errorf("bracket %g…%g, %v", low, high, err)
	}
	if _, _, err = Bracket(func(float64) (float64, float64) { return 1, 0 }, 0, 1, 50); !errors.As(err, &nb) {
		t.Errorf("got %v, want NoBracket", err)
	}
}
