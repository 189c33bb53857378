package quantity

// A Kind says what a field holds: its dimension, the unit it is shown in, and
// what to tell a person who typed something else.
type Kind struct {
	Name     string // what the trade calls it: "length"
	SIUnit   string // the unit inside: "m"
	Expected string // examples for the error text
	Shown    string // the unit a value is always shown in; empty: by its size
	dim      dimension
	offset   bool // temperatures may be typed in °C
	bare     bool // a number without a unit is taken as SI
	molar    bool // energies may be typed per mole of particles
}

// The kinds of quantity that fields hold.
var (
	Length         = Kind{Name: "length", SIUnit: "m", Expected: "a length such as 350 nm, 0.35 µm or 1.2 mm", dim: dimension{1}}
	Area           = Kind{Name: "area", SIUnit: "m2", Expected: "an area such as 0.5 cm2 or 50 mm2", dim: dimension{2}}
	NumberDensity  = Kind{Name: "number density", SIUnit: "m-3", Expected: "sites or particles per volume such as 2.5e28 m-3 or 2.5e22 cm-3", dim: dimension{-3}}
	SheetDensity   = Kind{Name: "sites per area", SIUnit: "m-2", Expected: "sites per area such as 1e18 m-2 or 1 nm-2", dim: dimension{-2}}
	Fraction       = Kind{Name: "fraction", SIUnit: "", Shown: "%", Expected: "a fraction such as 0.01 or 1 %", bare: true}
	Number         = Kind{Name: "number", SIUnit: "", Expected: "a plain number such as 30", bare: true}
	Temperature    = Kind{Name: "temperature", SIUnit: "K", Expected: "a temperature such as 300 °C or 573.15 K", dim: dimension{0, 0, 0, 0, 1}, offset: true}
	Energy         = Kind{Name: "energy", SIUnit: "J", Expected: "an energy such as -0.72 eV or 69 kJ/mol", dim: dimension{2, 1, -2}, molar: true}
	Potential      = Kind{Name: "potential", SIUnit: "V", Expected: "a potential such as 0.22 V or 220 mV", dim: dimension{2, 1, -3, -1}}
	Millivolts     = Kind{Name: "potential", SIUnit: "V", Shown: "mV", Expected: "a potential such as 5 mV", dim: dimension{2, 1, -3, -1}}
	SurfaceCharge  = Kind{Name: "charge per area", SIUnit: "C/m2", Expected: "a charge per area such as 0.136 C/m2 or 13.6 µC/cm2", dim: dimension{-2, 0, 1, 1}}
	Resistance     = Kind{Name: "resistance", SIUnit: "ohm", Expected: "a resistance such as 72 kΩ or 7.2e4 ohm", dim: dimension{2, 1, -3, -2}}
	Capacitance    = Kind{Name: "capacitance", SIUnit: "F", Expected: "a capacitance such as 1.2 nF", dim: dimension{-2, -1, 4, 2}}
	Frequency      = Kind{Name: "frequency", SIUnit: "Hz", Expected: "a frequency such as 1 kHz", dim: dimension{0, 0, -1}}
	Conductivity   = Kind{Name: "conductivity", SIUnit: "S/m", Expected: "a conductivity such as 3e-4 S/m or 3 µS/cm", dim: dimension{-3, -1, 3, 2}}
	AreaResistance = Kind{Name: "resistance of unit area", SIUnit: "ohm m2", Expected: "a resistance of unit area such as 2.9 Ω m2", dim: dimension{4, 1, -3, -2}}
	AreaCapacity   = Kind{Name: "capacitance per area", SIUnit: "F/m2", Expected: "a capacitance per area such as 20 µF/cm2", dim: dimension{-4, -1, 4, 2}}
	InverseLength  = Kind{Name: "inverse length", SIUnit: "m-1", Expected: "an inverse length such as 24 m-1 or 0.24 cm-1", dim: dimension{-1}}
	Inductance     = Kind{Name: "inductance", SIUnit: "H", Expected: "an inductance such as 0.4 µH", dim: dimension{2, 1, -2, -2}}
	Conductance    = Kind{Name: "conductance", SIUnit: "S", Expected: "a conductance such as 1 mS", dim: dimension{-2, -1, 3, 2}}
	VoltPerKelvin  = Kind{Name: "potential per temperature", SIUnit: "V/K", Expected: "a potential per temperature such as -0.22 mV/K", dim: dimension{2, 1, -3, -1, -1}}
	Field          = Kind{Name: "electric field", SIUnit: "V/m", Expected: "a field such as 1e8 V/m or 1 MV/cm", dim: dimension{1, 1, -3, -1}}
)
