package study

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"brinkfield/physics/impedance"
	"brinkfield/physics/transport"
)

// Options steer a run.
type Options struct {
	Samples  int                                 // draws for the intervals; 0: none
	Progress func(fraction float64, what string) // may be nil
}

// DefaultSamples is how many draws an interval rests on.
const DefaultSamples = 400

// Result is one calculation.
type Result struct {
	Inputs    Inputs
	Numbers   []Number
	Flags     []Flag
	Findings  []string
	Headlines map[string]string // per station
	Evidence  []Evidence        // per spectrum
	Moves     []Move            // how far each route moves with each input
	View      View              // what the drawing and the profile show
	Energies  Energies

	rows    []row
	settled bool
}

// Energies are the Arrhenius lines behind the energies.
type Energies struct{ Bulk, Boundary, Total transport.Arrhenius }

// Number returns a result by id and spectrum (1 the first, 0 for the specimen and
// the layer shown), or nil.
func (r *Result) Number(id string, spectrum int) *Number {
	for i := range r.Numbers {
		if n := &r.Numbers[i]; n.ID == id && n.Spectrum == spectrum {
			return n
		}
	}
	return nil
}

// Series returns all results with an id, in order of temperature.
func (r *Result) Series(id string) []Number {
	var list []Number
	for _, n := range r.Numbers {
		if n.ID == id {
			list = append(list, n)
		}
	}
	return list
}

// Runner runs calculations and remembers the last fits, so that an edit of the
// specimen does not fit the spectra again. Not safe for concurrent use.
type Runner struct {
	key      string
	evidence []Evidence
}

// run is one calculation under way.
type run struct {
	*Runner
	in       Inputs
	read     map[string]Understood
	specimen specimen
	options  Options
	result   *Result
	rows     []row // per spectrum
	derived  []derivation

	// Where the numbers of rows, of all temperatures together and of the profile stand.
	where         map[int]rowIndex
	whereTogether [togethers]int
	whereProfile  []int
	profileShown  []profileColumn
}

// derivation remembers how a number of the specimen follows from it, for sampling.
type derivation struct {
	index int
	of    func(specimen) float64
}

// Run carries the inputs through all stations. The error is Problems when an
// input cannot be used, or the context's. What one spectrum refuses is said in
// its Evidence and does not stop the others.
func (rn *Runner) Run(ctx context.Context, in Inputs, options Options) (*Result, error) {
	read, problems := in.Check()
	if len(problems) > 0 {
		return nil, problems
	}
	r := &run{Runner: rn, in: in, read: read, specimen: specimenOf(in, read), options: options,
		result: &Result{Inputs: in, Headlines: map[string]string{}}}
	if err := r.fit(ctx); err != nil {
		return nil, err
	}
	r.result.Evidence = rn.evidence
	for _, section := range sections {
		section.run(r)
	}
	if options.Samples > 0 {
		if err := r.sample(ctx); err != nil {
			return nil, err
		}
		r.result.settled = true
	}
	r.result.rows = r.rows
	r.raiseFlags()
	r.result.Findings = r.findings()
	return r.result, nil
}

// sections are the stations in the order of the work; each adds its numbers.
var sections = []struct {
	Station
	run func(*run)
}{
	{Station{"view", ""}, (*run).chooseView},
	{Station{"specimen", "Specimen"}, (*run).specimenStation},
	{Station{"spectra", "Spectra"}, (*run).spectraStation},
	{Station{"boundary", "Boundary"}, (*run).boundaryStation},
	{Station{"profile", "Profile"}, (*run).profileStation},
}

// Station is a named part of the calculation.
type Station struct{ ID, Name string }

// Stations lists the stations in order.
func Stations() []Station {
	var list []Station
	for _, s := range sections {
		if s.Name != "" {
			list = append(list, s.Station)
		}
	}
	return list
}

func (r *run) headline(station, text string) { r.result.Headlines[station] = text }

// add appends a number, without an interval unless it has one.
func (r *run) add(n Number) int {
	if n.Low == 0 && n.High == 0 {
		n.Low, n.High = Float(math.NaN()), Float(math.NaN())
	}
	n.Unit = n.Kind.SIUnit
	r.result.Numbers = append(r.result.Numbers, n)
	return len(r.result.Numbers) - 1
}

// derive adds a number that follows from the specimen alone, and remembers how.
func (r *run) derive(n Number, of func(specimen) float64) {
	n.Source, n.Value = Derived, Float(of(r.specimen))
	r.derived = append(r.derived, derivation{r.add(n), of})
}

func (r *run) progress(fraction float64, format string, args ...any) {
	if r.options.Progress != nil {
		r.options.Progress(fraction, fmt.Sprintf(format, args...))
	}
}

// sample draws the fits and the inputs, carries every draw through the chain, and
// writes the 2.5 % and 97.5 % points to the numbers. The seed is fixed: the same
// inputs give the same interval everywhere.
func (r *run) sample(ctx context.Context) error {
	normal := rand.New(rand.NewPCG(0x6272696e6b, 0x6669656c64)).NormFloat64
	draws := make(map[int][]float64)
	keep := func(index int, v float64) {
		if !math.IsNaN(v) {
			draws[index] = append(draws[index], v)
		}
	}
	for k := range r.options.Samples {
		if k%20 == 0 {
			if err := ctx.Err(); err != nil {
				return err
			}
			r.progress(0.5+0.5*float64(k)/float64(r.options.Samples), "intervals, draw %d of %d", k, r.options.Samples)
		}
		s := r.specimen.sampled(r.read, normal)
		for _, d := range r.derived {
			keep(d.index, d.of(s))
		}
		rows := make([]row, len(r.rows))
		for i := range r.rows {
			rows[i] = r.rows[i].redrawn(s, r.evidence[i].Fit, normal)
		}
		r.keepBoundary(rows, keep)
		r.keepProfile(s, rows, keep)
	}
	for index, list := range draws {
		n := &r.result.Numbers[index]
		if len(list) < r.options.Samples*9/10 || n.Bound != Exact {
			continue
		}
		if slices.Sort(list); list[0] == list[len(list)-1] {
			continue // nothing that it rests on is uncertain
		}
		n.Low, n.High = Float(quantile(list, 0.025)), Float(quantile(list, 0.975))
	}
	return nil
}

// quantile interpolates in sorted values (type 7 of Hyndman & Fan, Am. Stat. 50, 361 (1996)).
func quantile(sorted []float64, p float64) float64 {
	at := p * float64(len(sorted)-1)
	i := int(at)
	if i+1 >= len(sorted) {
		return sorted[len(sorted)-1]
	}
	return sorted[i] + (at-float64(i))*(sorted[i+1]-sorted[i])
}

// Intervals returns the ends of all intervals in the order of the numbers, and
// SetIntervals puts them onto a result of the same inputs: the page computes the
// numbers at once and receives the intervals from the engine.
func (r *Result) Intervals() []float64 {
	out := make([]float64, 0, 2*len(r.Numbers))
	for _, n := range r.Numbers {
		out = append(out, float64(n.Low), float64(n.High))
	}
	return out
}

// SetIntervals is the counterpart of Intervals; it refuses a list of another length.
func (r *Result) SetIntervals(ends []float64) error {
	if len(ends) != 2*len(r.Numbers) {
		return fmt.Errorf("study: intervals do not belong to these numbers (%d ends for %d numbers)", len(ends), len(r.Numbers))
	}
	for i := range r.Numbers {
		r.Numbers[i].Low, r.Numbers[i].High = Float(ends[2*i]), Float(ends[2*i+1])
	}
	read, _ := r.Inputs.Check()
	again := &run{Runner: &Runner{evidence: r.Evidence}, in: r.Inputs, read: read, specimen: specimenOf(r.Inputs, read), result: r, rows: r.rows}
	r.Flags, r.settled = nil, true
	again.raiseFlags()
	r.Findings = again.findings()
	return nil
}

// Prime gives the runner fits made elsewhere (by the engine) for the inputs.
func (rn *Runner) Prime(in Inputs, evidence []Evidence) { rn.key, rn.evidence = fitKey(in), evidence }

// Fitted reports whether the runner holds the fits of these inputs, so that Run is quick.
func (rn *Runner) Fitted(in Inputs) bool {
	return len(in.Spectra()) == 0 || (rn.key != "" && rn.key == fitKey(in))
}

// Fit fits the spectra of the inputs, or returns what is remembered.
func (rn *Runner) Fit(ctx context.Context, in Inputs, options Options) ([]Evidence, error) {
	read, problems := in.Check()
	if len(problems) > 0 {
		return nil, problems
	}
	r := &run{Runner: rn, in: in, read: read, specimen: specimenOf(in, read), options: options, result: &Result{}}
	if err := r.fit(ctx); err != nil {
		return nil, err
	}
	return rn.evidence, nil
}

// Evidence is what one spectrum says.
type Evidence struct {
	Spectrum impedance.Spectrum
	Validity impedance.Validity
	Fit      *impedance.Fit // nil when Refused
	Refused  string         // why there is no fit
}

// Settled reports that the intervals are there.
func (r *Result) Settled() bool { return r.settled }
