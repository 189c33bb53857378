package page

import "brinkfield/physics/study"

// Fields is a group of inputs under a heading; a choice is shown side by side.
type Fields struct {
	App    *App
	Head   string
	Params []string
}

// choice reports that a field is one of a few options.
func (c *Fields) choice(param string) bool { return study.FieldOf(param).Sort == study.Choice }

// pick returns what a choice does.
func (c *Fields) pick(param string) func(string) {
	return func(key string) { c.App.Edit(param, key) }
}

func (c *Fields) field(param string) study.Field { return study.FieldOf(param) }
