package spacecharge

import (
	"encoding/json"
	"math"
	"os"
	"testing"

	q "brinkfield/physics/quantity"
)

// knownCase is one layer of testdata/known-answers/layers.json, computed by an
// independent program in 30-digit arithmetic (mpmath 1.2.1; see its header).
type knownCase struct {
	Kind         string  `json:"kind"`
	Temperature  float64 `json:"temperature_K"`
	Permittivity float64 `json:"relative_permittivity"`
	Species      []struct {
		Charge   int      `json:"charge"`
		Bulk     float64  `json:"bulk_m3"`
		Mobile   bool     `json:"mobile"`
		Sites    *float64 `json:"sites_m3"`
		Mobility float64  `json:"mobility_m2_Vs"`
	} `json:"species"`
	CoreSites   float64 `json:"core_sites_m2"`
	Segregation float64 `json:"segregation_eV"`
	Occupancy   float64 `json:"core_occupancy"`
	Phi0        float64 `json:"phi0_V"`
	Debye       float64 `json:"debye_m"`
	Charge      float64 `json:"charge_one_side_C_m2"`
	Capacitance float64 `json:"capacitance_F_m2"`
	Half        float64 `json:"x_half_m"`
	Percent     float64 `json:"x_percent_m"`
	Across      float64 `json:"across_one_side_ohm_m2"`
	Along       float64 `json:"along_one_side_S"`
}

func knownCases(tb testing.TB) []knownCase {
	text, err := os.ReadFile("../../testdata/known-answers/layers.json")
	if err != nil {
		tb.Fatal(err)
	}
	var file struct{ Cases []knownCase }
	if err := json.Unmarshal(text, &file); err != nil || len(file.Cases) == 0 {
		tb.Fatal("no cases", err)
	}
	return file.Cases
}

func (k knownCase) medium(tb testing.TB) *Medium {
	var list []Species
	for i, s := range k.Species {
		one := Species{Name: string(rune('a' + i)), Charge: s.Charge, Bulk: s.Bulk, Mobile: s.Mobile, Mobility: s.Mobility}
		if s.Sites != nil {
			one.Sites = *s.Sites
		}
		list = append(list, one)
	}
	m, err := NewMedium(k.Temperature, k.Permittivity, list)
	if err != nil {
		tb.Fatal(err)
	}
	return m
}

func TestKnownAnswers(t *testing.T) {
	for i, k := range knownCases(t) {
		m := k.medium(t)
		check := func(name string, got, want, tolerance float64) {
			if !(math.Abs(got-want) <= tolerance) {
				t.Errorf("case %d (%s) %s: got %.15g, want %.15g, off by %.2g of it", i, k.Kind, name, got, want, math.Abs(got/want-1))
			}
		}
		if k.CoreSites > 0 {
			filled, err := m.Fill(Core{Sides: Boundary, Sites: []CoreSites{{Species: 0, PerArea: k.CoreSites,
				Segregation: k.Segregation * q.ElementaryCharge, Sites: *k.Species[0].Sites}}})
			if err != nil {
				t.Fatal(err)
			}
			check("Φ₀", filled.Phi0, k.Phi0, 1e-8)
			check("occupancy", filled.Occupancy[0], k.Occupancy, 1e-8*k.Occupancy)
			check("core charge", filled.Charge, 2*k.Charge, 2e-8*k.Charge)
		}
		l, err := m.Solve(k.Phi0)
		if err != nil {
			t.Fatal(err)
		}
		half, err1 := l.Distance(0.5)
		percent, err2 := l.Distance(0.01)
		if err1 != nil || err2 != nil {
			t.Fatal(err1, err2)
		}
		rel := func(v float64) float64 { return 1e-8 * math.Abs(v) }
		check("debye", m.Debye(), k.Debye, rel(k.Debye))
		check("charge", l.Charge, k.Charge, rel(k.Charge))
		check("capacitance", l.Capacitance, k.Capacitance, rel(k.Capacitance))
		check("half", half, k.Half, rel(k.Half))
		check("percent", percent, k.Percent, rel(k.Percent))
		check("across", l.Across, k.Across, rel(k.Across))
		check("along", l.Along, k.Along, rel(k.Along))
		if phi, err := m.PotentialForCharge(l.Charge); err != nil || math.Abs(phi-k.Phi0) > 1e-12 {
			t.Errorf("case %d: charge gives back %.15g, %v, want %g", i, phi, err, k.Phi0)
		}
		if k.Phi0*float64(k.Species[0].Charge) > 0 {
			if phi, err := m.PotentialForExcess(0, l.AcrossLength[0], 0); err != nil || math.Abs(phi-k.Phi0) > 1e-9 {
				t.Errorf("case %d: excess gives back %.15g, %v, want %g", i, phi, err, k.Phi0)
			}
			shape := l.AcrossLength[0] * l.Capacitance / m.Epsilon()
			if phi, err := m.PotentialForShape(0, shape, 0); err != nil || math.Abs(phi-k.Phi0) > 1e-9 {
				t.Errorf("case %d: shape gives back %.15g, %v, want %g", i, phi, err, k.Phi0)
			}
		}
	}
}

func BenchmarkSolve(b *testing.B) {
	k := knownCases(b)[1]
	m := k.medium(b)
	evals := 0
	for b.Loop() {
		l, err := m.Solve(k.Phi0)
		if err != nil {
			b.Fatal(err)
		}
		if _, err := l.Distance(0.5); err != nil {
			b.Fatal(err)
		}
		if _, err := l.Distance(0.01); err != nil {
			b.Fatal(err)
		}
		evals++
	}
}

func BenchmarkInvert(b *testing.B) {
	k := knownCases(b)[1]
	m := k.medium(b)
	l, err := m.Solve(k.Phi0)
	if err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		if _, err := m.PotentialForExcess(0, l.AcrossLength[0], 0); err != nil {
			b.Fatal(err)
		}
	}
}

// What one sample of an uncertainty costs: near start, relaxed tolerance.
func BenchmarkInvertNear(b *testing.B) {
	k := knownCases(b)[1]
	m := k.medium(b)
	l, err := m.Solve(k.Phi0)
	if err != nil {
		b.Fatal(err)
	}
	m.Tolerance = 1e-6
	for b.Loop() {
		if _, err := m.PotentialForExcess(0, l.AcrossLength[0]*1.01, k.Phi0); err != nil {
			b.Fatal(err)
		}
	}
}
