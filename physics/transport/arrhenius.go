package transport

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/stat"
	"gonum.org/v1/gonum/stat/distuv"

	q "brinkfield/physics/quantity"
)

// Arrhenius is the line σT = A exp(−E/k_BT) through conductivities.
type Arrhenius struct {
	Energy    float64 // J
	EnergyLow float64 // J, 95 %
	EnergyTop float64 // J, 95 %
	LogFactor float64 // ln(A/(S K/m))
	Scatter   float64 // standard deviation of ln(σT) about the line
	Points    int
}

// At returns σ(T) of the line in S/m.
func (a Arrhenius) At(kelvin float64) float64 {
	return math.Exp(a.LogFactor-a.Energy/(q.Boltzmann*kelvin)) / kelvin
}

// FitArrhenius fits ln(σT) against 1/T without weights: the interval of the
// energy is Student's, from the scatter about the line. It needs three temperatures.
func FitArrhenius(kelvin, sigma []float64) (Arrhenius, error) {
	n := len(kelvin)
	if n < 3 {
		return Arrhenius{}, fmt.Errorf("transport: too few temperatures for an energy (%d), expected 3 or more", n)
	}
	x, y := make([]float64, n), make([]float64, n)
	for i := range n {
		x[i], y[i] = -1/(q.Boltzmann*kelvin[i]), math.Log(sigma[i]*kelvin[i])
	}
	spread := stat.Variance(x, nil) * float64(n-1)
	if !(spread > 1e-12*x[0]*x[0]) {
		return Arrhenius{}, fmt.Errorf("transport: temperatures do not differ enough for an energy (%.6g to %.6g K), expected some kelvin between them", kelvin[0], kelvin[n-1])
	}
	factor, e := stat.LinearRegression(x, y, nil, false)
	variance := 0.0
	for i := range n {
		variance += math.Pow(y[i]-factor-e*x[i], 2) / float64(n-2)
	}
	t := distuv.StudentsT{Mu: 0, Sigma: 1, Nu: float64(n - 2)}.Quantile(0.975)
	half := t * math.Sqrt(variance/spread)
	return Arrhenius{Energy: e, EnergyLow: e - half, EnergyTop: e + half, LogFactor: factor,
		Scatter: math.Sqrt(variance), Points: n}, nil
}
