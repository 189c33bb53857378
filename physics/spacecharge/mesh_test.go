package spacecharge

import (
	"errors"
	"flag"
	"math"
	"math/rand/v2"
	"strings"
	"testing"
)

// long runs the random cases in full (20,000 in place of 2,000).
var long = flag.Bool("mesh.long", false, "run the mesh solver's random cases in full")

// randomMedium draws a neutral medium: two to four species of |z| ≤ 4, some
// with limited or shared sites, some frozen and flat, closed by a balancing one.
func randomMedium(r *rand.Rand) (*Medium, error) {
	temperature := 250 + 1750*r.Float64()
	level := 18 + 10*r.Float64() // decades of m⁻³
	limited := r.IntN(2) == 0
	frozen := r.IntN(2) == 0
	var list []Species
	sum, top := 0.0, 0.0
	add := func(z int, c float64, mobile bool) {
		s := Species{Name: string(rune('a' + len(list))), Charge: z, Bulk: c, Mobile: mobile, Mobility: 1e-12}
		if limited && r.IntN(3) > 0 && mobile {
			s.Sites = c * math.Pow(10, 0.3+3*r.Float64())
		}
		list = append(list, s)
		sum += float64(z) * c
		top = max(top, c)
	}
	for range 1 + r.IntN(3) {
		z := 1 + r.IntN(4)
		if r.IntN(2) == 0 {
			z = -z
		}
		add(z, math.Pow(10, max(18, level-3*r.Float64())), true)
	}
	z := 1 + r.IntN(4)
	if sum > 0 {
		z = -z
	}
	if math.Abs(sum) > 1e-3*top {
		add(z, -sum/float64(z), !frozen)
	} else {
		add(1, top, true)
		add(-1, top+sum, !frozen)
	}
	if limited && r.IntN(3) == 0 { // the first two share a sublattice
		n := 3 * (list[0].Bulk + list[1].Bulk)
		if list[0].Mobile && list[1].Mobile {
			list[0].Sites, list[1].Sites, list[0].Sublattice, list[1].Sublattice = n, n, "s", "s"
		}
	}
	return NewMedium(temperature, 5+95*r.Float64(), list)
}

func relative(a, b float64) float64 {
	if a == b {
		return 0
	}
	return math.Abs(a-b) / math.Max(math.Abs(a), math.Abs(b))
}

// A half grain far wider than its layer is the semi-infinite layer that the
// quadrature solves (second road; quadrature tolerance 1e-10). The estimate is
// honest where no result is further off than it says, or than the quadrature's own error.
func TestMeshAgainstQuadrature(t *testing.T) {
	for _, tolerance := range []float64{1e-6, 1e-8} {
		r := rand.New(rand.NewPCG(5, 1))
		worst, dishonest := 0.0, 0
		for done := 0; done < 100; {
			m, err := randomMedium(r)
			if err != nil {
				continue
			}
			m.Tolerance = 1e-11
			phi := m.thermal * (r.Float64()*40 - 20)
			layer, err := m.Solve(phi)
			if err != nil {
				continue
			}
			done++
			g, err := HalfGrain{Medium: m, Tolerance: tolerance}.AtPotential(phi)
			if err != nil {
				t.Errorf("%v: %v", m.Species, err)
				continue
			}
			off, name := 0.0, ""
			note := func(what string, got, want float64) {
				if d := relative(got, want); d > off {
					off, name = d, what
				}
			}
			// Medium.at cancels linear terms and so loses digits where sites fill
			// (1e-9 seen); the plain first integral keeps them there.
			root := math.Copysign(m.newSlope().at(phi/m.thermal), phi)
			note("charge", g.Charge, m.chargeUnit()*root)
			note("field", g.Field, m.thermal/m.debye*root)
			if d := relative(layer.Field, m.thermal/m.debye*root); d > 2e-9 {
				t.Errorf("quadrature's field off by %.2g", d)
			}
			note("capacitance", g.Capacitance, layer.Capacitance*layer.Field/(m.thermal/m.debye*root)) // |ρ/E|
			for i := range m.Species {
				note("across", g.AcrossLength[i], layer.AcrossLength[i])
				note("along", g.AlongLength[i], layer.AlongLength[i])
			}
			note("across", g.Across, layer.Across)
			for _, share := range []float64{0.5, 0.01} {
				want, _ := layer.Distance(share)
				got, err := g.Distance(share)
				if err != nil {
					t.Error(err)
				}
				note("position", got, want)
			}
			if off > max(g.RelativeError, g.PositionError, 3e-10) {
				dishonest++
				t.Logf("%s off by %.2g, estimate %.2g and %.2g: phi %g, %v", name, off, g.RelativeError, g.PositionError, phi, m.Species)
			}
			if off > tolerance {
				t.Errorf("%s off by %.2g at tolerance %.0g: phi %g, %+v", name, off, tolerance, phi, m.Species)
			}
			worst = max(worst, off)
		}
		t.Logf("tolerance %.0g: worst %.2g", tolerance, worst)
		if dishonest > 0 {
			t.Errorf("tolerance %.0g: %d estimates too small", tolerance, dishonest)
		}
	}
}

// balance is how far ½εE² at the interface is from the pressure difference to
// the centre, for a uniform permittivity and flat frozen species.
func (g *Grain) balance() float64 {
	grid := g.grid
	u0, uc := grid.u[0], grid.u[len(grid.u)-1]
	p := grid.medium.newPhase(grid.reference+uc, nil) // no cancellation against the centre
	fixed := p.charge
	for j, z := range p.z {
		fixed -= z * p.ref[j]
	}
	pressure := p.pressure(u0-uc) - fixed*(u0-uc)
	e := g.Field * g.Medium.debye / g.Medium.thermal
	return relative(e*e/2, pressure)
}

// Whatever the medium, potential and width: it settles, obeys Gauss' law and
// the balance of pressures, keeps within the sites, or says what is wrong.
func TestMeshRandom(t *testing.T) {
	n := 2000
	if *long {
		n = 20000
	}
	r := rand.New(rand.NewPCG(7, 3))
	failed, iterations, cells, gauss := 0, 0, 0, 0.0
	var balances [2]float64
	for done := 0; done < n; {
		m, err := randomMedium(r)
		if err != nil {
			continue
		}
		phi := 4*r.Float64() - 2
		h := HalfGrain{Medium: m, Width: 1e-9 * math.Pow(10, 4.7*r.Float64()), Tolerance: 1e-6}
		if done%4 == 0 {
			h.Tolerance = 1e-8
		}
		done++
		g, err := h.AtPotential(phi)
		if err != nil {
			failed++
			var typed *NotConverged
			if !errors.As(err, &typed) && math.Abs(phi)/m.thermal*m.largestCharge() < MaxReduced {
				t.Errorf("untyped: %v", err)
			}
			t.Logf("%v: %+v phi %g width %g T %g", err, m.Species, phi, h.Width, m.Temperature)
			continue
		}
		iterations, cells = max(iterations, g.Iterations), max(cells, g.Cells)
		gauss = max(gauss, g.Residual)
		b, limit, k := g.balance(), 1e-5, 0
		if h.Tolerance < 1e-6 {
			limit, k = 1e-8, 1
		}
		balances[k] = max(balances[k], b)
		if g.Residual > 1e-9 || relative(g.Charge, m.epsilon*g.Field) > 1e-9 || !(b < limit) {
			t.Errorf("gauss %.2g, balance %.2g: width %g phi %g %+v T %g, eps %g; %d cells, error %g", g.Residual, b, h.Width, phi, m.Species, m.Temperature, m.Permittivity, g.Cells, g.RelativeError)
		}
		for i, s := range m.Species {
			if s.Sites > 0 && s.Mobile && g.Concentration(i, 0) > s.Sites*(1+1e-12) {
				t.Errorf("%s beyond its sites", s.Name)
			}
		}
	}
	if iterations > 60 || failed > n/500 {
		t.Errorf("%d Newton steps, %d errors of %d", iterations, failed, n)
	}
	t.Logf("%d of %d ended in an error; at most %d Newton steps, %d cells; Gauss %.2g, pressure %.2g and %.2g", failed, n, iterations, cells, gauss, balances[0], balances[1])
}

// A random frozen profile on a random medium, and the way back: the charge that
// a potential gives leads to that potential.
func TestMeshRandomProfiles(t *testing.T) {
	n := 500
	if *long {
		n = 5000
	}
	r := rand.New(rand.NewPCG(11, 2))
	iterations, cells, worst, back := 0, 0, 0.0, 0.0
	for done := 0; done < n; {
		m, err := randomMedium(r)
		if err != nil {
			continue
		}
		h := HalfGrain{Medium: m, Width: 1e-9 * math.Pow(10, 3*r.Float64())}
		last := len(m.Species) - 1
		if !m.Species[last].Mobile {
			amplitude, length := math.Pow(10, 2*r.Float64()-1), h.Width*math.Pow(10, -2*r.Float64())
			if r.IntN(3) == 0 {
				amplitude = -r.Float64()
			}
			h.Profiles = []FrozenProfile{{Species: last, Excess: func(x float64) float64 { return amplitude * math.Exp(-x/length) }}}
		}
		phi := 3*r.Float64() - 1.5
		done++
		g, err := h.AtPotential(phi)
		if err != nil {
			t.Errorf("%v: %+v phi %g width %g T %g", err, m.Species, phi, h.Width, m.Temperature)
			continue
		}
		iterations, cells, worst = max(iterations, g.Iterations), max(cells, g.Cells), max(worst, g.Residual)
		if g.Residual > 1e-9 {
			t.Errorf("gauss %.2g: %+v phi %g width %g", g.Residual, m.Species, phi, h.Width)
		}
		if math.Abs(g.Charge)/g.Capacitance/m.thermal > 1e6 { // full sites: the charge hardly tells the potential
			continue
		}
		other, err := h.AtCharge(g.Charge)
		if err != nil {
			t.Errorf("way back: %v: %+v phi %g width %g T %g", err, m.Species, phi, h.Width, m.Temperature)
			continue
		}
		iterations = max(iterations, other.Iterations)
		// an error of the charge by the tolerance shows as that much over dQ/dΦ₀
		d := math.Abs(other.Phi0-phi) / (math.Abs(phi) + math.Abs(g.Charge)/g.Capacitance)
		if back = max(back, d); d > 1e-6 {
			t.Errorf("way back: potential %g, expected %g: %+v width %g", other.Phi0, phi, m.Species, h.Width)
		}
	}
	t.Logf("at most %d Newton steps, %d cells; Gauss %.2g; way back %.2g", iterations, cells, worst, back)
}

// Far fewer particles than sites: limited sites become dilute, by the share filled.
func TestMeshDiluteLimit(t *testing.T) {
	last := math.Inf(1)
	for _, sites := range []float64{1e28, 1e30, 1e32} {
		var list [2]*Grain
		for k, n := range []float64{0, sites} {
			m, err := NewMedium(900, 40, []Species{{Name: "a", Charge: 2, Bulk: 1e24, Mobile: true, Sites: n},
				{Name: "b", Charge: -1, Bulk: 2e24, Mobile: true, Sites: n}})
			if err != nil {
				t.Fatal(err)
			}
			if list[k], err = (HalfGrain{Medium: m, Width: 3e-9, Tolerance: 1e-8}).AtPotential(-0.15); err != nil {
				t.Fatal(err)
			}
		}
		d := relative(list[0].Charge, list[1].Charge)
		if !(d < last/50) {
			t.Errorf("%g sites: charge off by %.2g after %.2g", sites, d, last)
		}
		last = d
	}
	if last > 1e-6 {
		t.Errorf("still off by %.2g", last)
	}
}

func demoMedium(tb testing.TB) *Medium {
	m, err := NewMedium(573.15, 30, []Species{
		{Name: "vacancy", Charge: 2, Bulk: 1.25e26, Mobile: true, Mobility: 8e-12},
		{Name: "electron", Charge: -1, Bulk: 1e20, Mobile: true, Mobility: 1e-9},
		{Name: "acceptor", Charge: -1, Bulk: 2.5e26 - 1e20}})
	if err != nil {
		tb.Fatal(err)
	}
	return m
}

func BenchmarkMesh(b *testing.B) {
	m := demoMedium(b)
	h := HalfGrain{Medium: m, Width: 10e-9}
	b.ReportAllocs()
	for b.Loop() {
		if _, err := h.AtPotential(0.3); err != nil {
			b.Fatal(err)
		}
	}
}

func TestMeshErrors(t *testing.T) {
	m := demoMedium(t)
	flat := func(float64) float64 { return 0 }
	for name, f := range map[string]func() error{
		"width":           func() error { _, err := HalfGrain{Medium: m, Width: -1}.AtPotential(0.1); return err },
		"potential":       func() error { _, err := HalfGrain{Medium: m}.AtPotential(math.NaN()); return err },
		"too high":        func() error { _, err := HalfGrain{Medium: m}.AtPotential(50); return err },
		"charge":          func() error { _, err := HalfGrain{Medium: m}.AtCharge(math.Inf(1)); return err },
		"sides":           func() error { _, _, err := HalfGrain{Medium: m}.WithCore(Core{}); return err },
		"closed, endless": func() error { _, err := HalfGrain{Medium: m, Closed: true}.AtCharge(0.1); return err },
		"closed, held":    func() error { _, err := HalfGrain{Medium: m, Width: 1e-9, Closed: true}.AtPotential(0.1); return err },
		"mobile profile": func() error {
			_, err := HalfGrain{Medium: m, Profiles: []FrozenProfile{{Species: 0, Excess: flat}}}.AtPotential(0.1)
			return err
		},
		"profile of none": func() error {
			_, err := HalfGrain{Medium: m, Profiles: []FrozenProfile{{Species: 9, Excess: flat}}}.AtPotential(0.1)
			return err
		},
		"negative profile": func() error {
			_, err := HalfGrain{Medium: m, Width: 1e-9, Profiles: []FrozenProfile{{Species: 2, Excess: func(float64) float64 { return -2 }}}}.AtPotential(0.1)
			return err
		},
		"core width": func() error { _, err := HalfGrain{Medium: m}.WithThickCore(ThickCore{Sides: 2}); return err },
		"core sites": func() error {
			_, err := HalfGrain{Medium: m}.WithThickCore(ThickCore{Sides: 2, Width: 1e-9, Species: []CoreSpecies{{Species: 0, Sites: 1e27}}})
			return err
		},
		"core frozen": func() error {
			_, err := HalfGrain{Medium: m}.WithThickCore(ThickCore{Sides: 2, Width: 1e-9, Species: []CoreSpecies{{Species: 2}}})
			return err
		},
		"stages": func() error {
			one := cooling(t, 900, true, true)
			other := Stage{m, Core{Sides: Boundary}}
			_, _, err := HalfGrain{}.Cool([]Stage{one, other})
			return err
		},
		"no such place": func() error {
			g, err := HalfGrain{Medium: m, Width: 1e-9}.AtPotential(0.1)
			if err != nil {
				return nil
			}
			_, err = g.PotentialAt(2e-9)
			return err
		},
	} {
		if err := f(); err == nil {
			t.Errorf("%s: no error", name)
		} else if !strings.HasPrefix(err.Error(), "spacecharge: ") || !strings.Contains(err.Error(), ", expected ") {
			t.Errorf("%s: %v", name, err)
		}
	}
}
