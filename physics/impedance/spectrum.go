package impedance

import (
	"math"
	"slices"
)

// Point is one measured impedance.
type Point struct {
	F    float64    // Hz, > 0
	Z    complex128 // Ω; Im Z < 0 is capacitive
	Line int        // line in the file it came from, 0 if none
}

// Spectrum is one frequency sweep at one temperature, highest frequency first.
type Spectrum struct {
	T      float64 // K
	Source string  // file name
	Points []Point
}

// Sort puts the points in canonical order, highest frequency first; points of
// equal frequency keep their order.
func (s *Spectrum) Sort() {
	slices.SortStableFunc(s.Points, func(a, b Point) int {
		switch {
		case a.F > b.F:
			return -1
		case a.F < b.F:
			return 1
		}
		return 0
	})
}

// Window returns the lowest and highest frequency in Hz.
func (s Spectrum) Window() (low, high float64) {
	low, high = math.Inf(1), 0
	for _, p := range s.Points {
		low, high = math.Min(low, p.F), math.Max(high, p.F)
	}
	return low, high
}

// sortSpectra orders by temperature, then by source.
func sortSpectra(all []Spectrum) {
	slices.SortStableFunc(all, func(a, b Spectrum) int {
		switch {
		case a.T < b.T:
			return -1
		case a.T > b.T:
			return 1
		case a.Source < b.Source:
			return -1
		case a.Source > b.Source:
			return 1
		}
		return 0
	})
}
