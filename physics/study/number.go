package study

import (
	"encoding/json"
	"math"

	q "brinkfield/physics/quantity"
)

// Source says where a number comes from.
type Source string

// The sources of a number.
const (
	Entered  Source = "entered"
	Borrowed Source = "demo value" // nobody has typed it
	Handbook Source = "handbook"
	Fitted   Source = "fitted"
	Derived  Source = "derived"
)

// Bound says what sort of statement a number is.
type Bound string

// A number is a value, a limit, or a value that was held or stands at the end of its range.
const (
	Exact   Bound = ""
	AtLeast Bound = "at least"
	AtMost  Bound = "at most"
	Held    Bound = "held"
	AtBound Bound = "at bound"
)

// Put is a number put into an equation.
type Put struct {
	Symbol string  `json:"symbol"`
	Value  Float   `json:"value"`
	Unit   string  `json:"unit,omitempty"`
	kind   *q.Kind // how it is printed
}

// Number is one result.
type Number struct {
	ID          string   `json:"id"`
	Station     string   `json:"station"`
	Label       string   `json:"label"`
	Symbol      string   `json:"symbol,omitempty"`
	Temperature Float    `json:"temperature_K,omitempty"` // 0: of the specimen
	Spectrum    int      `json:"spectrum,omitempty"`      // 1 the first; 0: of the specimen or the layer shown
	Value       Float    `json:"value"`                   // SI
	Unit        string   `json:"unit"`
	Low         Float    `json:"low"` // 95 % interval; null: none
	High        Float    `json:"high"`
	Bound       Bound    `json:"statement,omitempty"`
	Source      Source   `json:"source"`
	Reference   string   `json:"reference,omitempty"` // of a handbook value
	Equation    string   `json:"equation,omitempty"`  // key into the equations
	With        []Put    `json:"with,omitempty"`
	Reason      string   `json:"reason,omitempty"` // why there is no value
	Flags       []string `json:"flags,omitempty"`  // ids

	Kind q.Kind `json:"-"` // how it is printed
}

// Float is a float64 whose NaN is null and whose infinities are texts in JSON.
type Float float64

// MarshalJSON writes the shortest digits that read back the same number.
func (f Float) MarshalJSON() ([]byte, error) {
	switch v := float64(f); {
	case math.IsNaN(v):
		return []byte("null"), nil
	case math.IsInf(v, 1):
		return []byte(`"inf"`), nil
	case math.IsInf(v, -1):
		return []byte(`"-inf"`), nil
	default:
		return json.Marshal(v)
	}
}

// UnmarshalJSON reads what MarshalJSON writes.
func (f *Float) UnmarshalJSON(text []byte) error {
	switch string(text) {
	case "null":
		*f = Float(math.NaN())
	case `"inf"`:
		*f = Float(math.Inf(1))
	case `"-inf"`:
		*f = Float(math.Inf(-1))
	default:
		return json.Unmarshal(text, (*float64)(f))
	}
	return nil
}

// Missing reports that the number has no value.
func (n Number) Missing() bool { return math.IsNaN(float64(n.Value)) }

// HasInterval reports that both ends of the interval are known and differ.
func (n Number) HasInterval() bool {
	return !math.IsNaN(float64(n.Low)) && !math.IsNaN(float64(n.High)) && n.Low != n.High
}

// Texts prints the value, its interval and the unit. One formatter feeds screen,
// print and export.
func (n Number) Texts() (value, interval, unit string) {
	if n.Missing() {
		return "—", "", ""
	}
	if n.HasInterval() && n.Bound == Exact {
		return q.FormatInterval(float64(n.Value), float64(n.Low), float64(n.High), n.Kind)
	}
	unit = q.DisplayUnit(float64(n.Value), n.Kind)
	value = q.FormatNumber(q.Convert(float64(n.Value), n.Kind, unit), 4)
	switch n.Bound {
	case AtLeast:
		value = "≥ " + value
	case AtMost:
		value = "≤ " + value
	}
	return value, "", q.PrettyUnit(unit)
}

// Text prints value and unit in one.
func (n Number) Text() string {
	value, _, unit := n.Texts()
	if unit == "" {
		return value
	}
	return value + " " + unit
}

// put is one number put into an equation.
func put(symbol string, value float64, kind q.Kind) Put {
	return Put{Symbol: symbol, Value: Float(value), Unit: kind.SIUnit, kind: &kind}
}

// Flag is a warning with the number it rests on.
type Flag struct {
	ID      string  `json:"id"`
	Station string  `json:"station"`
	Text    string  `json:"text"`
	Value   Float   `json:"value"`
	Limit   Float   `json:"limit"`
	Unit    string  `json:"unit,omitempty"`
	At      []Float `json:"temperatures_K,omitempty"`
	Worst   Float   `json:"worst_K,omitempty"` // the temperature its numbers belong to
}
