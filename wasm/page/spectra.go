package page

import (
	"fmt"
	"html"
	"strings"

	"github.com/vugu/vugu"

	"brinkfield/physics/impedance"
	"brinkfield/physics/quantity"
	"brinkfield/physics/study"
)

// Spectra is the station of the measured impedance: in, tested, split into arcs.
type Spectra struct {
	App      *App
	all      bool   // the number of arcs goes for all spectra
	held     string // parameter to hold
	heldText string // value to hold it at
	below    string // leave out below this frequency
	above    string // leave out above this frequency
}

var arcOptions = []study.Option{{Key: "auto", Label: "auto"}, {Key: "1", Label: "1"}, {Key: "2", Label: "2"}, {Key: "3", Label: "3"}}

var roleOptions = []string{"auto", "interior", "boundary", "contact"}

// arcs are the arcs of the spectrum shown.
func (c *Spectra) arcs() []impedance.FittedArc {
	if e := c.App.Evidence(); e != nil && e.Fit != nil {
		return e.Fit.Arcs
	}
	return nil
}

func (c *Spectra) setArcs(choice string) { c.App.SetArcs(choice, c.all) }

func (c *Spectra) setHeld(name string) { c.held = name }

// roles are the arcs with the role each has, or is given.
func (c *Spectra) roles() (list []correction) {
	for i, a := range c.arcs() {
		id := fmt.Sprintf("role%d", i)
		list = append(list, correction{id, c.arcName(i, a), []Select{{ID: id, Label: "role of arc", Options: roleOptions, Chosen: c.App.RoleChosen(i),
			Pick: func(role string) { c.App.SetRole(i, role) }}}})
	}
	return list
}

// arcName is an arc as the assignment names it.
func (c *Spectra) arcName(i int, a impedance.FittedArc) string {
	return fmt.Sprintf("arc %d, %s", i+1, quantity.Format(a.Arc.Capacitance(), quantity.Capacitance, 2))
}

// where names the spectrum shown.
func (c *Spectra) where() string {
	if e := c.App.Evidence(); e != nil {
		return study.Celsius(e.Spectrum.T)
	}
	return ""
}

// why says how the number of arcs was chosen.
func (c *Spectra) why() string {
	e := c.App.Evidence()
	if e == nil {
		return ""
	}
	if e.Fit == nil {
		return "No fit: " + e.Refused + "."
	}
	var parts []string
	for _, t := range e.Fit.Trials {
		if t.Accepted {
			parts = append([]string{fmt.Sprintf("The rule took %d %s", t.Arcs, plural(t.Arcs, "arc"))}, parts...)
		} else {
			parts = append(parts, fmt.Sprintf("against %d: %s", t.Arcs, t.Why))
		}
	}
	for _, n := range e.Fit.Notes {
		parts = append(parts, n.Text)
	}
	return strings.Join(parts, "; ")
}

func plural(n int, word string) string {
	if n == 1 {
		return word
	}
	return word + "s"
}

// omitted says how many points of the spectrum shown are left out.
func (c *Spectra) omitted() string {
	n := len(c.App.control().Omit)
	switch n {
	case 0:
		return "Click a point in the complex plane to leave it out of the fit."
	case 1:
		return "1 point is left out of the fit; click it again to take it back."
	}
	return fmt.Sprintf("%d points are left out of the fit; click one again to take it back.", n)
}

func (c *Spectra) holdName() string {
	list := c.App.Holdable()
	for _, n := range list {
		if n == c.held {
			return n
		}
	}
	return list[len(list)-1]
}

func (c *Spectra) hold() {
	c.App.Hold(c.holdName(), c.heldText)
	c.heldText = ""
}

// fitTable is the fit of the spectrum shown.
func (c *Spectra) fitRows() (rows []Row) {
	for i, a := range c.arcs() {
		rows = append(rows, Row{Cells: []Cell{rowHead(fmt.Sprint(i + 1)), {HTML: vugu.HTML(html.EscapeString(a.Role.String())), Class: "text"},
			estimate(a.R, quantity.Resistance), estimate(a.C, quantity.Capacitance), estimate(a.N, quantity.Number),
			cell(quantity.Format(a.Arc.Peak(), quantity.Frequency, 2))}})
	}
	if e := c.App.Evidence(); e != nil && e.Fit != nil {
		rows = append(rows, Row{Cells: []Cell{rowHead("lead"), wordy("resistance"), estimate(e.Fit.LeadR, quantity.Resistance), {}, {}, {}}})
		rows = append(rows, Row{Cells: []Cell{rowHead("lead"), wordy("inductance"), estimate(e.Fit.LeadL, quantity.Inductance), {}, {}, {}}})
	}
	return rows
}

// estimate prints a fitted number with its 95 % half-width, or as what it is.
func estimate(e impedance.Estimate, kind quantity.Kind) Cell {
	switch e.Kind {
	case impedance.AtLeast, impedance.AtMost:
		mark := map[impedance.Kind]string{impedance.AtLeast: "≥ ", impedance.AtMost: "≤ "}[e.Kind]
		return Cell{HTML: vugu.HTML(`<span class="bound">` + unbroken(mark+quantity.Format(e.Best(), kind, 3)) + `</span>`)}
	case impedance.Held, impedance.AtBound:
		return Cell{HTML: vugu.HTML(unbroken(quantity.Format(e.Value, kind, 4)) + ` <small>` + e.Kind.String() + `</small>`)}
	}
	unit := quantity.DisplayUnit(e.Value, kind)
	digits := quantity.IntervalDigits(e.Value, e.Low, e.High)
	half := quantity.FormatNumber(quantity.Convert((e.High-e.Low)/2, kind, unit), 2)
	return Cell{HTML: vugu.HTML(unbroken(quantity.FormatIn(e.Value, kind, unit, digits)) + ` <small>±` + "\u00a0" + half + `</small>`)}
}

// verdict is the outcome of the Kramers–Kronig test for the spectrum shown.
func (c *Spectra) verdict() (class, title, text string) {
	e := c.App.Evidence()
	if e == nil || e.Fit == nil {
		return "verdict", "Not tested", "There is no spectrum to test."
	}
	v := e.Validity
	text = fmt.Sprintf("Linear Kramers–Kronig test with %d elements: largest smoothed residual %s of |Z|, limit %s; noise about %s.",
		v.Elements, percentText(v.Worst), percentText(v.Threshold), percentText(v.Noise))
	if v.Pass {
		return "verdict pass", "Valid", text
	}
	var ranges []string
	for _, f := range v.Failing {
		ranges = append(ranges, quantity.Format(f.Low, quantity.Frequency, 2)+" to "+quantity.Format(f.High, quantity.Frequency, 2))
	}
	return "verdict fail", "Not valid " + strings.Join(ranges, ", "), text
}

func (c *Spectra) verdictClass() string { class, _, _ := c.verdict(); return class }
func (c *Spectra) verdictTitle() string { _, title, _ := c.verdict(); return title }
func (c *Spectra) verdictText() string  { _, _, text := c.verdict(); return text }

func percentText(x float64) string { return quantity.FormatNumber(100*x, 2) + "\u00a0%" }

// used says what taking the previewed spectra does.
func (c *Spectra) used() string {
	n := c.App.Preview.Count()
	what := fmt.Sprintf("these %d spectra", n)
	if n == 1 {
		what = "this spectrum"
	}
	if c.canAdd() {
		return fmt.Sprintf("Replace the present %d by %s", len(c.App.Typed.Spectra()), what)
	}
	return "Use " + what
}

// acceptClass makes the safe button the main one.
func (c *Spectra) acceptClass() string {
	if c.canAdd() {
		return "btn"
	}
	return "btn main"
}

func (c *Spectra) files() []*PreviewFile {
	if c.App.Preview == nil {
		return nil
	}
	return c.App.Preview.Files
}

func (c *Spectra) ready() string {
	if c.App.Preview == nil {
		return ""
	}
	return c.App.Preview.Ready()
}

func (c *Spectra) useText() string {
	if c.App.Preview == nil {
		return ""
	}
	return c.used()
}

// canAdd reports whether there are spectra to add to.
func (c *Spectra) canAdd() bool { return c.App.Typed.Get("spectra") == "data" }
