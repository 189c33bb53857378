// Package numerics holds the numerical methods that the physics needs and that
// gonum does not have: adaptive Gauss–Kronrod quadrature of several integrands
// at once, bracketed roots, and damped least squares with a covariance.
//
// All bounds are explicit: nothing here iterates without a limit, and a method
// that stops short says so in an error with the figures it reached.
//
//	var q numerics.Quadrature
//	v, e, err := q.Integrate(func(x float64, y []float64) { y[0] = math.Exp(x) }, 1, 0, 1)
package numerics
