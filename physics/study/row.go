package study

import (
	"fmt"
	"math"

	"brinkfield/physics/impedance"
	q "brinkfield/physics/quantity"
	"brinkfield/physics/transport"
)

// column is one derived quantity of the boundary at every temperature.
type column struct {
	id, label, symbol string
	kind              q.Kind
	equation          string
}

// The columns of a row, by position.
const (
	cWidth = iota
	cRBulk
	cRBoundary
	cRatio
	cBlocking
	cSigmaBulk
	cSigmaTotal
	cSigmaBoundary
	cEpsilon
	cTimeRatio
	cPhiShort
	cPhiDepletion
	cPhiFull
	cBias
	cBiasExpected
	cWidthStar
	cWidthSmall
	cGap
	cClosing
	cClosingShare
	cCoreCharge
	cOccupancy
	cSegregation
	cSideWalls
	columns
)

var columnList = [columns]column{
	cWidth:         {"width_electrical", "Electrical width of a boundary", "δ", q.Length, "widthShare"},
	cRBulk:         {"r_bulk", "Bulk resistance", "R_bulk", q.Resistance, "rBulk"},
	cRBoundary:     {"r_excess", "Boundary resistance", "R_boundary", q.Resistance, "rBoundary"},
	cRatio:         {"ratio", "Boundary over bulk", "r", q.Number, "ratio"},
	cBlocking:      {"blocking", "Blocking factor", "R_boundary/R", q.Fraction, "blocking"},
	cSigmaBulk:     {"sigma_bulk", "Conductivity of the interior", "σ_bulk", q.Conductivity, "sigmaBulk"},
	cSigmaTotal:    {"sigma_total", "Conductivity, total", "σ_total", q.Conductivity, "sigmaTotal"},
	cSigmaBoundary: {"sigma_boundary", "Specific boundary conductivity", "σ_gb", q.Conductivity, "sigmaBoundary"},
	cEpsilon:       {"epsilon_arc", "Permittivity from the interior arc", "ε_r", q.Number, "epsilonArc"},
	cTimeRatio:     {"time_ratio", "Ratio of time constants", "τ_gb/τ_b", q.Number, "timeRatio"},
	cPhiShort:      {"phi0_short", "Barrier, short form", "Φ₀", q.Potential, "phiShort"},
	cPhiDepletion:  {"phi0_depletion", "Barrier, exact depletion", "Φ₀", q.Potential, "phiDepletion"},
	cPhiFull:       {"phi0_full", "Barrier, full layer", "Φ₀", q.Potential, "phiFull"},
	cBias:          {"short_bias", "Error of the short form, as read", "ΔΦ₀", q.Millivolts, "bias"},
	cBiasExpected:  {"short_bias_expected", "Error of the short form, as the full layer predicts it", "ΔΦ₀", q.Millivolts, "biasExpected"},
	cWidthStar:     {"width_depletion", "Depleted width", "2λ*", q.Length, "width"},
	cWidthSmall:    {"width_small_signal", "Width from the barrier", "2λ_eff", q.Length, "widthSmall"},
	cGap:           {"width_gap", "Width from the barrier over width from the capacitance, less one", "2λ_eff/δ − 1", q.Fraction, "gap"},
	cClosing:       {"carriers_closing", "Carrier density that would make the widths agree", "c∞", q.NumberDensity, "closing"},
	cClosingShare:  {"carriers_closing_share", "… over the entered one", "c∞/nominal", q.Fraction, "closingShare"},
	cCoreCharge:    {"core_charge", "Charge of the core", "Q_core", q.SurfaceCharge, "coreCharge"},
	cOccupancy:     {"core_occupancy", "Occupancy of the core sites", "θ", q.Fraction, "occupancy"},
	cSegregation:   {"core_segregation", "Segregation energy", "Δg", q.Energy, "segregation"},
	cSideWalls:     {"side_walls", "Conduction changed by side walls", "", q.Fraction, "sideWalls"},
}

// row is what one spectrum says about the boundary. Missing values are NaN.
type row struct {
	T      float64
	v      [columns]float64
	reason string // why there is no barrier
	bulk   Bound  // whether the bulk conductivity is a limit only
}

// readRow carries one spectrum to its barrier. params are the fit's or a draw's;
// near is a Φ₀ to start from, 0 for none.
func readRow(s specimen, fit *impedance.Fit, params []float64, near, tolerance float64) row {
	r := emptyRow(fit.T)
	cell := s.brick.CellConstant()
	arcs := impedance.ArcsOf(params)
	i, b := fit.Index(impedance.Interior), fit.Index(impedance.Boundary)
	if i < 0 || b < 0 {
		r.reason = "no " + map[bool]string{true: "interior", false: "boundary"}[i < 0] + " arc was found"
		r.partial(s, fit, params, i, b)
		return r
	}
	if r.reason = unresolved(&fit.Arcs[i], &fit.Arcs[b]); r.reason != "" {
		r.partial(s, fit, params, i, b)
		return r
	}
	in := transport.Arcs{RInterior: arcs[i].R, CInterior: arcs[i].Capacitance(), RBoundary: arcs[b].R, CBoundary: arcs[b].Capacitance()}
	g, err := in.Read()
	if err != nil {
		r.reason = err.Error()
		return r
	}
	v := &r.v
	v[cWidth] = s.brick.Grain * g.WidthShare
	v[cRBulk], v[cRBoundary], v[cRatio], v[cBlocking], v[cTimeRatio] = g.RBulk, g.RBoundary, g.Ratio, g.Blocking, g.TimeRatio
	v[cSigmaBulk] = cell / g.RBulk
	v[cSigmaTotal] = cell / (g.RBulk + g.RBoundary)
	v[cSigmaBoundary] = g.SpecificBoundary(cell, in.CBoundary)
	v[cEpsilon] = g.CBulk * cell / q.VacuumPermittivity
	r.barrier(s, near, tolerance)
	return r
}

func emptyRow(kelvin float64) row {
	r := row{T: kelvin}
	for k := range r.v {
		r.v[k] = math.NaN()
	}
	return r
}

// unresolved says why a barrier cannot be read from these arcs, or nothing.
func unresolved(i, b *impedance.FittedArc) string {
	limit := func(name string, e impedance.Estimate, kind q.Kind) string {
		return fmt.Sprintf("%s is only known to be %s %s in this frequency window", name, e.Kind, q.Format(e.Best(), kind, 3))
	}
	switch {
	case !i.R.Resolved():
		return limit("the interior resistance", i.R, q.Resistance)
	case !b.R.Resolved():
		return limit("the boundary resistance", b.R, q.Resistance)
	case !i.C.Resolved():
		return limit("the interior capacitance", i.C, q.Capacitance)
	case !b.C.Resolved():
		return limit("the boundary capacitance", b.C, q.Capacitance)
	}
	return ""
}

// partial fills what can still be said without a barrier: the total conductivity
// from what lies before the contact, and a limit of the interior's.
func (r *row) partial(s specimen, fit *impedance.Fit, params []float64, i, b int) {
	arcs, cell := impedance.ArcsOf(params), s.brick.CellConstant()
	if b >= 0 && fit.Arcs[b].R.Resolved() {
		sum := arcs[b].R
		if i >= 0 {
			sum += arcs[i].R
		}
		if i < 0 || !fit.Arcs[i].R.Resolved() {
			// The interior is not told apart from the lead; together they are known.
			sum += params[impedance.ParamLeadR]
		}
		r.v[cSigmaTotal] = cell / sum
	}
	if i < 0 {
		return
	}
	// The arc is short by δ/d as ever; its own capacitance is not known here, so
	// the share comes from the permittivity entered.
	grain := 1.0
	if b >= 0 && fit.Arcs[b].C.Resolved() {
		share := s.brick.InteriorCapacitance(s.epsr) / arcs[b].Capacitance()
		grain = math.Max(0, 1-share)
	}
	switch {
	case fit.Arcs[i].R.Kind == impedance.AtMost:
		r.v[cSigmaBulk], r.bulk = cell/fit.Arcs[i].R.High*grain, AtLeast
	case fit.Arcs[i].R.Kind == impedance.AtLeast:
		r.v[cSigmaBulk], r.bulk = cell/fit.Arcs[i].R.Low*grain, AtMost
	case b < 0:
		r.v[cSigmaBulk] = cell / arcs[i].R
	}
}

// barrier fills the three routes and what follows from the full one.
func (r *row) barrier(s specimen, near, tolerance float64) {
	v := &r.v
	sgn := math.Copysign(1, float64(s.carrierCharge))
	z := math.Abs(float64(s.carrierCharge))
	thermal := q.ThermalVoltage(r.T)
	if a, err := transport.InvertShortForm(v[cTimeRatio]); err == nil {
		v[cPhiShort] = sgn * a * thermal / z
	}
	if a, err := transport.InvertDepletion(v[cTimeRatio]); err == nil {
		v[cPhiDepletion] = sgn * a * thermal / z
	}
	m, err := s.medium(r.T, v[cSigmaBulk])
	if err != nil {
		r.reason = err.Error()
		return
	}
	m.Tolerance = tolerance
	phi, err := m.PotentialForExcess(0, v[cRatio]*s.brick.Grain/2, near)
	if err != nil {
		r.reason = "the boundaries add no resistance over the bulk"
		return
	}
	v[cPhiFull] = phi
	v[cBias] = v[cPhiShort]*sgn - phi*sgn
	layer, err := m.Solve(phi)
	if err != nil {
		r.reason = err.Error()
		return
	}
	expected := v[cRatio] * layer.Capacitance * s.brick.Grain / (2 * m.Epsilon())
	if a, err := transport.InvertShortForm(expected); err == nil {
		v[cBiasExpected] = a*thermal/z - phi*sgn
	}
	d := s.depletion(r.T)
	v[cWidthStar] = 2 * d.Width(phi)
	v[cWidthSmall] = 2 * d.SmallSignalWidth(phi)
	v[cGap] = v[cWidthSmall]/v[cWidth] - 1
	if shape, err := m.PotentialForShape(0, v[cTimeRatio], phi); err == nil {
		if soft := math.Abs(shape) - thermal/z; soft > 0 {
			v[cClosing] = 8 * m.Epsilon() * soft / (z * q.ElementaryCharge * v[cWidth] * v[cWidth])
			v[cClosingShare] = v[cClosing] / s.carrierDensity()
		}
	}
	r.core(s, 2*layer.Charge)
	v[cSideWalls] = s.brick.SideWalls(layer.Along, v[cSigmaBulk])
}

// core fills charge, occupancy and segregation energy of the core.
func (r *row) core(s specimen, charge float64) {
	z := float64(s.carrierCharge)
	r.v[cCoreCharge] = charge
	theta := charge / (z * q.ElementaryCharge * s.coreSites)
	r.v[cOccupancy] = theta
	c := s.carrierDensity()
	if theta > 0 && theta < 1 && c < s.carrierSites {
		r.v[cSegregation] = q.Boltzmann*r.T*(math.Log(c/(s.carrierSites-c))-math.Log(theta/(1-theta))) - z*q.ElementaryCharge*r.v[cPhiFull]
	}
}

// redrawn is the row of one draw of the fit for a sampled specimen.
func (r *row) redrawn(s specimen, fit *impedance.Fit, normal func() float64) row {
	if fit == nil {
		return emptyRow(r.T)
	}
	near := r.v[cPhiFull]
	if math.IsNaN(near) {
		near = 0
	}
	return readRow(s, fit, fit.Draw(normal), near, sampleTolerance)
}

// sampleTolerance is enough for a quantile of a few hundred draws.
const sampleTolerance = 1e-6
