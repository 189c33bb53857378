package study

import (
	"fmt"
	"maps"
	"slices"
	"strconv"
	"strings"

	"brinkfield/physics/impedance"
	q "brinkfield/physics/quantity"
)

// Controls are a person's wishes for the fit of one spectrum.
type Controls struct {
	Arcs   int                    // 0: chosen by the rule
	Omit   []int                  // places from the highest frequency, 0 the first
	Hold   map[string]float64     // by name ("boundary.n"), SI
	Assign map[int]impedance.Role // by arc, 0 the fastest
}

var roleNames = map[string]impedance.Role{"interior": impedance.Interior, "boundary": impedance.Boundary, "contact": impedance.Contact}

// ControlsOf reads the controls of every spectrum; controls that cannot be read
// are reported by Check and are empty here.
func (in Inputs) ControlsOf() []Controls {
	list, _ := parseControls(in, len(in.Spectra()))
	return list
}

// WithControls returns a copy of the inputs with these controls.
func (in Inputs) WithControls(list []Controls) Inputs {
	var arcs, omit, hold, assign []string
	add := func(to *[]string, i int, items []string) {
		if len(items) > 0 {
			*to = append(*to, fmt.Sprintf("%d:%s", i+1, strings.Join(items, ",")))
		}
	}
	for i, c := range list {
		if c.Arcs > 0 {
			add(&arcs, i, []string{strconv.Itoa(c.Arcs)})
		}
		var points, held, roles []string
		for _, p := range slices.Sorted(slices.Values(c.Omit)) {
			points = append(points, strconv.Itoa(p+1))
		}
		for _, name := range slices.Sorted(maps.Keys(c.Hold)) {
			held = append(held, name+"="+strconv.FormatFloat(c.Hold[name], 'g', -1, 64))
		}
		for _, k := range slices.Sorted(maps.Keys(c.Assign)) {
			roles = append(roles, fmt.Sprintf("%d=%s", k+1, c.Assign[k]))
		}
		add(&omit, i, points)
		add(&hold, i, held)
		add(&assign, i, roles)
	}
	out := in.Clone()
	if len(arcs) == len(list) && len(list) > 0 && allSame(list) {
		arcs = []string{strconv.Itoa(list[0].Arcs)}
	}
	out.set("arcs", orDefault(strings.Join(arcs, ";"), "auto"))
	out.set("omit", strings.Join(omit, ";"))
	out.set("hold", strings.Join(hold, ";"))
	out.set("assign", strings.Join(assign, ";"))
	return out
}

func allSame(list []Controls) bool {
	for _, c := range list {
		if c.Arcs != list[0].Arcs {
			return false
		}
	}
	return true
}

func orDefault(text, def string) string {
	if text == "" {
		return def
	}
	return text
}

// parseControls reads the four control parameters for n spectra.
func parseControls(in Inputs, n int) ([]Controls, *Problem) {
	list := make([]Controls, n)
	for _, param := range []string{"arcs", "omit", "hold", "assign"} {
		text := in.Get(param)
		if n == 0 || text == "" {
			continue
		}
		if err := readControl(list, param, text); err != nil {
			return make([]Controls, n), &Problem{param, err.Error()}
		}
	}
	return list, nil
}

func readControl(list []Controls, param, text string) error {
	for _, part := range strings.Split(text, ";") {
		head, body, each := strings.Cut(strings.TrimSpace(part), ":")
		if !each {
			if param != "arcs" {
				return fmt.Errorf("spectrum number is missing (%q), expected %s", part, controlExample[param])
			}
			count, err := readArcs(head)
			if err != nil {
				return err
			}
			for i := range list {
				list[i].Arcs = count
			}
			continue
		}
		i, err := strconv.Atoi(head)
		if err != nil || i < 1 || i > len(list) {
			return fmt.Errorf("spectrum number is not usable (%q), expected 1 to %d", head, len(list))
		}
		for _, item := range strings.Split(body, ",") {
			if err := list[i-1].read(param, strings.TrimSpace(item)); err != nil {
				return err
			}
		}
	}
	return nil
}

var controlExample = map[string]string{"arcs": "auto, 3 or 4:3", "omit": "4:1,2", "hold": "4:boundary.n=1", "assign": "4:1=interior"}

func readArcs(text string) (int, error) {
	if text == "auto" {
		return 0, nil
	}
	n, err := strconv.Atoi(text)
	if err != nil || n < 1 || n > impedance.MaxArcs {
		return 0, fmt.Errorf("number of arcs is not usable (%q), expected auto or 1 to %d", text, impedance.MaxArcs)
	}
	return n, nil
}

func (c *Controls) read(param, item string) error {
	name, value, pair := strings.Cut(item, "=")
	switch param {
	case "arcs":
		n, err := readArcs(item)
		c.Arcs = n
		return err
	case "omit":
		p, err := strconv.Atoi(item)
		if err != nil || p < 1 {
			return fmt.Errorf("point number is not usable (%q), expected 1 for the highest frequency and up", item)
		}
		if !slices.Contains(c.Omit, p-1) {
			c.Omit = append(c.Omit, p-1)
		}
	case "hold":
		v, err := strconv.ParseFloat(value, 64)
		if _, known := holdOf(name, v); !pair || err != nil || !known {
			return fmt.Errorf("held parameter is not usable (%q), expected a name and a value such as boundary.n=1", item)
		}
		if c.Hold == nil {
			c.Hold = map[string]float64{}
		}
		c.Hold[name] = v
	case "assign":
		k, err := strconv.Atoi(name)
		role, known := roleNames[value]
		if err != nil || k < 1 || k > impedance.MaxArcs || !known {
			return fmt.Errorf("assignment is not usable (%q), expected an arc and its role such as 1=interior", item)
		}
		if c.Assign == nil {
			c.Assign = map[int]impedance.Role{}
		}
		c.Assign[k-1] = role
	}
	return nil
}

// holdOf turns a name such as boundary.n into what the fit holds.
func holdOf(name string, value float64) (impedance.Hold, bool) {
	place, what, _ := strings.Cut(name, ".")
	if place == "lead" {
		kind, ok := map[string]impedance.Quantity{"R": impedance.LeadResistance, "L": impedance.LeadInductance}[what]
		return impedance.Hold{Quantity: kind, Value: value}, ok
	}
	role, known := roleNames[place]
	kind, ok := map[string]impedance.Quantity{"R": impedance.ArcResistance, "Q": impedance.ArcQ, "n": impedance.ArcExponent}[what]
	return impedance.Hold{Quantity: kind, Role: role, Value: value}, known && ok
}

// forFit turns the controls into those of the fit; cell is L/A in 1/m.
func (c Controls) forFit(cell float64) impedance.Controls {
	out := impedance.Controls{Arcs: c.Arcs, Omit: c.Omit, Assign: c.Assign, CellConstant: cell}
	for _, name := range slices.Sorted(maps.Keys(c.Hold)) {
		h, _ := holdOf(name, c.Hold[name])
		out.Hold = append(out.Hold, h)
	}
	return out
}

// celsius names a temperature the way stations and findings do.
func celsius(kelvin float64) string {
	c := kelvin - q.ZeroCelsius
	return strings.Replace(strconv.FormatFloat(float64(int(c*100+sign(c)*0.5))/100, 'f', -1, 64), "-", "−", 1) + " °C"
}

func sign(x float64) float64 {
	if x < 0 {
		return -1
	}
	return 1
}
