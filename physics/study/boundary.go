package study

import (
	"fmt"
	"math"
	"slices"

	"brinkfield/physics/impedance"
	q "brinkfield/physics/quantity"
	"brinkfield/physics/transport"
)

// boundaryStation reads every spectrum into a row and adds its numbers, then what
// all temperatures say together.
func (r *run) boundaryStation() {
	for i, e := range r.evidence {
		if e.Fit == nil {
			continue
		}
		r.addRow(i, e)
	}
	if len(r.evidence) == 0 {
		r.headline("boundary", "no spectra")
		return
	}
	r.addTogether()
	r.result.Moves = r.moves()
	view := r.viewRow()
	switch {
	case view == nil:
		r.headline("boundary", "no barrier read")
	default:
		r.headline("boundary", fmt.Sprintf("%s of R · %s", percent(view.v[cBlocking]), q.Format(view.v[r.routeColumn()], q.Potential, 3)))
	}
}

// rowIndex is where the numbers of one row stand.
type rowIndex [columns]int

func (r *run) addRow(i int, e Evidence) {
	row := &r.rows[i]
	var where rowIndex
	for k, c := range columnList {
		n := Number{ID: c.id, Station: "boundary", Label: c.label, Symbol: c.symbol, Kind: c.kind, Equation: c.equation,
			Temperature: Float(row.T), Spectrum: i + 1, Value: Float(row.v[k]), Source: Derived, With: r.puts(k, row, e.Fit)}
		if math.IsNaN(row.v[k]) {
			n.Reason = row.reason
			if n.Reason == "" {
				n.Reason = missingReason[k]
			}
		}
		if k == cSigmaBulk && row.bulk != Exact {
			n.Bound, n.Reason = row.bulk, row.reason
		}
		where[k] = r.add(n)
	}
	r.where[i] = where
}

// missingReason explains a value that this column alone cannot give.
var missingReason = map[int]string{
	cPhiShort:     "the ratio of time constants is below e/2, where the short form has no barrier",
	cBias:         "the short form has no barrier here",
	cBiasExpected: "the short form has no barrier here",
	cWidthSmall:   "the barrier is below k_B T/|z|e: no depletion layer",
	cGap:          "the barrier is below k_B T/|z|e: no depletion layer",
	cClosing:      "the barrier is below k_B T/|z|e: no depletion layer",
	cClosingShare: "the barrier is below k_B T/|z|e: no depletion layer",
	cSegregation:  "the core would need more sites than entered",
}

// puts lists the numbers that were put into a column's equation.
func (r *run) puts(k int, row *row, fit *impedance.Fit) []Put {
	if math.IsNaN(row.v[k]) {
		return nil
	}
	s, v := r.specimen, row.v
	fitted := func(role impedance.Role, symbol string) (list []Put) {
		if a := fit.Arc(role); a != nil {
			list = append(list, put("R_"+symbol, a.R.Value, q.Resistance), put("C_"+symbol, a.C.Value, q.Capacitance))
		}
		return list
	}
	arcs := append(fitted(impedance.Interior, "int"), fitted(impedance.Boundary, "gb")...)
	layer := []Put{put("ε_r", s.epsr, q.Number), put("c∞", s.carrierDensity(), q.NumberDensity), put("T", row.T, q.Temperature)}
	switch k {
	case cWidth:
		return append(arcs, put("d", s.brick.Grain, q.Length))
	case cRBulk, cRBoundary:
		return append(arcs, put("δ", v[cWidth], q.Length), put("d", s.brick.Grain, q.Length))
	case cRatio, cBlocking, cTimeRatio:
		return append(arcs, put("R_bulk", v[cRBulk], q.Resistance), put("R_boundary", v[cRBoundary], q.Resistance))
	case cSigmaBulk, cSigmaTotal, cSigmaBoundary, cEpsilon:
		return append(arcs, put("L/(A f)", s.brick.CellConstant(), q.InverseLength))
	case cPhiShort, cPhiDepletion:
		return []Put{put("τ_gb/τ_b", v[cTimeRatio], q.Number), put("T", row.T, q.Temperature), put("z", float64(s.carrierCharge), q.Number)}
	case cPhiFull:
		return append(layer, put("r", v[cRatio], q.Number), put("d", s.brick.Grain, q.Length))
	case cWidthStar, cWidthSmall, cCoreCharge, cSideWalls:
		return append(layer, put("Φ₀", v[cPhiFull], q.Potential))
	case cGap, cClosing:
		return append(layer, put("2λ_eff", v[cWidthSmall], q.Length), put("δ", v[cWidth], q.Length))
	case cOccupancy, cSegregation:
		return []Put{put("Q_core", v[cCoreCharge], q.SurfaceCharge), put("N_core", s.coreSites, q.SheetDensity), put("N", s.carrierSites, q.NumberDensity), put("Φ₀", v[cPhiFull], q.Potential)}
	}
	return nil
}

// together are the results of all temperatures at once, by position.
const (
	tEnergyBulk = iota
	tEnergyBoundary
	tEnergyTotal
	tSlope
	togethers
)

var togetherList = [togethers]column{
	tEnergyBulk:     {"energy_bulk", "Energy of the interior", "E_bulk", q.Energy, "energy"},
	tEnergyBoundary: {"energy_boundary", "Energy of the specific boundary conductivity", "E_gb", q.Energy, "energy"},
	tEnergyTotal:    {"energy_total", "Energy of the total", "E_total", q.Energy, "energy"},
	tSlope:          {"phi0_slope", "Change of the barrier with temperature", "dΦ₀/dT", q.VoltPerKelvin, "slope"},
}

// addTogether fits the Arrhenius lines and the trend of the barrier.
func (r *run) addTogether() {
	lines := [3]struct {
		column int
		to     *transport.Arrhenius
	}{{cSigmaBulk, &r.result.Energies.Bulk}, {cSigmaBoundary, &r.result.Energies.Boundary}, {cSigmaTotal, &r.result.Energies.Total}}
	for k, c := range togetherList {
		n := Number{ID: c.id, Station: "boundary", Label: c.label, Symbol: c.symbol, Kind: c.kind, Equation: c.equation, Source: Derived, Value: Float(math.NaN())}
		if k == tSlope {
			n.Value = Float(slope(r.rows, r.routeColumn()))
		} else if line, err := arrhenius(r.rows, lines[k].column); err != nil {
			n.Reason = plainError(err)
		} else {
			*lines[k].to = line
			n.Value, n.Low, n.High = Float(line.Energy), Float(line.EnergyLow), Float(line.EnergyTop)
		}
		if math.IsNaN(float64(n.Value)) && n.Reason == "" {
			n.Reason = "fewer than three temperatures"
		}
		r.whereTogether[k] = r.add(n)
	}
}

func arrhenius(rows []row, c int) (transport.Arrhenius, error) {
	var kelvin, sigma []float64
	for _, row := range rows {
		if !math.IsNaN(row.v[c]) && !(c == cSigmaBulk && row.bulk != Exact) {
			kelvin, sigma = append(kelvin, row.T), append(sigma, row.v[c])
		}
	}
	return transport.FitArrhenius(kelvin, sigma)
}

// slope is that of a straight line through a column against T, NaN for fewer
// than three temperatures.
func slope(rows []row, c int) float64 {
	var n, st, sv, stt, stv float64
	for _, row := range rows {
		if v := row.v[c]; !math.IsNaN(v) {
			n, st, sv, stt, stv = n+1, st+row.T, sv+v, stt+row.T*row.T, stv+row.T*v
		}
	}
	if d := n*stt - st*st; n >= 3 && d > 1e-6 {
		return (n*stv - st*sv) / d
	}
	return math.NaN()
}

// keepBoundary hands one draw of all rows to the collector of intervals. The
// energies keep Student's interval from their scatter.
func (r *run) keepBoundary(rows []row, keep func(int, float64)) {
	for i := range rows {
		if where, ok := r.where[i]; ok {
			for k, index := range where {
				keep(index, rows[i].v[k])
			}
		}
	}
	if len(r.evidence) > 0 {
		keep(r.whereTogether[tSlope], slope(rows, r.routeColumn()))
	}
}

// routeColumn is the column of the route that was chosen.
func (r *run) routeColumn() int {
	return map[string]int{"full": cPhiFull, "depletion": cPhiDepletion, "short": cPhiShort}[r.in.Get("route")]
}

// viewRow is the row of the temperature shown, nil if it gives no barrier.
func (r *run) viewRow() *row {
	i := r.result.View.Spectrum
	if i < 0 || math.IsNaN(r.rows[i].v[r.routeColumn()]) {
		return nil
	}
	return &r.rows[i]
}

// Move says how far a route's barrier moves when one input does.
type Move struct {
	Route  string `json:"route"`
	Input  string `json:"input"`
	Symbol string `json:"symbol"`
	Change string `json:"change"`
	Shift  Float  `json:"shift_V"`
	Stated bool   `json:"stated,omitempty"` // the change is the ± that was stated
}

// moves recomputes the barrier of the temperature shown with one input moved at a
// time: by a tenth, the temperature by 10 K; then every input with a stated ± by that.
func (r *run) moves() (list []Move) {
	base := r.viewRow()
	if base == nil {
		return nil
	}
	fit := r.evidence[r.result.View.Spectrum].Fit
	type shift struct {
		input, symbol, change string
		routes                []int
		apply                 func(s *specimen, p []float64, f *impedance.Fit)
	}
	i, b := fit.Index(impedance.Interior), fit.Index(impedance.Boundary)
	tenth, all := "+10 %", []int{cPhiFull, cPhiDepletion, cPhiShort}
	scaleC := func(p []float64, k int, by float64) { // C at constant R and n
		p[impedance.ParamQ(k)] += p[impedance.ParamN(k)] * math.Log(by)
	}
	for _, m := range []shift{
		{"Boundary resistance", "R_gb", tenth, all, func(_ *specimen, p []float64, _ *impedance.Fit) {
			p[impedance.ParamR(b)] += math.Log(1.1)
			p[impedance.ParamQ(b)] -= (1 - p[impedance.ParamN(b)]) * math.Log(1.1)
		}},
		{"Boundary capacitance", "C_gb", tenth, all, func(_ *specimen, p []float64, _ *impedance.Fit) { scaleC(p, b, 1.1) }},
		{"Interior capacitance", "C_int", tenth, all, func(_ *specimen, p []float64, _ *impedance.Fit) { scaleC(p, i, 1.1) }},
		{"Temperature", "T", "+10 K", all, func(_ *specimen, _ []float64, f *impedance.Fit) { f.T += 10 }},
		{"Grain size", "d", tenth, all, func(s *specimen, _ []float64, _ *impedance.Fit) { s.brick.Grain *= 1.1 }},
		{"Permittivity", "ε_r", tenth, all, func(s *specimen, _ []float64, _ *impedance.Fit) { s.epsr *= 1.1 }},
		{"Carriers", "c∞", tenth, all, func(s *specimen, _ []float64, _ *impedance.Fit) { s.dopant *= 1.1 }},
	} {
		s, p, f := r.specimen, slices.Clone(fit.Params), *fit
		m.apply(&s, p, &f)
		moved := readRow(s, &f, p, base.v[cPhiFull], 0)
		for _, c := range m.routes {
			list = append(list, Move{Route: routeKeys[c], Input: m.input, Symbol: m.symbol, Change: m.change, Shift: Float(moved.v[c] - base.v[c])})
		}
	}
	return append(list, r.statedMoves(base, fit)...)
}

// statedMoves moves every input with a stated ± up by it.
func (r *run) statedMoves(base *row, fit *impedance.Fit) (list []Move) {
	for k, one := range varied {
		u, f := r.read[one.param], FieldOf(one.param)
		if u.Plus == 0 || math.IsNaN(u.Value) {
			continue
		}
		drawn := -1
		s := r.specimen.sampled(r.read, func() float64 { // this input alone, one half-width up
			if drawn++; drawn == k {
				return halfWidth95
			}
			return 0
		})
		moved := readRow(s, fit, fit.Params, base.v[cPhiFull], 0)
		for _, c := range []int{cPhiFull, cPhiDepletion, cPhiShort} {
			list = append(list, Move{Route: routeKeys[c], Input: f.Label, Symbol: f.Symbol, Change: "± " + PlusText(f, u), Shift: Float(moved.v[c] - base.v[c]), Stated: true})
		}
	}
	return list
}

var routeKeys = map[int]string{cPhiShort: "short", cPhiDepletion: "depletion", cPhiFull: "full"}
