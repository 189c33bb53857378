package page

import (
	"math"

	"brinkfield/physics/quantity"
	"brinkfield/physics/study"
	"brinkfield/physics/transport"
)

// arrheniusSpec shows σT against 1000/T: interior, total, specific boundary.
func (a *App) arrheniusSpec() *chartSpec {
	spec := &chartSpec{Title: "Conductivity", Sub: "bars: 95 %", Height: 320, X: axisSpec{Label: "1000/T", Unit: "K⁻¹", Top: &topSpec{"celsius"}},
		Y: axisSpec{Label: "σT", Unit: "S K m⁻¹", Scale: "log"}, Series: []seriesSpec{}}
	for _, s := range []struct {
		id, name, role  string
		line            transport.Arrhenius
		below, straight bool
	}{
		{"sigma_bulk", "interior", "interior", a.Result.Energies.Bulk, false, true},
		{"sigma_total", "total", "total", a.Result.Energies.Total, true, false},
		{"sigma_boundary", "boundary, specific", "boundary", a.Result.Energies.Boundary, true, true},
	} {
		points := seriesSpec{Name: s.name, Role: s.role, Mark: "errorbars", Legend: ptr(false)}
		for _, n := range a.Result.Series(s.id) {
			if n.Missing() || n.Bound != study.Exact {
				continue
			}
			t := float64(n.Temperature)
			points.X, points.Y = append(points.X, 1000/t), append(points.Y, float64(n.Value)*t)
			points.Low, points.High = append(points.Low, float64(n.Low)*t), append(points.High, float64(n.High)*t)
		}
		if len(points.X) == 0 {
			continue
		}
		// Lines lie farthest apart where it is coldest: the label stands there.
		line := seriesSpec{Name: s.name, Role: s.role, Mark: "line", Legend: ptr(false), Label: mark{At: min(1, len(points.X)-1), Text: s.name, Below: s.below}}
		if s.straight && s.line.Points > 0 {
			line.Label = mark{At: min(1, len(points.X)-1), Text: s.name + " " + unbroken(quantity.FormatIn(s.line.Energy, quantity.Energy, "eV", 3)), Below: s.below}
			for _, x := range points.X {
				line.X, line.Y = append(line.X, x), append(line.Y, s.line.At(1000/x)*1000/x)
			}
		} else { // the total is no straight line: two processes share it
			line.X, line.Y = points.X, points.Y
		}
		spec.Series = append(spec.Series, line)
		spec.Series = append(spec.Series, points)
	}
	return spec
}

// widthSpec shows the two roads to the width as intervals.
func (a *App) widthSpec() *chartSpec {
	spec := &chartSpec{Height: 150, X: axisSpec{Label: "width of a boundary", Unit: "nm"}, Y: axisSpec{Domain: &[2]num{0.6, 2.9}, Ticks: &[]num{}}, Series: []seriesSpec{}}
	for _, w := range []struct {
		id, text, role string
		y              float64
	}{{"width_small_signal", "2λ_eff from the barrier", "boundary", 2}, {"width_electrical", "δ from the capacitance", "interior", 1}} {
		n := a.at(w.id)
		if n.Missing() {
			continue
		}
		low, high := n.Low, n.High
		if !n.HasInterval() {
			low, high = n.Value, n.Value
		}
		spec.Series = append(spec.Series, seriesSpec{Name: w.text, Role: w.role, Mark: "spans", Legend: ptr(false), X: nums{float64(n.Value) * 1e9}, Y: nums{w.y},
			Low: nums{float64(low) * 1e9}, High: nums{float64(high) * 1e9}})
		spec.Notes = append(spec.Notes, noteSpec{X: num(n.Value * 1e9), Y: num(w.y + 0.42), Text: w.text, Anchor: "middle"})
	}
	if spec.X.Domain = around(spec.Series); spec.X.Domain != nil {
		for i := range spec.Notes {
			spec.Notes[i].Anchor = anchor(spec.Notes[i].X, *spec.X.Domain)
		}
	}
	return spec
}

// anchor keeps a note beside a value inside the plot.
func anchor(x num, domain [2]num) string {
	switch share := (x - domain[0]) / (domain[1] - domain[0]); {
	case share < 0.35:
		return "start"
	case share > 0.65:
		return "end"
	}
	return "middle"
}

// around leaves room on both sides of the widths, at least a tenth of them.
func around(series []seriesSpec) *[2]num {
	low, high := math.Inf(1), math.Inf(-1)
	for _, s := range series {
		low, high = math.Min(low, s.Low[0]), math.Max(high, s.High[0])
	}
	if math.IsInf(low, 0) {
		return nil
	}
	room := math.Max(0.6*(high-low), 0.1*high)
	return &[2]num{num(math.Max(0, low-room)), num(high + room)}
}

// barrierSpec shows Φ₀ against temperature by the three routes.
func (a *App) barrierSpec() *chartSpec {
	spec := &chartSpec{Title: "Barrier", Sub: "bars: 95 % of the full layer", Height: 260, X: axisSpec{Label: "T", Unit: "°C"}, Y: axisSpec{Label: "Φ₀", Unit: "V"}, Series: []seriesSpec{}}
	for _, s := range []struct {
		id, name, role, mark string
		dash                 bool
	}{
		{"phi0_short", "short form", "muted", "dots+line", true},
		{"phi0_depletion", "exact depletion", "boundary", "dots+line", true},
		{"phi0_full", "full layer", "potential", "errorbars", false},
	} {
		one := seriesSpec{Name: s.name, Role: s.role, Mark: s.mark, Dash: s.dash, Hollow: s.dash}
		for _, n := range a.Result.Series(s.id) {
			if n.Missing() {
				continue
			}
			one.X, one.Y = append(one.X, float64(n.Temperature)-quantity.ZeroCelsius), append(one.Y, float64(n.Value))
			if s.mark == "errorbars" {
				one.Low, one.High = append(one.Low, float64(n.Low)), append(one.High, float64(n.High))
			}
		}
		if len(one.X) > 0 {
			spec.Series = append(spec.Series, one)
		}
	}
	return spec
}

// distanceAxis is the axis of the profile plots, and the factor from metres.
func (a *App) distanceAxis() (axisSpec, float64) {
	v := a.Result.View
	switch a.Result.Inputs.Get("axis") {
	case "debye":
		return axisSpec{Label: "x/λ_D"}, 1 / v.Debye
	case "log":
		return axisSpec{Label: "x", Unit: "nm", Scale: "log"}, 1e9
	}
	return axisSpec{Label: "x", Unit: "nm"}, 1e9
}

// profileX are the distances; a logarithmic axis begins after the core plane.
func (a *App) profileX() (axis axisSpec, x nums, from int) {
	axis, by := a.distanceAxis()
	x = scaled(a.Result.View.Profile.X, by)
	if axis.Scale == "log" && len(x) > 1 {
		return axis, x[1:], 1
	}
	return axis, x, 0
}

func (a *App) potentialSpec() *chartSpec {
	axis, x, from := a.profileX()
	v := a.Result.View
	spec := &chartSpec{Title: "Potential", Sub: unbroken(study.Celsius(v.Temperature)), Height: 280, Zero: true, X: axis, Y: axisSpec{Label: "Δφ", Unit: "V"}, Series: []seriesSpec{}}
	if len(x) > 0 {
		spec.Series = append(spec.Series, seriesSpec{Name: "Δφ", Role: "potential", Mark: "line", X: x, Y: scaled(v.Profile.Phi[from:], 1), Legend: ptr(false)})
	}
	return spec
}

func (a *App) carrierSpec() *chartSpec {
	axis, x, from := a.profileX()
	v := a.Result.View
	spec := &chartSpec{Title: "Carriers", Sub: "concentration", Height: 280, X: axis, Y: axisSpec{Label: "c", Unit: "m⁻³", Scale: "log"}, Series: []seriesSpec{}}
	for i, b := range v.Carriers {
		if len(x) == 0 {
			break
		}
		role := "carrier"
		if !b.Mobile {
			role = "dopant"
		}
		spec.Series = append(spec.Series, seriesSpec{Name: b.Name, Role: role, Mark: "line", X: x, Y: scaled(v.Profile.Relative[i][from:], b.Bulk), Label: b.Name, Legend: ptr(false)})
	}
	return spec
}
