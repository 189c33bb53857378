package page

import (
	"encoding/json"
	"math"
	"strconv"
)

// The forms a drawing takes; site/plots/README.md tells their meaning.

type axisSpec struct {
	Label  string   `json:"label,omitempty"`
	Unit   string   `json:"unit,omitempty"`
	Scale  string   `json:"scale,omitempty"`
	Domain *[2]num  `json:"domain,omitempty"`
	Ticks  *[]num   `json:"ticks,omitempty"`
	Top    *topSpec `json:"top,omitempty"`
}

type topSpec struct {
	Fn string `json:"fn"`
}

type seriesSpec struct {
	Name    string   `json:"name"`
	Role    string   `json:"role"`
	Mark    string   `json:"mark"`
	X       nums     `json:"x,omitempty"`
	Y       nums     `json:"y,omitempty"`
	Low     nums     `json:"low,omitempty"`
	High    nums     `json:"high,omitempty"`
	Dash    bool     `json:"dash,omitempty"`
	Hollow  bool     `json:"hollow,omitempty"`
	Faint   bool     `json:"faint,omitempty"`
	Muted   []int    `json:"muted,omitempty"`
	Decades []mark   `json:"decades,omitempty"`
	Label   any      `json:"label,omitempty"`
	Legend  *bool    `json:"legend,omitempty"`
	Tip     []string `json:"tip,omitempty"`
}

type mark struct {
	At    int    `json:"at"`
	Text  string `json:"text"`
	Below bool   `json:"below,omitempty"`
}

type noteSpec struct {
	X      num    `json:"x"`
	Y      num    `json:"y"`
	Text   string `json:"text"`
	Anchor string `json:"anchor,omitempty"`
}

type chartSpec struct {
	Title  string       `json:"title,omitempty"`
	Sub    string       `json:"sub,omitempty"`
	Height int          `json:"height,omitempty"`
	Equal  bool         `json:"equal,omitempty"`
	Zero   bool         `json:"zero,omitempty"`
	X      axisSpec     `json:"x"`
	Y      axisSpec     `json:"y"`
	Series []seriesSpec `json:"series"`
	Notes  []noteSpec   `json:"notes,omitempty"`
}

type coreSpec struct {
	Width     num    `json:"width_nm"`
	Charge    string `json:"charge_text"`
	Sign      int    `json:"sign"`
	Occupancy *num   `json:"occupancy,omitempty"`
}

type carrierSpec struct {
	Name     string `json:"name"`
	Role     string `json:"role"`
	Relative nums   `json:"relative,omitempty"`
	Bulk     string `json:"bulk_text"`
	Mobile   bool   `json:"mobile"`
}

type sectionSpec struct {
	Temperature string        `json:"temperature"`
	Stale       bool          `json:"stale"`
	Note        string        `json:"note,omitempty"`
	Core        coreSpec      `json:"core"`
	X           nums          `json:"x_nm"`
	Potential   nums          `json:"potential_V"`
	Half        *num          `json:"half_nm,omitempty"`
	Phi0        num           `json:"phi0_V"`
	PhiText     string        `json:"phi0_text"`
	Interval    string        `json:"interval_text,omitempty"`
	Carriers    []carrierSpec `json:"carriers"`
	Width       *num          `json:"width_nm,omitempty"`
	WidthText   string        `json:"width_text,omitempty"`
	Debye       num           `json:"debye_nm"`
	DebyeText   string        `json:"debye_text,omitempty"`
}

// num is a number of a drawing: six digits do, and what is no number leaves a gap.
type num float64

func (v num) MarshalJSON() ([]byte, error) { return appendNum(nil, float64(v)), nil }

// nums is a list of them, written without the cost of a call each.
type nums []float64

func (list nums) MarshalJSON() ([]byte, error) {
	b := make([]byte, 0, 10*len(list)+2)
	b = append(b, '[')
	for i, v := range list {
		if i > 0 {
			b = append(b, ',')
		}
		b = appendNum(b, v)
	}
	return append(b, ']'), nil
}

func appendNum(b []byte, v float64) []byte {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return append(b, "null"...)
	}
	return strconv.AppendFloat(b, v, 'g', 7, 64)
}

func scaled(list []float64, by float64) nums {
	out := make(nums, len(list))
	for i, v := range list {
		out[i] = v * by
	}
	return out
}

func ptr[T any](v T) *T { return &v }

func encode(spec any) []byte {
	data, err := json.Marshal(spec)
	if err != nil {
		panic(err) // the forms above always encode
	}
	return data
}
