package impedance_test

import (
	"context"
	"fmt"
	"os"

	"brinkfield/physics/impedance"
)

func Example() {
	data, err := os.ReadFile("../../testdata/spectra/barrier-commas.csv")
	if err != nil {
		fmt.Println(err)
		return
	}
	r, err := impedance.Read("barrier-commas.csv", data, impedance.ReadOptions{})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%s, decimal %q, header in line %d, %d temperatures\n", r.Delimiter, r.Decimal, r.HeaderLine, len(r.Groups))
	fits, err := impedance.FitAll(context.Background(), r.Spectra, nil, nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, a := range fits[0].Arcs {
		fmt.Printf("%s: %s %.3g Ω, %.2g F\n", a.Role, a.R.Kind, a.R.Best(), a.C.Value)
	}
	// Output:
	// semicolon, decimal ",", header in line 3, 7 temperatures
	// interior: measured 3.78e+05 Ω, 1.5e-11 F
	// boundary: measured 2.16e+06 Ω, 5.8e-09 F
	// contact: at least 3.56e+06 Ω, 7.5e-06 F
}
