package impedance

import (
	"regexp"
	"strings"
)

// ColumnQuantity is what a column holds.
type ColumnQuantity int

const (
	Ignored          ColumnQuantity = iota
	Frequency                       // Hz
	AngularFrequency                // rad/s
	RealPart                        // Ω
	ImaginaryPart                   // Ω, signed
	NegatedImaginary                // Ω, −Z″
	Modulus                         // Ω
	Phase                           // deg or rad, signed
	NegatedPhase                    // deg or rad, −phase
	Temperature                     // K or °C
)

var quantityNames = [...]string{"ignored", "frequency", "angular frequency", "real part", "imaginary part",
	"negated imaginary part", "modulus", "phase", "negated phase", "temperature"}

// String names the quantity.
func (q ColumnQuantity) String() string { return quantityNames[q] }

// kind lumps together what stands in for one another.
func (q ColumnQuantity) kind() ColumnQuantity {
	switch q {
	case AngularFrequency:
		return Frequency
	case NegatedImaginary:
		return ImaginaryPart
	case NegatedPhase:
		return Phase
	}
	return q
}

// unit is a spelled unit and its factor to Hz, rad/s, Ω, rad or K. Celsius alone
// has an offset, added by convert.
type unit struct {
	label  string
	factor float64
}

const degree = 0.017453292519943295 // π/180

var prefixFactor = map[string]float64{"": 1, "m": 1e-3, "k": 1e3, "K": 1e3, "M": 1e6, "G": 1e9, "µ": 1e-6, "u": 1e-6, "meg": 1e6, "Meg": 1e6}

var (
	unitHertz  = regexp.MustCompile(`^(m|k|K|M|G|)(?i:hz|hertz)$`)
	unitOhm    = regexp.MustCompile(`^(m|k|K|M|G|µ|u|meg|Meg|)(?i:ohms?)$`)
	unitRadS   = regexp.MustCompile(`^(k|M|)(?i:rad/s|rads-1|rad\*s\^?-1|rad·s\^?-1|rad/sec|1/s|s\^?-1)$`)
	unitDegree = regexp.MustCompile(`^(?i:deg|degs|degrees?)$`)
	unitRadian = regexp.MustCompile(`^(m|)(?i:rad|radians?)$`)
	unitKelvin = regexp.MustCompile(`^(K|(?i:kelvin))$`)
	unitDegC   = regexp.MustCompile(`^(C|c|(?i:deg ?c|celsius|deg ?celsius))$`)
	unitArea   = regexp.MustCompile(`^(m|k|K|M|G|)(?i:ohms?)[ .*·]*(m|cm|mm)(\^?2|²)?$`)
)

// readUnit recognises a unit of one of the quantities; q tells which it belongs to.
func readUnit(s string) (u unit, q ColumnQuantity, ok bool) {
	s = strings.TrimSpace(s)
	if m := unitHertz.FindStringSubmatch(s); m != nil {
		return unit{m[1] + "Hz", prefixFactor[m[1]]}, Frequency, true
	}
	if m := unitOhm.FindStringSubmatch(s); m != nil {
		return unit{strings.Replace(m[1], "K", "k", 1) + "Ω", prefixFactor[m[1]]}, RealPart, true
	}
	if m := unitRadS.FindStringSubmatch(s); m != nil {
		return unit{m[1] + "rad/s", prefixFactor[m[1]]}, AngularFrequency, true
	}
	if unitDegree.MatchString(s) {
		return unit{"deg", degree}, Phase, true
	}
	if m := unitRadian.FindStringSubmatch(s); m != nil {
		return unit{m[1] + "rad", prefixFactor[m[1]]}, Phase, true
	}
	if unitKelvin.MatchString(s) {
		return unit{"K", 1}, Temperature, true
	}
	if unitDegC.MatchString(s) {
		return unit{"°C", 1}, Temperature, true
	}
	return unit{}, Ignored, false
}

// headerGlyphs brings typographic forms to keyboard ones.
var headerGlyphs = strings.NewReplacer("″", "''", "”", "''", "“", "''", "\"", "''", "′", "'", "’", "'", "‘", "'", "`", "'", "´", "'",
	"−", "-", "–", "-", "Ω", "ohm", "Ω", "ohm", "ω", "omega", "φ", "phi", "ϕ", "phi", "Φ", "phi", "θ", "theta", "Θ", "theta",
	"ν", "nu", "°", "deg", "º", "deg", "℃", "degC", "∠", "angle", "\u200b", "", "\u00a0", " ")

var (
	bracketUnit = regexp.MustCompile(`^(.*?)\s*[\[({<]\s*([^\[\](){}<>]*?)\s*[\])}>]\s*$`)
	slashUnit   = regexp.MustCompile(`^(.*?)\s*/\s*(.+)$`)
	tailUnit    = regexp.MustCompile(`^(.*?)(?:\s*,\s*|\s+in\s+|[\s_.:]+)([^\s_,:]+)$`)
)

// splitUnit takes the unit off a header. A bracket or tail that is no unit belongs
// to the name, as in Re(Z) or Z_real.
func splitUnit(cell string) (name string, u unit, q ColumnQuantity, odd string) {
	for _, re := range []*regexp.Regexp{bracketUnit, slashUnit, tailUnit} {
		m := re.FindStringSubmatch(cell)
		if m == nil || (strings.TrimSpace(m[1]) == "" && re != bracketUnit) {
			continue
		}
		if u, q, ok := readUnit(m[2]); ok {
			return strings.Trim(m[1], " _/,:"), u, q, ""
		}
		if unitArea.MatchString(strings.TrimSpace(m[2])) {
			return strings.Trim(m[1], " _/,:"), unit{}, Ignored, m[2]
		}
	}
	return cell, unit{}, Ignored, ""
}

// spellings of column names, after folding: lower case, only letters, digits, '
// and | kept.
var spellings = map[string]ColumnQuantity{}

func init() {
	for q, words := range map[ColumnQuantity]string{
		Frequency:        "f freq freqs frequency nu hz frequenz fréquence frequence frecuencia frequenza",
		AngularFrequency: "omega w angularfrequency angfreq circularfrequency angularfreq kreisfrequenz",
		RealPart:         "z' zre zreal rez realz re real z'real zr r rs zprime realpart realpartz repart realimpedance resistance z're realteil realzohm",
		ImaginaryPart:    "z'' zim zimag imz imagz im imag z''imag zi x xs zdoubleprime imaginary imaginarypart imagpart imaginaryz impart zimaginary imaginaryimpedance imagimpedance reactance z''im imaginärteil",
		Modulus:          "|z| z zmod modz absz zabs abs mag magnitude modulus impedance |zohm| zmag magz zmagnitude impedancemodulus impedancemagnitude betrag mod |imp|",
		Phase:            "phase phi theta arg argz phasez zphase phaseangle angle thetaz ztheta zphi phiz phasewinkel zangle phaseshift",
		Temperature:      "temp temperature temperatur température temperatura tsample tcell tspecimen sampletemperature sampletemp",
	} {
		for _, w := range strings.Fields(words) {
			spellings[w] = q
		}
	}
}

var negated = regexp.MustCompile(`^(-|neg(ative|\.)?[ _]|minus[ _])\s*`)

// foldName brings a header name to the form of the spellings and says if it is
// negated.
func foldName(name string) (string, bool) {
	s := strings.ToLower(strings.TrimSpace(name))
	neg := false
	if loc := negated.FindStringIndex(s); loc != nil {
		neg, s = true, s[loc[1]:]
	}
	var b strings.Builder
	for _, r := range s {
		switch {
		case r >= 'a' && r <= 'z', r >= '0' && r <= '9', r > 127, r == '\'', r == '|':
			b.WriteRune(r)
		case r == '-' && b.Len() == 0:
			neg = !neg
		}
	}
	return b.String(), neg
}

// readHeader recognises one header cell. odd is a unit that cannot be used.
func readHeader(cell string) (q ColumnQuantity, u unit, odd string) {
	cell = headerGlyphs.Replace(strings.TrimSpace(cell))
	name, u, unitQ, odd := splitUnit(cell)
	if odd == "" && u.label == "" {
		if bare, bq, ok := readUnit(cell); ok && bq == Frequency {
			return Frequency, bare, "" // a column headed just "Hz"
		}
	}
	fold, neg := foldName(name)
	q, known := spellings[fold]
	if !known {
		q = nameByUnit(strings.TrimSpace(name), fold, unitQ)
	}
	if unitQ != Ignored && unitQ.kind() != unitKindOf(q) {
		return Ignored, unit{}, "" // "T/s" is a time, "Z'/V" something else
	}
	if q == Frequency && unitQ == AngularFrequency {
		q = AngularFrequency
	}
	if q == AngularFrequency && unitQ == Frequency {
		return Ignored, unit{}, ""
	}
	if neg {
		switch q {
		case ImaginaryPart:
			q = NegatedImaginary
		case Phase:
			q = NegatedPhase
		}
	}
	return q, u, odd
}

// nameByUnit settles names that mean different things: t is a temperature only
// with its unit or as a capital.
func nameByUnit(name, fold string, unitQ ColumnQuantity) ColumnQuantity {
	if unitQ == Temperature && (fold == "t" || strings.HasPrefix(fold, "temp")) || name == "T" {
		return Temperature
	}
	return Ignored
}

// unitKindOf is the quantity under which readUnit files the units of q.
func unitKindOf(q ColumnQuantity) ColumnQuantity {
	switch q.kind() {
	case RealPart, ImaginaryPart, Modulus:
		return RealPart
	}
	return q.kind()
}
