package study

import (
	"fmt"
	"math"
	"strings"

	"brinkfield/physics/impedance"
	q "brinkfield/physics/quantity"
)

// Limits of the flags.
const (
	siteShareLimit    = 0.1  // site fraction above which dilute statistics mislead
	fieldLimit        = 1e9  // V/m
	overlapDebye      = 10.0 // grain over Debye lengths
	overlapWidth      = 4.0  // grain over depleted width of one side
	permittivityLimit = 0.1  // relative difference of arc and entered permittivity
	sideWallLimit     = 0.02
	exponentLimit     = 0.97
	misfit            = 3.0 // scatter about the fit over the noise of the data

	// arcAllowance is how far the capacitance read from a depletion layer's arc may
	// stand from its small-signal capacitance: the arc is not exactly one R and C.
	arcAllowance = 0.03
)

// raise adds a flag, or a temperature to one that is there; value is kept where
// it is farthest from the limit.
func (r *run) raise(f Flag, kelvin float64) {
	for i := range r.result.Flags {
		have := &r.result.Flags[i]
		if have.ID != f.ID {
			continue
		}
		if math.Abs(float64(f.Value-f.Limit)) > math.Abs(float64(have.Value-have.Limit)) {
			have.Text, have.Value, have.Limit, have.Worst = f.Text, f.Value, f.Limit, Float(kelvin)
		}
		if kelvin > 0 {
			have.At = append(have.At, Float(kelvin))
		}
		return
	}
	if kelvin > 0 {
		f.At, f.Worst = []Float{Float(kelvin)}, Float(kelvin)
	}
	r.result.Flags = append(r.result.Flags, f)
}

// raiseFlags says when not to believe the result, each with its number.
func (r *run) raiseFlags() {
	r.flagBorrowed()
	for i, e := range r.evidence {
		r.flagSpectrum(e)
		if e.Fit != nil {
			r.flagRow(i)
		}
	}
	r.flagLayer()
	for i := range r.result.Numbers {
		r.result.Numbers[i].Flags = r.flagsOf(r.result.Numbers[i])
	}
}

// touched says which numbers a flag speaks of.
var touched = map[string][]string{
	"not_valid":     {"r_interior", "r_boundary", "phi0_full", "phi0_short", "phi0_depletion"},
	"misfit":        {"r_interior", "r_boundary", "noise", "phi0_full", "phi0_short", "phi0_depletion", "sigma_bulk", "sigma_total"},
	"spread":        {"n_boundary", "phi0_full", "phi0_short", "phi0_depletion"},
	"window":        {"r_interior", "sigma_bulk"},
	"widths":        {"width_small_signal", "width_electrical", "width_gap", "phi0_full", "core_charge"},
	"permittivity":  {"epsilon_arc"},
	"side_walls":    {"side_walls", "sigma_bulk"},
	"core_overfull": {"core_occupancy"},
	"spacing":       {"debye", "phi0_full"},
	"sites":         {"core_ratio", "site_share"},
	"overlap":       {"half_distance", "percent_distance", "phi0_full"},
	"field":         {"field"},
}

func (r *run) flagsOf(n Number) (ids []string) {
	for _, f := range r.result.Flags {
		for _, id := range touched[f.ID] {
			if id == n.ID && (n.Temperature == 0 || len(f.At) == 0 || containsFloat(f.At, n.Temperature)) {
				ids = append(ids, f.ID)
			}
		}
	}
	return ids
}

func containsFloat(list []Float, v Float) bool {
	for _, x := range list {
		if math.Abs(float64(x-v)) < 1e-6 {
			return true
		}
	}
	return false
}

// flagBorrowed names what is still the demo's in a case of one's own.
func (r *run) flagBorrowed() {
	if len(r.evidence) == 0 {
		return
	}
	var list []string
	for _, p := range []string{"epsr", "cation_sites", "carrier_sites", "dopant", "grain", "thickness", "area", "core_sites"} {
		if r.in.Borrowed(p) {
			f := FieldOf(p)
			list = append(list, fmt.Sprintf("%s %s", strings.ToLower(f.Label[:1])+f.Label[1:], f.Default))
		}
	}
	if len(list) > 0 {
		r.raise(Flag{ID: "borrowed", Station: "specimen", Text: "These values are still the demo's, not yours: " + strings.Join(list, ", ") + ".",
			Value: Float(len(list)), Limit: 0, Unit: "fields"}, 0)
	}
}

func (r *run) flagSpectrum(e Evidence) {
	t := e.Spectrum.T
	if e.Fit == nil {
		r.raise(Flag{ID: "refused", Station: "spectra", Text: fmt.Sprintf("No fit: %s.", e.Refused),
			Value: Float(len(e.Spectrum.Points)), Limit: impedance.MinFitPoints, Unit: "points"}, t)
		return
	}
	if !e.Validity.Pass {
		r.raise(Flag{ID: "not_valid", Station: "spectra",
			Text:  fmt.Sprintf("Linear Kramers–Kronig test not passed: %s.", failing(e.Validity)),
			Value: Float(e.Validity.Worst), Limit: Float(e.Validity.Threshold)}, t)
	}
	if s, limit := e.Fit.Sigma, misfit*e.Validity.Noise; s > limit && s > 0.005 {
		r.raise(Flag{ID: "misfit", Station: "spectra",
			Text:  fmt.Sprintf("The arcs do not describe the spectrum: scatter about the fit %s of |Z|, noise of the data %s. Numbers from this fit are not to be trusted.", percent(s), percent(e.Validity.Noise)),
			Value: Float(s), Limit: Float(limit)}, t)
	}
	if b := e.Fit.Arc(impedance.Boundary); b != nil && b.N.Value < exponentLimit {
		r.raise(Flag{ID: "spread", Station: "spectra",
			Text:  fmt.Sprintf("The boundary arc is depressed, n = %s: boundaries differ, and Φ₀ is their mean weighted by resistance.", q.FormatNumber(b.N.Value, 3)),
			Value: Float(b.N.Value), Limit: exponentLimit}, t)
	}
	if i := e.Fit.Arc(impedance.Interior); i != nil && !i.R.Resolved() {
		_, top := e.Spectrum.Window()
		r.raise(Flag{ID: "window", Station: "spectra",
			Text: fmt.Sprintf("The interior arc is not held by the frequency window (top of the arc near %s, window to %s).",
				q.Format(i.Peak.Value, q.Frequency, 2), q.Format(top, q.Frequency, 2)),
			Value: Float(i.Peak.Value), Limit: Float(top), Unit: "Hz"}, t)
	}
}

func (r *run) flagRow(i int) {
	row := &r.rows[i]
	v := &row.v
	if gap := v[cGap]; !math.IsNaN(gap) && !r.result.WidthsAgree(i) {
		r.raise(Flag{ID: "widths", Station: "boundary",
			Text: fmt.Sprintf("The two roads to the width disagree: %s from the barrier, %s from the capacitance. Carriers of %s of the nominal %s would close them.",
				q.Format(v[cWidthSmall], q.Length, 3), q.Format(v[cWidth], q.Length, 3), percent(v[cClosingShare]), q.Format(r.specimen.carrierDensity(), q.NumberDensity, 3)),
			Value: Float(gap), Limit: arcAllowance}, row.T)
	}
	if off := v[cEpsilon]/r.specimen.epsr - 1; math.Abs(off) > permittivityLimit {
		r.raise(Flag{ID: "permittivity", Station: "boundary",
			Text:  fmt.Sprintf("The interior arc gives a permittivity of %s, entered is %s.", q.FormatNumber(v[cEpsilon], 3), q.FormatNumber(r.specimen.epsr, 3)),
			Value: Float(v[cEpsilon]), Limit: Float(r.specimen.epsr * (1 + math.Copysign(permittivityLimit, off)))}, row.T)
	}
	if math.Abs(v[cSideWalls]) > sideWallLimit {
		r.raise(Flag{ID: "side_walls", Station: "boundary",
			Text:  fmt.Sprintf("Side walls along the current change the grains' conduction by %s; the barrier is read without them.", percent(v[cSideWalls])),
			Value: Float(v[cSideWalls]), Limit: sideWallLimit}, row.T)
	}
	if v[cOccupancy] >= 1 {
		r.raise(Flag{ID: "core_overfull", Station: "boundary",
			Text:  fmt.Sprintf("The core would hold %s carriers per site: more core sites, or another charge.", q.FormatNumber(v[cOccupancy], 3)),
			Value: Float(v[cOccupancy]), Limit: 1}, row.T)
	}
}

// flagLayer judges the layer that is shown.
func (r *run) flagLayer() {
	s, view := r.specimen, r.result.View
	if math.IsNaN(view.Phi0) {
		return
	}
	spacing := math.Pow(s.cationSites, -1.0/3)
	if view.Debye < spacing {
		r.raise(Flag{ID: "spacing", Station: "profile",
			Text:  fmt.Sprintf("The Debye length %s is below the spacing of cation sites %s: a continuum layer is at its limit.", q.Format(view.Debye, q.Length, 3), q.Format(spacing, q.Length, 3)),
			Value: Float(view.Debye), Limit: Float(spacing), Unit: "m"}, view.Temperature)
	}
	top := s.carrierDensity() / s.carrierSites
	if len(view.Profile.Relative) > 0 && len(view.Profile.Relative[0]) > 0 {
		top *= math.Max(1, view.Profile.Relative[0][0])
	}
	if !s.limited && top > siteShareLimit {
		r.raise(Flag{ID: "sites", Station: "profile",
			Text:  fmt.Sprintf("Dilute statistics put %s carriers on a site; switch to site-limited to see the difference.", q.FormatNumber(top, 3)),
			Value: Float(top), Limit: siteShareLimit}, view.Temperature)
	}
	if d := s.brick.Grain; d < overlapDebye*view.Debye || d < overlapWidth*view.Width/2 {
		limit := math.Max(overlapDebye*view.Debye, overlapWidth*orZero(view.Width)/2)
		r.raise(Flag{ID: "overlap", Station: "profile",
			Text:  fmt.Sprintf("The layers of one grain overlap: grain %s, layers need %s. The result holds for grains above that.", q.Format(d, q.Length, 3), q.Format(limit, q.Length, 3)),
			Value: Float(d), Limit: Float(limit), Unit: "m"}, view.Temperature)
	}
	if f := view.Profile.Field; len(f) > 0 && f[0] > fieldLimit {
		r.raise(Flag{ID: "field", Station: "profile",
			Text:  fmt.Sprintf("The field at the core is %s: permittivity and site energies will not be those of the bulk.", q.FormatIn(f[0], q.Field, "V/m", 2)),
			Value: Float(f[0]), Limit: fieldLimit, Unit: "V/m"}, view.Temperature)
	}
}

// failing names the frequency ranges that violate the relations.
func failing(v impedance.Validity) string {
	var list []string
	for _, f := range v.Failing {
		list = append(list, q.Format(f.Low, q.Frequency, 2)+" to "+q.Format(f.High, q.Frequency, 2))
	}
	return fmt.Sprintf("residual up to %s at %s", percent(v.Worst), orDefault(strings.Join(list, ", "), "no single range"))
}

func orZero(x float64) float64 {
	if math.IsNaN(x) {
		return 0
	}
	return x
}
