package page

import (
	"fmt"
	"strings"

	"brinkfield/physics/impedance"
	"brinkfield/physics/quantity"
	"brinkfield/physics/study"
)

// FilePreview shows what was understood of one file and lets it be corrected.
type FilePreview struct {
	App   *App
	File  *PreviewFile
	Index int
}

// summary is the file in one line.
func (c *FilePreview) summary() string {
	r := c.File.Reading
	if c.File.Err != "" {
		return "not read"
	}
	var parts []string
	switch {
	case r.TemperatureMissing:
		parts = append(parts, "no temperature")
	case len(r.Groups) == 1:
		parts = append(parts, study.Celsius(r.Groups[0].T))
	default:
		parts = append(parts, fmt.Sprintf("%d temperatures", len(r.Groups)))
	}
	points := 0
	for _, s := range r.Spectra {
		points += len(s.Points)
	}
	parts = append(parts, fmt.Sprintf("%d points", points))
	for _, col := range r.Columns {
		if col.Quantity != impedance.Ignored {
			parts = append(parts, strings.TrimSpace(col.Quantity.String()+" "+quantity.PrettyUnit(col.Unit)))
		}
	}
	if n := len(r.Skipped); n > 0 {
		parts = append(parts, fmt.Sprintf("%d %s left out", n, plural(n, "row")))
	}
	return strings.Join(parts, " · ")
}

// open shows the whole of a file that needs a person, of a file alone, or of one
// that a person opened.
func (c *FilePreview) open() bool {
	whole := c.File.Err != "" || c.File.Reading.TemperatureMissing || len(c.App.Preview.Files) == 1
	return whole != c.App.Opened(c.id("file"))
}

func (c *FilePreview) toggle() { c.App.Toggle(c.id("file")) }

func (c *FilePreview) understood() []string {
	if c.File.Err != "" {
		return nil
	}
	return study.Understanding(c.File.Reading)
}

// correction is one line of what a person may correct.
type correction struct {
	id, label string
	selects   []Select
}

func (c *FilePreview) id(name string) string { return fmt.Sprintf("%s-%d", name, c.Index) }

func (c *FilePreview) key() string { return c.id("correct") }

// corrections are the columns with what they hold and in which unit, the sign and
// the decimal mark.
func (c *FilePreview) corrections() (list []correction) {
	var quantities []string
	for _, q := range columnChoices {
		quantities = append(quantities, q.String())
	}
	for _, col := range c.File.Reading.Columns {
		name := fmt.Sprintf("column %d", col.Number)
		id := c.id(fmt.Sprintf("column%d", col.Number))
		list = append(list, correction{id, strings.TrimSpace(name + " " + col.Header), []Select{
			{ID: id, Label: name, Options: quantities, Chosen: col.Quantity.String(), Pick: func(q string) { c.File.SetColumn(col.Number, q) }},
			{ID: id + "-unit", Label: "unit of " + name, Options: unitChoices(col.Quantity), Chosen: col.Unit, Pick: func(u string) { c.File.SetUnit(col.Number, u) }}}})
	}
	signs := map[string]string{"": "as understood", "as is": "numbers are Z″ (capacitive: negative)", "negated": "numbers are −Z″ (capacitive: positive)"}
	sign := map[impedance.Sign]string{impedance.SignAsIs: "as is", impedance.SignFlipped: "negated"}[c.File.Options.Sign]
	return append(list,
		correction{c.id("sign"), "sign of Z″ or phase", []Select{{ID: c.id("sign"), Label: "sign", Options: []string{"", "as is", "negated"}, Chosen: sign, Names: signs, Pick: c.File.SetSign}}},
		correction{c.id("decimal"), "decimal mark", []Select{{ID: c.id("decimal"), Label: "decimal mark", Options: []string{"", ".", ","}, Chosen: c.File.Options.Decimal,
			Names: map[string]string{"": "as understood", ".": "point", ",": "comma"}, Pick: c.File.SetDecimal}}})
}

func (c *FilePreview) temperatureClass() string {
	if c.File.TypedNo != "" || (c.File.Reading.TemperatureMissing && c.File.Err == "") {
		return "field row wrong"
	}
	return "field row"
}

func (c *FilePreview) temperatureReason() string {
	if c.File.TypedNo != "" {
		return c.File.TypedNo
	}
	if c.File.Reading.TemperatureMissing && c.File.Err == "" {
		return "the file names no temperature; give one such as 300 °C"
	}
	return ""
}
