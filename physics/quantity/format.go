package quantity

import (
	"math"
	"strconv"
	"strings"
)

var superscripts = strings.NewReplacer("-", "⁻", "0", "⁰", "1", "¹", "2", "²", "3", "³", "4", "⁴",
	"5", "⁵", "6", "⁶", "7", "⁷", "8", "⁸", "9", "⁹")

// Superscript writes an integer power in superscript digits.
func Superscript(n int) string { return superscripts.Replace(strconv.Itoa(n)) }

// FormatNumber prints x with the given significant digits the way the trade
// writes it: 0.222, 350, 1.25×10²⁶, with a real minus sign.
func FormatNumber(x float64, digits int) string {
	switch {
	case math.IsNaN(x):
		return "—"
	case math.IsInf(x, 1):
		return "∞"
	case math.IsInf(x, -1):
		return "−∞"
	case x == 0:
		return "0"
	}
	text := strconv.FormatFloat(x, 'e', digits-1, 64)
	mantissa, power, _ := strings.Cut(text, "e")
	p, _ := strconv.Atoi(power)
	if p >= -3 && p < 5 {
		text = strconv.FormatFloat(x, 'f', max(0, digits-1-p), 64)
	} else {
		text = mantissa + "×10" + Superscript(p)
	}
	return strings.Replace(text, "-", "−", 1)
}

// FormatShort prints x like FormatNumber with at most six digits and no zeros
// that say nothing: 30, 0.0012, 2.5×10²⁸.
func FormatShort(x float64) string {
	text := FormatNumber(x, 6)
	mantissa, power, scaled := strings.Cut(text, "×")
	if strings.Contains(mantissa, ".") {
		mantissa = strings.TrimRight(strings.TrimRight(mantissa, "0"), ".")
	}
	if scaled {
		return mantissa + "×" + power
	}
	return mantissa
}

// FormatPlain prints all digits of x the way they are typed: 573.15, -0.72, 2.5e28.
func FormatPlain(x float64) string { return strconv.FormatFloat(x, 'g', -1, 64) }

// PrettyUnit writes a unit typed as "S/m" or "m-3" with superscripts: "m⁻³".
func PrettyUnit(unit string) string {
	words := strings.Fields(strings.ReplaceAll(unit, "/", " / "))
	for i, w := range words {
		name, power := splitPower(w)
		switch name {
		case "ohm", "Ohm":
			name = "Ω"
		case "um":
			name = "µm"
		}
		words[i] = name
		if power != 1 && power != 0 {
			words[i] = name + Superscript(int(power))
		}
	}
	return strings.ReplaceAll(strings.Join(words, " "), " / ", "/")
}

// Convert expresses an SI value of the kind in another unit of it. It panics on
// a unit that does not fit: units given here are the program's own.
func Convert(si float64, kind Kind, unit string) float64 {
	if kind.offset && unit == "°C" {
		return si - ZeroCelsius
	}
	if unit == "" {
		return si
	}
	dim, factor, err := unitFactor(fold.Replace(unit))
	if err != nil || dim != kind.dim {
		panic("quantity: unit " + unit + " does not fit " + kind.Name)
	}
	return si / factor
}

// steps are the units a value of that kind is shown in, by size.
var steps = map[string][]string{
	"m":   {"pm", "nm", "µm", "mm", "m"},
	"ohm": {"mΩ", "Ω", "kΩ", "MΩ", "GΩ"},
	"F":   {"fF", "pF", "nF", "µF", "mF", "F"},
	"Hz":  {"mHz", "Hz", "kHz", "MHz"},
	"V":   {"V"},
	"J":   {"eV"},
	"m2":  {"nm2", "mm2", "cm2"},
	"H":   {"nH", "µH", "mH", "H"},
	"V/K": {"mV/K"},
	"m-1": {"cm-1"},
	"S/m": {"S/m"},
}

// DisplayUnit picks the unit in which an SI value of this kind reads best.
func DisplayUnit(si float64, kind Kind) string {
	if kind.Shown != "" {
		return kind.Shown
	}
	list, ok := steps[kind.SIUnit]
	if !ok {
		return kind.SIUnit
	}
	best := list[0]
	for _, u := range list {
		if math.Abs(Convert(si, kind, u)) >= 0.9995 {
			best = u
		}
	}
	return best
}

// Format prints an SI value in its display unit: "350 nm", "1.25×10²⁶ m⁻³".
func Format(si float64, kind Kind, digits int) string {
	return FormatIn(si, kind, DisplayUnit(si, kind), digits)
}

// FormatIn prints an SI value in the given unit.
func FormatIn(si float64, kind Kind, unit string, digits int) string {
	text := FormatNumber(Convert(si, kind, unit), digits)
	if unit == "" {
		return text
	}
	return text + " " + PrettyUnit(unit)
}

// FormatInterval prints a value and its interval in one unit, to the digits that
// the interval supports: "0.2217", "0.2194 … 0.2241".
func FormatInterval(si, low, high float64, kind Kind) (value, interval, unit string) {
	unit = DisplayUnit(si, kind)
	v, a, b := Convert(si, kind, unit), Convert(low, kind, unit), Convert(high, kind, unit)
	digits := IntervalDigits(v, a, b)
	return FormatNumber(v, digits), FormatNumber(a, digits) + " … " + FormatNumber(b, digits), PrettyUnit(unit)
}

// IntervalDigits says how many significant digits of v its interval low…high
// supports: to the second digit of the half-width when that begins with 1 or 2,
// else to the first; 2 to 4 digits.
func IntervalDigits(v, low, high float64) int {
	half := math.Abs(high-low) / 2
	if half == 0 || v == 0 || math.IsNaN(half) || math.IsInf(half, 0) {
		return 4
	}
	place := int(math.Floor(math.Log10(half)))
	if half < 2.95*math.Pow10(place) {
		place--
	}
	return min(max(int(math.Floor(math.Log10(math.Abs(v))))-place+1, 2), 4)
}
