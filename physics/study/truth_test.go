package study

import (
	"context"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"strings"
	"testing"

	"brinkfield/physics/impedance"
	q "brinkfield/physics/quantity"
)

// truth is the file beside an invented spectrum, written by the independent
// program that made it.
type truth struct {
	Inputs struct {
		Thickness float64 `json:"thickness_m"`
		Area      float64 `json:"area_m2"`
		Grain     float64 `json:"grain_m"`
		Epsr      float64 `json:"epsr"`
		Vacancy   float64 `json:"vacancy_m3"`
		Sites     float64 `json:"site_m3"`
		CoreSites float64 `json:"core_sites_m2"`
		Seg       float64 `json:"seg_eV"`
	}
	Truth []struct {
		C     float64 `json:"T_C"`
		Sigma float64 `json:"sigma_bulk_S_m"`
		Phi0  float64 `json:"phi0_V"`
		Ratio float64 `json:"R_boundary_over_bulk"`
	}
}

const cationSites = 2.5e28 // m⁻³, said in the truth files

func readTruth(t testing.TB, name string) truth {
	text, err := os.ReadFile("../../testdata/spectra/" + name + ".truth.json")
	if err != nil {
		t.Fatal(err)
	}
	var f truth
	if err := json.Unmarshal(text, &f); err != nil {
		t.Fatal(err)
	}
	return f
}

// inputsOf builds the inputs of a truth file and its spectra and nothing else: no
// arc count, start value or assignment.
func inputsOf(t testing.TB, name string) (Inputs, truth) {
	f := readTruth(t, name)
	link := fmt.Sprintf("epsr=%g&cation_sites=%g m-3&carrier_sites=%g m-3&dopant=%g&grain=%g m&thickness=%g m&area=%g m2&core_sites=%g m-2",
		f.Inputs.Epsr, cationSites, f.Inputs.Sites, 2*f.Inputs.Vacancy/cationSites, f.Inputs.Grain, f.Inputs.Thickness, f.Inputs.Area, f.Inputs.CoreSites)
	in, problems := Parse(link)
	if len(problems) > 0 {
		t.Fatal(problems)
	}
	data, err := os.ReadFile("../../testdata/spectra/" + name + ".csv")
	if err != nil {
		t.Fatal(err)
	}
	reading, err := impedance.Read(name+".csv", data, impedance.ReadOptions{})
	if err != nil {
		t.Fatal(err)
	}
	if in, err = in.WithSpectra(reading.Spectra); err != nil {
		t.Fatal(err)
	}
	return in, f
}

func runOf(t testing.TB, in Inputs, samples int) *Result {
	var rn Runner
	r, err := rn.Run(context.Background(), in, Options{Samples: samples})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// The invented pellets, from the file to the barrier, with nothing but the
// specimen's inputs. Tolerances are those the truth was made to be read with.
func TestBarrierFromSpectra(t *testing.T) {
	for _, tt := range []struct {
		name              string
		sigma, ratio, phi float64 // relative, relative, V
		covered           int
	}{
		{"barrier-demo", 0.005, 0.01, 0.3e-3, 6},
		{"barrier-commas", 0.005, 0.015, 0.5e-3, 0}, // noise 0.6 % on small ratios
	} {
		in, f := inputsOf(t, tt.name)
		r := runOf(t, in, DefaultSamples)
		covered := 0
		for i, want := range f.Truth {
			get := func(id string) Number {
				n := r.Number(id, i+1)
				if n == nil || n.Missing() {
					t.Fatalf("%s: no %s at %g °C: %+v", tt.name, id, want.C, n)
				}
				return *n
			}
			phi, sigma, ratio := get("phi0_full"), get("sigma_bulk"), get("ratio")
			t.Logf("%s %g °C: Φ₀ off %+.3f mV (95 %% ±%.3f), σ off %+.3f %%, ratio off %+.3f %%, widths %+.2f %%", tt.name, want.C,
				1e3*(float64(phi.Value)-want.Phi0), 500*float64(phi.High-phi.Low), 100*(float64(sigma.Value)/want.Sigma-1), 100*(float64(ratio.Value)/want.Ratio-1), 100*float64(get("width_gap").Value))
			if off := math.Abs(float64(phi.Value) - want.Phi0); off > tt.phi {
				t.Errorf("%s %g °C: Φ₀ = %.5f V, truth %.5f", tt.name, want.C, phi.Value, want.Phi0)
			}
			if phi.Low <= Float(want.Phi0) && Float(want.Phi0) <= phi.High {
				covered++
			}
			if math.Abs(float64(sigma.Value)/want.Sigma-1) > tt.sigma {
				t.Errorf("%s %g °C: σ = %g, truth %g", tt.name, want.C, sigma.Value, want.Sigma)
			}
			if math.Abs(float64(ratio.Value)/want.Ratio-1) > tt.ratio {
				t.Errorf("%s %g °C: ratio = %g, truth %g", tt.name, want.C, ratio.Value, want.Ratio)
			}
			bias, expected := float64(get("short_bias").Value), float64(get("short_bias_expected").Value)
			t.Logf("   bias %.3f mV, expected %.3f mV", 1e3*bias, 1e3*expected)
			if tt.covered > 0 && (bias <= 0 || bias >= 10e-3 || math.Abs(bias-expected) > 0.5e-3) {
				t.Errorf("%s %g °C: short form is %.3f mV off, the layer predicts %.3f", tt.name, want.C, 1e3*bias, 1e3*expected)
			}
		}
		t.Logf("%s: truth in %d of %d intervals", tt.name, covered, len(f.Truth))
		if covered < tt.covered {
			t.Errorf("%s: truth in %d of %d intervals, want %d at least", tt.name, covered, len(f.Truth), tt.covered)
		}
		seg := r.Number("core_segregation", 1)
		if off := float64(seg.Value)/q.ElementaryCharge - f.Inputs.Seg; math.Abs(off) > 2e-3 {
			t.Errorf("%s: segregation energy off by %.4f eV", tt.name, off)
		}
	}
}

// Boundaries that differ, and an interior arc that leaves the window when hot.
func TestSpreadSpectra(t *testing.T) {
	in, f := inputsOf(t, "barrier-spread")
	r := runOf(t, in, 100)
	depressed, limits := 0, 0
	for i, want := range f.Truth {
		total := r.Number("sigma_total", i+1)
		truthTotal := want.Sigma / (1 + want.Ratio)
		phi, sigma, n := r.Number("phi0_full", i+1), r.Number("sigma_bulk", i+1), r.Number("n_boundary", i+1)
		t.Logf("%g °C: total off %+.2f %%, σ %s (truth %.4g), Φ₀ %s %s, n %s", want.C, 100*(float64(total.Value)/truthTotal-1), sigma.Text(), want.Sigma, phi.Text(), phi.Reason, n.Text())
		if math.Abs(float64(total.Value)/truthTotal-1) > 0.01 {
			t.Errorf("%g °C: total conductivity %g, truth %g", want.C, total.Value, truthTotal)
		}
		if n != nil && n.Value < 0.995 && n.High < 1 {
			depressed++
		}
		if sigma.Bound != Exact {
			limits++
			if !phi.Missing() || phi.Reason == "" {
				t.Errorf("%g °C: interior is a limit but Φ₀ = %s, reason %q", want.C, phi.Text(), phi.Reason)
			}
			if sigma.Bound == AtLeast && float64(sigma.Value) > want.Sigma*1.02 {
				t.Errorf("%g °C: σ ≥ %g, truth %g", want.C, sigma.Value, want.Sigma)
			}
		}
	}
	if depressed < 3 || limits < 1 {
		t.Errorf("%d temperatures with n < 1, %d with a limit of the interior", depressed, limits)
	}
	if text := strings.Join(r.Findings, " "); !strings.Contains(text, "No barrier is read at") {
		t.Errorf("findings do not say what was left out: %s", text)
	}
}
