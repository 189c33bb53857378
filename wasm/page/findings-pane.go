package page

import "brinkfield/physics/study"

// FindingsPane says what a colleague would say.
type FindingsPane struct{ App *App }

func (c *FindingsPane) class() string {
	if c.App.Stale() {
		return "stale"
	}
	return ""
}

func (c *FindingsPane) list() []string {
	if c.App.Result == nil {
		return nil
	}
	return c.App.Result.Findings
}

func (c *FindingsPane) flags() []study.Flag {
	if c.App.Result == nil {
		return nil
	}
	return c.App.Result.Flags
}
