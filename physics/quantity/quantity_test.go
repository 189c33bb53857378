package quantity

import (
	"errors"
	"math"
	"strings"
	"testing"
)

// Factors: BIPM SI brochure, 9th ed. (2019); eV from CODATA 2022; conversions are exact by definition.
func TestParse(t *testing.T) {
	tests := []struct {
		text string
		kind Kind
		want float64
	}{
		{"350 nm", Length, 3.5e-7},
		{"0.35um", Length, 3.5e-7},
		{"0,35 µm", Length, 3.5e-7},
		{"3.5 Å", Length, 3.5e-10},
		{"1.2 mm", Length, 1.2e-3},
		{"0.5 cm2", Area, 5e-5},
		{"50 mm²", Area, 5e-5},
		{"25 °C", Temperature, 298.15},
		{"25 C", Temperature, 298.15},
		{"573.15 K", Temperature, 573.15},
		{"1.2 eV", Energy, 1.2 * ElementaryCharge},
		{"-96.48533212331002 kJ/mol", Energy, -ElementaryCharge},
		{"2.5e22 cm-3", NumberDensity, 2.5e28},
		{"2.5×10²⁸ m⁻³", NumberDensity, 2.5e28},
		{"2.5x10^28 1/m3", NumberDensity, 2.5e28},
		{"1 nm^-2", SheetDensity, 1e18},
		{"1.35e22 per cm3", NumberDensity, 1.35e28},
		{"1 %", Fraction, 0.01},
		{"200 ppm", Fraction, 2e-4},
		{"0.01", Fraction, 0.01},
		{"−0.22 V", Potential, -0.22},
		{"220mV", Potential, 0.22},
		{"13.6 µC/cm2", SurfaceCharge, 0.136},
		{"72 kΩ", Resistance, 7.2e4},
		{"7.2e4 ohm", Resistance, 7.2e4},
		{"3 uS/cm", Conductivity, 3e-4},
		{"20 µF/cm²", AreaCapacity, 0.2},
		{"1 MV/cm", Field, 1e8},
	}
	for _, tt := range tests {
		v, err := Parse(tt.text, tt.kind)
		if err != nil {
			t.Errorf("%q: %v", tt.text, err)
		} else if math.Abs(v.SI-tt.want) > 4e-16*math.Abs(tt.want) {
			t.Errorf("%q: got %.17g, want %.17g", tt.text, v.SI, tt.want)
		}
	}
}

func TestParseErrors(t *testing.T) {
	tests := []struct {
		text string
		kind Kind
		part string
	}{
		{"", Length, "the field is empty"},
		{"abc", Length, "no number found"},
		{"350", Length, "the unit is missing"},
		{"350 nn", Length, `unit "nn" is not known`},
		{"350 V", Length, `"V" is not a unit of length`},
		{"1,000 nm", Length, "write 1000 or 1.000"},
		{"1.2.3 nm", Length, "two decimal marks"},
		{"1e999 nm", Length, "out of range"},
		{"3 cm^", Length, "power is missing"},
		{"25 °C", Potential, "is not known"},
	}
	for _, tt := range tests {
		_, err := Parse(tt.text, tt.kind)
		var qe *Error
		if !errors.As(err, &qe) || !strings.Contains(err.Error(), tt.part) || !strings.Contains(err.Error(), tt.kind.Expected) {
			t.Errorf("%q: got %v, want it to say %q and what was expected", tt.text, err, tt.part)
		}
	}
}

func TestPlusMinus(t *testing.T) {
	tests := []struct {
		text  string
		kind  Kind
		value float64
		want  float64
	}{
		{"", Length, 3.5e-7, 0},
		{"10 %", Length, 3.5e-7, 3.5e-8},
		{"± 30 nm", Length, 3.5e-7, 3e-8},
		{"2 K", Temperature, 573.15, 2},
		{"2 °C", Temperature, 573.15, 2},
		{"0.1 %", Fraction, 0.01, 0.001},
	}
	for _, tt := range tests {
		got, err := ParsePlusMinus(tt.text, tt.kind, tt.value)
		if err != nil || math.Abs(got-tt.want) > 1e-15*math.Abs(tt.value) {
			t.Errorf("%q: got %g, %v, want %g", tt.text, got, err, tt.want)
		}
	}
	if _, err := ParsePlusMinus("3 V", Length, 1); err == nil {
		t.Error("an uncertainty in a wrong unit was accepted")
	}
}

func TestFormat(t *testing.T) {
	tests := []struct{ got, want string }{
		{Format(3.5e-7, Length, 3), "350 nm"},
		{Format(1.25e26, NumberDensity, 3), "1.25×10²⁶ m⁻³"},
		{Format(-0.2217, Potential, 3), "−0.222 V"},
		{Format(7.206e4, Resistance, 3), "72.1 kΩ"},
		{Format(-0.72*ElementaryCharge, Energy, 3), "−0.720 eV"},
		{Format(1.18e-9, Capacitance, 3), "1.18 nF"},
		{PrettyUnit("S/m"), "S/m"},
		{FormatShort(30), "30"},
		{FormatShort(1e5), "1×10⁵"},
		{FormatShort(2.5e28), "2.5×10²⁸"},
		{FormatShort(0.0012), "0.0012"},
		{Format(0.0025, Fraction, 2), "0.25 %"},
		{Format(0.0053, Millivolts, 2), "5.3 mV"},
		{FormatNumber(math.NaN(), 3), "—"},
	}
	for _, tt := range tests {
		if tt.got != tt.want {
			t.Errorf("got %q, want %q", tt.got, tt.want)
		}
	}
	v, i, u := FormatInterval(0.22169, 0.2194, 0.2241, Potential)
	if v != "0.2217" || i != "0.2194 … 0.2241" || u != "V" {
		t.Errorf("interval: got %q %q %q", v, i, u)
	}
}

func FuzzParse(f *testing.F) {
	for _, s := range []string{"350 nm", "1,5 %", "2.5x10^28 m-3", "°C", "1 m^-", "9e9/"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		for _, k := range []Kind{Length, Temperature, Energy, Fraction} {
			if v, err := Parse(s, k); err == nil && (math.IsNaN(v.SI) || math.IsInf(v.SI, 0)) {
				t.Errorf("%q parsed to %g", s, v.SI)
			}
		}
	})
}
