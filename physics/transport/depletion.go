package transport

import (
	"fmt"
	"math"

	"brinkfield/physics/numerics"
	q "brinkfield/physics/quantity"
)

// Depletion is a Mott–Schottky layer: a frozen flat charge of density
// |z| e c∞ stripped of its mobile carrier.
type Depletion struct {
	Temperature  float64 // K
	Permittivity float64 // relative
	Charge       int     // z of the depleted carrier
	Bulk         float64 // c∞ of the carrier, m⁻³
}

func (d Depletion) z() float64 { return math.Abs(float64(d.Charge)) }

// Reduced returns a = |z|eΦ₀/k_BT.
func (d Depletion) Reduced(phi0 float64) float64 {
	return d.z() * math.Abs(phi0) / q.ThermalVoltage(d.Temperature)
}

// Width returns λ* = √(2εΦ₀/(|z| e c∞)) of one side, in m (Mott 1939, Schottky 1939).
func (d Depletion) Width(phi0 float64) float64 {
	return math.Sqrt(2 * d.Permittivity * q.VacuumPermittivity * math.Abs(phi0) / (d.z() * q.ElementaryCharge * d.Bulk))
}

// SmallSignalWidth returns λ_eff = √(2ε(Φ₀ − k_BT/|z|e)/(|z| e c∞)) of one
// side, in m: ε over the differential capacitance of the layer, whose edge is
// softened by k_BT. NaN below Φ₀ = k_BT/|z|e, where there is no depletion layer.
func (d Depletion) SmallSignalWidth(phi0 float64) float64 {
	soft := math.Abs(phi0) - q.ThermalVoltage(d.Temperature)/d.z()
	if soft <= 0 {
		return math.NaN()
	}
	return d.Width(soft)
}

// Charge returns |z| e c∞ λ*, C/m² of one side.
func (d Depletion) ChargeOneSide(phi0 float64) float64 {
	return d.z() * q.ElementaryCharge * d.Bulk * d.Width(phi0)
}

// MeanResistivity returns the mean of ρ/ρ_bulk over a depletion layer,
// ∫₀¹ e^{a t²} dt = e^a D(√a)/√a with Dawson's integral D. The series
// Σ a^k/(k!(2k+1)) has positive terms only and so keeps all digits; beyond
// a = 300 Dawson's asymptotic series does. Overflows to +Inf near a = 715.
func MeanResistivity(a float64) float64 {
	if a > 300 {
		return math.Exp(a) * asymptoticMean(a)
	}
	sum, term := 0.0, 1.0
	for k := 0; ; k++ {
		add := term / float64(2*k+1)
		sum += add
		if add < 1e-17*sum && float64(k) > a {
			return sum
		}
		term *= a / float64(k+1)
	}
}

// asymptoticMean is D(√a)/√a = 1/(2a) Σ (2k−1)!!/(2a)^k, to its smallest term.
func asymptoticMean(a float64) float64 {
	sum, term := 0.0, 1/(2*a)
	for k := 1; k < 40 && term > 1e-17*sum; k++ {
		sum += term
		term *= float64(2*k-1) / (2 * a)
	}
	return sum
}

// ExcessLength returns ∫(c∞/c − 1)dx of one side within the depletion
// approximation, in m of bulk: λ*(mean − 1).
func (d Depletion) ExcessLength(phi0 float64) float64 {
	return d.Width(phi0) * (MeanResistivity(d.Reduced(phi0)) - 1)
}

// ShortForm returns e^a/(2a), the leading term of the mean for a ≫ 1; it is
// 5.7 % low at a = 10.
func ShortForm(a float64) float64 { return math.Exp(a) / (2 * a) }

// OutOfRange reports a ratio for which a depletion formula has no barrier.
type OutOfRange struct{ Ratio, Least float64 }

func (e *OutOfRange) Error() string {
	return fmt.Sprintf("transport: ratio of time constants gives no barrier (%.4g), expected above %.4g", e.Ratio, e.Least)
}

// InvertShortForm solves e^a/(2a) = ratio on the branch a > 1. The error is
// *OutOfRange unless ratio > e/2, the minimum of the form.
func InvertShortForm(ratio float64) (float64, error) {
	if !(ratio > math.E/2) || math.IsInf(ratio, 0) {
		return math.NaN(), &OutOfRange{ratio, math.E / 2}
	}
	f := func(a float64) (float64, float64) { return a - math.Log(2*a) - math.Log(ratio), 1 - 1/a }
	return numerics.Root(f, 1, 5+2*math.Log(ratio), 1e-15)
}

// InvertDepletion solves mean(a) − 1 = ratio, the depletion approximation
// without the short form: ratio = R_boundary C_boundary/(R_bulk C_bulk).
func InvertDepletion(ratio float64) (float64, error) {
	if !(ratio > 0) || ratio > 1e300 {
		return math.NaN(), &OutOfRange{ratio, 0}
	}
	f := func(a float64) (float64, float64) {
		mean := MeanResistivity(a)
		// d mean/da = (e^a − mean)/(2a), from integration by parts.
		return math.Log((mean - 1) / ratio), (math.Exp(a) - mean) / (2 * a) / (mean - 1)
	}
	return numerics.Root(f, math.Min(1e-3, ratio), 10+2*math.Log1p(ratio), 1e-14)
}
