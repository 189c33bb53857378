package impedance

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"
)

// Spectra of an independent program that obey the relations by construction; the
// noise is known.
func TestValidSpectraPass(t *testing.T) {
	for _, name := range []string{"barrier-demo", "barrier-commas", "barrier-spread"} {
		want := readTruth(t, name).Inputs.Noise / math.Sqrt2 // per component
		for _, s := range readSpectra(t, name).Spectra {
			v, err := KramersKronig(s)
			if err != nil || !v.Pass || len(v.Failing) != 0 {
				t.Errorf("%s %.1f K: %v, worst %.4f of %.4f, failing %v", name, s.T, err, v.Worst, v.Threshold, v.Failing)
			}
			// 61 points: standard deviation of a standard deviation 7 %, thrice that
			if math.Abs(v.Noise/want-1) > 0.21 {
				t.Errorf("%s %.1f K: noise %.5f, put in %.5f", name, s.T, v.Noise, want)
			}
			if v.Elements < 5 || v.Elements > 45 || len(v.Residuals) != len(s.Points) {
				t.Errorf("%s %.1f K: %d elements, %d residuals", name, s.T, v.Elements, len(v.Residuals))
			}
		}
	}
}

// Violations: an imaginary part too large in a band of frequencies, and a specimen
// whose resistance drifts by half while the sweep goes on.
func TestViolationsFail(t *testing.T) {
	rng := rand.New(rand.NewPCG(6, 6))
	s := synthetic(twoArcs, 0.1, 2e6, 61, 0.003, rng)
	for i, p := range s.Points {
		if p.F > 300 && p.F < 3e4 {
			s.Points[i].Z = complex(real(p.Z), imag(p.Z)*1.15)
		}
	}
	v, err := KramersKronig(s)
	if err != nil || v.Pass || len(v.Failing) == 0 {
		t.Fatalf("band: %v %+v", err, v)
	}
	inside := false
	for _, r := range v.Failing {
		inside = inside || (r.High > 300 && r.Low < 3e4)
		if r.Low > r.High {
			t.Errorf("range %+v is upside down", r)
		}
	}
	if !inside {
		t.Errorf("failing ranges %v, want one within 300 Hz to 30 kHz", v.Failing)
	}
	s = synthetic(twoArcs, 0.1, 2e6, 61, 0.003, rng)
	for i, p := range s.Points {
		drift := 1 + 0.5*float64(i)/60
		q := append([]float64(nil), twoArcs...)
		q[ParamR(0)] += math.Log(drift)
		q[ParamR(1)] += math.Log(drift * drift)
		s.Points[i].Z = ModelOf(q, p.F)
	}
	v, err = KramersKronig(s)
	if err != nil || v.Pass {
		t.Errorf("drift: %v, worst %.4f, threshold %.4f, pass %v", err, v.Worst, v.Threshold, v.Pass)
	}
}

func TestKramersKronigErrors(t *testing.T) {
	s := synthetic(twoArcs, 1, 1e5, 5, 0, nil)
	if _, err := KramersKronig(s); !errors.Is(err, ErrTooFewPoints) {
		t.Errorf("error %v, want ErrTooFewPoints", err)
	}
	s = synthetic(twoArcs, 1e3, 1e3, 12, 0, nil)
	if v, err := KramersKronig(s); !errors.Is(err, ErrNoFit) {
		t.Errorf("error %v (%+v), want ErrNoFit", err, v)
	}
}
