package study

import (
	"fmt"
	"strings"

	"brinkfield/physics/impedance"
	q "brinkfield/physics/quantity"
)

// Understanding says in words what was understood of a file.
func Understanding(r impedance.Reading) []string {
	var list []string
	say := func(format string, args ...any) { list = append(list, fmt.Sprintf(format, args...)) }
	say("%s text, %s between columns, decimal %s", r.Encoding, r.Delimiter, map[string]string{".": "point", ",": "comma"}[r.Decimal])
	for _, c := range r.Columns {
		head := ""
		if c.Header != "" {
			head = fmt.Sprintf(" %q", c.Header)
		}
		say("column %d%s: %s%s (%s)", c.Number, head, c.Quantity, inUnit(c.Unit), c.How)
	}
	taken := "as written"
	if r.Sign == impedance.SignFlipped {
		taken = "as −Z″, turned"
	}
	say("imaginary part or phase taken %s: %s", taken, r.SignHow)
	for _, g := range r.Groups {
		if g.T > 0 {
			say("%s: %d points", celsius(g.T), g.Points)
		}
	}
	if r.TemperatureMissing {
		say("no temperature was found, please give one")
	} else {
		say("temperature from %s", r.TemperatureSource)
	}
	if r.FrequencyOrder != "" {
		say("frequencies in the file: %s", r.FrequencyOrder)
	}
	for _, n := range r.Notes {
		say("%s", n.Text)
	}
	if r.Duplicates > 0 {
		say("%d points repeat a frequency", r.Duplicates)
	}
	for i, s := range r.Skipped {
		if i == 5 && len(r.Skipped) > 6 {
			say("… and %d more rows left out", len(r.Skipped)-5)
			break
		}
		say("row at line %d left out: %s", s.Line, s.Reason)
	}
	return list
}

func inUnit(unit string) string {
	if unit == "" {
		return ""
	}
	return " in " + q.PrettyUnit(unit)
}

// FindingsText prints findings and flags for a terminal.
func FindingsText(r *Result) string {
	var b strings.Builder
	if title := r.Inputs.Get("title"); title != "" {
		fmt.Fprintf(&b, "%s\n\n", title)
	}
	for _, f := range r.Findings {
		fmt.Fprintf(&b, "  %s\n", f)
	}
	for _, f := range r.Flags {
		fmt.Fprintf(&b, "  ! %s%s\n", f.Text, atText(f))
	}
	return b.String()
}

// atText lists the temperatures of a flag.
func atText(f Flag) string {
	if len(f.At) == 0 {
		return ""
	}
	if len(f.At) == 1 {
		return " (" + celsius(float64(f.At[0])) + ")"
	}
	var list []string
	for _, t := range f.At {
		if t != f.Worst {
			list = append(list, celsius(float64(t)))
		}
	}
	return " (" + celsius(float64(f.Worst)) + "; also " + strings.Join(list, ", ") + ")"
}

// Sentence is the flag as it is shown: its text and where it holds.
func (f Flag) Sentence() string { return f.Text + atText(f) }

// Celsius prints a temperature in K the way stations and findings do: "300 °C".
func Celsius(kelvin float64) string { return celsius(kelvin) }

// ParameterTable writes the parameters of a link and the fields of the case file
// as Markdown, from the tables the program itself uses.
func ParameterTable() string {
	var b strings.Builder
	b.WriteString("| parameter | ± | station | what it is | default |\n|---|---|---|---|---|\n")
	for _, f := range Fields {
		what := f.Label
		if f.Symbol != "" {
			what += ", " + f.Symbol
		}
		if len(f.Options) > 0 {
			var keys []string
			for _, o := range f.Options {
				keys = append(keys, "`"+o.Key+"` "+o.Label)
			}
			what += " (" + strings.Join(keys, "; ") + ")"
		}
		plus := ""
		if f.PlusName != "" {
			plus = "`" + f.PlusName + "`"
		}
		fmt.Fprintf(&b, "| `%s` | %s | %s | %s. %s | %s |\n", f.Param, plus, f.Station, what, cell(f.Doc), cell(f.Default))
	}
	return b.String()
}

// NumberTable writes the numbers of a result as Markdown, each id once.
func NumberTable(r *Result) string {
	var b strings.Builder
	b.WriteString("| number | symbol | unit | of | equation | source |\n|---|---|---|---|---|---|\n")
	seen := map[string]bool{}
	for _, n := range r.Numbers {
		if seen[n.ID] {
			continue
		}
		seen[n.ID] = true
		of := n.Station
		if n.Spectrum > 0 {
			of = "each spectrum"
		}
		e := Equations[n.Equation]
		fmt.Fprintf(&b, "| `%s` %s | %s | %s | %s | %s | %s |\n", n.ID, cell(n.Label), cell(n.Symbol), orDefault(q.PrettyUnit(n.Unit), "1"), of, cell(e.Text), cell(e.Source))
	}
	return b.String()
}

// cell escapes what would end a Markdown cell.
func cell(text string) string { return strings.ReplaceAll(text, "|", "\\|") }

// PlusText prints the ± of a field in the unit it reads best in.
func PlusText(f Field, u Understood) string {
	kind := f.Kind
	if kind.SIUnit == "" { // fractions are shown as they are understood
		return q.FormatShort(u.Plus)
	}
	unit := q.DisplayUnit(u.Plus, kind)
	return q.FormatShort(q.Convert(u.Plus, kind, unit)) + " " + q.PrettyUnit(unit)
}

// StationOf is the station of a parameter or of a ± parameter.
func StationOf(param string) string {
	for _, f := range Fields {
		if f.Param == param || (f.PlusName != "" && f.PlusName == param) {
			return f.Station
		}
	}
	return ""
}

// ValueText prints what was put into an equation, without its symbol.
func (p Put) ValueText() string {
	if p.kind == nil {
		return q.FormatNumber(float64(p.Value), 4)
	}
	return q.Format(float64(p.Value), *p.kind, 4)
}
