package study

import (
	"fmt"
	"maps"
	"slices"
	"strings"

	"brinkfield/physics/impedance"
)

// Inputs are the texts a person typed, by parameter name (± parameters too). A
// missing name means the field's default. Copy with Clone before changing.
type Inputs struct {
	Text map[string]string

	// Own are the spectra of parameter data, decoded once; nil for the demo or none.
	Own []impedance.Spectrum
}

// Defaults are the inputs of the demo case.
func Defaults() Inputs { return Inputs{Text: map[string]string{}} }

// Borrowed reports that a value is the demo's while the spectra are not: nobody
// has said that it holds for this specimen.
func (in Inputs) Borrowed(param string) bool {
	_, typed := in.Text[param]
	return !typed && in.Get("spectra") != "demo" && FieldOf(param).Default != ""
}

// NewCase are the inputs of an empty case: no spectra, the demo's specimen until
// it is typed over.
func NewCase() Inputs {
	return Inputs{Text: map[string]string{"spectra": "none", "title": "New case"}}
}

// Clone copies the inputs; the spectra are shared, they are never changed.
func (in Inputs) Clone() Inputs {
	return Inputs{Text: maps.Clone(in.Text), Own: in.Own}
}

// Get returns the text of a parameter or the field's default.
func (in Inputs) Get(param string) string {
	if t, ok := in.Text[param]; ok {
		return t
	}
	if i, ok := fieldIndex[param]; ok {
		return Fields[i].Default
	}
	return ""
}

// With returns a copy with one parameter set. Choices and controls forget their
// default, so that links stay short; what a person measured is kept even where it
// equals the demo's value.
func (in Inputs) With(param, text string) Inputs {
	out := in.Clone()
	out.set(param, text)
	return out
}

func (in *Inputs) set(param, text string) {
	trimmed := strings.TrimSpace(text)
	f, isField := Field{}, false
	if i, ok := fieldIndex[param]; ok {
		f, isField = Fields[i], true
	}
	typed := isField && (f.Sort == Measure || f.Sort == Integer || f.Sort == Words)
	if trimmed == f.Default && !(typed && trimmed != "") {
		delete(in.Text, param)
		return
	}
	if !typed && isField {
		text = trimmed
	}
	in.Text[param] = text // blanks at the ends of typed texts are kept: a person may be about to go on typing
}

// WithoutControls returns a copy without the wishes for the fit, which speak of
// the spectra that are there.
func (in Inputs) WithoutControls() Inputs {
	out := in.Clone()
	for _, p := range []string{"arcs", "omit", "hold", "assign"} {
		delete(out.Text, p)
	}
	return out
}

// WithSpectra returns a copy that holds these spectra as own data.
func (in Inputs) WithSpectra(spectra []impedance.Spectrum) (Inputs, error) {
	own := make([]impedance.Spectrum, len(spectra))
	for i, s := range spectra { // what a link does not carry is left behind: file names and lines
		own[i] = impedance.Spectrum{T: s.T, Points: make([]impedance.Point, len(s.Points))}
		for k, p := range s.Points {
			own[i].Points[k] = impedance.Point{F: p.F, Z: p.Z}
		}
	}
	data, err := pack(own)
	if err != nil {
		return in, err
	}
	out := in.Clone()
	out.set("spectra", "data")
	out.set("data", data)
	out.Own = own
	return out, nil
}

// Spectra returns the spectra that the inputs name.
func (in Inputs) Spectra() []impedance.Spectrum {
	switch in.Get("spectra") {
	case "demo":
		return demoSpectra()
	case "data":
		return in.Own
	}
	return nil
}

// Problem is an input that cannot be used, at its parameter.
type Problem struct {
	Param string `json:"parameter"`
	Text  string `json:"text"`
}

func (p Problem) Error() string { return fmt.Sprintf("study: %s: %s", p.Param, p.Text) }

// Problems is the error of inputs that cannot be used.
type Problems []Problem

func (p Problems) Error() string {
	var list []string
	for _, one := range p {
		list = append(list, one.Param+": "+one.Text)
	}
	return "study: inputs are not usable: " + strings.Join(list, "; ")
}

// At returns the text of the problem at a parameter, empty if there is none.
func (p Problems) At(param string) string {
	i := slices.IndexFunc(p, func(one Problem) bool { return one.Param == param })
	if i < 0 {
		return ""
	}
	return p[i].Text
}

// Check reads every field and returns what was understood and what is wrong.
func (in Inputs) Check() (map[string]Understood, Problems) {
	read, problems := map[string]Understood{}, Problems(nil)
	for _, f := range Fields {
		u, err := f.Read(in.Get(f.Param), in.Text[f.PlusName])
		if err != nil {
			problems = append(problems, Problem{f.Param, err.Error()})
			continue
		}
		read[f.Param] = u
	}
	problems = append(problems, in.checkTogether(read)...)
	if _, err := parseControls(in, len(in.Spectra())); err != nil {
		problems = append(problems, *err)
	}
	return read, problems
}

// checkTogether finds fields that do not fit each other.
func (in Inputs) checkTogether(read map[string]Understood) (list Problems) {
	say := func(param, format string, args ...any) {
		list = append(list, Problem{param, fmt.Sprintf(format, args...)})
	}
	area, diameter := strings.TrimSpace(in.Get("area")), strings.TrimSpace(in.Get("diameter"))
	switch {
	case area == "" && diameter == "":
		say("area", "the field is empty, expected an area such as 0.5 cm2, or a diameter")
	case area != "" && diameter != "":
		say("diameter", "area and diameter are both given (%q and %q), expected one of them", area, diameter)
	}
	zd, okD := read["dopant_charge"]
	zc, okC := read["carrier_charge"]
	if okD && okC && zd.Value*zc.Value > 0 {
		say("carrier_charge", "carrier and dopant have charges of one sign (%g and %g), expected opposite signs", zc.Value, zd.Value)
		return list
	}
	x, okX := read["dopant"]
	nc, okN := read["cation_sites"]
	n, okS := read["carrier_sites"]
	if okD && okC && okX && okN && okS {
		if c := carriers(x.Value, nc.Value, zd.Value, zc.Value); c >= n.Value {
			say("carrier_sites", "the dopant asks for more carriers than there are sites (%.3g of %.3g m⁻³), expected fewer", c, n.Value)
		}
	}
	if in.Get("spectra") == "data" && len(in.Own) == 0 {
		say("data", "no spectra are given, expected measured data or spectra=demo")
	}
	return list
}
