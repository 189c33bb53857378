// Package transport says what a charged boundary does to the current: the
// depletion-layer formulas and their inversions, the brick layer that connects a
// pellet's arcs to its grains, and Arrhenius energies.
//
// Sources: Fleig, Rodewald, Maier, J. Appl. Phys. 87, 2372 (2000) and Guo &
// Waser, Prog. Mater. Sci. 51, 151 (2006) for the depletion layer's resistance;
// Maier, Prog. Solid State Chem. 23, 171 (1995) for the brick layer (memory).
// The exact counterpart of the depletion formulas is spacecharge.Layer.
//
// SI throughout. a = |z|eΦ₀/k_BT is the reduced barrier. "One side" and "per
// boundary" (two sides) are never the same variable. Validity: cubic grains,
// layers thin against the grain, one carrier in the depletion formulas.
//
//	a, err := transport.InvertDepletion(534.9) // from τ_boundary/τ_bulk
//	phi0 := a * quantity.ThermalVoltage(573.15) / 2
package transport
