package impedance

import (
	"math"
	"strconv"
	"strings"
)

// cellState is what a cell holds.
type cellState int

const (
	cellNumber cellState = iota
	cellNaN              // NaN or infinite, written or overflowed
	cellEmpty
	cellText
)

var minusSigns = strings.NewReplacer("−", "-", "–", "-", "‒", "-")

// parseNumber reads one cell with the given decimal mark. Only plain decimal
// notation counts, with e, E, d or D before an exponent: what strconv accepts
// besides (hexadecimal, underscores) is no measured number.
func parseNumber(cell string, decimal byte) (float64, cellState) {
	s := strings.TrimSpace(cell)
	if s == "" {
		return 0, cellEmpty
	}
	switch strings.ToLower(strings.Trim(s, "+-#.")) {
	case "nan", "inf", "infinity", "1inf", "1nan", "1ind", "1qnan", "ovl", "na", "n/a":
		return math.NaN(), cellNaN
	}
	s = minusSigns.Replace(s)
	digits, mark := 0, 0
	buf := make([]byte, len(s))
	for i := 0; i < len(s); i++ {
		c := s[i]
		switch {
		case c >= '0' && c <= '9':
			digits++
		case c == decimal:
			c = '.'
			mark++
			if i+1 == len(s) && decimal == ',' {
				return 0, cellText // "1," is a cell and a separator
			}
		case c == 'e' || c == 'E' || c == 'd' || c == 'D':
			if digits == 0 {
				return 0, cellText
			}
			c = 'e'
		case c == '+' || c == '-':
		default:
			return 0, cellText
		}
		buf[i] = c
	}
	if digits == 0 || mark > 1 {
		return 0, cellText
	}
	v, err := strconv.ParseFloat(string(buf), 64)
	if math.IsInf(v, 0) {
		return v, cellNaN
	}
	if err != nil {
		return 0, cellText
	}
	return v, cellNumber
}
