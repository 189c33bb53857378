package spacecharge

import (
	"fmt"
	"math"
	"testing"

	q "brinkfield/physics/quantity"
)

func pair(tb testing.TB, kelvin, epsr float64, z int, c float64) *Medium {
	m, err := NewMedium(kelvin, epsr, []Species{
		{Name: "cation", Charge: z, Bulk: c, Mobile: true, Mobility: 1e-8},
		{Name: "anion", Charge: -z, Bulk: c, Mobile: true, Mobility: 1e-8}})
	if err != nil {
		tb.Fatal(err)
	}
	return m
}

// Gouy 1910, Chapman 1913; closed form for solids in Maier, Prog. Solid State
// Chem. 23, 171 (1995): tanh(zψ/4) = tanh(zψ₀/4) e^{−x/λ}.
func TestGouyChapman(t *testing.T) {
	steps := []float64{0, 0.1, 0.5, 1, 2, 3, 5, 8, 10, 12, 15, 20}
	for _, psi0 := range []float64{0.01, 0.1, 0.5, 1, 2, 4, 8, 12, 20, 30, -0.01, -0.1, -0.5, -1, -2, -4, -8, -12, -20, -30} {
		for _, z := range []int{1, 2} {
			m := pair(t, 298.15, 78.4, z, 6e25)
			l, err := m.Solve(psi0 / float64(z) * m.ThermalVoltage())
			if err != nil {
				t.Fatal(err)
			}
			lambda := m.DebyeMajority(0)
			for _, xi := range steps {
				theta := math.Tanh(psi0/4) * math.Exp(-xi)
				want := 4 * math.Atanh(theta) // zψ
				if xi == 0 {
					want = psi0
				}
				phi, err := l.PotentialAt(xi * lambda)
				if err != nil {
					t.Fatal(err)
				}
				got := float64(z) * m.Reduced(phi)
				if math.Abs(got-want) > 1e-9*math.Abs(want) {
					t.Errorf("z %d ψ₀ %g x %g λ: zψ = %.15g, want %.15g", z, psi0, xi, got, want)
				}
				cWant := math.Pow((1-theta)/(1+theta), 2)
				if xi == 0 {
					cWant = math.Exp(-psi0)
				}
				if c := m.Concentration(0, phi) / 6e25; math.Abs(c-cWant) > 1e-9*cWant {
					t.Errorf("z %d ψ₀ %g x %g λ: c/c∞ = %.15g, want %.15g", z, psi0, xi, c, cWant)
				}
			}
			charge := math.Sqrt(8*m.Epsilon()*q.Boltzmann*298.15*6e25) * math.Sinh(psi0/2)
			capacity := m.Epsilon() / lambda * math.Cosh(psi0/2)
			if math.Abs(l.Charge-charge) > 1e-12*math.Abs(charge) || math.Abs(l.Capacitance-capacity) > 1e-12*capacity {
				t.Errorf("z %d ψ₀ %g: charge %g want %g, capacitance %g want %g", z, psi0, l.Charge, charge, l.Capacitance, capacity)
			}
		}
	}
}

// Debye lengths and charges in water at 25 °C. "quoted" rows are printed values
// read in texts that quote the source, rounded there; "memory" rows are from
// memory; "recomputed" rows come from the stated formula.
func TestWater25C(t *testing.T) {
	salt := func(kelvin, epsr, molar float64, plus, minus int) *Medium {
		c := molar * 1e3 * q.Avogadro
		m, err := NewMedium(kelvin, epsr, []Species{
			{Name: "cation", Charge: plus, Bulk: c * float64(minus) / float64(gcd(plus, minus)), Mobile: true},
			{Name: "anion", Charge: -minus, Bulk: c * float64(plus) / float64(gcd(plus, minus)), Mobile: true}})
		if err != nil {
			t.Fatal(err)
		}
		return m
	}
	lengths := []struct {
		molar       float64
		plus, minus int
		nm, within  float64
		source      string
	}{
		{1, 1, 1, 0.304, 0.0005, "Israelachvili, Intermolecular and Surface Forces, quoted"},
		{1, 2, 1, 0.176, 0.0006, "Israelachvili, quoted (mol/L of salt; there 0.304/√3 rounded up)"},
		{1, 2, 2, 0.152, 0.0005, "Israelachvili, memory"},
		{1e-4, 1, 1, 31, 0.7, "Hu & Mi, Environ. Sci. Technol. 47, 3715 (2013), NaCl 0.1 mM, rounded, quoted"},
		{1e-2, 1, 1, 3.1, 0.07, "Hu & Mi 2013, NaCl 10 mM, rounded, quoted"},
		{1e-4, 1, 2, 18, 0.5, "Hu & Mi 2013, Na₂SO₄ 0.1 mM, rounded, quoted"},
		{1e-2, 1, 2, 1.8, 0.05, "Hu & Mi 2013, Na₂SO₄ 10 mM, rounded, quoted"},
		{1, 1, 1, 0.30, 0.005, "Bard & Faulkner 2nd ed., table 13.3.1, memory"},
		{0.1, 1, 1, 0.96, 0.005, "Bard & Faulkner, table 13.3.1, memory"},
		{0.01, 1, 1, 3.04, 0.005, "Bard & Faulkner, table 13.3.1, memory"},
		{1e-3, 1, 1, 9.62, 0.01, "Bard & Faulkner, table 13.3.1, memory"},
		{1e-4, 1, 1, 30.4, 0.05, "Bard & Faulkner, table 13.3.1, memory"},
	}
	for _, tt := range lengths {
		if got := salt(298, 78.4, tt.molar, tt.plus, tt.minus).Debye() * 1e9; math.Abs(got-tt.nm) > tt.within {
			t.Errorf("%s: λ_D = %.4f nm, want %g", tt.source, got, tt.nm)
		}
	}
	minima := []struct{ molar, want float64 }{ // µF/cm², ε_r 78.49, 298.15 K, recomputed
		{1, 228.47}, {0.1, 72.25}, {0.01, 22.85}, {1e-3, 7.225}, {1e-4, 2.285},
	}
	for _, tt := range minima {
		l, err := salt(298.15, 78.49, tt.molar, 1, 1).Solve(0)
		if got := l.Capacitance * 100; err != nil || math.Abs(got/tt.want-1) > 2.5e-4 {
			t.Errorf("minimum at %g M: %.3f µF/cm², want %g", tt.molar, got, tt.want)
		}
	}
	// Grahame equation, Israelachvili, quoted: σ = 0.117 √c sinh(ψ₀/51.4 mV); prefactors recomputed.
	for _, mv := range []float64{10, 50, 100, 200} {
		l, err := salt(298, 78.4, 0.1, 1, 1).Solve(mv / 1e3)
		want := 0.117301 * math.Sqrt(0.1) * math.Sinh(mv/51.359)
		if err != nil || math.Abs(l.Charge/want-1) > 5e-5 {
			t.Errorf("Grahame at %g mV: %g C/m², want %g", mv, l.Charge, want)
		}
	}
	// With a 2:1 salt: σ = 0.117 sinh(ψ₀/51.4) √([NaCl] + [CaCl₂](2 + e^{−ψ₀/25.7})), Israelachvili, memory.
	// Prefactors as recomputed above.
	a, b := 0.1*1e3*q.Avogadro, 0.02*1e3*q.Avogadro
	m, err := NewMedium(298, 78.4, []Species{{Name: "Na", Charge: 1, Bulk: a, Mobile: true},
		{Name: "Ca", Charge: 2, Bulk: b, Mobile: true}, {Name: "Cl", Charge: -1, Bulk: a + 2*b, Mobile: true}})
	if err != nil {
		t.Fatal(err)
	}
	for _, mv := range []float64{-80, -20, 30, 90} {
		l, err := m.Solve(mv / 1e3)
		want := 0.117301 * math.Sinh(mv/51.359) * math.Sqrt(0.1+0.02*(2+math.Exp(-mv/25.6795)))
		if err != nil || math.Abs(l.Charge/want-1) > 1e-4 {
			t.Errorf("Grahame, mixed, at %g mV: %g C/m², want %g", mv, l.Charge, want)
		}
	}
}

func gcd(a, b int) int {
	for b != 0 {
		a, b = b, a%b
	}
	return a
}

// Common practice, no source: with all species mobile a layer fades over about
// two Debye lengths. Exactly, |zψ(2λ)| ≤ 4 artanh(e⁻²) = 0.545 for the symmetric pair.
func TestTwoDebyeLengths(t *testing.T) {
	m := pair(t, 800, 30, 2, 1e25)
	for _, psi := range []float64{0.3, 3, 30, 120} {
		l, err := m.Solve(psi * m.ThermalVoltage())
		if err != nil {
			t.Fatal(err)
		}
		phi, err := l.PotentialAt(2 * m.DebyeMajority(0))
		if got := 2 * m.Reduced(phi); err != nil || got > 4*math.Atanh(math.Exp(-2)) {
			t.Errorf("ψ₀ %g: zψ(2λ) = %g", psi, got)
		}
	}
}

// The core against the published trend values recomputed for the equations of
// package doc: N_c 3e17 m⁻², Δg −0.9 eV (recomputed to 3 digits, with ε_r 30,
// c∞ 1e26 m⁻³, N 5e28 m⁻³).
func TestCoreTrend(t *testing.T) {
	want := map[float64]float64{400: 0.153, 573: 0.159, 800: 0.150, 1200: 0.099}
	for kelvin, phi := range want {
		m, err := NewMedium(kelvin, 30, []Species{{Name: "v", Charge: 2, Bulk: 1e26, Mobile: true}, {Name: "a", Charge: -1, Bulk: 2e26}})
		if err != nil {
			t.Fatal(err)
		}
		f, err := m.Fill(Core{Sides: Boundary, Sites: []CoreSites{{PerArea: 3e17, Segregation: -0.9 * q.ElementaryCharge, Sites: 5e28}}})
		if err != nil || math.Abs(f.Phi0-phi) > 6e-4 {
			t.Errorf("%g K: Φ₀ = %.4f V, %v, want %g", kelvin, f.Phi0, err, phi)
		}
	}
}

// Sites limit the concentration; at low c the limited law becomes the dilute one.
func TestSiteLimit(t *testing.T) {
	for _, share := range []float64{1e-6, 0.3} {
		c := 5e28 * share
		list := func(sites float64) []Species {
			return []Species{{Name: "v", Charge: 2, Bulk: c, Mobile: true, Sites: sites}, {Name: "a", Charge: -1, Bulk: 2 * c}}
		}
		limited, err1 := NewMedium(900, 30, list(5e28))
		dilute, err2 := NewMedium(900, 30, list(0))
		if err1 != nil || err2 != nil {
			t.Fatal(err1, err2)
		}
		if top := limited.Concentration(0, -2); top > 5e28 || top < 0.999*5e28 {
			t.Errorf("share %g: c = %g at −2 V, want the sites filled", share, top)
		}
		a, _ := limited.Solve(0.1)
		b, _ := dilute.Solve(0.1)
		if r := math.Abs(a.Charge/b.Charge - 1); (share < 1e-3) != (r < 1e-5) {
			t.Errorf("share %g: limited and dilute charge differ by %g", share, r)
		}
	}
}

func TestRefusals(t *testing.T) {
	v := Species{Name: "v", Charge: 2, Bulk: 1e25, Mobile: true}
	a := Species{Name: "a", Charge: -1, Bulk: 2e25}
	for name, make := range map[string]func() error{
		"charged":     func() error { _, err := NewMedium(500, 30, []Species{v}); return err },
		"cold":        func() error { _, err := NewMedium(0, 30, []Species{v, a}); return err },
		"permittless": func() error { _, err := NewMedium(500, -1, []Species{v, a}); return err },
		"frozen":      func() error { f := v; f.Mobile = false; _, err := NewMedium(500, 30, []Species{f, a}); return err },
		"overfull":    func() error { f := v; f.Sites = 1e25; _, err := NewMedium(500, 30, []Species{f, a}); return err },
		"steep":       func() error { m, _ := NewMedium(500, 30, []Species{v, a}); _, err := m.Solve(40); return err },
		"negative": func() error {
			m, _ := NewMedium(500, 30, []Species{v, a})
			_, err := m.PotentialForExcess(0, -1, 0)
			return err
		},
	} {
		if make() == nil {
			t.Errorf("%s: accepted", name)
		}
	}
}

func ExampleMedium_Solve() {
	m, _ := NewMedium(573.15, 30, []Species{
		{Name: "vacancy", Charge: 2, Bulk: 1.25e26, Mobile: true},
		{Name: "acceptor", Charge: -1, Bulk: 2.5e26}})
	l, _ := m.Solve(0.2217)
	fmt.Printf("%.4f C/m², %.4f F/m²\n", l.Charge, l.Capacitance)
	// Output: 0.0647 C/m², 0.1643 F/m²
}
