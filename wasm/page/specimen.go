package page

import "brinkfield/physics/study"

// Specimen is the station of what was weighed in, pressed and fired.
type Specimen struct{ App *App }

// specimenGroups are the inputs, by what they describe.
var specimenGroups = []struct {
	head   string
	params []string
}{
	{"Grain", []string{"epsr", "cation_sites", "dopant", "dopant_charge", "carrier", "carrier_charge", "carrier_sites", "statistics"}},
	{"Pellet", []string{"grain", "thickness", "area", "diameter", "porosity"}},
}

func (c *Specimen) lead() string {
	return "What was weighed in, pressed and fired. Each ± is a 95 % half-width, 10 % or in the unit of the value. Drag a name sideways, or press the arrow keys in a field, to vary a value."
}

// numbersOf lists the results of a station that belong to no spectrum, without
// what was typed.
func (a *App) numbersOf(station string) (list []study.Number) {
	if a.Result == nil {
		return nil
	}
	for _, n := range a.Result.Numbers {
		if n.Station == station && n.Spectrum == 0 && n.Source != study.Entered && n.Source != study.Borrowed {
			list = append(list, n)
		}
	}
	return list
}

// flagsOf lists the flags of a station.
func (a *App) flagsOf(station string) (list []string) {
	if a.Result == nil {
		return nil
	}
	for _, f := range a.Result.Flags {
		if f.Station == station {
			list = append(list, f.Sentence())
		}
	}
	return list
}

// staleClass greys results that do not belong to what is typed.
func (a *App) staleClass() string {
	if a.Stale() {
		return "results stale"
	}
	return "results"
}
