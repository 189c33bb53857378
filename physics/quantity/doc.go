// Package quantity holds the constants, the units and the reading and printing
// of physical quantities.
//
// Everything inside the program is SI (m, V, K, m⁻³, Ω, S, F, J); units exist
// only where a person types or reads a number. A quantity is typed as a number
// and a unit ("350 nm", "0.35um", "25 °C", "1.2 eV", "3e-6 cm2/s"); Parse turns
// it into SI and says exactly what it expected when it cannot:
//
//	d, err := quantity.Parse("350 nm", quantity.Length) // d.SI == 3.5e-7
//
// Source of the constants: CODATA 2022 (Mohr et al., Rev. Mod. Phys. 97, 025002
// (2025)). Source of the unit symbols and prefixes: BIPM, The International
// System of Units, 9th ed. (2019), tables 2, 4, 7 and 8.
package quantity

// Constants of CODATA 2022. e, k_B and N_A are exact.
const (
	ElementaryCharge   = 1.602176634e-19   // C, exact
	Boltzmann          = 1.380649e-23      // J/K, exact
	Avogadro           = 6.02214076e23     // 1/mol, exact
	VacuumPermittivity = 8.8541878188e-12  // F/m, ± 1.4e-21
	Faraday            = 96485.33212331002 // C/mol, e·N_A
	GasConstant        = 8.31446261815324  // J/(mol K), k_B·N_A
	ZeroCelsius        = 273.15            // K, exact by definition
)

// ThermalVoltage returns k_B·T/e in volts for a temperature in kelvin.
func ThermalVoltage(kelvin float64) float64 {
	return Boltzmann * kelvin / ElementaryCharge
}
