package impedance

import (
	"fmt"
	"math"
	"strconv"

	"brinkfield/physics/quantity"
)

// sameTemperature is the difference in K below which two files are one temperature.
const sameTemperature = 0.02

// Combine joins several readings into one set, sorted by temperature. Two spectra
// of one temperature from different files are joined when their frequency ranges
// do not overlap (one instrument took over from another), else both are kept; the
// notes say so.
func Combine(readings ...Reading) ([]Spectrum, []Note, error) {
	var all []Spectrum
	var notes []Note
	total := 0
	for _, r := range readings {
		if r.TemperatureMissing {
			return nil, nil, &ReadError{File: r.File, What: "the temperature is not known", Expected: "a temperature column, a line such as T = 300 C, a file name such as pellet_300C.csv, or a typed value"}
		}
		for _, s := range r.Spectra {
			total += len(s.Points)
			all = append(all, s)
		}
	}
	if total > MaxRows {
		return nil, nil, &ReadError{What: fmt.Sprintf("too many points in all files (%d)", total), Expected: fmt.Sprintf("at most %d", MaxRows)}
	}
	sortSpectra(all)
	var out []Spectrum
	for _, s := range all {
		if n := len(out); n > 0 && math.Abs(out[n-1].T-s.T) < sameTemperature && out[n-1].Source != s.Source {
			prev := &out[n-1]
			if !overlap(*prev, s) {
				prev.Points = append(append([]Point(nil), prev.Points...), s.Points...)
				prev.Source += " + " + s.Source
				prev.Sort()
				notes = append(notes, Note{fmt.Sprintf("%s are joined at %.6g °C", prev.Source, s.T-quantity.ZeroCelsius), s.T})
				continue
			}
			notes = append(notes, Note{fmt.Sprintf("%s and %s are both at %.6g °C; both are kept", prev.Source, s.Source, s.T-quantity.ZeroCelsius), s.T})
		}
		out = append(out, s)
	}
	return out, notes, nil
}

func overlap(a, b Spectrum) bool {
	aLow, aHigh := a.Window()
	bLow, bHigh := b.Window()
	return aLow < bHigh && bLow < aHigh
}

// Encode writes spectra as compact text that Read reads back without loss of a
// bit; the lines of origin and the file names are not kept.
func Encode(spectra []Spectrum) []byte {
	b := []byte("# " + canonicalMark + "\nf/Hz,Re Z/ohm,Im Z/ohm\n")
	num := func(x float64) { b = strconv.AppendFloat(b, x, 'g', -1, 64) }
	for _, s := range spectra {
		b = append(b, "# T="...)
		b = strconv.AppendFloat(b, s.T, 'f', -1, 64)
		b = append(b, " K\n"...)
		for _, p := range s.Points {
			num(p.F)
			b = append(b, ',')
			num(real(p.Z))
			b = append(b, ',')
			num(imag(p.Z))
			b = append(b, '\n')
		}
	}
	return b
}
