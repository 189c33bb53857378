package study

import (
	"context"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"brinkfield/physics/impedance"
	q "brinkfield/physics/quantity"
)

// A link reproduces its inputs, spectra and wishes for the fit bit for bit.
func TestLinkRoundTrip(t *testing.T) {
	in, _ := inputsOf(t, "barrier-commas")
	in = in.With("title", "Ofen 3 & Co: 5 % \"grün\" #2").With("grain_pm", "10 %").With("epsr", "31,5")
	in = in.WithControls([]Controls{{}, {Arcs: 3, Omit: []int{0, 60}}, {Hold: map[string]float64{"boundary.n": 1, "lead.L": 4e-7}},
		{Assign: map[int]impedance.Role{0: impedance.Interior}}, {}, {}, {}})
	for _, link := range []string{in.Link(), "https://host.example/sub/page.html#" + in.Link(), "file:///tmp/brinkfield.html?" + in.Link()} {
		back, problems := Parse(link)
		if len(problems) > 0 {
			t.Fatal(problems)
		}
		if back.Link() != in.Link() {
			t.Errorf("link changed:\n%.200s\n%.200s", in.Link(), back.Link())
		}
		if fmt.Sprint(back.ControlsOf()) != fmt.Sprint(in.ControlsOf()) {
			t.Errorf("controls changed: %v, %v", back.ControlsOf(), in.ControlsOf())
		}
		for i, s := range back.Spectra() {
			for k, p := range s.Points {
				if want := in.Spectra()[i].Points[k]; p.F != want.F || p.Z != want.Z {
					t.Fatalf("spectrum %d point %d changed: %v, %v", i, k, p, want)
				}
			}
		}
	}
	for _, r := range in.Link() {
		if r <= ' ' || r > '~' || strings.ContainsRune("\"<>\\^`{|}#", r) {
			t.Errorf("link holds %q, which may not stand in a fragment (RFC 3986)", r)
		}
	}
}

func TestLinkByHand(t *testing.T) {
	in, problems := Parse("grain=2.5e-7 m&dopant=2 %&cation_sites=2.5e+28 m-3&epsr=30")
	if len(problems) > 0 || in.Get("dopant") != "2 %" || in.Get("cation_sites") != "2.5e28 m-3" {
		t.Errorf("read %v, %v", in.Text, problems)
	}
	for link, part := range map[string]string{
		"grainsize=3 nm":    "parameter is not known",
		"grain":             "parameter has no value",
		"data=%%%":          "text is not readable",
		"data=AAAA":         "measured data",
		"spectra=data":      "no spectra are given",
		"omit=99:1":         "spectrum number is not usable",
		"omit=1:x":          "point number is not usable",
		"arcs=7":            "number of arcs is not usable",
		"hold=1:middle.R=3": "held parameter is not usable",
		"assign=1:1=left":   "assignment is not usable",
		"grain=350":         "the unit is missing",
		"grain=350 V":       "is not a unit of length",
		"grain=":            "the field is empty",
		"grain=1e9 m":       "out of range",
		"epsr_pm=x":         "",
		"epsr=3 nm":         "is not a unit of number",
		"dopant_charge=0":   "not a usable charge number",
		"dopant_charge=1":   "charges of one sign",
		"dopant=90 %&dopant_charge=-4&carrier_charge=1": "more carriers than there are sites",
		"area=":         "expected an area",
		"diameter=1 cm": "both given",
		"route=fast":    "choice is not known",
		"at=2 nm":       "is not a unit of temperature",
	} {
		in, problems := Parse(link)
		_, more := in.Check()
		all := append(problems, more...).Error()
		if !strings.Contains(all, part) || len(problems)+len(more) == 0 {
			t.Errorf("%s: got %q, want it to say %q", link, all, part)
		}
		if !strings.Contains(all, "expected") {
			t.Errorf("%s: %q does not say what was expected", link, all)
		}
	}
}

// A saved case opens again to the same inputs and the same result.
func TestCaseFile(t *testing.T) {
	in, _ := inputsOf(t, "barrier-spread")
	in = in.With("grain_pm", "5 %").WithControls([]Controls{{Omit: []int{3}}, {}, {}, {}, {}, {}})
	r := runOf(t, in, 60)
	data, err := r.JSON()
	if err != nil {
		t.Fatal(err)
	}
	if !IsCase(data) || IsCase([]byte("f,Z\n1,2\n")) {
		t.Error("case files are not told from tables")
	}
	back, err := Open(data)
	if err != nil {
		t.Fatal(err)
	}
	again, err := runOf(t, back, 60).JSON()
	if err != nil || string(again) != string(data) {
		t.Errorf("the case changed by saving and opening (%v)", err)
	}
	for _, bad := range []string{"", "{", "[]", `{"program":"other"}`, `{"program":"Brinkfield","format":99}`,
		`{"program":"Brinkfield","format":1,"parameters":{"nonsense":"1"}}`,
		`{"program":"Brinkfield","format":1,"parameters":{"spectra":"data"}}`,
		`{"program":"Brinkfield","format":1,"parameters":{"spectra":"data"},"spectra":[{"temperature_K":-1,"points_Hz_ohm":[[1,1,1]]}]}`,
		`{"program":"Brinkfield","format":1,"parameters":{"spectra":"data"},"spectra":[{"temperature_K":300,"points_Hz_ohm":[[-1,1,1]]}]}`} {
		if _, err := Open([]byte(bad)); err == nil || !strings.Contains(err.Error(), "expected") {
			t.Errorf("%s: got %v", bad, err)
		}
	}
}

// Every number carries unit, source, and where it has one an interval that holds it.
func TestNumbersAreComplete(t *testing.T) {
	in := Defaults().With("grain_pm", "10 %").With("epsr_pm", "5 %").With("thickness_pm", "20 um")
	r := runOf(t, in, DefaultSamples)
	seen := map[string]bool{}
	for _, n := range r.Numbers {
		key := fmt.Sprintf("%s/%d", n.ID, n.Spectrum)
		if seen[key] {
			t.Errorf("%s stands twice", key)
		}
		seen[key] = true
		if n.Source == "" || n.Station == "" || n.Label == "" {
			t.Errorf("%s has no source, station or label: %+v", key, n)
		}
		if n.Equation != "" && Equations[n.Equation].Text == "" {
			t.Errorf("%s names the equation %q, which is not there", key, n.Equation)
		}
		if n.Missing() && n.Reason == "" {
			t.Errorf("%s has no value and no reason", key)
		}
		if n.HasInterval() && n.Bound == Exact && (n.Value < n.Low || n.Value > n.High) && n.Source == Derived {
			t.Errorf("%s = %g stands outside its interval %g … %g", key, n.Value, n.Low, n.High)
		}
	}
	// A stated ± of the grain moves the full layer's barrier and not the short form's.
	wide, narrow := r.Number("phi0_full", 5), r.Number("phi0_short", 5)
	exact := runOf(t, Defaults(), DefaultSamples)
	grow := func(a, b *Number) float64 { return float64((a.High - a.Low) / (b.High - b.Low)) }
	if g := grow(wide, exact.Number("phi0_full", 5)); g < 5 {
		t.Errorf("interval of the full layer grew by %.2f only", g)
	}
	if g := grow(narrow, exact.Number("phi0_short", 5)); math.Abs(g-1) > 1e-9 {
		t.Errorf("interval of the short form changed by %.3g though it does not use the grain", g-1)
	}
	// The ± is a 95 % half-width: dΦ₀ = 2.54 mV for 10 % of d (moves), and ε 5 % adds 0.64 mV.
	if half := 500 * float64(wide.High-wide.Low); math.Abs(half-2.7) > 0.35 {
		t.Errorf("half-width %.3f mV, want about 2.7", half)
	}
}

// Warning case, plausibility band of Kjølseth et al., Solid State Ionics 181, 268
// (2010): BaZr₀.₉Y₀.₁O₃ at 250 °C, 0.5–0.6 V, electrical width 8–10 nm. With the
// full 10 % of charge and ε_r 75 (memory) the barrier's own width is 3.5–3.8 nm:
// the two roads disagree, and 12–23 % of the nominal charge would close them (recomputed).
func TestWidthsDisagree(t *testing.T) {
	s := specimen{epsr: 75, cationSites: 1.35e28, carrierSites: 4.05e28, dopant: 0.1, dopantCharge: -1, carrierCharge: 1}
	for _, tt := range []struct{ phi, delta float64 }{{0.5, 8e-9}, {0.6, 8e-9}, {0.5, 10e-9}, {0.6, 10e-9}} {
		d := s.depletion(250 + q.ZeroCelsius)
		if w := 2 * d.Width(tt.phi); w < 3.4e-9 || w > 3.9e-9 {
			t.Errorf("%g V: 2λ* = %.2f nm", tt.phi, w*1e9)
		}
		small := 2 * d.SmallSignalWidth(tt.phi)
		if share := math.Pow(small/tt.delta, 2); share < 0.10 || share > 0.24 {
			t.Errorf("%g V, δ %g: %.0f %% of the charge closes the widths", tt.phi, tt.delta, 100*share)
		}
	}
	// And the program says so when the arcs of the demo are read with too much dopant.
	r := runOf(t, Defaults().With("dopant", "6 %"), 200)
	if r.WidthsAgree(4) || !strings.Contains(strings.Join(r.Findings, " "), "disagree") {
		t.Errorf("six times the charge goes unnoticed: %v", r.Findings)
	}
	share := r.Number("carriers_closing_share", 5)
	if math.Abs(float64(share.Value)*6-1) > 0.05 {
		t.Errorf("closing share %.4f, want a sixth", share.Value)
	}
}

// The three ways to give a barrier without spectra agree with each other.
func TestBarrierGiven(t *testing.T) {
	base := Defaults().With("spectra", "none").With("at", "573.15 K")
	sites := runOf(t, base.With("barrier", "sites").With("segregation", "-0.72 eV"), 0)
	phi := sites.View.Phi0
	if math.Abs(phi-0.22169276) > 1e-6 { // truth of the demo at 300 °C
		t.Errorf("core sites give %.8f V", phi)
	}
	charge := runOf(t, base.With("barrier", "charge").With("core_charge", fmt.Sprintf("%.15g C/m2", sites.View.CoreCharge)), 0)
	volt := runOf(t, base.With("barrier", "potential").With("potential", fmt.Sprintf("%.15g V", phi)), 0)
	for name, r := range map[string]*Result{"charge": charge, "potential": volt} {
		if math.Abs(r.View.Phi0-phi) > 1e-12 || math.Abs(r.View.CoreCharge/sites.View.CoreCharge-1) > 1e-10 {
			t.Errorf("%s: Φ₀ %.12f, Q %.12g; want %.12f, %.12g", name, r.View.Phi0, r.View.CoreCharge, phi, sites.View.CoreCharge)
		}
	}
	if r := runOf(t, base, 0); r.View.Missing == "" {
		t.Error("a barrier from spectra without spectra goes unnoticed")
	}
}

// Nothing that can be typed ends the program; what cannot be computed is said.
func TestOddSpecimens(t *testing.T) {
	for _, link := range []string{
		"epsr=1.01&grain=1 nm", "epsr=1e5&dopant=1 ppm&grain=1 cm", "dopant=49 %&statistics=limited", "carrier_charge=-1&dopant_charge=2",
		"at=50 K&barrier=potential&potential=5 V", "at=3000 K&barrier=potential&potential=-5 V&spectra=none", "barrier=charge&core_charge=-100 C/m2",
		"barrier=sites&segregation=-5 eV&core_sites=1e21 m-2", "porosity=60 %&thickness=1 m", "route=short&spectra=none", "arcs=1", "arcs=2", "arcs=3;1:1",
		"omit=1:1,2,3,4,5,6,7,8,9,10,11,12,13,14,15,16,17,18,19,20,21,22,23,24,25,26,27,28,29,30,31,32,33,34,35,36,37,38,39,40,41,42,43,44,45,46,47,48,49,50,51,52,53,54,55,56,57",
		"hold=5:boundary.n=1,interior.R=72000", "hold=5:contact.R=1e9", "assign=5:1=contact,3=interior", "grain_pm=300 %&epsr_pm=200 %",
	} {
		in, problems := Parse(link)
		if len(problems) > 0 {
			t.Fatal(link, problems)
		}
		var rn Runner
		r, err := rn.Run(context.Background(), in, Options{Samples: 20})
		var refused Problems
		switch {
		case errors.As(err, &refused):
			t.Logf("%s: %v", link, err)
		case err != nil:
			t.Errorf("%s: %v", link, err)
		case len(r.Findings) == 0:
			t.Errorf("%s: nothing is said", link)
		default:
			if _, err := r.JSON(); err != nil {
				t.Errorf("%s: %v", link, err)
			}
		}
	}
}

// A run that is cancelled stops.
func TestCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	var rn Runner
	if _, err := rn.Run(ctx, Defaults(), Options{Samples: 10}); !errors.Is(err, context.Canceled) {
		t.Errorf("got %v", err)
	}
}

// The demo of the page is the demo of the test data.
func TestDemoIsTestData(t *testing.T) {
	text, err := os.ReadFile(filepath.Join("..", "..", "testdata", "spectra", "barrier-demo.csv"))
	if err != nil {
		t.Fatal(err)
	}
	reading, err := impedance.Read("x.csv", text, impedance.ReadOptions{})
	if err != nil || len(reading.Spectra) != len(Defaults().Spectra()) {
		t.Errorf("%d spectra, %v", len(reading.Spectra), err)
	}
}

func FuzzParse(f *testing.F) {
	for _, s := range []string{"", "grain=350 nm", "omit=1:2;3:4&arcs=4:2", "data=AAAA", "#title=%zz&x", "a=b=c&&&=", "hold=1:lead.R=1e999"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, link string) {
		in, _ := Parse(link)
		in.Check()
		if back, problems := Parse(in.Link()); len(problems) == 0 && back.Link() != in.Link() {
			t.Errorf("%q is not stable: %q, %q", link, in.Link(), back.Link())
		}
	})
}

func FuzzOpen(f *testing.F) {
	f.Add([]byte(`{"program":"Brinkfield","format":1,"parameters":{"grain":"1 nm"}}`))
	f.Fuzz(func(t *testing.T, data []byte) {
		if in, err := Open(data); err == nil {
			in.Check()
		}
	})
}

func BenchmarkQuickRun(b *testing.B) {
	in := Defaults()
	var rn Runner
	if _, err := rn.Run(context.Background(), in, Options{}); err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		if _, err := rn.Run(context.Background(), in, Options{}); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkIntervals(b *testing.B) {
	in := Defaults()
	var rn Runner
	for b.Loop() {
		if _, err := rn.Run(context.Background(), in, Options{Samples: DefaultSamples}); err != nil {
			b.Fatal(err)
		}
	}
}
