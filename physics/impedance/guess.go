package impedance

// guess names the columns of a table without header: one that repeats few values
// is the temperature, one that counts rows is left out, then frequency, real and
// imaginary part in this order.
func (r *reader) guess(cols []Column) {
	var order []int
	t := -1
	for i := range cols {
		v := r.values(i)
		switch {
		case len(cols) > 3 && t < 0 && steady(v):
			t = i
		case len(cols) > 3 && counts(v):
		default:
			order = append(order, i)
		}
	}
	for k, q := range []ColumnQuantity{Frequency, RealPart, ImaginaryPart} {
		if k < len(order) {
			cols[order[k]].Quantity, cols[order[k]].How = q, "guessed from the order"
		}
	}
	if t >= 0 {
		cols[t].Quantity, cols[t].How = Temperature, "guessed from its few values"
	}
}

func (r *reader) values(col int) []float64 {
	var out []float64
	for _, l := range r.lines[r.first:] {
		if l.comment {
			continue
		}
		cells := splitCells(l.text, r.layout.delimiter)
		if col >= len(cells) {
			continue
		}
		if x, st := parseNumber(cells[col], r.layout.decimal); st == cellNumber {
			out = append(out, x)
		}
	}
	return out
}

// steady: plausible temperatures, each held for six rows or more on average.
func steady(v []float64) bool {
	distinct := map[float64]bool{}
	for _, x := range v {
		if x < -273.15 || x > MaxTemperature || x == 0 {
			return false
		}
		distinct[x] = true
	}
	return len(v) >= MinPoints && len(distinct)*MinPoints <= len(v)
}

// counts: 1, 2, 3 … or 0, 1, 2 ….
func counts(v []float64) bool {
	for i, x := range v {
		if x != v[0]+float64(i) {
			return false
		}
	}
	return len(v) > 2 && (v[0] == 0 || v[0] == 1)
}
