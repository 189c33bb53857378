package spacecharge

import (
	"errors"
	"math"
	"testing"

	q "brinkfield/physics/quantity"
)

const eV = q.ElementaryCharge

// sodiumChloride has 2.23e28 cation sites per m³ (a = 564 pm, common practice).
func sodiumChloride(gM, gX Gibbs, fraction float64) Formation {
	const sites = 2.23e28
	return Formation{Negative: gM, Positive: gX, Charge: 1, Sites: sites, DopantCharge: fraction * sites}
}

var (
	textbookM, textbookX = Gibbs{H: 0.65 * eV}, Gibbs{H: 1.21 * eV} // Kliewer & Koehler 1965, memory
	// Harris, J. Phys. C 20 (1987): cation vacancy 1.15 eV, 4.1 k; Dreyfus & Nowick,
	// J. Appl. Phys. 33, 473 (1962): Schottky pair 2.12 eV, 6.28 k; the anion vacancy is the rest.
	harrisM = Gibbs{1.15 * eV, 4.1 * q.Boltzmann}
	harrisX = Gibbs{(2.12 - 1.15) * eV, (6.28 - 4.1) * q.Boltzmann}
)

func TestFormationPotential(t *testing.T) {
	// Kliewer & Koehler 1965 (memory): the bulk stands 0.28 V below the surface.
	for _, kelvin := range []float64{300, 700, 1000} {
		phi, err := sodiumChloride(textbookM, textbookX, 0).Potential(kelvin)
		if err != nil || math.Abs(phi-0.28) > 1e-12 {
			t.Errorf("pure, %g K: %g V, %v", kelvin, phi, err)
		}
	}
	// The two published sets give opposite signs of the intrinsic potential.
	if phi, _ := sodiumChloride(harrisM, harrisX, 0).Potential(300); phi >= 0 {
		t.Errorf("Harris with Dreyfus–Nowick at 300 K: %g V, want negative", phi)
	}
	// Mass action and neutrality hold in the bulk over forty decades.
	for _, kelvin := range []float64{100, 300, 900} {
		for _, fraction := range []float64{0, 1e-12, 1e-6, -1e-6, 0.01} {
			f := sodiumChloride(textbookM, textbookX, fraction)
			m, x, err := f.Bulk(kelvin)
			if err != nil {
				t.Fatal(err)
			}
			kT := q.Boltzmann * kelvin
			if law := math.Log(m/f.Sites) + math.Log(x/f.Sites) + (f.Negative.At(kelvin)+f.Positive.At(kelvin))/kT; math.Abs(law) > 1e-10 {
				t.Errorf("%g K, %g: mass action off by %g", kelvin, fraction, law)
			}
			if off := (m - x - f.DopantCharge) / math.Max(m, x); math.Abs(off) > 1e-10 {
				t.Errorf("%g K, %g: neutrality off by %g", kelvin, fraction, off)
			}
		}
	}
}

// Recomputed: c_M(0) − c_X(0) = c_D for the textbook pair at two site fractions.
func TestIsoelectric(t *testing.T) {
	for fraction, want := range map[float64]float64{1e-6: 545.976, 1e-4: 818.996} {
		got, err := sodiumChloride(textbookM, textbookX, fraction).Isoelectric(200, 1073)
		if err != nil || math.Abs(got-want) > 6e-4 {
			t.Errorf("%g: %.4f K, %v, want %g", fraction, got, err, want)
		}
	}
	// None below melting (1073.8 K) with the measured energies; formally 1089.9 and 1178.5 K (recomputed).
	for fraction, want := range map[float64]float64{1e-6: 1089.9, 1e-4: 1178.5} {
		_, err := sodiumChloride(harrisM, harrisX, fraction).Isoelectric(200, 1073.8)
		var none *NoIsoelectric
		if !errors.As(err, &none) || math.Abs(none.Formal-want) > 0.06 {
			t.Errorf("%g: got %v, want a formal %g K", fraction, err, want)
		}
	}
	// The other sign of dopant has none.
	_, err := sodiumChloride(textbookM, textbookX, -1e-6).Isoelectric(200, 1073)
	var none *NoIsoelectric
	if !errors.As(err, &none) || !math.IsNaN(none.Formal) {
		t.Errorf("the other sign: %v", err)
	}
	if _, err := (Formation{}).Isoelectric(200, 300); err == nil {
		t.Error("an empty crystal was accepted")
	}
}
