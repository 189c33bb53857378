package impedance

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// canonicalMark is the first line Encode writes: in such a file the sign of Im Z
// is not up for detection.
const canonicalMark = "impedance spectra: Im Z < 0 is capacitive"

// reader carries one file through the stages of Read.
type reader struct {
	name      string
	opt       ReadOptions
	lines     []line
	layout    layout
	first     int // index of the first data line
	header    int // index of the header line, −1 if none
	units     int // index of a line of units under it, −1 if none
	canonical bool
	out       Reading
	rows      []row
}

// row is one data row in SI, sign not yet applied.
type row struct {
	f, a, b, t float64 // b: Im Z or phase as written; t: K or 0
	line       int
	block      int // rises at each line of text that names a temperature
}

// Read reads one file of spectra: any delimited text with a frequency and either
// real and imaginary part or modulus and phase. The Reading says what was
// understood. A row that cannot be used is skipped with its reason; a file of which
// more than half the rows cannot be used is refused. Errors are *ReadError.
func Read(name string, data []byte, opt ReadOptions) (Reading, error) {
	r := &reader{name: name, opt: opt, header: -1, units: -1, out: Reading{File: name}}
	for _, stage := range []func() error{
		r.checkOptions,
		func() error { return r.openText(data) },
		r.findTable,
		r.findColumns,
		r.readRows,
		r.settleSign,
		r.group,
	} {
		if err := stage(); err != nil {
			return Reading{}, err
		}
	}
	return r.out, nil
}

func (r *reader) fail(line, column int, what, expected string) error {
	return &ReadError{File: r.name, Line: line, Column: column, What: what, Expected: expected}
}

func (r *reader) checkOptions() error {
	if d := r.opt.Delimiter; d != "" && (len(d) != 1 || delimiterNames[d[0]] == "") {
		return r.fail(0, 0, fmt.Sprintf("delimiter (%q)", d), `one of , ; | tab or blank`)
	}
	if d := r.opt.Decimal; d != "" && d != "." && d != "," {
		return r.fail(0, 0, fmt.Sprintf("decimal mark (%q)", d), `"." or ","`)
	}
	if r.opt.Decimal != "" && r.opt.Decimal == r.opt.Delimiter {
		return r.fail(0, 0, fmt.Sprintf("delimiter and decimal mark are the same (%q)", r.opt.Decimal), "two different ones")
	}
	if t := r.opt.Temperature; math.IsNaN(t) || t < 0 || t > MaxTemperature {
		return r.fail(0, 0, fmt.Sprintf("temperature (%g K)", t), fmt.Sprintf("0 to %g K", MaxTemperature))
	}
	if r.opt.Sign < SignAuto || r.opt.Sign > SignFlipped {
		return r.fail(0, 0, fmt.Sprintf("sign (%d)", r.opt.Sign), "automatic, as is or flipped")
	}
	for n, c := range r.opt.Columns {
		if c.Quantity < Ignored || c.Quantity > Temperature {
			return r.fail(0, n, fmt.Sprintf("quantity (%d)", c.Quantity), "one of the listed quantities")
		}
	}
	return nil
}

func (r *reader) openText(data []byte) error {
	text, encoding, err := decode(r.name, data)
	if err != nil {
		return err
	}
	r.out.Encoding = encoding
	r.lines, err = splitLines(r.name, text)
	if len(r.lines) > 0 && r.lines[0].comment && r.lines[0].text == canonicalMark {
		r.canonical = true
	}
	return err
}

// findTable settles the layout and where the rows begin.
func (r *reader) findTable() error {
	var delimiter, decimal byte
	if r.opt.Delimiter != "" {
		delimiter = r.opt.Delimiter[0]
	}
	if r.opt.Decimal != "" {
		decimal = r.opt.Decimal[0]
	}
	r.layout = findLayout(r.lines, delimiter, decimal)
	if r.layout.rows == 0 {
		if r.oneColumn(decimal) {
			return r.fail(0, 0, "only one column of numbers was found", "frequency and two columns of impedance")
		}
		return r.fail(0, 0, "no table of numbers was found", "rows of frequency, real and imaginary part (or modulus and phase)")
	}
	r.out.Delimiter, r.out.Decimal = delimiterNames[r.layout.delimiter], string(r.layout.decimal)
	r.first = slices.IndexFunc(r.lines, func(l line) bool { // "12 34" in a head is no row of a wider table
		return !l.comment && r.isRow(l.text) && len(splitCells(l.text, r.layout.delimiter)) == r.layout.columns
	})
	if r.first < 0 { // the sample can hold rows only if a line does
		return r.fail(0, 0, "no table of numbers was found", "rows of frequency and impedance")
	}
	rows := 0
	for _, l := range r.lines[r.first:] {
		if !l.comment && strings.TrimSpace(l.text) != "" {
			rows++
		}
	}
	if rows > MaxRows {
		return tooMany(r.name, rows)
	}
	return nil
}

func (r *reader) isRow(text string) bool {
	cells := splitCells(text, r.layout.delimiter)
	n := countNumbers(cells, r.layout.decimal)
	return n >= 2 && 2*n >= len(cells)
}

// oneColumn: most lines hold a single number.
func (r *reader) oneColumn(decimal byte) bool {
	numbers, others := 0, 0
	for _, s := range sampleOf(r.lines) {
		_, dot := parseNumber(s, '.')
		_, comma := parseNumber(s, ',')
		if dot == cellNumber || comma == cellNumber {
			numbers++
		} else {
			others++
		}
	}
	return numbers > others
}

// readRows reads every row below the header in the units of its columns.
func (r *reader) readRows() error {
	use := map[ColumnQuantity]Column{}
	for _, c := range r.out.Columns {
		if c.Quantity != Ignored {
			use[c.Quantity.kind()] = c
		}
	}
	block := 0
	blockT := 0.0
	_, hasT := use[Temperature]
	pending := []Skipped{}
	for _, l := range r.lines[r.first:] {
		text := strings.TrimSpace(l.text)
		if l.comment || (text != "" && !r.isRow(l.text)) {
			if t, ok := temperatureIn(text); ok && !hasT {
				block, blockT = block+1, t
				continue
			}
			if l.comment {
				continue
			}
		}
		if text == "" {
			pending = append(pending, Skipped{l.number, "blank"})
			continue
		}
		r.out.Skipped = append(r.out.Skipped, pending...) // blank lines at the very end are no rows
		pending = pending[:0]
		r.out.Rows++
		v, reason := r.readRow(l, use)
		if reason != "" {
			r.out.Skipped = append(r.out.Skipped, Skipped{l.number, reason})
			continue
		}
		v.block = block
		if !hasT {
			v.t = blockT
		}
		r.rows = append(r.rows, v)
	}
	return r.enoughRows()
}

func (r *reader) enoughRows() error {
	bad := r.out.Rows - len(r.rows)
	if 2*bad <= r.out.Rows {
		return nil
	}
	for _, s := range r.out.Skipped {
		if s.Reason != "blank" {
			return r.fail(s.Line, 0, fmt.Sprintf("%d of %d rows cannot be used, the first: %s", bad, r.out.Rows, s.Reason), "at most half")
		}
	}
	return r.fail(0, 0, "no row can be used", "frequency and impedance in each")
}

// Ranges outside which a number is an error of the file, not a measurement.
const (
	minHertz, maxHertz = 1e-9, 1e15
	minOhm, maxOhm     = 1e-12, 1e21
)

// readRow reads one row; reason says why it cannot be used.
func (r *reader) readRow(l line, use map[ColumnQuantity]Column) (v row, reason string) {
	cells := splitCells(l.text, r.layout.delimiter)
	v.line = l.number
	for _, q := range []ColumnQuantity{Frequency, RealPart, ImaginaryPart, Modulus, Phase, Temperature} {
		c, ok := use[q]
		if !ok {
			continue
		}
		if c.Number > len(cells) {
			return v, fmt.Sprintf("too few columns (%d), column %d is the %s", len(cells), c.Number, c.Quantity)
		}
		x, state := parseNumber(cells[c.Number-1], r.layout.decimal)
		switch state {
		case cellNaN:
			return v, fmt.Sprintf("the %s is not finite (%s)", c.Quantity, clip(cells[c.Number-1]))
		case cellEmpty:
			return v, fmt.Sprintf("the %s is missing", c.Quantity)
		case cellText:
			return v, fmt.Sprintf("the %s is not a number (%s)", c.Quantity, clip(cells[c.Number-1]))
		}
		x *= c.factor
		switch q {
		case Frequency:
			if v.f = x; c.Quantity == AngularFrequency {
				v.f /= 2 * math.Pi
			}
		case RealPart, Modulus:
			v.a = x
		case ImaginaryPart, Phase:
			v.b = x
		case Temperature:
			if v.t = x; c.Unit == "°C" {
				v.t += 273.15
			}
		}
	}
	_, polar := use[Modulus]
	_, hasT := use[Temperature]
	return v, v.reject(polar, hasT)
}

func (v row) reject(polar, hasT bool) string {
	size := math.Hypot(v.a, v.b)
	if polar {
		size = v.a
	}
	switch {
	case v.f == 0:
		return "the frequency is zero"
	case v.f < 0:
		return fmt.Sprintf("the frequency is negative (%g Hz)", v.f)
	case v.f < minHertz || v.f > maxHertz:
		return fmt.Sprintf("the frequency is out of range (%g Hz)", v.f)
	case size == 0:
		return "the impedance is zero"
	case polar && size < 0:
		return fmt.Sprintf("the modulus is negative (%g Ω)", v.a)
	case size < minOhm || size > maxOhm:
		return fmt.Sprintf("the impedance is out of range (%g Ω)", size)
	case polar && math.Abs(v.b) > 4*math.Pi:
		return fmt.Sprintf("the phase is more than two turns (%.3g rad)", v.b)
	case hasT && (v.t <= 0 || v.t > MaxTemperature):
		return fmt.Sprintf("the temperature is out of range (%g K)", v.t)
	}
	return ""
}

func clip(s string) string {
	r := []rune(s)
	if len(r) > 24 {
		return string(r[:24]) + "…"
	}
	return s
}
