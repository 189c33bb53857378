package main

import (
	"bytes"
	"encoding/json"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

const commas = "../../testdata/spectra/barrier-commas.csv"

func answer(t *testing.T, args ...string) (string, error) {
	t.Helper()
	var out bytes.Buffer
	err := run(args, &out, io.Discard)
	return out.String(), err
}

// Without arguments it answers the demo; the link may stand before or after the options.
func TestAnswer(t *testing.T) {
	demo, err := answer(t)
	if err != nil {
		t.Fatal(err)
	}
	var file struct {
		Program string
		Numbers []struct {
			ID    string  `json:"id"`
			Value float64 `json:"value"`
		}
	}
	if err := json.Unmarshal([]byte(demo), &file); err != nil || file.Program != "Brinkfield" || len(file.Numbers) < 100 {
		t.Fatalf("%d numbers, %v", len(file.Numbers), err)
	}
	const link = "https://host.example/x/#grain=900+nm&dopant=2+%25&thickness=0.9+mm"
	a, err1 := answer(t, link, "--spectra", commas, "--findings")
	b, err2 := answer(t, "--findings", "--spectra", commas, link)
	if err1 != nil || err2 != nil || a != b || !strings.Contains(a, "Φ₀ = 0.1961 V") {
		t.Errorf("%v, %v: %q, %q", err1, err2, a, b)
	}
	// what it printed opens again as a file
	path := filepath.Join(t.TempDir(), "case.json")
	if err := os.WriteFile(path, []byte(demo), 0o600); err != nil {
		t.Fatal(err)
	}
	if again, err := answer(t, path); err != nil || again != demo {
		t.Errorf("the printed case does not open to itself (%v)", err)
	}
	if table, err := answer(t, "--parameters"); err != nil || !strings.Contains(table, "`grain_pm`") {
		t.Errorf("parameters: %v", err)
	}
}

func TestAnswerRefuses(t *testing.T) {
	for _, tt := range []struct {
		args []string
		says string
	}{
		{[]string{"grain=350"}, "the unit is missing"},
		{[]string{"nonsense=1"}, "parameter is not known"},
		{[]string{"grain=1 um", "grain=2 um"}, "more than one link"},
		{[]string{"--spectra", "no/such/file"}, "no such file"},
		{[]string{"--spectra", "main.go"}, "expected"},
		{[]string{"--spectra", commas, "--temperature", "warm"}, "no number found"},
		{[]string{"--wrong"}, "not defined"},
	} {
		if _, err := answer(t, tt.args...); err == nil || !strings.Contains(err.Error(), tt.says) {
			t.Errorf("%v: got %v, expected %q in it", tt.args, err, tt.says)
		}
	}
}
