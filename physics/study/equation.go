package study

// Equation is a formula with its source, as a derived number opens to it.
type Equation struct {
	Text   string `json:"text"`
	Source string `json:"source"`
}

// Equations are the formulas by key.
var Equations = map[string]Equation{
	"carriers":      {"c∞ = |z_D| x N_c / |z|", "electroneutrality with the dopant fully ionised and no association"},
	"debye":         {"λ_D = √(ε k_B T / (e² Σ z² c∞)), all mobile species", "IUPAC Gold Book T06343; under site limits z²c(1 − c/N)"},
	"debyeMajority": {"λ = √(ε k_B T / (2 z² e² c∞)), majority carrier", "Maier, Prog. Solid State Chem. 23, 171 (1995)"},
	"cell":          {"L/(A f), f = (1 − p)/(1 + p/2)", "geometry; pores: Maxwell, Treatise (1873), art. 314"},
	"capacitance":   {"C = (R^(1−n) Q)^(1/n)", "Hsu & Mansfeld, Corrosion 57, 747 (2001)"},
	"widthShare":    {"δ = d q/(1 + q), q = C_int/C_gb", "brick layer; the depleted layers are dielectric at the interior arc's frequencies"},
	"rBulk":         {"R_bulk = R_int/(1 − δ/d)", "brick layer, see δ"},
	"rBoundary":     {"R_boundary = R_int + R_gb − R_bulk", "brick layer, see δ"},
	"ratio":         {"r = R_boundary/R_bulk", "brick layer"},
	"blocking":      {"R_boundary/(R_bulk + R_boundary)", "common practice, no source"},
	"sigmaBulk":     {"σ_bulk = L/(A f R_bulk)", "brick layer"},
	"sigmaTotal":    {"σ_total = L/(A f (R_int + R_gb))", "geometry"},
	"sigmaBoundary": {"σ_gb = (L/A f)(1/R_boundary)(C_bulk/C_gb)", "Maier, Prog. Solid State Chem. 23, 171 (1995)"},
	"epsilonArc":    {"ε_r = C_int (1 − δ/d) L/(A f ε₀)", "brick layer"},
	"timeRatio":     {"τ_gb/τ_b = R_boundary C_gb/(R_bulk C_bulk)", "Fleig, Rodewald, Maier, J. Appl. Phys. 87, 2372 (2000)"},
	"phiShort":      {"e^a/(2a) = τ_gb/τ_b, Φ₀ = a k_B T/(|z|e)", "Fleig, Rodewald, Maier, J. Appl. Phys. 87, 2372 (2000); Guo & Waser, Prog. Mater. Sci. 51, 151 (2006)"},
	"phiDepletion":  {"e^a D(√a)/√a − 1 = τ_gb/τ_b, Φ₀ = a k_B T/(|z|e)", "Mott–Schottky layer, exact mean of the resistivity; D is Dawson's integral, a the barrier in k_B T"},
	"phiFull":       {"(2/d) ∫ (c∞/c − 1) dx = R_boundary/R_bulk over the full Poisson–Boltzmann layer", "Gouy 1910, Chapman 1913; Maier, Prog. Solid State Chem. 23, 171 (1995)"},
	"bias":          {"Φ₀(short form) − Φ₀(full layer)", "comparison of routes; not an uncertainty"},
	"biasExpected":  {"e^a/(2a) = (2/d)∫(c∞/c − 1)dx · C_layer d/(2ε), minus Φ₀", "the full layer's own R and C put through the short form"},
	"width":         {"λ* = √(2εΦ₀/(|z|e c∞)), two sides", "Mott 1939, Schottky 1939"},
	"widthSmall":    {"λ_eff = √(2ε(Φ₀ − k_B T/|z|e)/(|z|e c∞)), two sides", "differential capacitance of the depletion layer"},
	"closing":       {"c∞ at which 2λ_eff = δ, from R_boundary C_gb/(R_bulk C_bulk) of the full layer", "both roads to the width made equal"},
	"coreCharge":    {"Q_core = 2 εE(Φ₀)", "Gauss' law, two sides"},
	"occupancy":     {"θ = Q_core/(z e N_core)", "charge of the occupied core sites"},
	"segregation":   {"Δg = k_B T ln[c∞/(N − c∞)] − k_B T ln[θ/(1 − θ)] − z e Φ₀", "equilibrium of the carrier between grain and core"},
	"energy":        {"slope of ln(σT) against 1/k_B T", "Arrhenius; interval from the scatter, Student's t"},
	"slope":         {"slope of Φ₀ against T", "straight line through the temperatures"},
	"charge":        {"Q = εE(Φ₀), ½εE² = Π(Φ₀)", "first integral of the Poisson–Boltzmann equation; Π is the excess osmotic pressure of the carriers"},
	"layerC":        {"C = dQ/dΦ₀ = |ρ/E|", "first integral of the Poisson–Boltzmann equation"},
	"field":         {"E = √(2Π/ε)", "first integral of the Poisson–Boltzmann equation"},
	"distance":      {"x = ∫ dφ/|E|", "first integral of the Poisson–Boltzmann equation"},
	"acrossOhm":     {"ΔR = ℓ_⊥/σ_bulk", "excess resistance of one side"},
	"alongSiemens":  {"ΔY = ℓ_∥ σ_bulk", "excess conductance of one side, per square"},
	"closingShare":  {"c∞ that closes the widths over the nominal c∞", "comparison"},
	"across":        {"∫ (c∞/c − 1) dx, one side", "excess resistance in metres of bulk"},
	"along":         {"∫ (c/c∞ − 1) dx, one side", "excess conductance in metres of bulk"},
	"sideWalls":     {"4 ΔY/(d σ_bulk)", "brick layer, walls along the current (Maier 1986/1995, from memory)"},
	"share":         {"c∞/N", "definition"},
	"row":           {"L/d", "brick layer"},
	"gap":           {"2λ_eff/δ − 1", "comparison of two roads"},
	"coreRatio":     {"c₀/c∞ = c(Φ₀)/c∞, Boltzmann or site-limited", "Maier, Prog. Solid State Chem. 23, 171 (1995)"},
	"fill":          {"k_B T ln[θ/(1−θ)] + Δg + z e Φ₀ = k_B T ln[c∞/(N−c∞)], z e N_core θ = 2 Q(Φ₀)", "Maier, Prog. Solid State Chem. 23, 171 (1995), from memory"},
}
