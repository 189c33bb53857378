package impedance

import (
	"context"
	"math"
	"math/rand/v2"
	"strings"
	"testing"
)

// Capacitances of Irvine, Sinclair, West, Adv. Mater. 2, 132 (1990), Table 1 (from
// memory), for thickness/area = 1 cm⁻¹: bulk 1e-12, boundary 1e-11…1e-8, contact
// 1e-7…1e-5 F.
func TestRolesByCapacitance(t *testing.T) {
	arc := func(r, c float64) Arc { return Arc{R: r, Q: c, N: 1} }
	for _, c := range []struct {
		name string
		arcs []Arc
		cell float64 // 1/m
		want []Role
	}{
		{"all three", []Arc{arc(1e4, 5e-12), arc(1e5, 1e-9), arc(1e5, 1e-6)}, 100, []Role{Interior, Boundary, Contact}},
		{"interior above the window", []Arc{arc(1e5, 1e-9), arc(1e5, 1e-6)}, 0, []Role{Boundary, Contact}},
		{"no boundary", []Arc{arc(1e5, 5e-12), arc(1e6, 2e-6)}, 0, []Role{Interior, Contact}},
		{"single crystal", []Arc{arc(1e5, 5e-12)}, 100, []Role{Interior}},
		{"high permittivity, thin and wide: 4e-9 F is ε_r 2260 at 5 1/m", []Arc{arc(1e4, 4e-9), arc(1e5, 3e-7)}, 5, []Role{Interior, Boundary}},
	} {
		p := append([]float64{0, 0}, params(0, 0, c.arcs...)[2:]...)
		s := synthetic(p, 1e-2, 1e8, 101, 0.002, rand.New(rand.NewPCG(1, 1)))
		f, err := FitArcs(s, Controls{Arcs: len(c.arcs), CellConstant: c.cell})
		if err != nil {
			t.Fatal(err)
		}
		for k, w := range c.want {
			if f.Arcs[k].Role != w {
				t.Errorf("%s: arc %d is %s (%s), want %s", c.name, k+1, f.Arcs[k].Role, f.Arcs[k].RoleWhy, w)
			}
		}
	}
}

// A spectrum whose boundary is ten times too large stands out from the others.
func TestOffTheLine(t *testing.T) {
	rng := rand.New(rand.NewPCG(8, 8))
	var all []Spectrum
	for i := 0; i < 6; i++ {
		T := 450 + 25*float64(i)
		g := math.Exp(9000 * (1/T - 1/500.0))
		gb := 3e5 * g
		if i == 3 {
			gb *= 10
		}
		s := synthetic(params(0, 0, Arc{5e4 * g, 1e-11, 1}, Arc{gb, 1e-9, 0.98}), 0.1, 2e6, 61, 0.003, rng)
		s.T = T
		all = append(all, s)
	}
	fits, err := FitAll(context.Background(), all, nil, nil)
	if err != nil {
		t.Fatal(err)
	}
	for i, f := range fits {
		noted := 0
		for _, n := range f.Notes {
			if strings.Contains(n.Text, "boundary resistance is") {
				noted++
				if math.Abs(n.Value/10-1) > 0.1 {
					t.Errorf("factor %v, want 10", n.Value)
				}
			}
		}
		if (noted == 1) != (i == 3) {
			t.Errorf("spectrum %d: %d notes: %+v", i, noted, f.Notes)
		}
	}
}

// Boundaries spread over two decades of time constants are no constant-phase
// element: the fit must say so and widen its intervals, so that the total
// resistance, which is known, lies within.
func TestMisfitIsSaid(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 5))
	said, held := 0, 0
	const runs = 40
	for i := 0; i < runs; i++ {
		p := []float64{0, 0}
		total := 0.0
		for k := 0; k < 9; k++ { // box of time constants, 1e-5…1e-3 s
			p = append(p, math.Log(1e4), math.Log(1e-5*math.Pow(10, float64(k)/4)/1e4), 1)
			total += 1e4
		}
		s := synthetic(p, 0.1, 2e6, 61, 0.002, rng)
		f, err := FitArcs(s, Controls{Arcs: 1})
		if err != nil {
			t.Fatal(err)
		}
		for _, n := range f.Notes {
			if strings.Contains(n.Text, "hang together") {
				said++
			}
		}
		if e := f.Arcs[0].R; e.Low <= total && total <= e.High {
			held++
		}
	}
	t.Logf("said %d, held %d of %d", said, held, runs)
	if said != runs || held < runs*9/10 {
		t.Errorf("misfit said %d times, total within the interval %d times of %d", said, held, runs)
	}
}

// randomSpecimen draws interior, boundary and contact over the range of ceramics:
// resistances over three decades, boundary 0.1…50 times the interior, layers 0.2…10 %
// of the grain, flat contacts, so that tops lie anywhere in the window and below it.
func randomSpecimen(rng *rand.Rand) (arcs []Arc, leadR, noise float64) {
	even := func(a, b float64) float64 { return a + (b-a)*rng.Float64() }
	log := func(a, b float64) float64 { return a * math.Pow(b/a, rng.Float64()) }
	q := func(r, c, n float64) float64 { return math.Pow(c, n) * math.Pow(r, n-1) }
	ri, ci, ni := log(3e3, 3e6), log(4e-12, 4e-11), even(0.9, 1)
	if rng.Float64() < 0.3 {
		ni = 1
	}
	rg, cg, ng := ri*log(0.1, 50), ci/log(0.002, 0.1), even(0.85, 1)
	rc := log(0.1, 100) * (ri + rg)
	return []Arc{{ri, q(ri, ci, ni), ni}, {rg, q(rg, cg, ng), ng}, {rc, log(3e-7, 1e-5), even(0.6, 0.95)}}, even(1, 50), log(0.002, 0.01)
}

// With no hints: roles, number and honesty over 200 specimens. What is missed are
// boundaries under 5 % of |Z| between two larger arcs, and tops closer than the
// rule of choose allows; the counts allow for them.
func TestRandomSpecimens(t *testing.T) {
	const runs = 200
	rng := rand.New(rand.NewPCG(21, 22))
	complete, dishonest := 0, 0
	for range runs {
		arcs, leadR, noise := randomSpecimen(rng)
		f, err := FitArcs(synthetic(params(leadR, 4e-7, arcs...), 0.1, 2e6, 61, noise, rng), Controls{})
		if err != nil {
			t.Fatal(err)
		}
		if len(f.Arcs) != 3 || f.Index(Interior) != 0 || f.Index(Boundary) != 1 || f.Index(Contact) != 2 {
			continue
		}
		complete++
		for j, v := range f.Draw(rng.NormFloat64) {
			if math.IsNaN(v) || math.IsInf(v, 0) || (j >= ParamR(0) && math.Abs(v) > 60) {
				t.Errorf("drawn parameters %v", v)
			}
		}
		if f.Covariance.At(ParamR(0), ParamR(0)) == 0 {
			t.Errorf("no variance: %+v", f.Notes)
		}
		for k, a := range arcs {
			e := f.Arcs[k].R
			half := math.Log(e.High/e.Low) / 2
			switch { // 1.5 times the half-width of 95 % is 2.9 standard deviations, a limit likewise
			case e.Kind == Measured && math.Abs(math.Log(e.Value/a.R)) > 1.5*half,
				e.Kind == AtLeast && a.R < e.Low/1.02, e.Kind == AtMost && a.R > e.High*1.02:
				dishonest++
			}
		}
	}
	t.Logf("%d of %d complete with the right roles; %d of %d resistances outside their statement", complete, runs, dishonest, 3*complete)
	if complete < runs*92/100 || dishonest > 3*complete*2/100 {
		t.Errorf("complete %d of %d, outside %d of %d", complete, runs, dishonest, 3*complete)
	}
}
