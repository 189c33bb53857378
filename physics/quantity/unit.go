package quantity

import (
	"fmt"
	"strconv"
	"strings"
	"unicode/utf8"
)

// dimension counts the powers of metre, kilogram, second, ampere, kelvin, mole.
type dimension [6]int8

func (d dimension) plus(o dimension, times int8) dimension {
	for i := range d {
		d[i] += times * o[i]
	}
	return d
}

type symbol struct {
	dim    dimension
	factor float64 // to SI
	prefix bool    // whether SI prefixes may stand before it
}

// symbols are the units that may be typed. Exact symbols win over a prefix plus
// a symbol: "min" is no milli-inch and "cd" no centi-day.
var symbols = map[string]symbol{
	"m":    {dimension{1}, 1, true},
	"Å":    {dimension{1}, 1e-10, false},
	"g":    {dimension{0, 1}, 1e-3, true},
	"s":    {dimension{0, 0, 1}, 1, true},
	"min":  {dimension{0, 0, 1}, 60, false},
	"h":    {dimension{0, 0, 1}, 3600, false},
	"A":    {dimension{0, 0, 0, 1}, 1, true},
	"K":    {dimension{0, 0, 0, 0, 1}, 1, true},
	"mol":  {dimension{0, 0, 0, 0, 0, 1}, 1, true},
	"L":    {dimension{3}, 1e-3, true},
	"l":    {dimension{3}, 1e-3, true},
	"M":    {dimension{-3, 0, 0, 0, 0, 1}, 1e3, true},
	"Hz":   {dimension{0, 0, -1}, 1, true},
	"C":    {dimension{0, 0, 1, 1}, 1, true},
	"V":    {dimension{2, 1, -3, -1}, 1, true},
	"Ω":    {dimension{2, 1, -3, -2}, 1, true},
	"ohm":  {dimension{2, 1, -3, -2}, 1, true},
	"Ohm":  {dimension{2, 1, -3, -2}, 1, true},
	"S":    {dimension{-2, -1, 3, 2}, 1, true},
	"F":    {dimension{-2, -1, 4, 2}, 1, true},
	"H":    {dimension{2, 1, -2, -2}, 1, true},
	"J":    {dimension{2, 1, -2}, 1, true},
	"W":    {dimension{2, 1, -3}, 1, true},
	"N":    {dimension{1, 1, -2}, 1, true},
	"Pa":   {dimension{-1, 1, -2}, 1, true},
	"bar":  {dimension{-1, 1, -2}, 1e5, true},
	"atm":  {dimension{-1, 1, -2}, 101325, false},
	"eV":   {dimension{2, 1, -2}, ElementaryCharge, true},
	"%":    {dimension{}, 1e-2, false},
	"mol%": {dimension{}, 1e-2, false},
	"at%":  {dimension{}, 1e-2, false},
	"ppm":  {dimension{}, 1e-6, false},
	"1":    {dimension{}, 1, false},
}

var prefixes = map[string]float64{
	"f": 1e-15, "p": 1e-12, "n": 1e-9, "u": 1e-6, "µ": 1e-6, "m": 1e-3, "c": 1e-2, "d": 1e-1,
	"k": 1e3, "M": 1e6, "G": 1e9, "T": 1e12,
}

// fold maps the look-alikes that keyboards and files produce to one spelling.
var fold = strings.NewReplacer(
	"μ", "µ", "Ω", "Ω", "Å", "Å", "−", "-", "–", "-", "⁻", "-", "℃", "°C", "º", "°",
	"⁰", "0", "¹", "1", "²", "2", "³", "3", "⁴", "4", "⁵", "5", "⁶", "6", "⁷", "7", "⁸", "8", "⁹", "9",
	"×", "x", "·", " ", "⋅", " ", "*", " ", "\u00a0", " ", "\u202f", " ", "\u2009", " ", " per ", "/", "mol %", "mol%", "at %", "at%", "at.%", "at%",
)

// unitFactor reads a compound unit such as "cm2/s", "S cm^-1" or "1/m3".
func unitFactor(text string) (dimension, float64, error) {
	dim, factor := dimension{}, 1.0
	sign := int8(1)
	for _, word := range splitUnit(text) {
		if word == "/" {
			sign = -1
			continue
		}
		name, power := splitPower(word)
		if power == 0 {
			return dim, 0, fmt.Errorf("a power is missing or zero in %q", word)
		}
		s, err := lookUp(name)
		if err != nil {
			return dim, 0, err
		}
		dim = dim.plus(s.dim, sign*power)
		for range max(power, -power) {
			if (sign > 0) == (power > 0) {
				factor *= s.factor
			} else {
				factor /= s.factor
			}
		}
		sign = 1
	}
	return dim, factor, nil
}

func splitUnit(text string) []string {
	return strings.Fields(strings.NewReplacer("/", " / ", "(", " ", ")", " ").Replace(text))
}

// splitPower splits "cm^-3", "cm-3" or "cm3" into "cm" and the power.
func splitPower(word string) (string, int8) {
	if word == "1" {
		return word, 1
	}
	i := strings.IndexAny(word, "^-+0123456789")
	if i <= 0 {
		return word, 1
	}
	p, err := strconv.Atoi(strings.TrimPrefix(word[i:], "^"))
	if err != nil || p < -9 || p > 9 {
		return word, 0
	}
	return word[:i], int8(p)
}

func lookUp(name string) (symbol, error) {
	if s, ok := symbols[name]; ok {
		return s, nil
	}
	_, n := utf8.DecodeRuneInString(name)
	if p, ok := prefixes[name[:n]]; ok {
		if s, ok := symbols[name[n:]]; ok && s.prefix {
			s.factor *= p
			return s, nil
		}
	}
	return symbol{}, fmt.Errorf("unit %q is not known", name)
}
