package spacecharge

import "math"

// The mesh solver's cells carry polynomials of degree `degree` through
// Gauss–Lobatto points. With the rule's own weights the charge stays local to
// its point, as in finite volumes, the scheme conserves charge to rounding, and
// values at cell ends converge with the power 2·degree of the cell width
// (Deville, Fischer, Mund, High-Order Methods for Incompressible Fluid Flow,
// 2002, ch. 2, memory).
const (
	degree = 8
	points = degree + 1
)

// lobatto is the reference cell −1…1.
var lobatto = newReferenceCell()

type referenceCell struct {
	node, weight [points]float64
	bary         [points]float64         // barycentric weights
	slope        [points][points]float64 // d/dξ of the cardinal polynomials at the nodes
	stiff        [points][points]float64 // ∫ l_i′ l_j′ dξ
	half         [2][points][points]float64
}

func newReferenceCell() *referenceCell {
	r := &referenceCell{}
	for k := range points { // roots of (1−ξ²)P′: Newton from the Chebyshev points
		x := -math.Cos(math.Pi * float64(k) / degree)
		for range 50 {
			p, before := legendre(x)
			x -= (x*p - before) / (float64(points) * p)
		}
		p, _ := legendre(x)
		r.node[k], r.weight[k] = x, 2/(float64(degree*points)*p*p)
	}
	r.node[0], r.node[degree] = -1, 1
	for k := range points {
		r.bary[k] = 1
		for j := range points {
			if j != k {
				r.bary[k] /= r.node[k] - r.node[j]
			}
		}
	}
	r.differentiate()
	for side := range 2 {
		for k := range points {
			r.cardinals((r.node[k]+float64(2*side-1))/2, &r.half[side][k])
		}
	}
	return r
}

// differentiate fills slope and stiff; the diagonals follow from zero row sums.
func (r *referenceCell) differentiate() {
	for k := range points {
		for j := range points {
			if j != k {
				r.slope[k][j] = r.bary[j] / r.bary[k] / (r.node[k] - r.node[j])
				r.slope[k][k] -= r.slope[k][j]
			}
		}
	}
	for i := range points {
		for j := range points {
			if i != j {
				for k := range points { // exact: the rule integrates degree 15
					r.stiff[i][j] += r.weight[k] * r.slope[k][i] * r.slope[k][j]
				}
				r.stiff[i][i] -= r.stiff[i][j]
			}
		}
	}
}

// cardinals writes the values of the cardinal polynomials at ξ.
func (r *referenceCell) cardinals(xi float64, out *[points]float64) {
	sum := 0.0
	for k := range points {
		if xi == r.node[k] {
			*out = [points]float64{}
			out[k] = 1
			return
		}
		out[k] = r.bary[k] / (xi - r.node[k])
		sum += out[k]
	}
	for k := range points {
		out[k] /= sum
	}
}

// legendre returns P of the cell's degree and the one before.
func legendre(x float64) (p, before float64) {
	p, before = x, 1
	for n := 2; n <= degree; n++ {
		p, before = (float64(2*n-1)*x*p-float64(n-1)*before)/float64(n), p
	}
	return p, before
}
