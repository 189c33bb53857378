package impedance

import (
	"fmt"
	"math"
	"regexp"
	"strings"
)

// headerReach is how far above the first row a header is looked for.
const headerReach = 4

var (
	slashBlanks   = regexp.MustCompile(`\s*/\s*`)
	bracketBlanks = regexp.MustCompile(`\s+([\[(])`)
)

// findColumns recognises the columns: by header, else by the values; what the
// person says wins over both.
func (r *reader) findColumns() error {
	n := r.widest()
	cols := make([]Column, n)
	for i := range cols {
		cols[i].Number = i + 1
	}
	odd := r.fromHeader(cols)
	if r.header < 0 {
		r.guess(cols)
	}
	if err := r.fromOptions(cols); err != nil {
		return err
	}
	r.dropDoubles(cols)
	r.out.Columns = cols
	for i := range cols {
		if u := odd[i+1]; u != "" && r.opt.Columns[i+1].Quantity == Ignored {
			return r.fail(r.out.HeaderLine, i+1, fmt.Sprintf("the unit (%s) is not one of impedance", clip(u)), "Ohm, kOhm, MOhm or GOhm of the specimen as measured")
		}
	}
	return r.complete(cols)
}

func (r *reader) widest() int {
	n := r.layout.columns
	for k := range r.opt.Columns {
		if k > n && k <= 1000 {
			n = k
		}
	}
	return n
}

// fromHeader looks for the header in the few lines above the first row, comments
// included, and reads it. It returns units that cannot be used, by column.
func (r *reader) fromHeader(cols []Column) map[int]string {
	for i, seen := r.first-1, 0; i >= 0 && seen < headerReach; i-- {
		if strings.TrimSpace(r.lines[i].text) == "" {
			continue
		}
		seen++
		cells := r.headerCells(r.lines[i])
		known := 0
		for _, c := range cells {
			if q, _, odd := readHeader(c); q != Ignored || odd != "" {
				known++
			}
		}
		if r.units < 0 && seen == 1 && r.unitLine(cells) {
			r.units = i
			continue
		}
		if known >= 2 || (known == 1 && len(cells) == r.layout.columns && !r.lines[i].comment) {
			r.header = i
			return r.readHeaders(cols, cells)
		}
	}
	r.units = -1
	return nil
}

// headerCells splits a header; between blanks "f / Hz" and "Z (Ohm)" are one cell.
func (r *reader) headerCells(l line) []string {
	text := l.text
	if r.layout.delimiter == ' ' {
		if wide := regexp.MustCompile(`\s{2,}|\t`).Split(strings.TrimSpace(text), -1); len(wide) == r.layout.columns {
			return wide
		}
		text = slashBlanks.ReplaceAllString(text, "/")
		text = bracketBlanks.ReplaceAllString(text, "$1")
	}
	cells := splitCells(text, r.layout.delimiter)
	if r.layout.delimiter != ' ' && len(cells) == 1 { // a comment head may use blanks above a table of commas
		text = bracketBlanks.ReplaceAllString(slashBlanks.ReplaceAllString(text, "/"), "$1")
		if c := strings.Fields(text); len(c) == r.layout.columns {
			cells = c
		}
	}
	if l.comment && len(cells) == r.layout.columns-1 { // "#" heads the column of numbers
		raw := strings.TrimSpace(l.raw)
		if len(raw) > 1 && raw[0] == '#' && (raw[1] == r.layout.delimiter) {
			cells = append([]string{"#"}, cells...)
		}
	}
	return cells
}

// unitLine: nothing but units, at least two of them.
func (r *reader) unitLine(cells []string) bool {
	n := 0
	for _, c := range cells {
		c = strings.Trim(headerGlyphs.Replace(c), "()[] ")
		if c == "" || c == "-" {
			continue
		}
		if _, _, ok := readUnit(c); !ok {
			return false
		}
		n++
	}
	return n >= 2
}

func (r *reader) readHeaders(cols []Column, cells []string) map[int]string {
	r.out.HeaderLine = r.lines[r.header].number
	var units []string
	if r.units >= 0 {
		units = r.headerCells(r.lines[r.units])
	}
	odd := map[int]string{}
	for i := range cols {
		if i >= len(cells) {
			break
		}
		c := &cols[i]
		c.Header = clip(strings.TrimSpace(cells[i]))
		text := cells[i]
		if i < len(units) && units[i] != "" {
			text += " (" + strings.Trim(units[i], "()[] ") + ")"
		}
		q, u, bad := readHeader(text)
		if bad != "" {
			odd[i+1] = bad
		}
		c.Quantity, c.Unit, c.factor, c.How = q, u.label, u.factor, "header"
	}
	return odd
}

func (r *reader) fromOptions(cols []Column) error {
	for n, choice := range r.opt.Columns {
		if n < 1 || n > len(cols) {
			return r.fail(0, n, fmt.Sprintf("there is no such column (%d)", n), fmt.Sprintf("1 to %d", len(cols)))
		}
		c := &cols[n-1]
		keep := c.Quantity.kind() == choice.Quantity.kind() && choice.Unit == ""
		c.Quantity, c.How = choice.Quantity, "given"
		if !keep {
			c.Unit, c.factor = "", 0
		}
		if choice.Unit == "" || choice.Quantity == Ignored {
			continue
		}
		u, q, ok := readUnit(headerGlyphs.Replace(choice.Unit))
		if !ok || (q.kind() != unitKindOf(choice.Quantity)) || (q == AngularFrequency) != (choice.Quantity == AngularFrequency) {
			return r.fail(0, n, fmt.Sprintf("the unit (%s) is not one of the %s", clip(choice.Unit), choice.Quantity), "Hz, kHz, MHz; rad/s; Ohm, kOhm, MOhm, GOhm; deg, rad; K, °C")
		}
		c.Unit, c.factor = u.label, u.factor
	}
	return nil
}

// dropDoubles keeps one column per quantity, a given one before a found one, and of
// two ways to write the impedance real and imaginary part.
func (r *reader) dropDoubles(cols []Column) {
	seen := map[ColumnQuantity]int{}
	for i := range cols {
		q := cols[i].Quantity.kind()
		if q == Ignored {
			continue
		}
		first, double := seen[q]
		if !double {
			seen[q] = i
			continue
		}
		lose := i
		if cols[i].How == "given" && cols[first].How != "given" {
			lose, seen[q] = first, i
		}
		r.note(float64(cols[lose].Number), "column %d is a second %s and is not used", cols[lose].Number, q)
		cols[lose].Quantity = Ignored
	}
	_, re := seen[RealPart]
	_, im := seen[ImaginaryPart]
	_, mod := seen[Modulus]
	_, ph := seen[Phase]
	polar := mod && ph && (!re || !im || (cols[seen[Modulus]].How == "given" && cols[seen[RealPart]].How != "given"))
	for i := range cols {
		switch q := cols[i].Quantity.kind(); {
		case polar && (q == RealPart || q == ImaginaryPart), !polar && re && im && (q == Modulus || q == Phase):
			cols[i].Quantity = Ignored
		}
	}
}

// complete checks that a frequency and a pair are there and fills in units.
func (r *reader) complete(cols []Column) error {
	has := map[ColumnQuantity]bool{}
	for i := range cols {
		has[cols[i].Quantity.kind()] = true
		r.defaultUnit(&cols[i])
	}
	numeric := r.layout.columns
	switch {
	case !has[Frequency]:
		return r.fail(r.out.HeaderLine, 0, "no frequency column was recognised"+r.headerList(cols), "a column headed f/Hz, frequency (kHz) or omega (rad/s)")
	case has[RealPart] && has[ImaginaryPart], has[Modulus] && has[Phase]:
		return nil
	case numeric < 3:
		return r.fail(r.out.HeaderLine, 0, fmt.Sprintf("only %d columns were found", numeric), "frequency and two columns of impedance")
	}
	return r.fail(r.out.HeaderLine, 0, "no pair of impedance columns was recognised"+r.headerList(cols), "Z' and Z'' or |Z| and phase")
}

func (r *reader) headerList(cols []Column) string {
	if r.header < 0 {
		return ""
	}
	var names []string
	for i, c := range cols {
		if i == 8 {
			names = append(names, "…")
			break
		}
		names = append(names, c.Header)
	}
	return " (" + strings.Join(names, ", ") + ")"
}

func (r *reader) defaultUnit(c *Column) {
	if c.Quantity == Ignored || c.factor != 0 {
		return
	}
	set := func(label string, factor float64) {
		c.Unit, c.factor = label, factor
		c.How += ", unit assumed"
	}
	switch c.Quantity.kind() {
	case Frequency:
		if c.Quantity == AngularFrequency {
			set("rad/s", 1)
		} else {
			set("Hz", 1)
		}
	case Phase:
		if most(r.values(c.Number-1)) <= math.Pi/2*1.02 {
			set("rad", 1)
		} else {
			set("deg", degree)
		}
	case Temperature:
		if v := r.values(c.Number - 1); len(v) > 0 && v[0] > 273.15 && math.Abs(math.Mod(v[0], 1)-0.15) < 1e-6 {
			set("K", 1) // 573.15 was typed in °C and turned into kelvin
		} else {
			set("°C", 1)
		}
	default:
		set("Ω", 1)
	}
}

func most(v []float64) float64 {
	m := 0.0
	for _, x := range v {
		m = math.Max(m, math.Abs(x))
	}
	return m
}

func (r *reader) note(value float64, format string, args ...any) {
	r.out.Notes = append(r.out.Notes, Note{Text: fmt.Sprintf(format, args...), Value: value})
}
