package quantity

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"
)

// Value is a quantity as a person typed it and as the program understood it.
type Value struct {
	Text string  // as typed
	SI   float64 // in the kind's SI unit
	Unit string  // the unit that was typed, for printing it back; may be empty
}

// Error says what is wrong with a typed quantity and what was expected there.
type Error struct {
	Text, What, Expected string
}

func (e *Error) Error() string {
	return fmt.Sprintf("quantity: %s (%q), expected %s", e.What, e.Text, e.Expected)
}

// numberPattern takes 3, 3.5, .5, 1e-6, 1.25x10^26, 1.25×10²⁶ and, with one
// comma and no point, a decimal comma.
var numberPattern = regexp.MustCompile(`^([+-]?(?:\d+[.,]?\d*|[.,]\d+))(?:[eE]([+-]?\d+)|\s*x\s*10\^?([+-]?\d+))?`)

// Parse reads a number with a unit. The error is an *Error.
func Parse(text string, kind Kind) (Value, error) {
	fail := func(what string) (Value, error) {
		return Value{Text: text}, &Error{Text: text, What: what, Expected: kind.Expected}
	}
	folded := strings.TrimSpace(fold.Replace(text))
	if folded == "" {
		return fail("the field is empty")
	}
	m := numberPattern.FindStringSubmatch(folded)
	if m == nil {
		return fail("no number found")
	}
	number, err := readNumber(m)
	if err != nil {
		return fail(err.Error())
	}
	unit := strings.TrimSpace(folded[len(m[0]):])
	if strings.HasPrefix(unit, ".") || strings.HasPrefix(unit, ",") {
		return fail("the number has two decimal marks")
	}
	si, err := toSI(number, unit, kind)
	if err != nil {
		return fail(err.Error())
	}
	if math.IsInf(si, 0) || math.IsNaN(si) {
		return fail("the number is out of range")
	}
	return Value{Text: text, SI: si, Unit: unit}, nil
}

func readNumber(m []string) (float64, error) {
	mantissa, power := m[1], m[2]+m[3]
	if i := strings.IndexByte(mantissa, ','); i >= 0 {
		// "1,000" may mean a thousand or one: refuse to guess.
		if len(mantissa)-i == 4 && strings.Trim(mantissa[:i], "+-0") != "" {
			return 0, fmt.Errorf("the comma may be a decimal mark or a thousands mark; write %s or %s",
				strings.Replace(mantissa, ",", "", 1), strings.Replace(mantissa, ",", ".", 1))
		}
		mantissa = strings.Replace(mantissa, ",", ".", 1)
	}
	if power != "" {
		mantissa += "e" + power
	}
	v, err := strconv.ParseFloat(mantissa, 64)
	if err != nil {
		return 0, fmt.Errorf("the number is out of range")
	}
	return v, nil
}

func toSI(number float64, unit string, kind Kind) (float64, error) {
	if unit == "" {
		if kind.bare {
			return number, nil
		}
		return 0, fmt.Errorf("the unit is missing")
	}
	if kind.offset && (unit == "°C" || unit == "C" || unit == "degC") {
		return number + ZeroCelsius, nil
	}
	dim, factor, err := unitFactor(unit)
	if err != nil {
		return 0, err
	}
	if kind.molar && dim == kind.dim.plus(dimension{0, 0, 0, 0, 0, 1}, -1) {
		return number * factor / Avogadro, nil
	}
	if dim != kind.dim {
		return 0, fmt.Errorf("%q is not a unit of %s", unit, kind.Name)
	}
	return number * factor, nil
}

// ParsePlusMinus reads the stated uncertainty of a value: a 95 % half-width,
// absolute in a unit of the kind ("30 nm", for temperatures "2 K") or relative
// ("10 %"). An empty text means none: 0. The result is absolute, SI, and never negative.
func ParsePlusMinus(text string, kind Kind, value float64) (float64, error) {
	folded := strings.TrimSpace(strings.TrimLeft(fold.Replace(text), "±+ -"))
	if folded == "" {
		return 0, nil
	}
	expected := "a 95 % half-width such as 10 % or one in the unit of the value"
	if strings.HasSuffix(folded, "%") && kind.Name != Fraction.Name {
		p, err := Parse(folded, Fraction)
		if err != nil {
			return 0, &Error{Text: text, What: "the uncertainty is not understood", Expected: expected}
		}
		return math.Abs(p.SI * value), nil
	}
	kind.offset = false
	if kind.Name == Fraction.Name {
		kind.Expected = "an uncertainty as a fraction, in the same terms as the value (0.001 or 0.1 %)"
	}
	if kind.SIUnit == "K" {
		folded = strings.TrimSuffix(strings.ReplaceAll(folded, "°C", "K"), " ")
	}
	v, err := Parse(folded, kind)
	if err != nil {
		e := err.(*Error)
		return 0, &Error{Text: text, What: e.What, Expected: expected}
	}
	return math.Abs(v.SI), nil
}
