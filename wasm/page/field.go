package page

import (
	"brinkfield/physics/study"
)

// Field is one input: the text, its ±, and what was understood.
type Field struct {
	App   *App
	Param string
}

func (c *Field) field() study.Field { return study.FieldOf(c.Param) }

func (c *Field) reason() string { return c.App.Problems.At(c.Param) }

func (c *Field) class() string {
	if c.reason() != "" {
		return "field wrong"
	}
	return "field"
}

func (c *Field) invalid() string {
	if c.reason() != "" {
		return "true"
	}
	return "false"
}

// label is the name with its symbol.
func (c *Field) label() string {
	f := c.field()
	if f.Symbol == "" {
		return f.Label
	}
	return f.Label + ", " + f.Symbol
}

// understood is the reading in SI, with its ±.
func (c *Field) understood() string {
	u, ok := c.App.Read[c.Param]
	if !ok {
		return ""
	}
	text := u.Text
	if u.Plus > 0 {
		text += " ± " + study.PlusText(c.field(), u)
	}
	return text
}

// drag is the field that dragging its name varies; whole numbers and words are typed.
func (c *Field) drag() string {
	if c.field().Sort == study.Measure {
		return c.Param
	}
	return ""
}

// source says where the value comes from.
func (c *Field) source() string {
	switch {
	case c.understood() == "":
		return ""
	case c.App.Typed.Borrowed(c.Param):
		return "demo value, not yet yours"
	}
	return "entered"
}

func (c *Field) sourceClass() string {
	switch c.source() {
	case "":
		return ""
	case "entered":
		return "source entered"
	}
	return "source borrowed"
}
