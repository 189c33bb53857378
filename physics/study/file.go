package study

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"slices"
	"strings"

	"brinkfield/physics/impedance"
)

// Program and Format stand at the head of a case file.
const (
	Program = "Brinkfield"
	Format  = 1
)

// caseFile is the JSON that the page saves and the terminal command prints.
type caseFile struct {
	Program    string              `json:"program"`
	Format     int                 `json:"format"`
	Link       string              `json:"link"`
	Parameters map[string]string   `json:"parameters"`
	NotTyped   []string            `json:"not_typed,omitempty"` // parameters nobody has typed: the demo's values
	Spectra    []spectrumRecord    `json:"spectra,omitempty"`
	Findings   []string            `json:"findings,omitempty"`
	Numbers    []Number            `json:"numbers,omitempty"`
	Flags      []Flag              `json:"flags,omitempty"`
	Moves      []Move              `json:"moves,omitempty"`
	Equations  map[string]Equation `json:"equations,omitempty"`
	Cautions   string              `json:"cautions"`
}

// Cautions are shown wherever results are.
const Cautions = "A screening calculation for people who know ceramics and electrochemistry. It replaces no measurement and no safety review. " +
	"Furnaces, hot or flammable gases, oxygen under pressure, high voltage across dielectrics, acids and solvents are governed by local codes " +
	"and the laboratory's own rules; designs that people depend on are signed off by licensed practice."

// spectrumRecord is a spectrum in a case file, with what the fit made of it.
type spectrumRecord struct {
	Temperature float64      `json:"temperature_K"`
	Points      [][3]float64 `json:"points_Hz_ohm"` // frequency, real, imaginary
	Valid       bool         `json:"kramers_kronig_passed"`
	Arcs        []arcRecord  `json:"arcs,omitempty"`
	Refused     string       `json:"refused,omitempty"`
}

type arcRecord struct {
	Role string `json:"role"`
	Why  string `json:"why"`
	R    Float  `json:"r_ohm"`
	Q    Float  `json:"q_S_s^n"`
	N    Float  `json:"n"`
	C    Float  `json:"c_F"`
	Peak Float  `json:"peak_Hz"`
	In   bool   `json:"peak_in_window"`
}

// JSON writes the case file of a result: inputs that open again, and everything
// that was found, with unit, interval, source and flags.
func (r *Result) JSON() ([]byte, error) {
	f := caseFile{Program: Program, Format: Format, Link: r.Inputs.withoutData().Link(), Parameters: r.Inputs.withoutData().all(), Findings: r.Findings,
		NotTyped: r.Inputs.notTyped(), Numbers: r.Numbers, Flags: r.Flags, Moves: r.Moves, Equations: map[string]Equation{}, Cautions: Cautions}
	for _, n := range r.Numbers {
		if e, ok := Equations[n.Equation]; ok {
			f.Equations[n.Equation] = e
		}
	}
	for _, e := range r.Evidence {
		f.Spectra = append(f.Spectra, recordOf(e))
	}
	var b bytes.Buffer
	enc := json.NewEncoder(&b)
	enc.SetEscapeHTML(false)
	enc.SetIndent("", " ")
	if err := enc.Encode(f); err != nil {
		return nil, fmt.Errorf("study: case file: %w", err)
	}
	return b.Bytes(), nil
}

func recordOf(e Evidence) spectrumRecord {
	rec := spectrumRecord{Temperature: e.Spectrum.T, Valid: e.Validity.Pass, Refused: e.Refused}
	for _, p := range e.Spectrum.Points {
		rec.Points = append(rec.Points, [3]float64{p.F, real(p.Z), imag(p.Z)})
	}
	if e.Fit == nil {
		return rec
	}
	for _, a := range e.Fit.Arcs {
		rec.Arcs = append(rec.Arcs, arcRecord{Role: a.Role.String(), Why: a.RoleWhy, R: Float(a.Arc.R), Q: Float(a.Arc.Q), N: Float(a.Arc.N),
			C: Float(a.Arc.Capacitance()), Peak: Float(a.Arc.Peak()), In: a.PeakInWindow})
	}
	return rec
}

// withoutData leaves the packed spectra out: a case file holds them as numbers.
func (in Inputs) withoutData() Inputs {
	out := in.Clone()
	delete(out.Text, "data")
	return out
}

// notTyped lists the parameters that stand at their default.
func (in Inputs) notTyped() (list []string) {
	for _, f := range Fields {
		if _, typed := in.Text[f.Param]; !typed && f.Param != "data" {
			list = append(list, f.Param)
		}
	}
	return list
}

// all lists every parameter with its text, defaults included.
func (in Inputs) all() map[string]string {
	m := map[string]string{}
	for _, f := range Fields {
		if f.Param == "data" {
			continue
		}
		m[f.Param] = strings.TrimSpace(in.Get(f.Param))
		if t := strings.TrimSpace(in.Text[f.PlusName]); f.PlusName != "" && t != "" {
			m[f.PlusName] = t
		}
	}
	return m
}

// Open reads a case file back into inputs. The error says what is wrong with the file.
func Open(data []byte) (Inputs, error) {
	var f caseFile
	if err := json.Unmarshal(data, &f); err != nil {
		return Inputs{}, fmt.Errorf("study: case file is not readable (%v), expected JSON that %s saved", err, Program)
	}
	if f.Program != Program {
		return Inputs{}, fmt.Errorf("study: file is not a case of this program (program %q), expected %q", f.Program, Program)
	}
	if f.Format < 1 || f.Format > Format {
		return Inputs{}, fmt.Errorf("study: case file has a newer format (%d), expected at most %d", f.Format, Format)
	}
	in := Defaults()
	for name, text := range f.Parameters {
		if !known(name) || name == "data" {
			return Inputs{}, fmt.Errorf("study: case file has an unknown parameter (%q), expected %s", name, nearest(name))
		}
		if !slices.Contains(f.NotTyped, name) || text != in.Get(name) {
			in.set(name, text)
		}
	}
	if in.Get("spectra") != "data" {
		return in, nil
	}
	spectra, err := spectraOf(f.Spectra)
	if err != nil {
		return Inputs{}, err
	}
	return in.WithSpectra(spectra)
}

func spectraOf(records []spectrumRecord) ([]impedance.Spectrum, error) {
	var list []impedance.Spectrum
	for i, rec := range records {
		s := impedance.Spectrum{T: rec.Temperature}
		if !(rec.Temperature > 0) || math.IsInf(rec.Temperature, 0) {
			return nil, fmt.Errorf("study: spectrum %d of the case file has no usable temperature (%g K), expected above 0 K", i+1, rec.Temperature)
		}
		for k, p := range rec.Points {
			if !(p[0] > 0) || math.IsInf(p[0], 0) {
				return nil, fmt.Errorf("study: point %d of spectrum %d has no usable frequency (%g Hz), expected above 0 Hz", k+1, i+1, p[0])
			}
			s.Points = append(s.Points, impedance.Point{F: p[0], Z: complex(p[1], p[2])})
		}
		s.Sort()
		list = append(list, s)
	}
	if len(list) == 0 {
		return nil, fmt.Errorf("study: case file holds no spectra (spectra=data), expected at least one")
	}
	return list, nil
}

// IsCase reports whether a dropped file looks like a case file rather than spectra.
func IsCase(data []byte) bool {
	head := strings.TrimSpace(string(data[:min(len(data), 200)]))
	return strings.HasPrefix(strings.TrimPrefix(head, "\ufeff"), "{")
}

// CSV writes all numbers as a table, one row each, comma separated (RFC 4180).
func (r *Result) CSV() []byte {
	var b strings.Builder
	b.WriteString("station,quantity,symbol,temperature_K,value,unit,low_95,high_95,statement,source,reason\r\n")
	for _, n := range r.Numbers {
		cells := []string{n.Station, n.Label, n.Symbol, plainFloat(n.Temperature, true), plainFloat(n.Value, false), n.Unit,
			plainFloat(n.Low, false), plainFloat(n.High, false), string(n.Bound), string(n.Source), n.Reason}
		for i, c := range cells {
			if strings.ContainsAny(c, ",\"\n") {
				cells[i] = `"` + strings.ReplaceAll(c, `"`, `""`) + `"`
			}
		}
		b.WriteString(strings.Join(cells, ",") + "\r\n")
	}
	return []byte(b.String())
}

func plainFloat(f Float, hideZero bool) string {
	if math.IsNaN(float64(f)) || (hideZero && f == 0) {
		return ""
	}
	return fmt.Sprint(float64(f))
}
