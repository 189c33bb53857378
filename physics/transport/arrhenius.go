package transport

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
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
	x, y := mat.NewDense(n, 2, nil), mat.NewVecDense(n, nil)
	for i := range n {
		x.Set(i, 0, 1)
		x.Set(i, 1, -1/(q.Boltzmann*kelvin[i])*1e-20) // keeps both columns of order one
		y.SetVec(i, math.Log(sigma[i]*kelvin[i]))
	}
	var line mat.VecDense
	if err := line.SolveVec(x, y); err != nil {
		return Arrhenius{}, fmt.Errorf("transport: no line through these temperatures: %w", err)
	}
	var rest mat.VecDense
	rest.MulVec(x, &line)
	rest.SubVec(y, &rest)
	variance := mat.Dot(&rest, &rest) / float64(n-2)
	var normal, inverse mat.Dense
	normal.Mul(x.T(), x)
	if err := inverse.Inverse(&normal); err != nil {
		return Arrhenius{}, fmt.Errorf("transport: temperatures do not differ enough for an energy: %w", err)
	}
	t := distuv.StudentsT{Mu: 0, Sigma: 1, Nu: float64(n - 2)}.Quantile(0.975)
	half := t * math.Sqrt(variance*inverse.At(1, 1)) * 1e-20
	e := line.AtVec(1) * 1e-20
	return Arrhenius{Energy: e, EnergyLow: e - half, EnergyTop: e + half, LogFactor: line.AtVec(0),
		Scatter: math.Sqrt(variance), Points: n}, nil
}
