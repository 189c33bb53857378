package spacecharge

import (
	"math"
	"testing"

	q "brinkfield/physics/quantity"
)

// cooling is an invented acceptor-doped oxide with the dopant mobile or not.
func cooling(tb testing.TB, temperature float64, dopant, vacancy bool) Stage {
	m, err := NewMedium(temperature, 30, []Species{
		{Name: "vacancy", Charge: 2, Bulk: 1.25e26, Mobile: vacancy, Mobility: 8e-12},
		{Name: "acceptor", Charge: -1, Bulk: 2.5e26 - 1e22, Mobile: dopant},
		{Name: "electron", Charge: -1, Bulk: 1e22, Mobile: true, Mobility: 1e-8}})
	if err != nil {
		tb.Fatal(err)
	}
	return Stage{m, Core{Sides: Boundary, Sites: []CoreSites{
		{Species: 0, PerArea: 3e17, Segregation: -0.9 * q.ElementaryCharge, Sites: 5e28}}}}
}

// Freezing and measuring at one temperature changes nothing: the frozen
// profile is the one the dopant would take anyway.
func TestRestrictedAtFreezing(t *testing.T) {
	for _, width := range []float64{0, 3e-9, 20e-9} {
		h := HalfGrain{Width: width, Tolerance: 1e-8}
		grains, cores, err := h.Cool([]Stage{cooling(t, 1200, true, true), cooling(t, 1200, false, true)})
		if err != nil {
			t.Fatal(err)
		}
		a, b := grains[0], grains[1]
		for i := range a.AlongLength {
			if d := relative(a.AlongLength[i], b.AlongLength[i]); d > 1e-8 {
				t.Errorf("width %g: along of %d differs by %.2g", width, i, d)
			}
		}
		if d := relative(a.Phi0, b.Phi0); d > 1e-8 {
			t.Errorf("width %g: potential differs by %.2g", width, d)
		}
		if d := relative(a.Charge, b.Charge); d > 1e-8 {
			t.Errorf("width %g: charge differs by %.2g", width, d)
		}
		if d := relative(cores[0].Occupancy[0], cores[1].Occupancy[0]); d > 1e-8 {
			t.Errorf("width %g: occupancy differs by %.2g", width, d)
		}
		if relative(b.Charge*2, cores[1].Charge) > 1e-8 {
			t.Errorf("width %g: core %g does not balance two sides of %g", width, cores[1].Charge, b.Charge)
		}
	}
}

// Below about two thirds of the freezing temperature the frozen tail is wider
// than the Debye length, and the potential overshoots zero in it.
func TestRestrictedOvershoots(t *testing.T) {
	grains, _, err := HalfGrain{}.Cool([]Stage{cooling(t, 1400, true, true), cooling(t, 573.15, false, true)})
	if err != nil {
		t.Fatal(err)
	}
	g := grains[1]
	_, phi := g.Points()
	lowest := 0.0
	for _, v := range phi {
		lowest = min(lowest, v/g.Medium.thermal)
	}
	if !(lowest < -1e-5 && lowest > -1e-2) {
		t.Errorf("lowest potential %.3g k_BT/e, expected an overshoot of some −5e-4", lowest)
	}
	if g.Residual > 1e-9 || g.RelativeError > 1e-6 {
		t.Errorf("residual %.2g, error %.2g", g.Residual, g.RelativeError)
	}
	t.Logf("overshoot %.3g, Phi0 %.4f then %.4f V, %d cells, %d steps", lowest, grains[0].Phi0, g.Phi0, g.Cells, g.Iterations)
}

// A given flat profile is the flat frozen species; a profile twice as high is
// a medium of twice the frozen bulk with the reservoir's potential shifted.
func TestGivenProfile(t *testing.T) {
	m := demoMedium(t)
	for _, width := range []float64{2e-9, 20e-9} {
		flat, err := HalfGrain{Medium: m, Width: width}.AtPotential(0.2)
		if err != nil {
			t.Fatal(err)
		}
		given, err := HalfGrain{Medium: m, Width: width, Profiles: []FrozenProfile{
			{Species: 2, Excess: func(float64) float64 { return 0 }, Joints: []float64{1e-9}}}}.AtPotential(0.2)
		if err != nil {
			t.Fatal(err)
		}
		if d := relative(flat.Charge, given.Charge); d > 1e-6 {
			t.Errorf("flat profile: charge differs by %.2g", d)
		}
	}
	twice, err := HalfGrain{Medium: m, Width: 20e-9, Profiles: []FrozenProfile{
		{Species: 2, Excess: func(float64) float64 { return 1 }}}}.AtPotential(0.2)
	if err != nil {
		t.Fatal(err)
	}
	c := [3]float64{twice.Concentration(0, twice.Width), twice.Concentration(1, twice.Width), twice.Concentration(2, twice.Width)}
	if net := 2*c[0] - c[1] - c[2]; math.Abs(net) > 1e-8*c[2] {
		t.Errorf("centre carries %g of %g", net, c[2])
	}
	shifted, err := NewMedium(m.Temperature, m.Permittivity, []Species{
		{Name: "vacancy", Charge: 2, Bulk: c[0], Mobile: true}, {Name: "electron", Charge: -1, Bulk: c[1], Mobile: true},
		{Name: "acceptor", Charge: -1, Bulk: 2*c[0] - c[1]}})
	if err != nil {
		t.Fatal(err)
	}
	other, err := HalfGrain{Medium: shifted, Width: 20e-9}.AtPotential(twice.Drop)
	if err != nil {
		t.Fatal(err)
	}
	if d := relative(twice.Charge, other.Charge); d > 1e-6 {
		t.Errorf("doubled profile: charge differs by %.2g", d)
	}
}

func BenchmarkRestricted(b *testing.B) {
	stages := []Stage{cooling(b, 1400, true, true), cooling(b, 1000, false, true), cooling(b, 573.15, false, true), cooling(b, 300, false, false)}
	b.ReportAllocs()
	for b.Loop() {
		if _, _, err := (HalfGrain{Width: 50e-9}).Cool(stages); err != nil {
			b.Fatal(err)
		}
	}
}
