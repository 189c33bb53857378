// Package impedance reads measured spectra, tests whether they can be trusted and
// resolves them into arcs.
//
// Reading takes any delimited text and says what it understood (Read). Validity is
// the linear Kramers–Kronig test (Boukamp, J. Electrochem. Soc. 142, 1885 (1995))
// with the number of elements chosen as by Schönleber et al., Electrochim. Acta
// 131, 20 (2014) (KramersKronig). Arcs are interior, boundary and contact in
// series, each a resistance parallel to a constant-phase element Y = Q (iω)ⁿ with
// 0.5 ≤ n ≤ 1, behind a lead resistance and inductance (FitArcs, FitAll). Residuals
// are divided by |Z|, so the noise is taken as proportional to |Z| and equal in
// both parts; every interval rests on that. A parameter the frequency window does
// not resolve is returned as a limit (Estimate.Kind), never as a number.
//
// Units: Hz, Ω, F, S sⁿ, K. Im Z < 0 is capacitive. Spectra run from the highest
// frequency down.
//
//	r, err := impedance.Read("pellet.csv", data, impedance.ReadOptions{})
//	fits, err := impedance.FitAll(ctx, r.Spectra, nil, nil)
//	interior := fits[0].Arc(impedance.Interior) // interior.R.Value in Ω
package impedance
