package page

import (
	"brinkfield/physics/study"
)

// NumberRow is one result that opens to its equation, what was put in, its source and flags.
type NumberRow struct {
	App *App
	N   study.Number
}

func (c *NumberRow) key() string { return c.N.Station + "." + c.N.ID }

func (c *NumberRow) class() string {
	if len(c.N.Flags) > 0 {
		return "number flagged"
	}
	return "number"
}

func (c *NumberRow) label() string {
	if c.N.Symbol == "" {
		return c.N.Label
	}
	return c.N.Label + ", " + c.N.Symbol
}

// value is the value with its unit, or why there is none.
func (c *NumberRow) value() string {
	if c.N.Missing() {
		return "—"
	}
	return unbroken(c.N.Text())
}

// note is the interval, the kind of statement, or the reason of a missing value.
func (c *NumberRow) note() string {
	if c.N.Reason != "" {
		return c.N.Reason
	}
	if c.N.Bound == study.Held || c.N.Bound == study.AtBound {
		return string(c.N.Bound)
	}
	if _, interval, _ := c.N.Texts(); interval != "" {
		return "95 %: " + unbroken(interval)
	}
	return ""
}

func (c *NumberRow) source() string {
	if c.N.Source == study.Fitted && !c.N.HasInterval() {
		return "fitted"
	}
	return string(c.N.Source)
}

func (c *NumberRow) equation() study.Equation { return study.Equations[c.N.Equation] }

func (c *NumberRow) toggle() { c.App.Toggle(c.key()) }

// flags are the sentences of the flags that touch the number.
func (c *NumberRow) flags() (list []string) {
	for _, id := range c.N.Flags {
		for _, f := range c.App.Result.Flags {
			if f.ID == id {
				list = append(list, f.Sentence())
			}
		}
	}
	return list
}
