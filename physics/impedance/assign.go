package impedance

import (
	"fmt"
	"math"
	"slices"
)

// band is the range of capacitance a role is found in, for thickness/area of
// 1 cm⁻¹: Irvine, Sinclair, West, Adv. Mater. 2, 132 (1990), Table 1 (from memory):
// bulk 1e-12, boundary 1e-11…1e-8, surface layer 1e-9…1e-7, contact 1e-7…1e-5 F.
// The bulk is widened to ε = 3…1000, which is what ceramics have.
type band struct {
	role      Role
	low, high float64 // log10 of F at 1 cm⁻¹
}

var bands = []band{{Interior, -12.6, -10.1}, {Boundary, -10.6, -7.8}, {Contact, -7, -4}}

// penalty is how many decades a capacitance lies outside its band.
func (b band) penalty(logC float64) float64 {
	return math.Max(0, math.Max(b.low-logC, logC-b.high))
}

// Decades of capacitance by which a role may drift between temperatures before it
// counts as another process.
const driftDecades = 0.5

// assign gives roles to all fits together. Every fit is first judged by its own
// capacitances, in the order of time constants; then each role's median
// capacitance over the temperatures is the yardstick, for capacitances hardly
// depend on temperature while resistances span decades. Roles given by the user
// stand.
func assign(fits []*Fit, controls []Controls) {
	choice := make([][]Role, len(fits))
	for i, f := range fits {
		choice[i] = best(f, controls[i], nil)
	}
	if len(fits) > 2 {
		medians := medianC(fits, controls, choice)
		for i, f := range fits {
			choice[i] = best(f, controls[i], medians)
		}
	}
	for i, f := range fits {
		apply(f, controls[i], choice[i], len(fits) > 2)
	}
}

// cell is thickness/area in cm⁻¹, 1 when unknown: pellets are within a decade or so.
func (c Controls) cell() float64 {
	if c.CellConstant > 0 {
		return c.CellConstant / 100
	}
	return 1
}

// best picks the role sequence of least total penalty: each role once, in the
// order interior, boundary, contact along growing time constants.
func best(f *Fit, c Controls, medians map[Role]float64) []Role {
	var winner []Role
	least := math.Inf(1)
	pick := make([]Role, len(f.Arcs))
	var walk func(k int, from Role)
	walk = func(k int, from Role) {
		if k == len(pick) {
			if p := total(f, c, pick, medians); p < least {
				least, winner = p, slices.Clone(pick)
			}
			return
		}
		if given, ok := c.Assign[k]; ok {
			pick[k] = given
			walk(k+1, max(from, given+1))
			return
		}
		for r := from; r <= Contact; r++ {
			pick[k] = r
			walk(k+1, r+1)
		}
		pick[k] = Unassigned
		walk(k+1, from)
	}
	walk(0, Interior)
	return winner
}

func total(f *Fit, c Controls, pick []Role, medians map[Role]float64) float64 {
	p := 0.0
	for k, r := range pick {
		if r == Unassigned {
			p += 1.5 // leaving an arc unnamed costs more than a decade and a half off band
			continue
		}
		logC := math.Log10(f.seenCapacitance(k) * c.cell())
		p += bands[r-1].penalty(logC)
		if m, ok := medians[r]; ok {
			p += 0.5 * math.Max(0, math.Abs(logC-m)-driftDecades)
		}
	}
	return p
}

// seenCapacitance is the capacitance of arc k, or, when its top lies below the window
// and its resistance is open, what its element is worth at the lowest frequency:
// Im Y/ω = Q ω^{n−1} sin(nπ/2).
func (f *Fit) seenCapacitance(k int) float64 {
	a := f.Arcs[k].Arc
	if !f.Arcs[k].below {
		return a.Capacitance()
	}
	return a.Q * math.Pow(2*math.Pi*f.lowest, a.N-1) * math.Sin(a.N*math.Pi/2)
}

// medianC is the median log capacitance per role over the fits whose arc has its
// top inside the window.
func medianC(fits []*Fit, controls []Controls, choice [][]Role) map[Role]float64 {
	seen := map[Role][]float64{}
	for i, f := range fits {
		for k, r := range choice[i] {
			if r != Unassigned && f.Arcs[k].PeakInWindow {
				seen[r] = append(seen[r], math.Log10(f.Arcs[k].Arc.Capacitance()*controls[i].cell()))
			}
		}
	}
	out := map[Role]float64{}
	for r, v := range seen {
		out[r] = median(v)
	}
	return out
}

// apply writes the roles and says why; notes of an earlier assignment are dropped.
func apply(f *Fit, c Controls, roles []Role, together bool) {
	f.Notes = f.Notes[:f.ownNotes]
	for k := range f.Arcs {
		a := &f.Arcs[k]
		a.Role = roles[k]
		cap := f.seenCapacitance(k)
		_, given := c.Assign[k]
		switch {
		case given:
			a.RoleWhy = "given"
		case a.Role == Unassigned:
			a.RoleWhy = fmt.Sprintf("%.2g F fits no role left in the order of time constants", cap)
			f.note(cap, "arc %d (%.2g F) could not be assigned", k+1, cap)
		default:
			a.RoleWhy = fmt.Sprintf("%.2g F, %s fastest of %d", cap, [...]string{"the", "second", "third"}[k], len(f.Arcs))
			if together {
				a.RoleWhy += ", consistent over all temperatures"
			}
			logC := math.Log10(cap * c.cell())
			if off := bands[a.Role-1].penalty(logC); off > 0.3 {
				f.note(cap, "the %s arc has %.2g F, %.1f decades off the usual range", a.Role, cap, off)
			}
		}
	}
}
