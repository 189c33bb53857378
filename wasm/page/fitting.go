package page

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"brinkfield/physics/impedance"
	"brinkfield/physics/quantity"
	"brinkfield/physics/study"
)

// Spectrum is the index of the spectrum shown, −1: none.
func (a *App) Spectrum() int {
	if a.Result == nil {
		return -1
	}
	return a.Result.View.Spectrum
}

// Evidence is what the spectrum shown says, nil without one.
func (a *App) Evidence() *study.Evidence {
	if i := a.Spectrum(); i >= 0 && i < len(a.Result.Evidence) {
		return &a.Result.Evidence[i]
	}
	return nil
}

// control returns the wishes for the spectrum shown.
func (a *App) control() study.Controls {
	if list := a.Typed.ControlsOf(); a.Spectrum() >= 0 && a.Spectrum() < len(list) {
		return list[a.Spectrum()]
	}
	return study.Controls{}
}

// change edits the wishes for one spectrum.
func (a *App) change(i int, f func(c *study.Controls)) {
	list := a.Typed.ControlsOf()
	if i < 0 || i >= len(list) {
		return
	}
	f(&list[i])
	a.set(a.Typed.WithControls(list), "")
}

// SetArcs sets the number of arcs of the spectrum shown, or of all.
func (a *App) SetArcs(choice string, all bool) {
	n, _ := strconv.Atoi(choice)
	list := a.Typed.ControlsOf()
	for i := range list {
		if all || i == a.Spectrum() {
			list[i].Arcs = n
			list[i].Assign = nil // arcs are counted anew
		}
	}
	a.set(a.Typed.WithControls(list), "")
}

// ArcsChosen is the number of arcs asked for: "auto", "1", …
func (a *App) ArcsChosen() string {
	if n := a.control().Arcs; n > 0 {
		return strconv.Itoa(n)
	}
	return "auto"
}

// SetRole assigns an arc of the spectrum shown; "auto" gives it back to the rule.
func (a *App) SetRole(arc int, choice string) {
	role := map[string]impedance.Role{"interior": impedance.Interior, "boundary": impedance.Boundary, "contact": impedance.Contact}[choice]
	a.change(a.Spectrum(), func(c *study.Controls) {
		if role == impedance.Unassigned {
			delete(c.Assign, arc)
			return
		}
		if c.Assign == nil {
			c.Assign = map[int]impedance.Role{}
		}
		for k, r := range c.Assign {
			if r == role {
				delete(c.Assign, k)
			}
		}
		c.Assign[arc] = role
	})
}

// RoleChosen is what was assigned by hand to an arc.
func (a *App) RoleChosen(arc int) string {
	if r, ok := a.control().Assign[arc]; ok {
		return r.String()
	}
	return "auto"
}

// ToggleOmit leaves a point of a spectrum out of the fit or takes it back.
func (a *App) ToggleOmit(spectrum, point int) {
	a.change(spectrum, func(c *study.Controls) {
		if k := slices.Index(c.Omit, point); k >= 0 {
			c.Omit = slices.Delete(slices.Clone(c.Omit), k, k+1)
			return
		}
		c.Omit = append(slices.Clone(c.Omit), point)
	})
}

// Trim leaves out the points of the spectrum shown, or of all, that lie outside a
// range of frequency; an empty end is open.
func (a *App) Trim(below, above string, all bool) {
	low, err := frequency(below, 0)
	if err == nil {
		var high float64
		if high, err = frequency(above, math.Inf(1)); err == nil {
			a.trim(low, high, all)
			return
		}
	}
	a.problem("The range is not usable: " + plain(err) + ".")
}

// frequency reads one end of the range; open stands for an empty text.
func frequency(text string, open float64) (float64, error) {
	if strings.TrimSpace(text) == "" {
		return open, nil
	}
	v, err := quantity.Parse(text, quantity.Frequency)
	return v.SI, err
}

func (a *App) trim(low, high float64, all bool) {
	list, spectra := a.Typed.ControlsOf(), a.Typed.Spectra()
	for i := range list {
		if !all && i != a.Spectrum() {
			continue
		}
		omit := slices.Clone(list[i].Omit)
		for k, p := range spectra[i].Points {
			if (p.F < low || p.F > high) && !slices.Contains(omit, k) {
				omit = append(omit, k)
			}
		}
		list[i].Omit = omit
	}
	a.set(a.Typed.WithControls(list), "")
}

// TakeBack takes all points of the spectrum shown back into the fit.
func (a *App) TakeBack() {
	a.change(a.Spectrum(), func(c *study.Controls) { c.Omit = nil })
}

// Holdable lists the parameters of the fit shown that may be held.
func (a *App) Holdable() []string {
	list := []string{"lead.R", "lead.L"}
	if e := a.Evidence(); e != nil && e.Fit != nil {
		for _, arc := range e.Fit.Arcs {
			if arc.Role != impedance.Unassigned {
				for _, what := range []string{".R", ".Q", ".n"} {
					list = append(list, arc.Role.String()+what)
				}
			}
		}
	}
	return list
}

// HeldList lists what is held in the spectrum shown.
func (a *App) HeldList() []HeldValue {
	var list []HeldValue
	c := a.control()
	for _, name := range []string{"lead.R", "lead.L", "interior.R", "interior.Q", "interior.n", "boundary.R", "boundary.Q", "boundary.n", "contact.R", "contact.Q", "contact.n"} {
		if v, ok := c.Hold[name]; ok {
			list = append(list, HeldValue{name, strconv.FormatFloat(v, 'g', -1, 64)})
		}
	}
	return list
}

// HeldValue is one held parameter.
type HeldValue struct{ Name, Value string }

// Hold holds a parameter of the spectrum shown at its fitted value, or at the
// text given; an empty name lets nothing change.
func (a *App) Hold(name, text string) {
	v, err := a.fitted(name), error(nil)
	if strings.TrimSpace(text) != "" {
		v, err = heldValue(name, text)
	}
	if err != nil {
		a.problem("The value to hold is not usable: " + plain(err) + ".")
		return
	}
	a.change(a.Spectrum(), func(c *study.Controls) {
		hold := map[string]float64{}
		for k, x := range c.Hold {
			hold[k] = x
		}
		hold[name] = v
		c.Hold = hold
	})
}

// heldValue reads a value to hold in the unit of its parameter; a bare number is SI.
func heldValue(name, text string) (float64, error) {
	kind := quantity.Number
	switch name[strings.IndexByte(name, '.')+1:] {
	case "R":
		kind = quantity.Resistance
	case "L":
		kind = quantity.Inductance
	}
	if v, err := quantity.Parse(text, quantity.Number); err == nil {
		return v.SI, nil
	}
	v, err := quantity.Parse(text, kind)
	return v.SI, err
}

// holdNames says the parameters in words.
var holdNames = func() map[string]string {
	m := map[string]string{"lead.R": "lead resistance", "lead.L": "lead inductance"}
	for _, role := range []string{"interior", "boundary", "contact"} {
		m[role+".R"], m[role+".Q"], m[role+".n"] = role+" resistance", role+" Q", role+" exponent n"
	}
	return m
}()

// Release lets a held parameter go free.
func (a *App) Release(name string) {
	a.change(a.Spectrum(), func(c *study.Controls) {
		hold := map[string]float64{}
		for k, x := range c.Hold {
			if k != name {
				hold[k] = x
			}
		}
		c.Hold = hold
	})
}

// fitted is the fitted value of a parameter by name.
func (a *App) fitted(name string) float64 {
	e := a.Evidence()
	if e == nil || e.Fit == nil {
		return 0
	}
	switch name {
	case "lead.R":
		return e.Fit.LeadR.Value
	case "lead.L":
		return e.Fit.LeadL.Value
	}
	role, what, _ := strings.Cut(name, ".")
	for _, arc := range e.Fit.Arcs {
		if arc.Role.String() == role {
			return map[string]float64{"R": arc.Arc.R, "Q": arc.Arc.Q, "n": arc.Arc.N}[what]
		}
	}
	return 0
}
