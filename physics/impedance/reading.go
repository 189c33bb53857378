package impedance

// Sign says how the imaginary part or the phase is written in a file.
type Sign int

const (
	SignAuto    Sign = iota // the majority of points is taken as capacitive
	SignAsIs                // numbers are Im Z (or its phase): capacitive is negative
	SignFlipped             // numbers are −Im Z: capacitive is positive
)

// ColumnChoice is what a person says of one column.
type ColumnChoice struct {
	Quantity ColumnQuantity
	Unit     string // as in a header: "kHz", "Ohm", "deg", "°C"; empty: Hz, rad/s, Ω, deg, °C
}

// ReadOptions correct what Read would find out by itself; the zero value leaves
// everything to it.
type ReadOptions struct {
	Delimiter   string               // "," ";" "|" "\t" or " " (blanks); empty: found
	Decimal     string               // "." or ","; empty: found
	Columns     map[int]ColumnChoice // by column number, 1 the first
	Sign        Sign
	Temperature float64 // K, for a file without a temperature column; 0: found
}

// Column is one column as it was understood.
type Column struct {
	Number   int // 1 the first
	Header   string
	Quantity ColumnQuantity
	Unit     string
	How      string // "header", "unit assumed", "guessed from the values", "given"
	factor   float64
}

// Skipped is one row that was not used.
type Skipped struct {
	Line   int
	Reason string
}

// Group is one temperature found.
type Group struct {
	T      float64 // K
	Points int
}

// Reading is what was understood of one file.
type Reading struct {
	File              string
	Encoding          string
	Delimiter         string // "comma", "semicolon", "tab", "bar", "blanks"
	Decimal           string // "." or ","
	HeaderLine        int    // 0: no header
	Columns           []Column
	Sign              Sign   // SignAsIs or SignFlipped, never SignAuto
	SignHow           string // why
	TemperatureSource string // "column 1", "line 3", "file name", "given", "" when none was found
	// TemperatureMissing: no temperature was found; the one spectrum has T = 0 and
	// has to be read again with ReadOptions.Temperature.
	TemperatureMissing bool
	Groups             []Group
	Rows               int // data rows met
	Skipped            []Skipped
	Duplicates         int // points whose frequency occurred before at the same temperature
	FrequencyOrder     string
	Notes              []Note
	Spectra            []Spectrum
}
