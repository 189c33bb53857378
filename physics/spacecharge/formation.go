package spacecharge

import (
	"fmt"
	"math"

	"brinkfield/physics/numerics"
	q "brinkfield/physics/quantity"
)

// Gibbs is a formation energy g = H − T·S.
type Gibbs struct {
	H float64 // J
	S float64 // J/K
}

// At returns g(T) in J.
func (g Gibbs) At(kelvin float64) float64 { return g.H - kelvin*g.S }

// Formation is an ionic crystal whose surface is source and sink of both members
// of a pair of defects of charges −z and +z: cation and anion vacancies of a
// Schottky pair, or, with its energies, vacancy and interstitial of a Frenkel
// pair. With φ against the surface
//
//	c_M = N exp(−(g_M − zeφ)/k_BT),  c_X = N exp(−(g_X + zeφ)/k_BT)
//
// (Frenkel 1946; Lehovec, J. Chem. Phys. 21, 1123 (1953); Kliewer & Koehler,
// Phys. Rev. 140, A1226 (1965)). Dopants are given by the charge they bring:
// positive (a cation of higher valence) enriches the negative member M.
type Formation struct {
	Negative, Positive Gibbs   // g_M of the member of charge −z, g_X of that of charge +z
	Charge             int     // z > 0
	Sites              float64 // N, m⁻³, of either member
	DopantCharge       float64 // charge density of the dopants, elementary charges per m³, signed
}

func (f Formation) check(kelvin float64) error {
	switch {
	case f.Charge <= 0:
		return fmt.Errorf("spacecharge: charge of the pair is not usable (%d), expected 1 or more", f.Charge)
	case !(f.Sites > 0):
		return fmt.Errorf("spacecharge: site density is not usable (%g m⁻³), expected above 0", f.Sites)
	case !(kelvin > 0):
		return fmt.Errorf("spacecharge: temperature is not usable (%g K), expected above 0 K", kelvin)
	}
	return nil
}

// intrinsic returns ln(c/N) of both members at the surface potential, and c_D/(zN).
func (f Formation) intrinsic(kelvin float64) (metal, other, dopant float64) {
	kT := q.Boltzmann * kelvin
	return -f.Negative.At(kelvin) / kT, -f.Positive.At(kelvin) / kT, f.DopantCharge / (float64(f.Charge) * f.Sites)
}

// Potential returns Φ₀ in V, surface against bulk, where z(c_M − c_X) balances the
// dopants in the bulk. Pure crystal: Φ₀ = (g_X − g_M)/(2ze), positive when the
// negative member is the cheaper one. With y = e^{zeφ/k_BT} of the bulk,
// e^{−g_M/kT} y − e^{−g_X/kT}/y = c_D/zN is solved through asinh, which loses
// nothing in either limit.
func (f Formation) Potential(kelvin float64) (float64, error) {
	if err := f.check(kelvin); err != nil {
		return math.NaN(), err
	}
	metal, other, dopant := f.intrinsic(kelvin)
	// y = e^{(other−metal)/2} e^{u}, sinh u = dopant/(2 e^{(metal+other)/2}).
	u := math.Asinh(dopant / 2 * math.Exp(-(metal+other)/2))
	return -q.ThermalVoltage(kelvin) / float64(f.Charge) * ((other-metal)/2 + u), nil
}

// Bulk returns the concentrations of the negative and the positive member in the
// bulk, m⁻³.
func (f Formation) Bulk(kelvin float64) (negative, positive float64, err error) {
	phi, err := f.Potential(kelvin)
	if err != nil {
		return math.NaN(), math.NaN(), err
	}
	metal, other, _ := f.intrinsic(kelvin)
	psi := -float64(f.Charge) * phi / q.ThermalVoltage(kelvin) // of the bulk against the surface
	return f.Sites * math.Exp(metal+psi), f.Sites * math.Exp(other-psi), nil
}

// NoIsoelectric reports that Φ₀ does not change sign in the range. Formal is the
// temperature outside it where it would, NaN if there is none at all.
type NoIsoelectric struct{ Low, High, Formal float64 }

func (e *NoIsoelectric) Error() string {
	if math.IsNaN(e.Formal) {
		return fmt.Sprintf("spacecharge: no isoelectric temperature at all (looked from %.4g to %.4g K), expected a dopant that enriches the cheaper member", e.Low, e.High)
	}
	return fmt.Sprintf("spacecharge: no isoelectric temperature from %.4g to %.4g K, formally it lies at %.5g K", e.Low, e.High, e.Formal)
}

// formalLimit is how far in K a formal isoelectric temperature is looked for.
const formalLimit = 1e5

// Isoelectric returns the temperature between low and high (K) at which Φ₀ = 0:
// there z(c_M − c_X) of the surface equals the dopants' charge. The error is
// *NoIsoelectric when there is none, with the formal one beyond the range.
func (f Formation) Isoelectric(low, high float64) (float64, error) {
	if err := f.check(low); err != nil {
		return math.NaN(), err
	}
	g := func(kelvin float64) (float64, float64) {
		phi, _ := f.Potential(kelvin)
		return phi, 0
	}
	if t, err := numerics.Root(g, low, high, 1e-9); err == nil {
		return t, nil
	}
	formal, err := numerics.Root(g, high, formalLimit, 1e-9)
	if err != nil {
		if formal, err = numerics.Root(g, math.Min(1, low), low, 1e-9); err != nil {
			formal = math.NaN()
		}
	}
	return math.NaN(), &NoIsoelectric{low, high, formal}
}
