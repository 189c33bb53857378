package transport

import (
	"fmt"

	q "brinkfield/physics/quantity"
)

// Brick is a pellet seen as cubic grains in rows along the current.
type Brick struct {
	Length   float64 // pellet thickness L, m
	Area     float64 // electrode area A, m²
	Grain    float64 // grain edge d, m
	Porosity float64 // volume fraction of closed insulating pores, 0 ≤ p < 1
}

// CellConstant returns L/(A f) in 1/m. f = (1−p)/(1+p/2) is the conductance left
// by spherical insulating pores (Maxwell, A Treatise on Electricity and Magnetism,
// 1873, art. 314); ratios of arcs do not depend on it.
func (b Brick) CellConstant() float64 {
	return b.Length / b.Area / ((1 - b.Porosity) / (1 + b.Porosity/2))
}

// Interior returns R_b = L/(Aσ_b), Ω.
func (b Brick) Interior(sigma float64) float64 { return b.CellConstant() / sigma }

// Boundary returns R_gb = r (L/d)/A in Ω for r Ω m² per boundary (both sides and core).
func (b Brick) Boundary(perBoundary float64) float64 {
	return perBoundary * b.CellConstant() / b.Grain
}

// BoundaryCapacitance returns C_gb = C″ d A/L in F for C″ F/m² per boundary.
func (b Brick) BoundaryCapacitance(perBoundary float64) float64 {
	return perBoundary * b.Grain / b.CellConstant()
}

// InteriorCapacitance returns C_b = εA/L, F.
func (b Brick) InteriorCapacitance(permittivity float64) float64 {
	return permittivity * q.VacuumPermittivity / b.CellConstant()
}

// SideWalls returns the relative change of the grains' conduction by the layers
// that run parallel to the current: 4ΔY/(d σ_b), since of the boundary volume
// 3δ/d two thirds lie along it and each wall has two sides (Maier 1986/1995, memory).
// along is ΔY of one side in S, sigma the bulk conductivity in S/m.
func (b Brick) SideWalls(along, sigma float64) float64 { return 4 * along / (b.Grain * sigma) }

// Arcs are the interior and the boundary arc as fitted.
type Arcs struct {
	RInterior, CInterior float64 // Ω, F
	RBoundary, CBoundary float64 // Ω, F
}

// Grains is what the arcs mean for the grains once the dielectric width of the
// boundaries is taken out.
type Grains struct {
	WidthShare float64 // δ/d, the electrical width of a boundary over the grain
	RBulk      float64 // Ω, of homogeneous grains over the full length
	RBoundary  float64 // Ω, excess of the boundaries over homogeneous grains
	CBulk      float64 // F, of homogeneous grains over the full length
	Ratio      float64 // RBoundary/RBulk, direct current
	TimeRatio  float64 // RBoundary·CBoundary/(RBulk·CBulk)
	Blocking   float64 // RBoundary/(RBulk + RBoundary)
}

// Read takes the dielectric width out of the arcs. At the frequencies of the
// interior arc the depleted layers do not conduct, so that arc is short by
// δ/d = q/(1+q), q = C_int/C_gb; the boundary arc holds the rest.
func (a Arcs) Read() (Grains, error) {
	for _, v := range []float64{a.RInterior, a.CInterior, a.RBoundary, a.CBoundary} {
		if !(v > 0) {
			return Grains{}, fmt.Errorf("transport: arc is not usable (R %.4g Ω, C %.4g F; R %.4g Ω, C %.4g F), expected positive values",
				a.RInterior, a.CInterior, a.RBoundary, a.CBoundary)
		}
	}
	ratio := a.CInterior / a.CBoundary
	g := Grains{WidthShare: ratio / (1 + ratio)}
	g.RBulk = a.RInterior / (1 - g.WidthShare)
	g.CBulk = a.CInterior * (1 - g.WidthShare)
	g.RBoundary = a.RInterior + a.RBoundary - g.RBulk
	g.Ratio = g.RBoundary / g.RBulk
	g.TimeRatio = g.RBoundary * a.CBoundary / (g.RBulk * g.CBulk)
	g.Blocking = g.RBoundary / (g.RBulk + g.RBoundary)
	return g, nil
}

// SpecificBoundary returns σ_gb = (L/A)(1/R_gb)(C_b/C_gb) in S/m, the published
// form of the specific boundary conductivity, for the cell constant in 1/m.
func (g Grains) SpecificBoundary(cell, cBoundary float64) float64 {
	return cell / g.RBoundary * g.CBulk / cBoundary
}

// ParallelPaths returns the resistance in Ω m² of a half grain of length half (m)
// whose carriers do not exchange on the way: 1/Σ 1/(half/σ + ΔR) with each
// carrier's own excess. It differs by factors from the formula with σ summed,
// which holds under local equilibrium.
func ParallelPaths(half float64, sigma, excessLength []float64) float64 {
	sum := 0.0
	for i, s := range sigma {
		if s > 0 {
			sum += s / (half + excessLength[i])
		}
	}
	return 1 / sum
}
