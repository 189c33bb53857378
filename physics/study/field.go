package study

import (
	"fmt"
	"math"
	"strings"

	q "brinkfield/physics/quantity"
)

// Sort says how a field is typed.
type Sort int

// The sorts of field.
const (
	Measure Sort = iota // a number with a unit
	Integer             // a whole number
	Words               // free text
	Choice              // one of Options
	Control             // structured text written by the page's controls
)

// Option is one choice of a field.
type Option struct{ Key, Label string }

// Field is one input: a parameter of the link, a field of the case file and of the page.
type Field struct {
	Param    string // name in links and files
	Station  string
	Label    string
	Symbol   string
	Sort     Sort
	Kind     q.Kind // of a Measure
	Default  string
	Empty    bool // may be left empty
	Range    Range
	Options  []Option
	Doc      string
	PlusName string // name of the field's ± parameter; empty: it has none
}

// Range bounds a value in SI; the zero value does not bound.
type Range struct {
	Low, High         float64
	OpenLow, OpenHigh bool
	set               bool
}

func above(low, high float64) Range { return Range{low, high, true, false, true} }
func between(low, high float64) Range {
	return Range{low, high, false, false, true}
}
func inside(low, high float64) Range { return Range{low, high, true, true, true} }

func (r Range) holds(v float64) bool {
	if !r.set {
		return true
	}
	lowOK := v > r.Low || (v == r.Low && !r.OpenLow)
	highOK := v < r.High || (v == r.High && !r.OpenHigh)
	return lowOK && highOK
}

func (r Range) text(kind q.Kind) string {
	low, high := "from ", " to "
	if r.OpenLow {
		low = "above "
	}
	if r.OpenHigh {
		high = " and below "
	}
	if math.IsInf(r.High, 1) {
		return low + q.Format(r.Low, kind, 3)
	}
	return low + q.Format(r.Low, kind, 3) + high + q.Format(r.High, kind, 3)
}

var inf = math.Inf(1)

// Fields lists every input in the order of the page. Stations appear in the
// order of the work.
var Fields = []Field{
	{Param: "title", Station: "case", Label: "Case", Sort: Words, Default: "Batch K7, pellet 3", Empty: true, Doc: "Name of the case, printed and saved with it."},

	{Param: "epsr", Station: "specimen", Label: "Permittivity of the host", Symbol: "ε_r", Kind: q.Number, Default: "30", Range: above(1, 1e5), PlusName: "epsr_pm", Doc: "Relative permittivity of the grain, uniform through the layer."},
	{Param: "cation_sites", Station: "specimen", Label: "Cation site density", Symbol: "N_c", Kind: q.NumberDensity, Default: "2.5e28 m-3", Range: between(1e24, 1e30), PlusName: "cation_sites_pm", Doc: "Sites per volume that the dopant is a fraction of."},
	{Param: "carrier_sites", Station: "specimen", Label: "Carrier sublattice density", Symbol: "N", Kind: q.NumberDensity, Default: "5e28 m-3", Range: between(1e24, 1e30), PlusName: "carrier_sites_pm", Doc: "Sites per volume of the mobile carrier's own sublattice."},
	{Param: "dopant", Station: "specimen", Label: "Dopant, site fraction", Symbol: "x", Kind: q.Fraction, Default: "1 %", Range: inside(0, 1), PlusName: "dopant_pm", Doc: "Fraction of the cation sites; c_D = x N_c. Taken as frozen and flat."},
	{Param: "dopant_charge", Station: "specimen", Label: "Dopant charge", Symbol: "z_D", Sort: Integer, Default: "-1", Range: between(-4, 4), Doc: "Effective charge number of the dopant."},
	{Param: "carrier", Station: "specimen", Label: "Mobile carrier", Sort: Words, Default: "V_O••", Doc: "Name of the carrier for labels, Kröger–Vink or plain."},
	{Param: "carrier_charge", Station: "specimen", Label: "Carrier charge", Symbol: "z", Sort: Integer, Default: "2", Range: between(-4, 4), Doc: "Effective charge number of the carrier; opposite in sign to the dopant. c∞ = |z_D| c_D/|z|."},
	{Param: "statistics", Station: "specimen", Label: "Carrier statistics", Sort: Choice, Default: "dilute", Options: []Option{{"dilute", "dilute"}, {"limited", "site-limited"}}, Doc: "Boltzmann, or limited by the sites of the carrier's sublattice."},
	{Param: "grain", Station: "specimen", Label: "Grain size", Symbol: "d", Kind: q.Length, Default: "350 nm", Range: between(1e-9, 1e-2), PlusName: "grain_pm", Doc: "Edge of the cubic grain of the brick layer."},
	{Param: "thickness", Station: "specimen", Label: "Pellet thickness", Symbol: "L", Kind: q.Length, Default: "1.2 mm", Range: between(1e-8, 1), PlusName: "thickness_pm", Doc: "Between the electrodes."},
	{Param: "area", Station: "specimen", Label: "Electrode area", Symbol: "A", Kind: q.Area, Default: "0.5 cm2", Empty: true, Range: between(1e-14, 1), PlusName: "area_pm", Doc: "Give the area or the diameter."},
	{Param: "diameter", Station: "specimen", Label: "or diameter", Symbol: "D", Kind: q.Length, Default: "", Empty: true, Range: between(1e-7, 1), PlusName: "diameter_pm", Doc: "Of a round electrode; A = πD²/4."},
	{Param: "porosity", Station: "specimen", Label: "Porosity", Symbol: "p", Kind: q.Fraction, Default: "0 %", Range: Range{0, 0.6, false, false, true}, PlusName: "porosity_pm", Doc: "Closed pores; conduction is reduced by (1−p)/(1+p/2)."},

	{Param: "spectra", Station: "spectra", Label: "Spectra", Sort: Choice, Default: "demo", Options: []Option{{"demo", "demo case"}, {"data", "own data"}, {"none", "none"}}, Doc: "Where the spectra come from; own data travel in the parameter data."},
	{Param: "data", Station: "spectra", Label: "Measured data", Sort: Control, Empty: true, Doc: "Spectra as text (temperature_K, frequency_Hz, Zre_ohm, Zim_ohm), DEFLATE, base64url."},
	{Param: "arcs", Station: "spectra", Label: "Number of arcs", Sort: Control, Default: "auto", Doc: "auto, or 1 to 3 for all; 4:2 for the fourth spectrum; separated by ;."},
	{Param: "omit", Station: "spectra", Label: "Points left out", Sort: Control, Empty: true, Doc: "Per spectrum, by place from the highest frequency: 4:1,2;5:61."},
	{Param: "hold", Station: "spectra", Label: "Held parameters", Sort: Control, Empty: true, Doc: "Per spectrum: 4:boundary.n=1,interior.R=72000;5:lead.L=0. Names lead.R, lead.L, and R, Q, n of interior, boundary, contact; SI."},
	{Param: "assign", Station: "spectra", Label: "Arcs assigned by hand", Sort: Control, Empty: true, Doc: "Per spectrum, arc 1 the fastest: 4:1=interior,2=boundary."},

	{Param: "route", Station: "boundary", Label: "Barrier by", Sort: Choice, Default: "full", Options: []Option{{"full", "full layer"}, {"depletion", "exact depletion"}, {"short", "short form"}}, Doc: "Which of the three routes feeds the drawing and the profile."},
	{Param: "core_sites", Station: "boundary", Label: "Core sites of the carrier", Symbol: "N_core", Kind: q.SheetDensity, Default: "1e18 m-2", Range: between(1e14, 1e21), PlusName: "core_sites_pm", Doc: "Sites per boundary area that the carrier may fill in the core."},

	{Param: "at", Station: "profile", Label: "Temperature shown", Symbol: "T", Kind: q.Temperature, Default: "300 °C", Range: between(50, 3000), Doc: "Temperature of the drawing and of the profile; with spectra, the nearest measured one."},
	{Param: "barrier", Station: "profile", Label: "Barrier from", Sort: Choice, Default: "spectra", Options: []Option{{"spectra", "the spectra"}, {"potential", "a potential"}, {"charge", "a core charge"}, {"sites", "core sites"}}, Doc: "What sets Φ₀ in the drawing and the profile."},
	{Param: "potential", Station: "profile", Label: "Potential of the core", Symbol: "Φ₀", Kind: q.Potential, Default: "0.22 V", Range: between(-5, 5), Doc: "Used when the barrier is given as a potential."},
	{Param: "core_charge", Station: "profile", Label: "Charge of the core", Symbol: "Q_core", Kind: q.SurfaceCharge, Default: "0.13 C/m2", Range: between(-100, 100), Doc: "Both sides together; used when the barrier is given as a charge."},
	{Param: "segregation", Station: "profile", Label: "Segregation energy", Symbol: "Δg", Kind: q.Energy, Default: "-0.72 eV", Range: between(-5*q.ElementaryCharge, 5*q.ElementaryCharge), Doc: "Of the carrier into the core, negative: attracted; used with the core sites when the barrier comes from them."},
	{Param: "axis", Station: "profile", Label: "Distance axis", Sort: Choice, Default: "linear", Options: []Option{{"linear", "linear"}, {"log", "logarithmic"}, {"debye", "in Debye lengths"}}, Doc: "Of the profile plots."},
}

var fieldIndex = func() map[string]int {
	m := map[string]int{}
	for i, f := range Fields {
		m[f.Param] = i
	}
	return m
}()

// FieldOf returns the field of a parameter; it panics on a name that is not one.
func FieldOf(param string) Field {
	i, ok := fieldIndex[param]
	if !ok {
		panic("study: no field " + param)
	}
	return Fields[i]
}

// Understood is a typed text as the program reads it.
type Understood struct {
	Value float64 // SI
	Plus  float64 // absolute 95 % half-width, SI
	Text  string  // the reading in words
}

// Read checks a typed text and its ±.
func (f Field) Read(text, plus string) (Understood, error) {
	text = strings.TrimSpace(text)
	if text == "" && f.Empty {
		return Understood{Value: math.NaN()}, nil
	}
	switch f.Sort {
	case Choice:
		return f.readChoice(text)
	case Words:
		if len(text) > 200 {
			return Understood{}, fmt.Errorf("text is too long (%d characters), expected at most 200", len(text))
		}
		if text == "" {
			return Understood{}, fmt.Errorf("the field is empty, expected a name")
		}
		return Understood{Value: math.NaN(), Text: text}, nil
	case Control:
		return Understood{Value: math.NaN(), Text: text}, nil
	}
	kind := f.Kind
	if f.Sort == Integer {
		kind = q.Number
		kind.Expected = "a whole number other than 0, such as " + f.Default
	}
	v, err := q.Parse(text, kind)
	if err != nil {
		return Understood{}, plainly(err)
	}
	if f.Sort == Integer && (v.SI != math.Trunc(v.SI) || v.SI == 0) {
		return Understood{}, fmt.Errorf("not a usable charge number (%q), expected %s", text, kind.Expected)
	}
	if !f.Range.holds(v.SI) {
		return Understood{}, fmt.Errorf("value is out of range (%q), expected %s", text, f.Range.text(kind))
	}
	u := Understood{Value: v.SI, Text: understood(v, kind)}
	if f.PlusName != "" {
		if u.Plus, err = q.ParsePlusMinus(plus, kind, v.SI); err != nil {
			return u, plainly(err)
		}
	}
	return u, nil
}

func (f Field) readChoice(text string) (Understood, error) {
	var keys []string
	for _, o := range f.Options {
		if o.Key == text {
			return Understood{Value: math.NaN(), Text: o.Label}, nil
		}
		keys = append(keys, o.Key)
	}
	return Understood{}, fmt.Errorf("choice is not known (%q), expected %s", text, strings.Join(keys, ", "))
}

// plainly drops the package name from an error shown at its field.
func plainly(err error) error {
	return fmt.Errorf("%s", strings.TrimPrefix(err.Error(), "quantity: "))
}

// understood is the SI reading of a typed value, as the field shows it.
func understood(v q.Value, kind q.Kind) string {
	text := q.FormatShort(v.SI)
	if kind.SIUnit != "" {
		text += " " + q.PrettyUnit(kind.SIUnit)
	}
	if kind.SIUnit == "J" {
		text = q.FormatShort(q.Convert(v.SI, kind, "eV")) + " eV = " + text
	}
	return text
}
