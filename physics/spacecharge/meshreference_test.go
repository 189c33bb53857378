package spacecharge

import (
	"encoding/json"
	"math"
	"os"
	"testing"
)

// bvpCase is one half grain of testdata/solve_bvp/cases.json, computed with
// scipy's collocation solver; its header states version and tolerance.
type bvpCase struct {
	Temperature  float64 `json:"temperature_K"`
	Permittivity float64 `json:"relative_permittivity"`
	Width        float64 `json:"half_width_m"`
	Species      []struct {
		Charge    int     `json:"charge"`
		Bulk      float64 `json:"bulk_m3"`
		Mobile    bool    `json:"mobile"`
		Sites     float64 `json:"sites_m3"`
		Amplitude float64 `json:"profile_amplitude"`
		Length    float64 `json:"profile_length_m"`
	} `json:"species"`
	GivenPhi0   *float64  `json:"given_phi0_V"`
	GivenCharge *float64  `json:"given_charge_C_m2"`
	Phi0        float64   `json:"phi0_V"`
	Drop        float64   `json:"drop_V"`
	Charge      float64   `json:"charge_C_m2"`
	Along       []float64 `json:"along_m"`
	Across      []float64 `json:"across_m"`
	Quarter     float64   `json:"phi_quarter_V"`
}

func (c bvpCase) solve(tb testing.TB) *Grain {
	var list []Species
	h := HalfGrain{Width: c.Width}
	for i, s := range c.Species {
		list = append(list, Species{Name: string(rune('a' + i)), Charge: s.Charge, Bulk: s.Bulk, Mobile: s.Mobile, Sites: s.Sites})
		if s.Amplitude != 0 {
			h.Profiles = append(h.Profiles, FrozenProfile{Species: i, Excess: func(x float64) float64 {
				return s.Amplitude * math.Exp(-x*x/s.Length/s.Length)
			}})
		}
	}
	m, err := NewMedium(c.Temperature, c.Permittivity, list)
	if err != nil {
		tb.Fatal(err)
	}
	h.Medium = m
	var g *Grain
	if c.GivenPhi0 != nil {
		g, err = h.AtPotential(*c.GivenPhi0)
	} else {
		g, err = h.AtCharge(*c.GivenCharge)
	}
	if err != nil {
		tb.Fatal(err)
	}
	return g
}

func TestMeshAgainstCollocation(t *testing.T) {
	text, err := os.ReadFile("../../testdata/solve_bvp/cases.json")
	if err != nil {
		t.Fatal(err)
	}
	var file struct{ Cases []bvpCase }
	if err := json.Unmarshal(text, &file); err != nil || len(file.Cases) != 12 {
		t.Fatal("cases:", len(file.Cases), err)
	}
	worst := 0.0
	for k, c := range file.Cases {
		g := c.solve(t)
		check := func(what string, got, want float64) {
			d := relative(got, want)
			worst = max(worst, d)
			if d > 1e-6 {
				t.Errorf("case %d: %s is %.10g, expected %.10g (off %.2g)", k, what, got, want, d)
			}
		}
		check("potential", g.Phi0, c.Phi0)
		check("drop", g.Drop, c.Drop)
		check("charge", g.Charge, c.Charge)
		quarter, err := g.PotentialAt(c.Width / 4)
		if err != nil {
			t.Error(err)
		}
		check("potential at a quarter", quarter, c.Quarter)
		for i := range c.Species {
			check("along", g.AlongLength[i], c.Along[i])
			check("across", g.AcrossLength[i], c.Across[i])
		}
	}
	t.Logf("worst %.2g", worst)
}
