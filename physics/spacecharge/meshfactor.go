package spacecharge

// factor eliminates from the centre to the interface, cell by cell. Row sums
// are carried instead of diagonals (Grassmann, Taksar, Heyman, Oper. Res. 33,
// 1107 (1985)): stiffness rows sum to zero, so nothing cancels where the cells
// are far smaller than the Debye length. What is left at the interface is
// dQ/dψ₀ of the grain.
func (g *mesh) factor() {
	carry := 0.0
	for e := len(g.phase) - 1; e >= 0; e-- {
		h := g.ends[e+1] - g.ends[e]
		kappa := 2 * g.phase[e].permittivity / h
		var sum [points]float64
		a := g.lower[e*points*points : (e+1)*points*points]
		for i := range points {
			for j := range i {
				a[i*points+j] = kappa * lobatto.stiff[i][j]
			}
			sum[i] = h / 2 * lobatto.weight[i] * g.screening[e*points+i]
		}
		sum[degree] += carry
		for k := degree; k > 0; k-- {
			row := a[k*points : k*points+points]
			pivot := sum[k]
			for j := range k {
				pivot -= row[j]
			}
			inverse := 1 / pivot
			row[k] = inverse // the diagonal keeps the inverse pivot
			for i := range k {
				l := row[i] * inverse
				if i > 0 {
					other := a[i*points : i*points+points]
					for j := range i {
						other[j] -= l * row[j]
					}
				}
				sum[i] -= l * sum[k]
			}
		}
		carry = sum[0]
		if e == g.core {
			g.stiffness = carry
		}
	}
	g.pivot = carry
}

// solve overwrites b with the solution of (K + W·screening) x = b; the node at
// the interface is left to finish, which gets the reduced right side there.
func (g *mesh) solve(b []float64, finish func(reduced float64) float64) {
	for e := len(g.phase) - 1; e >= 0; e-- {
		a, c := g.lower[e*points*points:(e+1)*points*points], b[e*degree:e*degree+points]
		for k := degree; k > 0; k-- {
			row := a[k*points : k*points+k+1]
			y := c[k] * row[k]
			c[k] = y
			for j := range k {
				c[j] -= row[j] * y
			}
		}
	}
	b[0] = finish(b[0])
	for e := range g.phase {
		a, c := g.lower[e*points*points:(e+1)*points*points], b[e*degree:e*degree+points]
		for k := 1; k < points; k++ {
			row := a[k*points : k*points+k+1]
			sum := 0.0
			for j := range k {
				sum += row[j] * c[j]
			}
			c[k] -= sum * row[k]
		}
	}
}

// finish is the equation of the interface node.
func (g *mesh) finish(reduced float64) float64 {
	if g.edge.fixed {
		return 0
	}
	_, slope := g.edge.charge(g.u[0]+g.reference, g.shifts())
	return reduced / (g.pivot - slope)
}
