// Package spectra holds invented impedance spectra of invented specimens with
// their truth beside them, made by an independent program. The demo case opens
// on the first; the tests read them all.
package spectra

import _ "embed"

// Demo is barrier-demo.csv: seven temperatures of one invented pellet.
//
//go:embed barrier-demo.csv
var Demo []byte
