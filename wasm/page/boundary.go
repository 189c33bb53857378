package page

import (
	"fmt"
	"html"
	"math"
	"strings"

	"github.com/vugu/vugu"

	"brinkfield/physics/quantity"
	"brinkfield/physics/study"
)

// Boundary is the station of the barrier: resistances, three routes, two widths.
type Boundary struct{ App *App }

// at returns a number of the spectrum shown, without a value if there is none.
func (a *App) at(id string) study.Number {
	if a.Result != nil && a.Spectrum() >= 0 {
		if n := a.Result.Number(id, a.Spectrum()+1); n != nil {
			return *n
		}
	}
	return study.Number{ID: id, Label: id, Value: study.Float(math.NaN()), Low: study.Float(math.NaN()), High: study.Float(math.NaN())}
}

// boundaryGroups are the numbers of the spectrum shown, by what they speak of.
var boundaryGroups = []struct {
	head string
	ids  []string
}{
	{"", []string{"phi0_full", "phi0_depletion", "phi0_short", "short_bias", "short_bias_expected"}},
	{"Resistances", []string{"r_bulk", "r_excess", "c_boundary", "blocking", "sigma_bulk", "sigma_total", "sigma_boundary", "side_walls"}},
	{"Core", []string{"core_charge", "core_occupancy", "core_segregation"}},
}

var widthIDs = []string{"width_small_signal", "width_electrical", "width_depletion", "carriers_closing", "carriers_closing_share", "epsilon_arc"}

func (c *Boundary) numbers(ids []string) (list []study.Number) {
	for _, id := range ids {
		if n := c.App.at(id); n.Station != "" {
			list = append(list, n)
		}
	}
	return list
}

// where names the spectrum shown.
func (c *Boundary) where() string {
	if e := c.App.Evidence(); e != nil {
		return study.Celsius(e.Spectrum.T)
	}
	return "no spectra"
}

// rows is the table of all temperatures.
func (c *Boundary) rows() (rows []Row) {
	r := c.App.Result
	if r == nil {
		return nil
	}
	phi := map[string]string{"full": "phi0_full", "depletion": "phi0_depletion", "short": "phi0_short"}[r.Inputs.Get("route")]
	for i, e := range r.Evidence {
		get := func(id string) study.Number {
			if n := r.Number(id, i+1); n != nil {
				return *n
			}
			return study.Number{Value: study.Float(math.NaN())}
		}
		row := Row{Cells: []Cell{rowHead(study.Celsius(e.Spectrum.T))}}
		if i == c.App.Spectrum() {
			row.Class = "current"
		}
		row.Cells = append(row.Cells, barrierCell(get(phi), e.Refused))
		for _, id := range []string{"ratio", "r_bulk", "r_excess", "c_boundary", "n_boundary"} {
			row.Cells = append(row.Cells, numberCell(get(id)))
		}
		if get(phi).Missing() {
			row.Class = strings.TrimSpace(row.Class + " out")
		}
		rows = append(rows, row)
	}
	return rows
}

// barrierCell is the barrier with its interval, or why it is left out.
func barrierCell(n study.Number, refused string) Cell {
	if n.Missing() {
		return wordy("left out: " + refused + n.Reason)
	}
	_, interval, _ := n.Texts()
	return Cell{Class: "text", HTML: vugu.HTML(html.EscapeString(unbroken(n.Text())) + ` <span class="within">` + html.EscapeString(unbroken(interval)) + `</span>`)}
}

func numberCell(n study.Number) Cell {
	c := cell(n.Text())
	if n.Bound == study.AtLeast || n.Bound == study.AtMost {
		c.HTML = `<span class="bound">` + c.HTML + `</span>`
	}
	return c
}

// routeList are the three routes, with what each uses.
var routeList = []struct{ key, id, name, uses string }{
	{"full", "phi0_full", "full layer", "R ratio, d, ε_r, c∞, T, z"},
	{"depletion", "phi0_depletion", "exact depletion", "R, C, T, z"},
	{"short", "phi0_short", "short form", "R, C, T, z"},
}

// routes compares the three routes: barrier, what it uses, and how far it moves
// when one input does.
func (c *Boundary) routes() (rows []Row) {
	if c.App.Result == nil || len(c.App.Result.Moves) == 0 {
		return nil
	}
	value, uses := Row{Class: "current", Cells: []Cell{rowHead("Φ₀")}}, Row{Cells: []Cell{rowHead("uses")}}
	for _, r := range routeList {
		value.Cells = append(value.Cells, numberCell(c.App.at(r.id)))
		uses.Cells = append(uses.Cells, Cell{HTML: pretty(r.uses), Class: "wrap"})
	}
	rows = []Row{value, uses}
	for _, m := range c.App.Result.Moves {
		if m.Stated && !c.moves(m.Input) {
			continue
		}
		change := "+" + strings.TrimPrefix(m.Change, "+")
		if m.Stated {
			change = m.Change
		}
		if m.Route != "full" { // the first route opens a row
			last := &rows[len(rows)-1]
			last.Cells = append(last.Cells, cell(shift(float64(m.Shift))))
			continue
		}
		rows = append(rows, Row{Cells: []Cell{{HTML: pretty(m.Input + ", " + m.Symbol + " " + unbroken(change)), Head: true}, cell(shift(float64(m.Shift)))}})
	}
	return rows
}

// moves reports whether a stated ± moves any route.
func (c *Boundary) moves(input string) bool {
	for _, m := range c.App.Result.Moves {
		if m.Stated && m.Input == input && math.Abs(float64(m.Shift)) > 5e-6 {
			return true
		}
	}
	return false
}

// shift prints a movement of the barrier in mV, 0 where the route does not use the input.
func shift(volt float64) string {
	switch mv := 1e3 * volt; {
	case math.IsNaN(mv):
		return "—"
	case math.Abs(mv) < 0.005:
		return "0"
	case mv > 0:
		return "+" + quantity.FormatNumber(mv, 2) + " mV"
	default:
		return quantity.FormatNumber(mv, 2) + " mV"
	}
}

// widths says in a sentence whether the two roads to the width agree.
func (c *Boundary) widths() (class, title string) {
	gap := c.App.at("width_gap")
	switch {
	case gap.Missing():
		return "verdict", "The widths cannot be compared here"
	case c.App.Result.WidthsAgree(c.App.Spectrum()):
		return "verdict pass", "The two roads agree"
	}
	return "verdict fail", "The two roads disagree"
}

func (c *Boundary) widthsClass() string { class, _ := c.widths(); return class }
func (c *Boundary) widthsTitle() string { _, title := c.widths(); return title }

func (c *Boundary) widthsText() string {
	small, el := c.App.at("width_small_signal"), c.App.at("width_electrical")
	if small.Missing() || el.Missing() {
		return c.App.at("width_gap").Reason
	}
	return fmt.Sprintf("2λ_eff from the barrier is %s, δ from the capacitance %s.", withInterval(small), withInterval(el))
}

func withInterval(n study.Number) string {
	_, interval, _ := n.Texts()
	if interval == "" {
		return unbroken(n.Text())
	}
	return unbroken(n.Text()) + " (" + unbroken(interval) + ")"
}
