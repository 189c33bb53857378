// Package spacecharge solves the Poisson–Boltzmann layer beside a charged
// interface in an ionic solid or a liquid.
//
// Model: a semi-infinite medium whose bulk is neutral, any number of species of
// any valence, each mobile (it follows the potential) or frozen with a flat
// profile; mobile species are dilute or share a sublattice of limited sites. The
// first integral of the Poisson–Boltzmann equation reduces every result to a
// quadrature over the potential, so there is no mesh (physics of the first
// integral: Gouy 1910, Chapman 1913; for solids Maier, Prog. Solid State Chem.
// 23, 171 (1995); site limits: Bikerman 1942, Kilic, Bazant, Ajdari, Phys. Rev.
// E 75, 021502 (2007)).
//
// Conventions: SI; x runs from the interface plane into the grain; Φ₀ is the
// potential of the interface against the bulk, ψ = eΔφ/k_BT; one side only, a
// boundary has two. Validity: continuum, uniform permittivity, layers that do
// not overlap (grain ≫ layer), no current.
//
//	m, err := spacecharge.NewMedium(573.15, 30, []spacecharge.Species{
//		{Name: "vacancy", Charge: 2, Bulk: 1.25e26, Mobile: true, Mobility: 8e-12},
//		{Name: "acceptor", Charge: -1, Bulk: 2.5e26}})
//	layer, err := m.Solve(0.22) // layer.Charge, layer.Capacitance, …
package spacecharge
