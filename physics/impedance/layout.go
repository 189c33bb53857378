package impedance

import (
	"strings"
)

// layout is how the cells of a table are written.
type layout struct {
	delimiter byte // ' ' stands for any run of blanks and tabs
	decimal   byte
	columns   int // cells in most rows
	rows      int // rows with at least two numbers
}

var delimiterNames = map[byte]string{',': "comma", ';': "semicolon", '\t': "tab", '|': "bar", ' ': "blanks"}

// sampleRows bounds how many lines are looked at to find the layout.
const sampleRows = 400

// findLayout tries every delimiter with every decimal mark and takes the pair that
// makes most lines rows of numbers, then the one with most numbers; a tie goes to
// the earlier of the list.
func findLayout(lines []line, delimiter, decimal byte) layout {
	sample := sampleOf(lines)
	var best layout
	bestCells := 0
	for _, d := range []byte{'\t', ';', '|', ',', ' '} {
		for _, m := range []byte{'.', ','} {
			if d == m || (delimiter != 0 && d != delimiter) || (decimal != 0 && m != decimal) {
				continue
			}
			l, cells := tryLayout(sample, d, m)
			if l.rows > best.rows || (l.rows == best.rows && cells > bestCells) {
				best, bestCells = l, cells
			}
		}
	}
	return best
}

func sampleOf(lines []line) []string {
	var plain []string
	for _, l := range lines {
		if !l.comment && strings.TrimSpace(l.text) != "" {
			plain = append(plain, l.text)
		}
	}
	step := max(1, len(plain)/sampleRows)
	var out []string
	for i := 0; i < len(plain); i += step {
		out = append(out, plain[i])
	}
	return out
}

func tryLayout(sample []string, delimiter, decimal byte) (layout, int) {
	l := layout{delimiter: delimiter, decimal: decimal}
	byCount := map[int]int{}
	numbers := 0
	for _, s := range sample {
		cells := splitCells(s, delimiter)
		if n := countNumbers(cells, decimal); n >= 2 && 2*n >= len(cells) {
			l.rows++
			numbers += n
			byCount[len(cells)]++
		}
	}
	most := 0
	for n, rows := range byCount {
		if rows > most || (rows == most && n > l.columns) {
			most, l.columns = rows, n
		}
	}
	return l, numbers
}

func countNumbers(cells []string, decimal byte) int {
	n := 0
	for _, c := range cells {
		if _, st := parseNumber(c, decimal); st == cellNumber || st == cellNaN {
			n++
		}
	}
	return n
}

// splitCells cuts a line; a delimiter inside double quotes is part of the cell. An
// empty last cell (a trailing delimiter) is dropped.
func splitCells(s string, delimiter byte) []string {
	if delimiter == ' ' {
		out := strings.Fields(s)
		for i := range out {
			out[i] = unquote(out[i])
		}
		return out
	}
	if delimiter == '|' {
		s = strings.Trim(strings.TrimSpace(s), "|")
	}
	var out []string
	quoted, from := false, 0
	for i := 0; i < len(s); i++ {
		switch {
		case s[i] == '"':
			quoted = !quoted
		case s[i] == delimiter && !quoted:
			out = append(out, unquote(s[from:i]))
			from = i + 1
		}
	}
	last := unquote(s[from:])
	if last != "" || len(out) == 0 {
		out = append(out, last)
	}
	return out
}

func unquote(s string) string {
	s = strings.TrimSpace(s)
	if len(s) >= 2 && s[0] == '"' && s[len(s)-1] == '"' {
		return strings.TrimSpace(s[1 : len(s)-1])
	}
	return s
}
