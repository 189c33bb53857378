package page

import "brinkfield/physics/study"

// Choice is a field with a few options.
type Choice struct {
	App   *App
	Param string
}

func (c *Choice) options() []study.Option { return study.FieldOf(c.Param).Options }

func (c *Choice) chosen(key string) bool { return c.App.Typed.Get(c.Param) == key }

func (c *Choice) label() string { return study.FieldOf(c.Param).Label }
