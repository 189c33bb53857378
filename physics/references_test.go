package physics

import (
	"flag"
	"fmt"
	"math"
	"os"
	"strings"
	"testing"

	"brinkfield/physics/impedance"
	q "brinkfield/physics/quantity"
	"brinkfield/physics/spacecharge"
	"brinkfield/physics/transport"
)

var update = flag.Bool("update", false, "write REFERENCES.md")

//go:generate go test -run TestReferences -update .

// reference is one value to check against. The mark says how it is known: printed
// (read in a text that quotes the source), memory, or recomputed from the formula.
type reference struct {
	what, source, mark string
	want, got          float64
	within             float64 // relative; half a unit of the last digit printed, unless said otherwise
}

func salt(kelvin, epsr, molar float64, plus, minus, cations, anions int) *spacecharge.Medium {
	c := molar * 1e3 * q.Avogadro
	m, err := spacecharge.NewMedium(kelvin, epsr, []spacecharge.Species{
		{Name: "cation", Charge: plus, Bulk: c * float64(cations), Mobile: true},
		{Name: "anion", Charge: -minus, Bulk: c * float64(anions), Mobile: true}})
	if err != nil {
		panic(err)
	}
	return m
}

func capacitance(m *spacecharge.Medium, volt float64) float64 {
	l, err := m.Solve(volt)
	if err != nil {
		panic(err)
	}
	return l.Capacitance * 100 // µF/cm²
}

func charge(m *spacecharge.Medium, volt float64) float64 {
	l, err := m.Solve(volt)
	if err != nil {
		panic(err)
	}
	return l.Charge
}

func shortForm(r float64) float64 {
	a, err := transport.InvertShortForm(r)
	if err != nil {
		panic(err)
	}
	return a
}

func references() []reference {
	const israelachvili = "Israelachvili, Intermolecular and Surface Forces"
	const bard = "Bard & Faulkner, 2nd ed., table 13.3.1"
	const hu = "Hu & Mi, Environ. Sci. Technol. 47, 3715 (2013)"
	const codata = "CODATA 2022"
	const mott = "e^Y D(√Y)/√Y, Dawson's integral"
	debye := func(molar float64, plus, minus, cations, anions int) float64 {
		return salt(298, 78.4, molar, plus, minus, cations, anions).Debye() * 1e9
	}
	list := []reference{
		{"Faraday constant / C mol⁻¹", codata, "printed", 96485.33212331, q.Faraday, 1e-13},
		{"gas constant / J mol⁻¹ K⁻¹", codata, "printed", 8.31446261815324, q.GasConstant, 1e-15},
		{"e N_A / C mol⁻¹", codata, "printed", 96485.33212331, q.ElementaryCharge * q.Avogadro, 1e-13},
		{"k_B N_A / J mol⁻¹ K⁻¹", codata, "printed", 8.31446261815324, q.Boltzmann * q.Avogadro, 1e-14},
		{"Debye length 1:1, 1 M, 25 °C / nm", israelachvili, "printed", 0.304, debye(1, 1, 1, 1, 1), 2e-3},
		{"Debye length 2:1, 1 M / nm", israelachvili + " (0.304/√3, rounded up there)", "printed", 0.176, debye(1, 2, 1, 1, 2), 4e-3},
		{"Debye length 2:2, 1 M / nm", israelachvili, "memory", 0.152, debye(1, 2, 2, 1, 1), 4e-3},
		{"Debye length NaCl 0.1 mM / nm", hu + ", rounded", "printed", 31, debye(1e-4, 1, 1, 1, 1), 0.03},
		{"Debye length NaCl 10 mM / nm", hu + ", rounded", "printed", 3.1, debye(1e-2, 1, 1, 1, 1), 0.03},
		{"Debye length Na₂SO₄ 0.1 mM / nm", hu + ", rounded", "printed", 18, debye(1e-4, 1, 2, 2, 1), 0.03},
		{"Debye length Na₂SO₄ 10 mM / nm", hu + ", rounded", "printed", 1.8, debye(1e-2, 1, 2, 2, 1), 0.03},
		{"Debye length 1:1, 0.1 M / Å", bard, "memory", 9.6, 10 * debye(0.1, 1, 1, 1, 1), 6e-3},
		{"Debye length 1:1, 1 mM / Å", bard, "memory", 96.2, 10 * debye(1e-3, 1, 1, 1, 1), 1e-3},
		{"diffuse C minimum, 1 M, ε_r 78.49 / µF cm⁻²", "C = ε/λ_D", "recomputed", 228.47, capacitance(salt(298.15, 78.49, 1, 1, 1, 1, 1), 0), 3e-5},
		{"diffuse C minimum, 0.01 M / µF cm⁻²", "C = ε/λ_D", "recomputed", 22.85, capacitance(salt(298.15, 78.49, 0.01, 1, 1, 1, 1), 0), 3e-4},
		{"C of 1 mM at 100 mV / µF cm⁻²", "Bard & Faulkner, eq. 13.3.21b: 228 √C cosh(19.5 φ)", "memory", 228 * math.Sqrt(1e-3) * math.Cosh(1.95), capacitance(salt(298.15, 78.49, 1e-3, 1, 1, 1, 1), 0.1), 4e-3},
		{"charge of 0.1 M at 100 mV / µC cm⁻²", "Bard & Faulkner, eq. 13.3.20b: 11.7 √C sinh(19.5 φ)", "memory", 11.7 * math.Sqrt(0.1) * math.Sinh(1.95), 100 * charge(salt(298.15, 78.49, 0.1, 1, 1, 1, 1), 0.1), 5e-3},
		{"charge of 0.1 M at 50 mV / C m⁻²", israelachvili + ": 0.117 √c sinh(ψ₀/51.4)", "printed", 0.117 * math.Sqrt(0.1) * math.Sinh(50/51.4), charge(salt(298, 78.4, 0.1, 1, 1, 1, 1), 0.05), 5e-3},
		{"mean resistivity, Y = 2", mott, "recomputed", 2.3644539, transport.MeanResistivity(2), 3e-8},
		{"mean resistivity, Y = 4", mott, "recomputed", 8.2263139, transport.MeanResistivity(4), 1e-8},
		{"mean resistivity, Y = 10", mott, "recomputed", 1168.2305, transport.MeanResistivity(10), 5e-8},
		{"mean resistivity, Y = 20", mott, "recomputed", 12458600, transport.MeanResistivity(20), 5e-7},
		{"short form inverted, r = 10", "r = e^Y/2Y", "recomputed", 4.499755, shortForm(10), 2e-7},
		{"short form inverted, r = 1e3", "r = e^Y/2Y", "recomputed", 9.892700, shortForm(1e3), 1e-7},
		{"short form inverted, r = 1e6", "r = e^Y/2Y", "recomputed", 17.362999, shortForm(1e6), 1e-7},
		{"barrier of r = 1e3, z = 2, 773.15 K / V", "r = e^Y/2Y", "recomputed", 0.32955, shortForm(1e3) * q.ThermalVoltage(773.15) / 2, 2e-5},
		{"capacitance of Q 1e-9, R 1e6, n 0.85 / F", "Hsu & Mansfeld, Corrosion 57, 747 (2001)", "recomputed", 2.955209e-10, impedance.Arc{R: 1e6, Q: 1e-9, N: 0.85}.Capacitance(), 2e-7},
	}
	return list
}

// REFERENCES.md lists published values beside ours; every row is checked.
func TestReferences(t *testing.T) {
	var b strings.Builder
	b.WriteString("# Values checked against\n\nWritten by the tests (`./build.sh regenerate`); do not edit. *printed*: read in a text that quotes the source; " +
		"*memory*: from memory, not re-read; *recomputed*: from the stated formula in 20 digits or more, no publication. Digits: how many agree.\n\n" +
		"The layers of `testdata/known-answers/layers.json` (30-digit arithmetic) are checked to 1e-8 in `spacecharge`, the Gouy–Chapman closed form to 1e-9, " +
		"arc fits against scipy in `impedance`.\n\n| quantity | source | mark | reference | ours | digits |\n|---|---|---|---|---|---|\n")
	for _, r := range references() {
		off := math.Abs(r.got/r.want - 1)
		if off > r.within {
			t.Errorf("%s (%s): got %.10g, want %.10g", r.what, r.source, r.got, r.want)
		}
		digits := math.Min(15, -math.Log10(math.Max(off, 1e-15)))
		fmt.Fprintf(&b, "| %s | %s | %s | %.10g | %.8g | %.0f |\n", r.what, r.source, r.mark, r.want, r.got, math.Floor(digits))
	}
	const path = "REFERENCES.md"
	if *update {
		if err := os.WriteFile(path, []byte(b.String()), 0o644); err != nil {
			t.Fatal(err)
		}
		return
	}
	have, err := os.ReadFile(path)
	if err != nil || string(have) != b.String() {
		t.Errorf("%s is not what the tests find (%v); run ./build.sh regenerate", path, err)
	}
}
