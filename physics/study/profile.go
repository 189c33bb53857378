package study

import (
	"fmt"
	"math"

	q "brinkfield/physics/quantity"
	"brinkfield/physics/spacecharge"
)

// View is what the drawing and the profile show.
type View struct {
	Temperature float64 // K
	Spectrum    int     // index of the spectrum shown, −1: none
	Phi0        float64 // V; NaN: nothing to show
	Missing     string  // why there is nothing to show
	Debye       float64 // m
	Width       float64 // m, both depleted sides; NaN: no depletion
	CoreCharge  float64 // C/m², both sides
	Occupancy   float64
	HalfGrain   float64 // m
	Carriers    []Band
	Profile     spacecharge.Profile
}

// Band is one species of the profile.
type Band struct {
	Name   string
	Charge int
	Bulk   float64 // m⁻³
	Mobile bool
}

// chooseView reads all spectra into rows and settles the temperature shown: the
// measured one nearest to what was asked, and among those with a barrier if any.
func (r *run) chooseView() {
	r.rows = make([]row, len(r.evidence))
	r.where = map[int]rowIndex{}
	asked := r.read["at"].Value
	view := View{Temperature: asked, Spectrum: -1, Phi0: math.NaN()}
	best := math.Inf(1)
	for i, e := range r.evidence {
		r.rows[i] = emptyRow(e.Spectrum.T)
		r.rows[i].reason = e.Refused
		if e.Fit != nil {
			r.rows[i] = readRow(r.specimen, e.Fit, e.Fit.Params, 0, 0)
		}
		if off := math.Abs(e.Spectrum.T - asked); off < best {
			best, view.Spectrum = off, i
		}
	}
	if view.Spectrum >= 0 && (r.in.Get("barrier") == "spectra" || best < 0.5) {
		view.Temperature = r.evidence[view.Spectrum].Spectrum.T
	}
	r.result.View = view
}

// profileStation solves the layer that is shown.
func (r *run) profileStation() {
	view := &r.result.View
	sigma := 0.0
	if view.Spectrum >= 0 && r.rows[view.Spectrum].bulk == Exact && r.rows[view.Spectrum].T == view.Temperature {
		sigma = r.rows[view.Spectrum].v[cSigmaBulk]
	}
	if math.IsNaN(sigma) {
		sigma = 0
	}
	view.Debye = r.specimen.length(view.Temperature, (*spacecharge.Medium).Debye)
	view.HalfGrain = r.specimen.brick.Grain / 2
	phi, err := r.shownBarrier(r.specimen, r.rows, 0)
	if err != nil {
		view.Missing = plainError(err)
		r.headline("profile", "no barrier to show")
		return
	}
	m, err := r.specimen.medium(view.Temperature, sigma)
	if err != nil {
		view.Missing = plainError(err)
		return
	}
	layer, err := m.Solve(phi)
	if err != nil {
		view.Missing = plainError(err)
		r.headline("profile", "no barrier to show")
		return
	}
	r.fillView(m, layer)
	r.profileNumbers(layer, sigma)
	r.headline("profile", q.Format(float64(r.result.Number("half_distance", 0).Value), q.Length, 2)+" to half of Φ₀")
}

// shownBarrier is the Φ₀ that the inputs ask to show, in V.
func (r *run) shownBarrier(s specimen, rows []row, tolerance float64) (float64, error) {
	view := r.result.View
	m, err := s.medium(view.Temperature, 0)
	if err != nil {
		return math.NaN(), err
	}
	m.Tolerance = tolerance
	switch r.in.Get("barrier") {
	case "potential":
		return r.read["potential"].Value, nil
	case "charge":
		return m.PotentialForCharge(r.read["core_charge"].Value / 2)
	case "sites":
		filled, err := m.Fill(spacecharge.Core{Sides: spacecharge.Boundary, Sites: []spacecharge.CoreSites{{
			PerArea: s.coreSites, Segregation: r.read["segregation"].Value, Sites: s.carrierSites}}})
		return filled.Phi0, err
	}
	if view.Spectrum < 0 {
		return math.NaN(), fmt.Errorf("study: no spectra are loaded, expected spectra or a barrier given another way")
	}
	row := rows[view.Spectrum]
	if phi := row.v[r.routeColumn()]; !math.IsNaN(phi) {
		return phi, nil
	}
	return math.NaN(), fmt.Errorf("study: no barrier at %s (%s)", celsius(row.T), orDefault(row.reason, "the route gives none"))
}

func (r *run) fillView(m *spacecharge.Medium, layer *spacecharge.Layer) {
	view, s := &r.result.View, r.specimen
	view.Phi0, view.Debye, view.HalfGrain = layer.Phi0, m.Debye(), s.brick.Grain/2
	view.CoreCharge = 2 * layer.Charge
	view.Occupancy = view.CoreCharge / (float64(s.carrierCharge) * q.ElementaryCharge * s.coreSites)
	view.Width = math.NaN()
	if layer.Phi0*float64(s.carrierCharge) > 0 {
		view.Width = 2 * s.depletion(view.Temperature).Width(layer.Phi0)
	}
	view.Profile = layer.Sample(profilePoints, profileEnd)
	for _, sp := range m.Species {
		name := sp.Name
		if !sp.Mobile {
			name = "dopant"
		}
		view.Carriers = append(view.Carriers, Band{name, sp.Charge, sp.Bulk, sp.Mobile})
	}
}

// The profile is sampled down to a thousandth of Φ₀.
const (
	profilePoints = 120
	profileEnd    = 1e-3
)

// profileColumn is one number of the layer shown.
type profileColumn struct {
	column
	of func(l *spacecharge.Layer, sigma float64) float64
}

func distance(fraction float64) func(*spacecharge.Layer, float64) float64 {
	return func(l *spacecharge.Layer, _ float64) float64 {
		x, err := l.Distance(fraction)
		if err != nil {
			return math.NaN()
		}
		return x
	}
}

var profileColumns = []profileColumn{
	{column{"phi0", "Potential of the core", "Φ₀", q.Potential, ""}, func(l *spacecharge.Layer, _ float64) float64 { return l.Phi0 }},
	{column{"charge_one_side", "Charge of one side", "Q", q.SurfaceCharge, "charge"}, func(l *spacecharge.Layer, _ float64) float64 { return l.Charge }},
	{column{"layer_capacitance", "Capacitance of one side", "C", q.AreaCapacity, "layerC"}, func(l *spacecharge.Layer, _ float64) float64 { return l.Capacitance }},
	{column{"field", "Field at the core", "E", q.Field, "field"}, func(l *spacecharge.Layer, _ float64) float64 { return math.Abs(l.Field) }},
	{column{"half_distance", "Distance to half of Φ₀", "x_½", q.Length, "distance"}, distance(0.5)},
	{column{"percent_distance", "Distance to a hundredth of Φ₀", "x_1%", q.Length, "distance"}, distance(0.01)},
	{column{"core_ratio", "Carriers at the core over the bulk", "c₀/c∞", q.Number, "coreRatio"}, func(l *spacecharge.Layer, _ float64) float64 {
		return l.Medium.Concentration(0, l.Phi0) / l.Medium.Species[0].Bulk
	}},
	{column{"across_length", "Extra resistance across, as a length of bulk", "ℓ_⊥", q.Length, "across"}, func(l *spacecharge.Layer, _ float64) float64 { return l.AcrossLength[0] }},
	{column{"along_length", "Extra conduction along, as a length of bulk", "ℓ_∥", q.Length, "along"}, func(l *spacecharge.Layer, _ float64) float64 { return l.AlongLength[0] }},
	{column{"across", "Extra resistance of one side", "ΔR", q.AreaResistance, "acrossOhm"}, func(l *spacecharge.Layer, sigma float64) float64 { return l.AcrossLength[0] / sigma }},
	{column{"along", "Extra sheet conductance of one side", "ΔY", q.Conductance, "alongSiemens"}, func(l *spacecharge.Layer, sigma float64) float64 { return l.AlongLength[0] * sigma }},
}

func (r *run) profileNumbers(layer *spacecharge.Layer, sigma float64) {
	for _, c := range profileColumns {
		v := c.of(layer, sigma)
		if math.IsInf(v, 0) || math.IsNaN(v) || (v == 0 && sigma == 0 && (c.id == "along" || c.id == "across")) {
			continue // no conductivity is known
		}
		r.whereProfile = append(r.whereProfile, r.add(Number{ID: c.id, Station: "profile", Label: c.label, Symbol: c.symbol,
			Kind: c.kind, Equation: c.equation, Temperature: Float(r.result.View.Temperature), Value: Float(v), Source: Derived,
			With: []Put{put("Φ₀", layer.Phi0, q.Potential), put("ε_r", r.specimen.epsr, q.Number), put("c∞", r.specimen.carrierDensity(), q.NumberDensity),
				put("T", r.result.View.Temperature, q.Temperature)}}))
		r.profileShown = append(r.profileShown, c)
	}
}

// keepProfile hands the profile numbers of one draw to the collector.
func (r *run) keepProfile(s specimen, rows []row, keep func(int, float64)) {
	if len(r.whereProfile) == 0 {
		return
	}
	phi, err := r.shownBarrier(s, rows, sampleTolerance)
	if err != nil {
		return
	}
	view, sigma := r.result.View, 0.0
	if view.Spectrum >= 0 {
		sigma = rows[view.Spectrum].v[cSigmaBulk]
	}
	m, err := s.medium(view.Temperature, 0)
	if err != nil {
		return
	}
	m.Tolerance = sampleTolerance
	layer, err := m.Solve(phi)
	if err != nil {
		return
	}
	for k, c := range r.profileShown {
		keep(r.whereProfile[k], c.of(layer, sigma))
	}
}
