package page

import (
	"html"
	"strings"
	"unicode"

	"github.com/vugu/vugu"
)

// pretty turns a symbol such as R_int or λ_eff into markup with the index
// lowered, and keeps numbers and their units on one line.
func pretty(text string) vugu.HTML { return vugu.HTML(raised(lowered(html.EscapeString(text)))) }

// raised sets what follows a ^ as a power: a bracket, without its brackets, or the
// letters and digits up to the next other character.
func raised(text string) string {
	var b strings.Builder
	for {
		head, tail, found := strings.Cut(text, "^")
		b.WriteString(head)
		if !found {
			return b.String()
		}
		power, rest := tail, ""
		if inside, ok := strings.CutPrefix(tail, "("); ok {
			power, rest, _ = strings.Cut(inside, ")")
		} else if end := strings.IndexFunc(tail, func(r rune) bool { return !unicode.IsLetter(r) && !unicode.IsDigit(r) && r != '−' }); end >= 0 {
			power, rest = tail[:end], tail[end:]
		}
		b.WriteString("<sup>" + power + "</sup>")
		text = rest
	}
}

// lowered sets what follows an underscore as an index: up to the next character
// that is no letter, digit, or one of the marks that belong to an index.
func lowered(text string) string {
	var b strings.Builder
	for {
		head, tail, found := strings.Cut(text, "_")
		b.WriteString(head)
		if !found {
			return b.String()
		}
		end := strings.IndexFunc(tail, func(r rune) bool {
			return !(r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z' || r >= '0' && r <= '9' || r == '½' || r == '⊥' || r == '∥' || r == '%')
		})
		if end < 0 {
			end = len(tail)
		}
		b.WriteString("<sub>" + tail[:end] + "</sub>")
		text = tail[end:]
	}
}

// unbroken keeps a number and its unit on one line.
func unbroken(text string) string { return strings.ReplaceAll(text, " ", "\u00a0") }

// Cell is one cell of a table.
type Cell struct {
	HTML  vugu.HTML
	Class string
	Head  bool // names its row or column
}

// Row is one row of a table.
type Row struct {
	Class string
	Cells []Cell
}

// cell makes a plain cell.
func cell(text string) Cell { return Cell{HTML: vugu.HTML(html.EscapeString(unbroken(text)))} }

// wordy makes a cell of running text.
func wordy(text string) Cell { return Cell{HTML: vugu.HTML(html.EscapeString(text)), Class: "text"} }

// rowHead names a row.
func rowHead(text string) Cell { c := cell(text); c.Head = true; return c }

// heads make the head of a table; a name that begins with | heads running text.
func heads(names ...string) (list []Cell) {
	for _, n := range names {
		c := Cell{HTML: pretty(strings.TrimPrefix(n, "|")), Head: true}
		if strings.HasPrefix(n, "|") {
			c.Class = "text"
		}
		list = append(list, c)
	}
	return list
}
