package page

import (
	"fmt"
	"strings"

	"brinkfield/physics/study"
)

// Chain is the row of stations, each with its headline result.
type Chain struct{ App *App }

// links are the stations with what each says.
func (c *Chain) links() []study.Station { return study.Stations() }

func (c *Chain) class(id string) string {
	switch {
	case c.App.wrongIn(id):
		return "link wrong"
	case c.App.Stale():
		return "link stale"
	}
	return "link"
}

func (c *Chain) headline(id string) string {
	if c.App.wrongIn(id) {
		return "a field needs mending"
	}
	if c.App.Result == nil {
		return "…"
	}
	return c.App.Result.Headlines[id]
}

func (c *Chain) current(id string) string {
	if c.App.Station == id {
		return "step"
	}
	return "false"
}

// wrongIn reports a problem in a field of the station.
func (a *App) wrongIn(id string) bool {
	for _, p := range a.Problems {
		if study.StationOf(p.Param) == id {
			return true
		}
	}
	return false
}

// Brief is the line that stands at the foot of a narrow page.
func (a *App) Brief() string {
	if a.Result == nil {
		return "…"
	}
	parts := []string{a.Result.Headlines["boundary"]}
	if n := len(a.Result.Flags); n > 0 {
		parts = append(parts, fmt.Sprintf("%d %s", n, plural(n, "flag")))
	}
	return strings.Join(parts, " · ")
}
