package spacecharge

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	q "brinkfield/physics/quantity"
)

// segregating is an invented oxide whose dopant has core sites of its own.
func segregating(tb testing.TB, sites bool) (*Medium, Core) {
	list := []Species{
		{Name: "vacancy", Charge: 2, Bulk: 5e25, Mobile: true, Mobility: 8e-12},
		{Name: "acceptor", Charge: -1, Bulk: 1e26 - 1e22, Mobile: true},
		{Name: "electron", Charge: -1, Bulk: 1e22, Mobile: true, Mobility: 1e-8}}
	if sites {
		list[0].Sites, list[1].Sites = 5e28, 2.5e27
	}
	m, err := NewMedium(1300, 30, list)
	if err != nil {
		tb.Fatal(err)
	}
	return m, Core{Sides: Boundary, Sites: []CoreSites{
		{Species: 0, PerArea: 6e17, Segregation: -0.7 * q.ElementaryCharge, Sites: 5e28},
		{Species: 1, PerArea: 4e17, Segregation: -0.5 * q.ElementaryCharge, Sites: 2.5e27}}}
}

// What was weighed in is there, in grain and core together; the compensating
// species' amount follows from neutrality and is checked as well.
func TestClosedConserves(t *testing.T) {
	for _, sites := range []bool{false, true} {
		for _, width := range []float64{1.5e-9, 5e-9, 50e-9, 1e-6} {
			m, core := segregating(t, sites)
			g, filled, err := HalfGrain{Medium: m, Width: width, Closed: true, Tolerance: 1e-8}.WithCore(core)
			if err != nil {
				t.Fatal(err)
			}
			for i, s := range m.Species {
				if d := relative(g.Contents[i], s.Bulk*width); d > 1e-8 {
					t.Errorf("width %g: %s holds %g m⁻², weighed in %g (off %.2g)", width, s.Name, g.Contents[i], s.Bulk*width, d)
				}
			}
			if d := math.Abs(filled.Charge/2 - g.Charge); d > 1e-9*math.Abs(g.Charge) {
				t.Errorf("width %g: core %g against %g", width, filled.Charge/2, g.Charge)
			}
			if !g.Closed || g.CoreContents[1] < 0.02*g.Contents[1] && width < 10e-9 {
				t.Errorf("width %g: core holds %g of %g, expected a share that matters", width, g.CoreContents[1], g.Contents[1])
			}
			t.Logf("width %g: drop %.4f V, interior acceptor %.3g of %.3g, %d steps, %d cells", width, g.Drop, g.Concentration(1, width), m.Species[1].Bulk, g.Iterations, g.Cells)
		}
	}
}

// Second road: an open grain in equilibrium with the neutral reservoir that the
// closed one implies is the same grain, solved without the balances.
func TestClosedAgainstOpen(t *testing.T) {
	m, core := segregating(t, false)
	width := 4e-9
	g, _, err := HalfGrain{Medium: m, Width: width, Closed: true, Tolerance: 1e-8}.WithCore(core)
	if err != nil {
		t.Fatal(err)
	}
	// c at the centre, brought along −zψ to where it is neutral
	centre := make([]float64, 3)
	for i := range centre {
		centre[i] = g.Concentration(i, g.Width)
	}
	low, high := -50.0, 50.0
	for range 200 {
		mid, net := (low+high)/2, 0.0
		for i, c := range centre {
			net += m.z[i] * c * math.Exp(-m.z[i]*mid)
		}
		if net > 0 {
			low = mid
		} else {
			high = mid
		}
	}
	list := append([]Species(nil), m.Species...)
	for i := range list {
		list[i].Bulk = centre[i] * math.Exp(-m.z[i]*low)
	}
	reservoir, err := NewMedium(m.Temperature, m.Permittivity, list)
	if err != nil {
		t.Fatal(err)
	}
	// the dilute core sites see ln[c∞/(N − c∞)]: keep the activity, not N − c∞
	same := core
	same.Sites = append([]CoreSites(nil), core.Sites...)
	for k := range same.Sites {
		s := &same.Sites[k]
		before, now := m.Species[s.Species].Bulk, list[s.Species].Bulk
		s.Sites = now + (core.Sites[k].Sites - before)
	}
	open, _, err := HalfGrain{Medium: reservoir, Width: width, Tolerance: 1e-8}.WithCore(same)
	if err != nil {
		t.Fatal(err)
	}
	for name, pair := range map[string][2]float64{"drop": {open.Drop, g.Drop}, "charge": {open.Charge, g.Charge},
		"acceptor": {open.Contents[1], g.Contents[1]}, "vacancy": {open.Contents[0], g.Contents[0]}} {
		if d := relative(pair[0], pair[1]); d > 1e-7 {
			t.Errorf("%s: open %.10g, closed %.10g (off %.2g)", name, pair[0], pair[1], d)
		}
	}
	_, flagged := open.Overlap()
	t.Logf("drop %.5f V, overlap %v", g.Drop, flagged)
}

// The wider the grain, the less the core takes from it: closed goes to open.
func TestClosedWide(t *testing.T) {
	m, core := segregating(t, true)
	open, _, err := HalfGrain{Medium: m}.WithCore(core)
	if err != nil {
		t.Fatal(err)
	}
	last := math.Inf(1)
	for _, width := range []float64{1e-7, 1e-6, 1e-5} {
		g, _, err := HalfGrain{Medium: m, Width: width, Closed: true}.WithCore(core)
		if err != nil {
			t.Fatal(err)
		}
		d := relative(g.Drop, open.Drop)
		if !(d < last/8) {
			t.Errorf("width %g: drop %g against %g open, off %.2g after %.2g", width, g.Drop, open.Drop, d, last)
		}
		last = d
	}
	if last > 1e-3 {
		t.Errorf("10 µm still off by %.2g", last)
	}
}

// A thick core with as many sites as a thin one, and a permittivity so high
// that no potential falls in it, is the thin one.
func TestThickCoreThin(t *testing.T) {
	m, core := segregating(t, true)
	core.Sites = core.Sites[1:]
	thin, _, err := HalfGrain{Medium: m, Width: 10e-9, Tolerance: 1e-8}.WithCore(core)
	if err != nil {
		t.Fatal(err)
	}
	w := 1e-9
	thick, err := HalfGrain{Medium: m, Width: 10e-9, Tolerance: 1e-8}.WithThickCore(ThickCore{Sides: Boundary, Width: w, Permittivity: 1e9,
		Species: []CoreSpecies{
			{Species: 0, Energy: 3 * q.ElementaryCharge}, {Species: 2, Energy: 3 * q.ElementaryCharge}, // kept out
			{Species: 1, Energy: core.Sites[0].Segregation, Sites: core.Sites[0].PerArea / w}}})
	if err != nil {
		t.Fatal(err)
	}
	if d := relative(thin.Phi0, thick.Phi0); d > 1e-6 {
		t.Errorf("potential %g V, thin core %g (off %.2g)", thick.Phi0, thin.Phi0, d)
	}
	if d := relative(thick.CoreCharge, thin.Charge); d > 1e-6 {
		t.Errorf("core charge %g, thin core %g", thick.CoreCharge, thin.Charge)
	}
	if d := relative(thick.CoreContents[1], thin.CoreContents[1]); d > 1e-6 {
		t.Errorf("core holds %g, thin core %g", thick.CoreContents[1], thin.CoreContents[1])
	}
}

// Within a thick core ½εE² at its edge is the pressure difference to its
// middle, with its own statistics; the displacement is continuous at the edge.
func TestThickCoreBalance(t *testing.T) {
	for _, closed := range []bool{false, true} {
		m, _ := segregating(t, true)
		g, err := HalfGrain{Medium: m, Width: 8e-9, Tolerance: 1e-8, Closed: closed}.WithThickCore(ThickCore{Sides: Boundary, Width: 0.8e-9, Permittivity: 12,
			Fixed: 2e7, Species: []CoreSpecies{{Species: 0, Energy: -0.4 * q.ElementaryCharge, Sites: 8e27}, {Species: 1, Energy: 0.1 * q.ElementaryCharge}}})
		if err != nil {
			t.Fatal(err)
		}
		grid := g.grid
		p, edge := grid.phase[0], grid.core*degree
		fixed := p.charge
		for j, z := range p.z {
			fixed -= z * p.ref[j]
		}
		at := func(u float64) float64 { // Π with the shifts, plain
			sum := -fixed * u
			for j := range p.z {
				if p.lattice[j] < 0 {
					sum += p.ref[j] * math.Exp(p.exponent(j, u))
				}
			}
			for _, l := range p.lattices {
				whole := l.empty
				for _, j := range l.members {
					whole += p.ref[j] / l.sites * math.Exp(p.exponent(j, u))
				}
				sum += l.sites * math.Log(whole)
			}
			return sum
		}
		d := g.Charge / m.chargeUnit() // displacement, the same on either side
		want := at(grid.u[edge]) - at(grid.u[0])
		if off := relative(d*d/2/p.permittivity, want); off > 1e-8 {
			t.Errorf("closed %v: ½εE² %g, pressure %g (off %.2g)", closed, d*d/2/p.permittivity, want, off)
		}
		if off := relative(g.CoreCharge, g.Charge); off > 1e-9 || g.Residual > 1e-9 {
			t.Errorf("closed %v: core %g against %g, residual %.2g", closed, g.CoreCharge, g.Charge, g.Residual)
		}
		if closed {
			for i := range 2 {
				if i == 0 { // the compensating species makes up for the core's fixed charge
					continue
				}
				if off := relative(g.Contents[i], m.Species[i].Bulk*8.4e-9); off > 1e-8 {
					t.Errorf("%s off by %.2g", m.Species[i].Name, off)
				}
			}
		}
		t.Logf("closed %v: Phi0 %.4f V, middle %.4f V, %d cells, %d steps", closed, g.Phi0, m.thermal*(grid.u[0]+grid.reference), g.Cells, g.Iterations)
	}
}

// Random grains and cores, closed: they settle and conserve, or say what is wrong.
func TestClosedRandom(t *testing.T) {
	n := 300
	if *long {
		n = 3000
	}
	r := rand.New(rand.NewPCG(3, 9))
	failed, iterations, worst := 0, 0, 0.0
	for done := 0; done < n; {
		m, err := randomMedium(r)
		if err != nil {
			continue
		}
		core := Core{Sides: Boundary}
		for i, s := range m.Species {
			if s.Mobile && r.IntN(2) == 0 {
				one := CoreSites{Species: i, PerArea: math.Pow(10, 16+2.5*r.Float64()), Segregation: (r.Float64() - 0.8) * q.ElementaryCharge, Sites: max(s.Sites, 1e29)}
				if r.IntN(2) == 0 {
					one.Shared = "c"
				}
				core.Sites = append(core.Sites, one)
			}
		}
		if len(core.Sites) == 0 {
			continue
		}
		done++
		h := HalfGrain{Medium: m, Width: 1e-9 * math.Pow(10, 3*r.Float64()), Closed: true}
		g, _, err := h.WithCore(core)
		if err != nil {
			failed++
			var typed *NotConverged
			if !errors.As(err, &typed) {
				t.Errorf("untyped: %v", err)
			}
			t.Logf("%v: %+v, %+v, T %g, eps %g, width %g", err, m.Species, core, m.Temperature, m.Permittivity, h.Width)
			continue
		}
		iterations = max(iterations, g.Iterations)
		for i, s := range m.Species {
			d := relative(g.Contents[i], s.Bulk*h.Width)
			// the compensating species carries the rounding of all the others' charge
			scale := 0.0
			for j, o := range m.Species {
				scale += math.Abs(m.z[j]) * o.Bulk
			}
			d *= s.Bulk * math.Abs(m.z[i]) / scale
			if worst = max(worst, d); d > 1e-8 {
				t.Errorf("%s off by %.2g: %+v, %+v, T %g, width %g", s.Name, d, m.Species, core, m.Temperature, h.Width)
			}
		}
	}
	if failed > n/100 {
		t.Errorf("%d errors of %d", failed, n)
	}
	t.Logf("%d of %d ended in an error; at most %d Newton steps; contents off by %.2g", failed, n, iterations, worst)
}

// Nothing there: no charge, no potential, a flat core.
func TestMeshFlat(t *testing.T) {
	m := demoMedium(t)
	h := HalfGrain{Medium: m, Width: 5e-9}
	g, err := h.AtPotential(0)
	if err != nil || g.Charge != 0 || relative(g.Capacitance, m.epsilon/m.debye*math.Tanh(h.Width/m.debye)) > 1e-9 {
		t.Errorf("flat: %v, %+v", err, g)
	}
	g, err = h.AtCharge(0)
	if err != nil || math.Abs(g.Phi0) > 1e-12 {
		t.Errorf("no charge: %v, %+v", err, g)
	}
	g, err = h.WithThickCore(ThickCore{Sides: Surface, Width: 1e-9, Fixed: -q.ElementaryCharge * m.Species[2].Bulk})
	if err != nil || math.Abs(g.Phi0) > 1e-12 {
		t.Errorf("core like the grain: %v, %+v", err, g)
	}
}

func BenchmarkClosed(b *testing.B) {
	m, core := segregating(b, true)
	b.ReportAllocs()
	for b.Loop() {
		if _, _, err := (HalfGrain{Medium: m, Width: 10e-9, Closed: true}).WithCore(core); err != nil {
			b.Fatal(err)
		}
	}
}
