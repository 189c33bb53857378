package study

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strings"

	q "brinkfield/physics/quantity"
)

// findings says in a few sentences what a colleague would say, with numbers.
func (r *run) findings() []string {
	list := []string{}
	for _, f := range []func() string{r.findShare, r.findBarrier, r.findWidths, r.findCore, r.findShortForm, r.findMoves, r.findLeftOut, r.findGiven} {
		if text := f(); text != "" {
			list = append(list, text)
		}
	}
	if len(list) == 0 {
		list = append(list, "Nothing to say yet: load spectra, or give the barrier another way in Profile.")
	}
	return list
}

func (r *run) findShare() string {
	series := present(r.result.Series("blocking"))
	if len(series) == 0 {
		return ""
	}
	shown := r.atView("blocking")
	if shown == nil {
		shown = &series[len(series)/2]
	}
	text := fmt.Sprintf("Grain boundaries take %s of the ceramic's resistance at %s", shareText(*shown), celsius(float64(shown.Temperature)))
	var ends []string
	for _, n := range []Number{series[0], series[len(series)-1]} {
		if n.Spectrum != shown.Spectrum {
			ends = append(ends, fmt.Sprintf("%s at %s", shareText(n), celsius(float64(n.Temperature))))
		}
	}
	if len(ends) > 0 {
		text += " (" + strings.Join(ends, ", ") + ")"
	}
	return text + "."
}

func shareText(n Number) string { return q.FormatNumber(100*float64(n.Value), 3) + " %" }

func (r *run) findBarrier() string {
	id := columnList[r.routeColumn()].id
	shown := r.atView(id)
	if shown == nil {
		return ""
	}
	start := "Barrier"
	if r.hasWidths() && !r.result.WidthsAgree(r.result.View.Spectrum) {
		start = "Read as a charged barrier (see the widths below),"
	}
	text := start + fmt.Sprintf(" Φ₀ = %s at %s by the %s", withInterval(*shown), celsius(float64(shown.Temperature)), FieldOf("route").optionLabel(r.in.Get("route")))
	if s := r.result.Number("phi0_slope", 0); s != nil && !s.Missing() {
		text += fmt.Sprintf("; it %s by %s mV per kelvin over the range", map[bool]string{true: "falls", false: "rises"}[s.Value < 0], q.FormatNumber(math.Abs(1e3*float64(s.Value)), 2))
	}
	if e := r.result.Number("energy_bulk", 0); e != nil && !e.Missing() {
		text += fmt.Sprintf(". Energies: interior %s", withInterval(*e))
		if g := r.result.Number("energy_boundary", 0); !g.Missing() {
			text += fmt.Sprintf(", boundary %s", withInterval(*g))
		}
	}
	return text + "."
}

func (f Field) optionLabel(key string) string {
	for _, o := range f.Options {
		if o.Key == key {
			return o.Label
		}
	}
	return key
}

func (r *run) findWidths() string {
	gap, small, width := r.atView("width_gap"), r.atView("width_small_signal"), r.atView("width_electrical")
	if gap == nil || small == nil || width == nil {
		return ""
	}
	roads := fmt.Sprintf("%s from the barrier (2λ_eff) and %s from the capacitance", small.Text(), width.Text())
	if r.result.WidthsAgree(r.result.View.Spectrum) {
		return fmt.Sprintf("The two roads to the width agree, %s: what a charged boundary with these carriers shows.", roads)
	}
	share := r.atView("carriers_closing_share")
	if share == nil {
		return fmt.Sprintf("The two roads to the width disagree, %s.", roads)
	}
	if share.Value < leastShare || share.Value > mostShare {
		return fmt.Sprintf("The two roads to the width disagree, %s: no plausible carrier density closes them (%s of the nominal one would). "+
			"That speaks against a charged barrier and for a film or poor contact between grains, or for wrong inputs: grain size, permittivity, area.", roads, shareText(*share))
	}
	return fmt.Sprintf("The two roads to the width disagree, %s: full dopant charge does not fit. Carriers of %s of the nominal ones would close them.", roads, shareText(*share))
}

// Shares of the nominal carriers that a doped ceramic may plausibly keep: below,
// association and segregation do not reach; above, the dopant brings no more.
const (
	leastShare = 0.02
	mostShare  = 2.0
)

// hasWidths reports whether the two roads can be compared at the temperature shown.
func (r *run) hasWidths() bool { return r.atView("width_gap") != nil }

func (r *run) findCore() string {
	charge, theta := r.atView("core_charge"), r.atView("core_occupancy")
	if charge == nil || theta == nil {
		return ""
	}
	sites := q.Format(r.specimen.coreSites, q.SheetDensity, 2)
	if theta.Value >= 1 {
		return fmt.Sprintf("The core carries %s, more than %s sites can hold: enter at least %s.", signed(charge.Text()), sites,
			q.Format(r.specimen.coreSites*float64(theta.Value), q.SheetDensity, 2))
	}
	text := fmt.Sprintf("The core carries %s, %s of its sites if there are %s", signed(charge.Text()), percent(float64(theta.Value)), sites)
	if seg := r.atView("core_segregation"); seg != nil {
		text += fmt.Sprintf(", which asks for a segregation energy of %s", seg.Text())
	}
	return text + "."
}

func signed(text string) string {
	if strings.HasPrefix(text, "−") {
		return text
	}
	return "+" + text
}

func (r *run) findShortForm() string {
	bias := r.atView("short_bias")
	if bias == nil {
		return ""
	}
	if r.hasWidths() && !r.result.WidthsAgree(r.result.View.Spectrum) {
		return fmt.Sprintf("The routes contradict each other too: the time constants alone give %s V (exact depletion).",
			q.FormatNumber(r.atViewValue("phi0_depletion"), 3))
	}
	mv := 1e3 * float64(bias.Value)
	return fmt.Sprintf("The short form alone would read %s mV too %s; exact depletion %s mV.", q.FormatNumber(math.Abs(mv), 2),
		map[bool]string{true: "high", false: "low"}[mv > 0], signed(q.FormatNumber(1e3*float64(r.atViewValue("phi0_depletion")-r.atViewValue("phi0_full"))*sign(r.atViewValue("phi0_full")), 2)))
}

func (r *run) atViewValue(id string) float64 {
	if n := r.atView(id); n != nil {
		return float64(n.Value)
	}
	return math.NaN()
}

// findMoves says what would change the answer: each input moved by a tenth, the
// temperature by 10 K, the one that moves the barrier most first; and, where a ± is
// stated, what the interval is made of.
func (r *run) findMoves() string {
	text := r.movesText(false, func(m Move) string { return map[bool]string{true: " (+10 K)"}[m.Symbol == "T"] })
	if text == "" {
		return ""
	}
	text = "What would change Φ₀, for 10 % more of each: " + text + "."
	if stated := r.movesText(true, func(Move) string { return "" }); stated != "" {
		text += " What the interval is made of: " + strings.ReplaceAll(strings.ReplaceAll(stated, "+", "±"), "−", "±") + ", and the fit."
	}
	return text + " The dopant is taken as frozen and flat."
}

func (r *run) movesText(stated bool, note func(Move) string) string {
	var used []Move
	for _, m := range r.result.Moves {
		if m.Route == r.in.Get("route") && m.Stated == stated && math.Abs(float64(m.Shift)) > 1e-4 {
			used = append(used, m)
		}
	}
	slices.SortStableFunc(used, func(a, b Move) int { return cmp.Compare(math.Abs(float64(b.Shift)), math.Abs(float64(a.Shift))) })
	var list []string
	for _, m := range used[:min(5, len(used))] {
		list = append(list, fmt.Sprintf("%s%s %s mV", strings.ToLower(m.Input[:1])+m.Input[1:], note(m), signed(q.FormatNumber(1e3*float64(m.Shift), 2))))
	}
	return strings.Join(list, ", ")
}

// findLeftOut lists the temperatures without a barrier, with the reason.
func (r *run) findLeftOut() string {
	var list []string
	for i, e := range r.evidence {
		if math.IsNaN(r.phiAt(i)) {
			reason := e.Refused
			if n := r.result.Number("phi0_full", i+1); n != nil {
				reason = n.Reason
			}
			list = append(list, fmt.Sprintf("%s (%s)", celsius(e.Spectrum.T), reason))
		}
	}
	if len(list) == 0 {
		return ""
	}
	return "No barrier is read at " + strings.Join(list, ", ") + "."
}

func (r *run) phiAt(i int) float64 {
	n := r.result.Number("phi0_full", i+1)
	if n == nil {
		return math.NaN()
	}
	return float64(n.Value)
}

// findGiven speaks of a barrier that does not come from spectra.
func (r *run) findGiven() string {
	how := r.in.Get("barrier")
	if how == "spectra" || math.IsNaN(r.result.View.Phi0) {
		return ""
	}
	v := r.result.View
	return fmt.Sprintf("With %s the core stands at %s at %s and holds %s.", FieldOf("barrier").optionLabel(how),
		q.Format(v.Phi0, q.Potential, 3), celsius(v.Temperature), signed(q.Format(v.CoreCharge, q.SurfaceCharge, 3)))
}

// atView returns a number at the temperature of the spectrum shown, nil if it has no value.
func (r *run) atView(id string) *Number {
	i := r.result.View.Spectrum
	if i < 0 || i >= len(r.result.Evidence) {
		return nil
	}
	n := r.result.Number(id, i+1)
	if n == nil || n.Missing() {
		return nil
	}
	return n
}

func present(list []Number) (out []Number) {
	for _, n := range list {
		if !n.Missing() {
			out = append(out, n)
		}
	}
	return out
}

// withInterval prints "0.2217 V (95 %: 0.2215 … 0.2220)".
func withInterval(n Number) string {
	_, interval, _ := n.Texts()
	if interval == "" {
		return n.Text()
	}
	return n.Text() + " (95 %: " + interval + ")"
}

// WidthsAgree reports whether the two roads to the width of a spectrum (0 the
// first) agree: within their interval, or within what an arc's capacitance is good for.
func (r *Result) WidthsAgree(spectrum int) bool {
	gap := r.Number("width_gap", spectrum+1)
	return gap != nil && !gap.Missing() && (math.Abs(float64(gap.Value)) <= arcAllowance || (gap.HasInterval() && gap.Low <= 0 && gap.High >= 0))
}
