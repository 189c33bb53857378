package study

import (
	"context"
	"flag"
	"os"
	"testing"
)

var update = flag.Bool("update", false, "write the generated tables")

//go:generate go test -run TestTables -update .

// PARAMETERS.md is what the code says of its parameters and numbers.
func TestTables(t *testing.T) {
	const path = "PARAMETERS.md"
	var rn Runner
	r, err := rn.Run(context.Background(), Defaults(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	want := "# Parameters and numbers\n\nWritten from the code by `./build.sh regenerate`; do not edit.\n\n" +
		"## Parameters of a link and of the case file\n\nA ± parameter takes a 95 % half-width: `10 %` or one in the unit of the value.\n\n" + ParameterTable() +
		"\n## Numbers of the case file\n\nSI units; `spectrum` says which spectrum a number belongs to, 1 the first.\n\n" + NumberTable(r)
	if *update {
		if err := os.WriteFile(path, []byte(want), 0o644); err != nil {
			t.Fatal(err)
		}
		return
	}
	have, err := os.ReadFile(path)
	if err != nil || string(have) != want {
		t.Errorf("%s is not what the code says (%v); run ./build.sh regenerate", path, err)
	}
}
