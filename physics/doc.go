// Package physics is the core of Brinkfield: the tree is the theory.
//
//	quantity     constants, units, reading and printing of quantities
//	numerics     quadrature, roots, least squares
//	spacecharge  the Poisson–Boltzmann layer and what charges the interface
//	transport    what the layer does to the current; brick layer; Arrhenius lines
//	impedance    spectra: reading, Kramers–Kronig test, arcs
//	study        one calculation from typed inputs to findings
//
// A package imports only packages listed above it. REFERENCES.md, written by the
// tests, lists published values beside ours.
package physics
