package study

import (
	"fmt"
	"math"

	q "brinkfield/physics/quantity"
	"brinkfield/physics/spacecharge"
	"brinkfield/physics/transport"
)

// specimen is the pellet in SI, as the stations use it.
type specimen struct {
	epsr, cationSites, carrierSites, dopant float64
	dopantCharge, carrierCharge             int
	carrierName                             string
	limited                                 bool
	brick                                   transport.Brick
	coreSites                               float64
}

// carriers returns c∞ = |z_D| x N_c/|z| in m⁻³: every dopant compensated by the carrier.
func carriers(x, cationSites, zDopant, zCarrier float64) float64 {
	return math.Abs(zDopant/zCarrier) * x * cationSites
}

// varied are the inputs with a ± in the order they are sampled, and how each
// enters a specimen. Quantities that cannot be negative are kept above zero by
// sampling their logarithm when the ± is relative to them.
var varied = []struct {
	param string
	field func(s *specimen) *float64
}{
	{"epsr", func(s *specimen) *float64 { return &s.epsr }},
	{"cation_sites", func(s *specimen) *float64 { return &s.cationSites }},
	{"carrier_sites", func(s *specimen) *float64 { return &s.carrierSites }},
	{"dopant", func(s *specimen) *float64 { return &s.dopant }},
	{"grain", func(s *specimen) *float64 { return &s.brick.Grain }},
	{"thickness", func(s *specimen) *float64 { return &s.brick.Length }},
	{"area", func(s *specimen) *float64 { return &s.brick.Area }},
	{"diameter", func(s *specimen) *float64 { return nil }},
	{"porosity", func(s *specimen) *float64 { return &s.brick.Porosity }},
	{"core_sites", func(s *specimen) *float64 { return &s.coreSites }},
}

// specimenOf builds the specimen from checked inputs.
func specimenOf(in Inputs, read map[string]Understood) specimen {
	v := func(p string) float64 { return read[p].Value }
	s := specimen{epsr: v("epsr"), cationSites: v("cation_sites"), carrierSites: v("carrier_sites"), dopant: v("dopant"),
		dopantCharge: int(v("dopant_charge")), carrierCharge: int(v("carrier_charge")), carrierName: in.Get("carrier"),
		limited: in.Get("statistics") == "limited", coreSites: v("core_sites"),
		brick: transport.Brick{Length: v("thickness"), Area: v("area"), Grain: v("grain"), Porosity: v("porosity")}}
	if d := v("diameter"); !math.IsNaN(d) {
		s.brick.Area = math.Pi * d * d / 4
	}
	return s
}

// sampled returns the specimen with its inputs moved by their ± times standard
// normal numbers; ± is a 95 % half-width.
func (s specimen) sampled(read map[string]Understood, normal func() float64) specimen {
	for _, one := range varied {
		u := read[one.param]
		z := normal() // drawn for every input, so that stating one ± does not reshuffle the others
		if u.Plus == 0 || math.IsNaN(u.Value) {
			continue
		}
		factor := math.Exp(z * u.Plus / halfWidth95 / math.Max(math.Abs(u.Value), u.Plus))
		switch {
		case one.param == "diameter":
			s.brick.Area *= factor * factor
		case one.param == "porosity":
			s.brick.Porosity = min(max(u.Value+z*u.Plus/halfWidth95, 0), 0.9)
		default:
			*one.field(&s) *= factor
		}
	}
	return s
}

// halfWidth95 is the 97.5 % point of the standard normal distribution.
const halfWidth95 = 1.959963984540054

// carrierDensity is c∞ in m⁻³.
func (s specimen) carrierDensity() float64 {
	return carriers(s.dopant, s.cationSites, float64(s.dopantCharge), float64(s.carrierCharge))
}

// medium is the bulk of a grain at a temperature in K; sigma in S/m gives the
// carrier its mobility, 0 leaves it out. The dopant is frozen and flat.
func (s specimen) medium(kelvin, sigma float64) (*spacecharge.Medium, error) {
	c := s.carrierDensity()
	carrier := spacecharge.Species{Name: s.carrierName, Charge: s.carrierCharge, Bulk: c, Mobile: true,
		Mobility: sigma / (math.Abs(float64(s.carrierCharge)) * q.ElementaryCharge * c)}
	if s.limited {
		carrier.Sites = s.carrierSites
	}
	return spacecharge.NewMedium(kelvin, s.epsr, []spacecharge.Species{carrier,
		{Name: "dopant", Charge: s.dopantCharge, Bulk: s.dopant * s.cationSites}})
}

// depletion is the Mott–Schottky layer of the specimen.
func (s specimen) depletion(kelvin float64) transport.Depletion {
	return transport.Depletion{Temperature: kelvin, Permittivity: s.epsr, Charge: s.carrierCharge, Bulk: s.carrierDensity()}
}

// specimenStation adds what follows from the inputs alone.
func (r *run) specimenStation() {
	r.entered()
	s, kelvin := r.specimen, r.result.View.Temperature
	add := func(id, label, symbol string, kind q.Kind, equation string, with []Put, of func(specimen) float64) {
		r.derive(Number{ID: id, Station: "specimen", Label: label, Symbol: symbol, Kind: kind, Equation: equation, With: with}, of)
	}
	add("carriers", "Carriers in the grain", "c∞", q.NumberDensity, "carriers",
		[]Put{put("x", s.dopant, q.Fraction), put("N_c", s.cationSites, q.NumberDensity), put("z_D", float64(s.dopantCharge), q.Number), put("z", float64(s.carrierCharge), q.Number)},
		specimen.carrierDensity)
	add("site_share", "Share of carrier sites", "c∞/N", q.Fraction, "share", nil, func(s specimen) float64 { return s.carrierDensity() / s.carrierSites })
	lengths := []Put{put("ε_r", s.epsr, q.Number), put("T", kelvin, q.Temperature), put("c∞", s.carrierDensity(), q.NumberDensity)}
	add("debye", "Debye length, all mobile species", "λ_D", q.Length, "debye", lengths, func(s specimen) float64 { return s.length(kelvin, (*spacecharge.Medium).Debye) })
	add("debye_majority", "Debye length, majority carrier", "λ", q.Length, "debyeMajority", lengths, func(s specimen) float64 {
		return s.length(kelvin, func(m *spacecharge.Medium) float64 { return m.DebyeMajority(0) })
	})
	add("cell_constant", "Thickness over area", "L/(A f)", q.InverseLength, "cell",
		[]Put{put("L", s.brick.Length, q.Length), put("A", s.brick.Area, q.Area), put("p", s.brick.Porosity, q.Fraction)},
		func(s specimen) float64 { return s.brick.CellConstant() })
	add("grains_across", "Boundaries in a row", "L/d", q.Number, "row", nil, func(s specimen) float64 { return s.brick.Length / s.brick.Grain })
	r.headline("specimen", fmt.Sprintf("%s dopant · %s", percent(s.dopant), q.Format(s.brick.Grain, q.Length, 3)))
}

// entered adds what a person typed as numbers, each with its ± as interval.
func (r *run) entered() {
	for _, f := range Fields {
		u := r.read[f.Param]
		if (f.Sort != Measure && f.Sort != Integer) || math.IsNaN(u.Value) {
			continue
		}
		kind := f.Kind
		if f.Sort == Integer {
			kind = q.Number
		}
		n := Number{ID: "entered_" + f.Param, Station: f.Station, Label: f.Label, Symbol: f.Symbol, Kind: kind, Value: Float(u.Value), Source: Entered}
		if r.in.Borrowed(f.Param) {
			n.Source = Borrowed
		}
		if u.Plus > 0 {
			n.Low, n.High = Float(u.Value-u.Plus), Float(u.Value+u.Plus)
		}
		r.add(n)
	}
}

func (s specimen) length(kelvin float64, of func(*spacecharge.Medium) float64) float64 {
	m, err := s.medium(kelvin, 0)
	if err != nil {
		return math.NaN()
	}
	return of(m)
}

// percent prints a fraction with two or three digits in percent.
func percent(x float64) string {
	digits := 2
	if math.Abs(x) >= 0.0995 {
		digits = 3
	}
	return q.FormatNumber(100*x, digits) + " %"
}
