package study

import (
	"encoding/binary"
	"encoding/json"
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"

	"brinkfield/physics/impedance"
)

// The evidence travels from the engine to the page as JSON whose infinities and
// missing values survive; the spectra themselves stay where they are.

type evidenceWire struct {
	Refused  string
	Validity validityWire
	Fit      *fitWire
}

type validityWire struct {
	Elements                      int
	Mu, Noise, RMS, Worst, Limits Float
	Residuals                     []Float
	Pass                          bool
	Failing                       []impedance.Range
	Rule                          string
}

type estimateWire struct {
	V, L, H Float
	K       impedance.Kind
}

type arcWire struct {
	Role                 impedance.Role
	Why                  string
	R, Q, N, C, Tau, Top estimateWire
	In                   bool
}

type fitWire struct {
	T                  float64
	Arcs               []arcWire
	LeadR, LeadL       estimateWire
	Params             []Float
	Free, Omitted      []bool
	Covariance         []Float
	Residuals          []Float
	Chi, Sigma, Grad   Float
	Inflation          Float
	Freedom, Steps     int
	Trials             []trialWire
	Status, StartsText string
	Notes              []noteWire
}

type trialWire struct {
	Arcs, Free             int
	AICc, Sigma, Inflation Float
	Accepted               bool
	Why                    string
}

type noteWire struct {
	Text  string
	Value Float
}

// EncodeEvidence writes what the fits found.
func EncodeEvidence(list []Evidence) ([]byte, error) {
	wire := make([]evidenceWire, len(list))
	for i, e := range list {
		v := e.Validity
		wire[i] = evidenceWire{Refused: e.Refused, Validity: validityWire{v.Elements, Float(v.Mu), Float(v.Noise), Float(v.RMS), Float(v.Worst),
			Float(v.Threshold), pairs(v.Residuals), v.Pass, v.Failing, v.Rule}, Fit: fitToWire(e.Fit)}
	}
	return json.Marshal(wire)
}

// DecodeEvidence reads it back for the spectra it belongs to.
func DecodeEvidence(data []byte, spectra []impedance.Spectrum) ([]Evidence, error) {
	var wire []evidenceWire
	if err := json.Unmarshal(data, &wire); err != nil {
		return nil, fmt.Errorf("study: evidence is not readable: %w", err)
	}
	if len(wire) != len(spectra) {
		return nil, fmt.Errorf("study: evidence is of %d spectra, expected %d", len(wire), len(spectra))
	}
	list := make([]Evidence, len(wire))
	for i, w := range wire {
		v := w.Validity
		list[i] = Evidence{Spectrum: spectra[i], Refused: w.Refused, Validity: impedance.Validity{Elements: v.Elements, Mu: float64(v.Mu),
			Noise: float64(v.Noise), RMS: float64(v.RMS), Worst: float64(v.Worst), Threshold: float64(v.Limits), Residuals: unpairs(v.Residuals),
			Pass: v.Pass, Failing: v.Failing, Rule: v.Rule}, Fit: fitFromWire(w.Fit)}
	}
	return list, nil
}

func estimateToWire(e impedance.Estimate) estimateWire {
	return estimateWire{Float(e.Value), Float(e.Low), Float(e.High), e.Kind}
}

func (w estimateWire) estimate() impedance.Estimate {
	return impedance.Estimate{Value: float64(w.V), Low: float64(w.L), High: float64(w.H), Kind: w.K}
}

func fitToWire(f *impedance.Fit) *fitWire {
	if f == nil {
		return nil
	}
	w := &fitWire{T: f.T, LeadR: estimateToWire(f.LeadR), LeadL: estimateToWire(f.LeadL), Params: floats(f.Params), Free: f.Free, Omitted: f.Omitted,
		Residuals: pairs(f.Residuals), Chi: Float(f.ChiSquared), Sigma: Float(f.Sigma), Inflation: Float(f.Inflation), Grad: Float(f.Gradient), Freedom: f.Freedom,
		Steps: f.Iterations, Status: f.Status, StartsText: f.StartsAgree}
	n := len(f.Params)
	for i := range n {
		for j := range n {
			w.Covariance = append(w.Covariance, Float(f.Covariance.At(i, j)))
		}
	}
	for _, a := range f.Arcs {
		w.Arcs = append(w.Arcs, arcWire{a.Role, a.RoleWhy, estimateToWire(a.R), estimateToWire(a.Q), estimateToWire(a.N), estimateToWire(a.C),
			estimateToWire(a.Tau), estimateToWire(a.Peak), a.PeakInWindow})
	}
	for _, t := range f.Trials {
		w.Trials = append(w.Trials, trialWire{t.Arcs, t.Free, Float(t.AICc), Float(t.Sigma), Float(t.Inflation), t.Accepted, t.Why})
	}
	for _, x := range f.Notes {
		w.Notes = append(w.Notes, noteWire{x.Text, Float(x.Value)})
	}
	return w
}

func fitFromWire(w *fitWire) *impedance.Fit {
	if w == nil {
		return nil
	}
	f := &impedance.Fit{T: w.T, LeadR: w.LeadR.estimate(), LeadL: w.LeadL.estimate(), Params: unfloats(w.Params), Free: w.Free, Omitted: w.Omitted,
		Residuals: unpairs(w.Residuals), ChiSquared: float64(w.Chi), Sigma: float64(w.Sigma), Inflation: float64(w.Inflation), Gradient: float64(w.Grad), Freedom: w.Freedom,
		Iterations: w.Steps, Status: w.Status, StartsAgree: w.StartsText}
	f.Covariance = mat.NewSymDense(len(w.Params), unfloats(w.Covariance))
	arcs := impedance.ArcsOf(f.Params)
	for k, a := range w.Arcs {
		f.Arcs = append(f.Arcs, impedance.FittedArc{Arc: arcs[k], Role: a.Role, RoleWhy: a.Why, R: a.R.estimate(), Q: a.Q.estimate(), N: a.N.estimate(),
			C: a.C.estimate(), Tau: a.Tau.estimate(), Peak: a.Top.estimate(), PeakInWindow: a.In})
	}
	for _, t := range w.Trials {
		f.Trials = append(f.Trials, impedance.Trial{Arcs: t.Arcs, Free: t.Free, AICc: float64(t.AICc), Sigma: float64(t.Sigma), Inflation: float64(t.Inflation), Accepted: t.Accepted, Why: t.Why})
	}
	for _, x := range w.Notes {
		f.Notes = append(f.Notes, impedance.Note{Text: x.Text, Value: float64(x.Value)})
	}
	return f
}

func floats(list []float64) []Float {
	out := make([]Float, len(list))
	for i, v := range list {
		out[i] = Float(v)
	}
	return out
}

func unfloats(list []Float) []float64 {
	out := make([]float64, len(list))
	for i, v := range list {
		out[i] = float64(v)
	}
	return out
}

func pairs(list []complex128) []Float {
	out := make([]Float, 0, 2*len(list))
	for _, z := range list {
		out = append(out, Float(real(z)), Float(imag(z)))
	}
	return out
}

func unpairs(list []Float) []complex128 {
	out := make([]complex128, len(list)/2)
	for i := range out {
		out[i] = complex(float64(list[2*i]), float64(list[2*i+1]))
	}
	return out
}

// EncodeEnds writes interval ends as little-endian float64s; DecodeEnds reads them.
func EncodeEnds(ends []float64) []byte {
	out := make([]byte, 0, 8*len(ends))
	for _, v := range ends {
		out = binary.LittleEndian.AppendUint64(out, math.Float64bits(v))
	}
	return out
}

// DecodeEnds is the counterpart of EncodeEnds.
func DecodeEnds(data []byte) ([]float64, error) {
	if len(data)%8 != 0 {
		return nil, fmt.Errorf("study: interval ends are cut off (%d bytes), expected eight each", len(data))
	}
	out := make([]float64, len(data)/8)
	for i := range out {
		out[i] = math.Float64frombits(binary.LittleEndian.Uint64(data[8*i:]))
	}
	return out, nil
}
