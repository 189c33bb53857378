package impedance

// Assign gives roles to the arcs of fits that belong together, one entry of
// controls each: a role keeps its capacitance over the temperatures. FitAll does
// this itself.
func Assign(fits []*Fit, controls []Controls) { assign(fits, controls) }
