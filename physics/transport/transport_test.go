package transport

import (
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"os"
	"testing"

	"brinkfield/physics/numerics"
	q "brinkfield/physics/quantity"
	"brinkfield/physics/spacecharge"
)

// Recomputed in 20 digits from e^Y D(√Y)/√Y with Dawson's integral; the last row
// against our own quadrature, a second road.
func TestMeanResistivity(t *testing.T) {
	for _, tt := range []struct{ a, want, tolerance float64 }{
		{2, 2.3644539, 3e-8}, {4, 8.2263139, 1e-8}, {10, 1168.2305, 5e-8}, {20, 12458600, 5e-7},
	} {
		if got := MeanResistivity(tt.a); math.Abs(got/tt.want-1) > tt.tolerance {
			t.Errorf("mean(%g) = %.10g, want %g", tt.a, got, tt.want)
		}
	}
	var quad numerics.Quadrature
	for _, a := range []float64{0, 0.3, 7, 55, 290, 310, 600} {
		scaled, _, err := quad.Integrate(func(x float64, y []float64) { y[0] = math.Exp(a * (x*x - 1)) }, 1, 0, 1, 0.5, 0.9)
		if got := MeanResistivity(a) * math.Exp(-a); err != nil || math.Abs(got/scaled[0]-1) > 1e-10 {
			t.Errorf("mean(%g)e^-a = %.14g, quadrature %.14g", a, got, scaled[0])
		}
	}
	// The short form is 21.9 % low at 2, 5.7 % at 10, 2.6 % at 20 (recomputed).
	for a, low := range map[float64]float64{2: 0.219, 10: 0.057, 20: 0.026} {
		if got := 1 - ShortForm(a)/MeanResistivity(a); math.Abs(got-low) > 6e-4 {
			t.Errorf("short form at %g is %.4f low, want %g", a, got, low)
		}
	}
}

// Recomputed: inversion of r = e^Y/2Y, and the potentials at z = 2, 773.15 K.
func TestInvertShortForm(t *testing.T) {
	for _, tt := range []struct{ r, a, volt float64 }{
		{10, 4.499755, 0.14990}, {1e3, 9.892700, 0.32955}, {1e6, 17.362999, 0.57840},
	} {
		a, err := InvertShortForm(tt.r)
		if err != nil || math.Abs(a-tt.a) > 6e-7 {
			t.Errorf("r %g: a = %.8f, %v, want %g", tt.r, a, err, tt.a)
		}
		if volt := a * q.ThermalVoltage(773.15) / 2; math.Abs(volt-tt.volt) > 6e-6 {
			t.Errorf("r %g: %.6f V, want %g", tt.r, volt, tt.volt)
		}
	}
	var out *OutOfRange
	if _, err := InvertShortForm(1.3); !errors.As(err, &out) {
		t.Errorf("1.3 < e/2 gave %v", err)
	}
}

func TestInvertDepletion(t *testing.T) {
	for _, a := range []float64{1e-3, 0.1, 1, 4, 9, 20, 60, 200, 400} {
		got, err := InvertDepletion(MeanResistivity(a) - 1)
		if err != nil || math.Abs(got/a-1) > 1e-9 {
			t.Errorf("a %g came back as %.12g, %v", a, got, err)
		}
	}
	for _, r := range []float64{0, -1, math.NaN(), math.Inf(1)} {
		if _, err := InvertDepletion(r); err == nil {
			t.Errorf("ratio %g accepted", r)
		}
	}
}

// The full layer tends to the depletion formulas at high barriers, but for the
// few percent of its tail; its capacitance is that of λ_eff (a second road).
func TestDepletionAgainstFullLayer(t *testing.T) {
	d := Depletion{Temperature: 573.15, Permittivity: 30, Charge: 2, Bulk: 1.25e26}
	m, err := spacecharge.NewMedium(573.15, 30, []spacecharge.Species{
		{Name: "v", Charge: 2, Bulk: 1.25e26, Mobile: true}, {Name: "a", Charge: -1, Bulk: 2.5e26}})
	if err != nil {
		t.Fatal(err)
	}
	for _, phi := range []float64{0.2, 0.5, 1} {
		l, err := m.Solve(phi)
		if err != nil {
			t.Fatal(err)
		}
		a := d.Reduced(phi)
		// exactly dQ/dΦ₀ = ε/λ_eff up to e^{-a}
		if got := l.Capacitance * d.SmallSignalWidth(phi) / m.Epsilon(); math.Abs(got-1) > 2*math.Exp(-a) {
			t.Errorf("%g V: C·λ_eff/ε = %.9f", phi, got)
		}
		// Π = a−1 instead of a raises the resistance by √(a/(a−1)) and the softened
		// edge adds terms of order 1/a: within 1.5/a.
		if got := l.AcrossLength[0]/d.ExcessLength(phi) - 1; got < 0 || got > 1.5/a {
			t.Errorf("%g V (a %.1f): full over depletion excess − 1 = %.4f", phi, a, got)
		}
		if got := l.Charge / d.ChargeOneSide(phi); math.Abs(got-math.Sqrt(1-1/a)) > 1e-4 {
			t.Errorf("%g V: charge ratio %.6f", phi, got)
		}
	}
}

// Arcs made from a known grain give it back: σ_int short by δ/d (package brick).
func TestArcsRead(t *testing.T) {
	b := Brick{Length: 1.2e-3, Area: 5e-5, Grain: 3.5e-7}
	sigma, delta, excess := 3.3e-4, 3.24e-9, 5.2 // S/m, m, Ω m² … chosen freely
	rb, rx := b.Interior(sigma), b.Boundary(excess*1e-3)
	share := delta / b.Grain
	cb := b.InteriorCapacitance(30)
	arcs := Arcs{RInterior: rb * (1 - share), CInterior: cb / (1 - share),
		RBoundary: rx + rb*share, CBoundary: b.BoundaryCapacitance(30 * q.VacuumPermittivity / delta)}
	g, err := arcs.Read()
	if err != nil {
		t.Fatal(err)
	}
	for name, pair := range map[string][2]float64{"δ/d": {g.WidthShare, share}, "R_bulk": {g.RBulk, rb},
		"R_boundary": {g.RBoundary, rx}, "C_bulk": {g.CBulk, cb},
		"τ ratio": {g.TimeRatio, rx * arcs.CBoundary / (rb * cb)}} {
		if math.Abs(pair[0]/pair[1]-1) > 1e-12 {
			t.Errorf("%s: got %g, want %g", name, pair[0], pair[1])
		}
	}
	if _, err := (Arcs{}).Read(); err == nil {
		t.Error("empty arcs accepted")
	}
}

// Maxwell 1873, art. 314: insulating spheres of volume share p leave 2(1−p)/(2+p).
func TestPorosity(t *testing.T) {
	dense, porous := Brick{Length: 1, Area: 1}, Brick{Length: 1, Area: 1, Porosity: 0.1}
	if got, want := dense.CellConstant()/porous.CellConstant(), 2*0.9/2.1; math.Abs(got-want) > 1e-15 {
		t.Errorf("got %g, want %g", got, want)
	}
}

// The mobility law behind the invented demo spectrum: σT is an exact Arrhenius line.
func TestFitArrhenius(t *testing.T) {
	text, err := os.ReadFile("../../testdata/spectra/barrier-demo.truth.json")
	if err != nil {
		t.Fatal(err)
	}
	var truth struct {
		Truth []struct {
			T     float64 `json:"T_C"`
			Sigma float64 `json:"sigma_bulk_S_m"`
		}
	}
	if err := json.Unmarshal(text, &truth); err != nil {
		t.Fatal(err)
	}
	var kelvin, sigma []float64
	for _, p := range truth.Truth {
		kelvin, sigma = append(kelvin, p.T+q.ZeroCelsius), append(sigma, p.Sigma)
	}
	a, err := FitArrhenius(kelvin, sigma)
	if err != nil || math.Abs(a.Energy/q.ElementaryCharge-0.66) > 1e-9 || math.Abs(a.At(500)/(2*q.ElementaryCharge*1.25e26*0.003/500*math.Exp(-0.66/q.ThermalVoltage(500)))-1) > 1e-9 {
		t.Errorf("E = %.12f eV, σ(500 K) = %g, %v", a.Energy/q.ElementaryCharge, a.At(500), err)
	}
	if _, err := FitArrhenius(kelvin[:2], sigma[:2]); err == nil {
		t.Error("two points accepted")
	}
	if _, err := FitArrhenius([]float64{500, 500, 500}, []float64{1, 2, 3}); err == nil {
		t.Error("one temperature accepted")
	}
}

// Typical value of the constant-phase capacitance formula is in package impedance;
// here the worked inversion of the demo figures.
func ExampleInvertShortForm() {
	a, _ := InvertShortForm(1000)
	fmt.Printf("%.3f V\n", a*q.ThermalVoltage(773.15)/2)
	// Output: 0.330 V
}
