package page

import (
	"brinkfield/physics/quantity"
)

// Profile is the station of the layer itself: potential and carriers.
type Profile struct{ App *App }

// fields are the inputs: what sets the barrier, and the field that it needs.
func (c *Profile) fields() []string {
	list := []string{"barrier", "at"}
	switch c.App.Typed.Get("barrier") {
	case "potential":
		list = append(list, "potential")
	case "charge":
		list = append(list, "core_charge")
	case "sites":
		list = append(list, "segregation") // the sites themselves stand in Boundary
	}
	return append(list, "axis")
}

// missing says why there is no layer to show.
func (c *Profile) missing() string {
	if c.App.Result == nil {
		return ""
	}
	return c.App.Result.View.Missing
}

// rows is the profile at round distances.
func (c *Profile) rows() (rows []Row) {
	if c.App.Result == nil {
		return nil
	}
	v := c.App.Result.View
	p := v.Profile
	step := max(1, len(p.X)/12)
	for k := 0; k < len(p.X); k += step {
		row := Row{Cells: []Cell{rowHead(quantity.Format(p.X[k], quantity.Length, 3)), cell(quantity.FormatNumber(p.Phi[k], 4)),
			cell(quantity.FormatNumber(p.Field[k], 3)), cell(quantity.FormatNumber(p.ChargeDensity[k], 3))}}
		for i, b := range v.Carriers {
			row.Cells = append(row.Cells, cell(quantity.FormatNumber(b.Bulk*p.Relative[i][k], 3)))
		}
		rows = append(rows, row)
	}
	return rows
}

func (c *Profile) heads() []Cell {
	names := []string{"x", "Δφ / V", "E / V m⁻¹", "ρ / C m⁻³"}
	if c.App.Result != nil {
		for _, b := range c.App.Result.View.Carriers {
			names = append(names, "c("+b.Name+") / m⁻³")
		}
	}
	return heads(names...)
}
