package page

import (
	"errors"
	"strings"
	"testing"
	"time"

	"brinkfield/physics/impedance"
	"brinkfield/physics/study"
)

// Undo goes back edit by edit; keystrokes in one field are one edit.
func TestHistory(t *testing.T) {
	var h history
	in := study.Defaults()
	edit := func(param, text string) {
		h.push(in, param)
		in = in.With(param, text)
	}
	h.push(in, "") // the page opens
	for _, text := range []string{"4", "40", "400", "400 nm"} {
		edit("grain", text)
	}
	edit("epsr", "25")
	back := func(want string) {
		t.Helper()
		var ok bool
		if in, ok = h.back(in); !ok || in.Link() != want {
			t.Errorf("went back to %q, %v, want %q", in.Link(), ok, want)
		}
	}
	back("grain=400+nm")
	back("")
	if _, ok := h.back(in); ok {
		t.Error("went back beyond the beginning")
	}
	in, _ = h.forth(in)
	if in, _ = h.forth(in); in.Link() != "epsr=25&grain=400+nm" {
		t.Errorf("went forth to %q", in.Link())
	}
	h.last = ""
	back("grain=400+nm")
	edit("grain", "1 um")
	if _, ok := h.forth(in); ok {
		t.Error("an edit left a future behind")
	}
}

// fakeEngine keeps calls until the test answers them.
type fakeEngine struct {
	done      []func([]byte, error)
	cancelled int
}

func (f *fakeEngine) Call(_ string, _ []byte, _ func(float64, string), onDone func([]byte, error)) func() {
	f.done = append(f.done, onDone)
	return func() { f.cancelled++ }
}

// A newer request ends an older one, waiting or under way.
func TestSuperseding(t *testing.T) {
	var timers []func()
	stopped := 0
	engine := &fakeEngine{}
	s := &superseding{engine: engine, after: func(_ time.Duration, f func()) func() {
		timers = append(timers, f)
		return func() { stopped++ }
	}}
	var heard []string
	call := func(name string) {
		s.Call("task", nil, nil, func(_ []byte, err error) { heard = append(heard, name) })
	}
	call("first")
	call("second") // before the first began
	if stopped != 1 {
		t.Errorf("%d waiting calls stopped, want 1", stopped)
	}
	timers[1]()
	call("third") // while the second runs
	if engine.cancelled != 1 {
		t.Errorf("%d running calls cancelled, want 1", engine.cancelled)
	}
	timers[2]()
	engine.done[1](nil, errors.New("whatever"))
	if len(heard) != 1 || heard[0] != "third" {
		t.Errorf("heard %v", heard)
	}
	s.stop()
	if engine.cancelled != 1 {
		t.Error("a call that is done was cancelled")
	}
}

func TestPretty(t *testing.T) {
	for text, want := range map[string]string{
		"R_int":             "R<sub>int</sub>",
		"2λ_eff/δ − 1":      "2λ<sub>eff</sub>/δ − 1",
		"V_O••":             "V<sub>O</sub>••",
		"a < b":             "a &lt; b",
		"e^a/(2a)":          "e<sup>a</sup>/(2a)",
		"(R^(1−n) Q)^(1/n)": "(R<sup>1−n</sup> Q)<sup>1/n</sup>",
		"|z|e, c_D = x N_c": "|z|e, c<sub>D</sub> = x N<sub>c</sub>",
	} {
		if got := string(pretty(text)); got != want {
			t.Errorf("%q: %q, want %q", text, got, want)
		}
	}
}

// A preview that misses something says what, and reads again when it is given.
func TestPreview(t *testing.T) {
	text := "f,Zre,Zim\n"
	for _, row := range []string{"1e6,100,-50", "1e5,200,-90", "1e4,300,-80", "1e3,400,-60", "1e2,450,-40", "1e1,480,-20", "1,490,-5"} {
		text += row + "\n"
	}
	f := &PreviewFile{Name: "nameless.csv", Data: []byte(text)}
	f.read()
	p := &Preview{Files: []*PreviewFile{f}}
	if why := p.Ready(); !strings.Contains(why, "needs a temperature") {
		t.Errorf("ready: %q", why)
	}
	f.SetTemperature("300")
	if !strings.Contains(f.TypedNo, "expected a temperature") {
		t.Errorf("a temperature without a unit: %q", f.TypedNo)
	}
	f.SetTemperature("300 °C")
	if why := p.Ready(); why != "" || p.Count() != 1 || f.Reading.Spectra[0].T != 573.15 {
		t.Errorf("ready: %q, %d spectra", why, p.Count())
	}
	f.SetUnit(2, "kΩ")
	if z := real(f.Reading.Spectra[0].Points[0].Z); z != 1e5 {
		t.Errorf("in kΩ: %g Ω", z)
	}
	f.SetColumn(3, impedance.NegatedImaginary.String())
	f.SetSign("negated")
	if z := imag(f.Reading.Spectra[0].Points[0].Z); z != 50 {
		t.Errorf("negated: %g", z)
	}
	f.SetColumn(1, impedance.Ignored.String())
	if f.Err == "" || p.Ready() == "" {
		t.Error("a table without a frequency is ready")
	}
}
