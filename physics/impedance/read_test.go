package impedance

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"math/cmplx"
	"os"
	"strings"
	"testing"
	"time"
	"unicode/utf16"
)

// parallelRC is what the invented tables below hold: 1 kΩ parallel to 1 µF.
func parallelRC(f float64) complex128 { return 1 / (1e-3 + complex(0, 2*math.Pi*f*1e-6)) }

var tableFrequencies = []float64{1e5, 3e4, 1e4, 3e3, 1e3, 300, 100, 30, 10}

// table writes rows by a format of up to three verbs.
func table(head string, rowOf func(f float64, z complex128) string) string {
	var b strings.Builder
	b.WriteString(head)
	for _, f := range tableFrequencies {
		b.WriteString(rowOf(f, parallelRC(f)) + "\n")
	}
	return b.String()
}

func comma(s string) string { return strings.ReplaceAll(s, ".", ",") }

// The spellings are common practice of the trade, no source.
func TestReadSpellings(t *testing.T) {
	deg := 180 / math.Pi
	cases := []struct {
		name, file, text string
		header           int
		source           string
		T                float64
		sign             Sign
	}{
		{"commas", "a.csv", table("# T = 300 C\nfrequency_Hz,Zre_ohm,Zim_ohm\n", func(f float64, z complex128) string {
			return fmt.Sprintf("%v,%v,%v", f, real(z), imag(z))
		}), 2, "line 1", 573.15, SignAsIs},
		{"semicolons and decimal commas, negated", "a.csv", table("f / kHz;Z' / kOhm;-Z'' / kOhm;T / K\n", func(f float64, z complex128) string {
			return comma(fmt.Sprintf("%v;%v;%v;573.15", f/1e3, real(z)/1e3, -imag(z)/1e3))
		}), 1, "column 4", 573.15, SignFlipped},
		{"tabs, modulus and phase", "pellet_300C.txt", table("freq (Hz)\t|Z| (MΩ)\tphase (°)\n", func(f float64, z complex128) string {
			return fmt.Sprintf("%v\t%v\t%v", f, cmplx.Abs(z)/1e6, cmplx.Phase(z)*deg)
		}), 1, "file name", 573.15, SignAsIs},
		{"blanks, omega, radians", "pellet-573K.txt", table("% omega [rad/s]   Zmod [Ohm]   theta [rad]\n", func(f float64, z complex128) string {
			return fmt.Sprintf("  %.17g   %v   %v", f*2*math.Pi, cmplx.Abs(z), cmplx.Phase(z))
		}), 1, "file name", 573, SignAsIs},
		{"bars", "a", table("| ω (rad/s) | Re(Z)/Ohm | -Im(Z)/Ohm | temperature_C |\n|---|---|---|---|\n", func(f float64, z complex128) string {
			return fmt.Sprintf("| %.17g | %v | %v | 300 |", f*2*math.Pi, real(z), -imag(z))
		}), 1, "column 4", 573.15, SignFlipped},
		{"no header", "x 20 °C.dat", table("", func(f float64, z complex128) string {
			return fmt.Sprintf("%v %v %v", f, real(z), imag(z))
		}), 0, "file name", 293.15, SignAsIs},
		{"no header, four columns with temperature, −Z″", "x", table("", func(f float64, z complex128) string {
			return fmt.Sprintf("300,%v,%v,%v", f, real(z), -imag(z))
		}), 0, "column 1", 573.15, SignFlipped},
		{"no header, four columns with row numbers", "x_300C.csv", func() string {
			i := 0
			return table("", func(f float64, z complex128) string {
				i++
				return fmt.Sprintf("%d,%v,%v,%v", i, f, real(z), imag(z))
			})
		}(), 0, "file name", 573.15, SignAsIs},
		{"head of free text, units line, CRLF", "x.txt", strings.ReplaceAll(table("Pellet 7, cooling\nsample temperature: 573,15 K\n\nFrequency\tZ_real\tZ_imag\nHz\tkOhm\tkOhm\n", func(f float64, z complex128) string {
			return fmt.Sprintf("%v\t%v\t%v", f, real(z)/1e3, imag(z)/1e3)
		}), "\n", "\r\n"), 4, "line 2", 573.15, SignAsIs},
		{"header says Z'' but numbers are −Z''", "x.txt", table("! T/°C = 300\nf,Z',Z''\n", func(f float64, z complex128) string {
			return fmt.Sprintf("%v,%v,%v", f, real(z), -imag(z))
		}), 2, "line 1", 573.15, SignFlipped},
		{"time column, GOhm, MHz, Fortran exponents", "x.txt", table("t/s;f/MHz;Re Z/GOhm;Im Z/GOhm;T/degC\n", func(f float64, z complex128) string {
			return strings.ReplaceAll(fmt.Sprintf("1;%.16e;%.16e;%.16e;300", f/1e6, real(z)/1e9, imag(z)/1e9), "e", "D")
		}), 1, "column 5", 573.15, SignAsIs},
		{"both pairs: real and imaginary part win", "x_573.15K.csv", table("\"f (Hz)\",\"|Z| (Ohm)\",\"phase\",\"Z' (Ohm)\",\"Z'' (Ohm)\"\n", func(f float64, z complex128) string {
			return fmt.Sprintf("%v,1,2,%v,%v", f, real(z), imag(z))
		}), 1, "file name", 573.15, SignAsIs},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			r, err := Read(c.file, []byte(c.text), ReadOptions{})
			if err != nil {
				t.Fatal(err)
			}
			if len(r.Spectra) != 1 || r.HeaderLine != c.header || r.TemperatureSource != c.source || r.Sign != c.sign {
				t.Fatalf("spectra %d, header line %d, temperature from %q, sign %d (%s); want 1, %d, %q, %d\n%+v", len(r.Spectra), r.HeaderLine, r.TemperatureSource, r.Sign, r.SignHow, c.header, c.source, c.sign, r.Columns)
			}
			s := r.Spectra[0]
			if math.Abs(s.T-c.T) > 1e-9 || len(s.Points) != len(tableFrequencies) {
				t.Fatalf("T %v K, %d points; want %v, %d", s.T, len(s.Points), c.T, len(tableFrequencies))
			}
			for i, p := range s.Points {
				f := tableFrequencies[i]
				// 1e-13: the cells are written to 16 or 17 digits and converted once
				if math.Abs(p.F/f-1) > 1e-13 || cmplx.Abs(p.Z/parallelRC(f)-1) > 1e-13 {
					t.Errorf("point %d: %v Hz %v, want %v Hz %v", i, p.F, p.Z, f, parallelRC(f))
				}
			}
		})
	}
}

func TestReadEncodings(t *testing.T) {
	text := table("f/Hz;Z'/Ω;Z''/Ω;T/°C\n", func(f float64, z complex128) string {
		return fmt.Sprintf("%v;%v;%v;300", f, real(z), imag(z))
	})
	latin := []byte{}
	for _, r := range strings.ReplaceAll(text, "Ω", "Ohm") {
		latin = append(latin, byte(r))
	}
	wide := func(big bool) []byte {
		var b []byte
		for _, u := range utf16.Encode([]rune(text)) {
			if big {
				b = append(b, byte(u>>8), byte(u))
			} else {
				b = append(b, byte(u), byte(u>>8))
			}
		}
		return b
	}
	for _, c := range []struct {
		want string
		data []byte
	}{
		{"UTF-8", []byte(text)},
		{"UTF-8 with byte order mark", append([]byte{0xEF, 0xBB, 0xBF}, text...)},
		{"Latin-1", latin},
		{"UTF-16 little-endian", append([]byte{0xFF, 0xFE}, wide(false)...)},
		{"UTF-16 big-endian", append([]byte{0xFE, 0xFF}, wide(true)...)},
		{"UTF-16 without byte order mark", wide(false)},
	} {
		r, err := Read("x", c.data, ReadOptions{})
		if err != nil {
			t.Errorf("%s: %v", c.want, err)
			continue
		}
		if r.Encoding != c.want || len(r.Spectra) != 1 || len(r.Spectra[0].Points) != len(tableFrequencies) || r.Spectra[0].T != 573.15 {
			t.Errorf("%s: read as %s, %+v", c.want, r.Encoding, r.Groups)
		}
	}
}

func TestReadSkipsAndCounts(t *testing.T) {
	text := "f,Z',Z''\n# T = 20 °C\n" + // the comment between header and rows counts as head
		"1e5,1,-1\n1e4,NaN,-1\n1e3,1,-2\n\n0,1,-1\n-5,1,-1\n1e2,1\n1e2,abc,-1\n1e2,1,-3\n1e2,1,-3\n10,1,-4\n1,1,-5\n0.1,1,inf\n0.1,1,-6\n0.01,0,0\n0.01,2,-7\n\n\n"
	r, err := Read("x", []byte(text), ReadOptions{})
	if err != nil {
		t.Fatal(err)
	}
	want := map[int]string{4: "not finite", 6: "blank", 7: "zero", 8: "negative", 9: "too few columns", 10: "not a number", 15: "not finite", 17: "impedance is zero"}
	if len(r.Skipped) != len(want) {
		t.Errorf("%d rows skipped, want %d: %+v", len(r.Skipped), len(want), r.Skipped)
	}
	for _, s := range r.Skipped {
		if w, ok := want[s.Line]; !ok || !strings.Contains(s.Reason, w) {
			t.Errorf("line %d skipped because %q, want %q", s.Line, s.Reason, w)
		}
	}
	if r.Duplicates != 1 || len(r.Spectra[0].Points) != 8 {
		t.Errorf("duplicates %d, points %d; want 1, 8", r.Duplicates, len(r.Spectra[0].Points))
	}
	if p := r.Spectra[0].Points[0]; p.Line != 3 || p.F != 1e5 {
		t.Errorf("first point %+v, want line 3", p)
	}
}

func TestReadErrors(t *testing.T) {
	rows := func(n int) string {
		var b strings.Builder
		for i := 0; i < n; i++ {
			fmt.Fprintf(&b, "%d,1,-1\n", i+1)
		}
		return b.String()
	}
	for _, c := range []struct{ name, text, want string }{
		{"empty", "", "empty"},
		{"blanks", " \n\n\t", "empty"},
		{"binary", "f,Z\x00\x01\x02\x03\n1,2,3", "not text"},
		{"prose", "the quick brown fox\njumps over 2 lazy dogs\n", "no table of numbers"},
		{"one column", "f/Hz\n1\n2\n3\n4\n5\n6\n7\n", "only one column"},
		{"no frequency", "time/s,Z',Z''\n" + rows(9), "no frequency column"},
		{"no pair", "f/Hz,Z',junk\n" + rows(9), "no pair of impedance columns"},
		{"two columns", "1,2\n2,3\n3,4\n4,5\n5,6\n6,7\n7,8\n", "only 2 columns"},
		{"all bad", "f,Z',Z''\n" + strings.Repeat("0,1,2\n", 10), "10 of 10 rows"},
		{"more than half bad", "f,Z',Z''\n" + rows(9) + strings.Repeat("NaN,1,2\n", 10), "10 of 19 rows"},
		{"too few points", "f,Z',Z''\n" + rows(5), "too few points"},
		{"too many rows", "f,Z',Z''\n" + rows(MaxRows+1), "too many rows (20001)"},
		{"unit of resistivity", "f,Z' (Ohm cm),Z'' (Ohm cm)\n" + rows(9), "not one of impedance"},
	} {
		_, err := Read("x.csv", []byte(c.text), ReadOptions{})
		var re *ReadError
		if !errors.As(err, &re) || !strings.Contains(err.Error(), c.want) || re.File != "x.csv" || re.Expected == "" {
			t.Errorf("%s: error %v, want one with %q and what was expected", c.name, err, c.want)
		}
	}
}

// A file of 200 MB is refused by counting lines; the time is reported, not asserted.
func TestReadRefusesHugeFile(t *testing.T) {
	data := bytes.Repeat([]byte("1000000,12345.678,-12345.678\n"), 200<<20/29)
	begin := time.Now()
	_, err := Read("huge.csv", data, ReadOptions{})
	t.Logf("%d MB refused in %v: %v", len(data)>>20, time.Since(begin), err)
	var re *ReadError
	if !errors.As(err, &re) || !strings.Contains(err.Error(), "at most 20000") {
		t.Errorf("error %v, want a refusal with the limit", err)
	}
}

func TestReadOptionsCorrect(t *testing.T) {
	text := table("", func(f float64, z complex128) string {
		return fmt.Sprintf("%v;%v;%v", real(z)/1e3, -imag(z)/1e3, f/1e3)
	})
	r, err := Read("x", []byte(text), ReadOptions{Temperature: 400, Sign: SignFlipped, Columns: map[int]ColumnChoice{
		1: {RealPart, "kOhm"}, 2: {ImaginaryPart, "kΩ"}, 3: {Frequency, "kHz"}}})
	if err != nil {
		t.Fatal(err)
	}
	if r.TemperatureSource != "given" || r.Spectra[0].T != 400 || r.SignHow != "given" {
		t.Errorf("%+v", r)
	}
	for i, p := range r.Spectra[0].Points {
		if f := tableFrequencies[i]; math.Abs(p.F/f-1) > 1e-13 || cmplx.Abs(p.Z/parallelRC(f)-1) > 1e-13 {
			t.Errorf("point %d: %+v", i, p)
		}
	}
	for name, opt := range map[string]ReadOptions{
		"delimiter":   {Delimiter: "x"},
		"decimal":     {Decimal: ";"},
		"same":        {Delimiter: ",", Decimal: ","},
		"temperature": {Temperature: -1},
		"column":      {Columns: map[int]ColumnChoice{9: {RealPart, ""}}},
		"unit":        {Columns: map[int]ColumnChoice{1: {RealPart, "Hz"}}},
		"quantity":    {Columns: map[int]ColumnChoice{1: {99, ""}}},
		"sign":        {Sign: 7},
	} {
		var re *ReadError
		if _, err := Read("x", []byte(text), opt); !errors.As(err, &re) {
			t.Errorf("%s: error %v, want a *ReadError", name, err)
		}
	}
}

func TestReadTemperature(t *testing.T) {
	for _, c := range []struct {
		text string
		want float64
	}{
		{"T = 300 C", 573.15}, {"temperature: 573.15 K", 573.15}, {"T=300°C, dry air", 573.15}, {"Temp 25,5 degC", 298.65},
		{"measured at 300 °C", 573.15}, {"Temperature (°C): 300", 573.15}, {"T/K = 573", 573}, {"held 2 h at 573 kelvin", 573},
		{"amplitude 100 mV", 0}, {"thickness 2 C", 0}, {"T = -300 C", 0}, {"Date 12.03.2024 K", 0},
	} {
		got, ok := temperatureIn(c.text)
		if math.Abs(got-c.want) > 1e-9 && (ok || c.want != 0) {
			t.Errorf("%q: %v K, want %v", c.text, got, c.want)
		}
	}
	for _, c := range []struct {
		name string
		want float64
	}{
		{"pellet_300C.csv", 573.15}, {"pellet-573K.txt", 573}, {`C:\data\run 2 300 °C.dat`, 573.15}, {"T300C", 573.15}, {"a_20.5C_b.csv", 293.65},
		{"300C_400C.csv", 0}, {"pellet.csv", 0}, {"sample_A12C.csv", 0}, {"10kohm.csv", 0},
	} {
		got, ok := temperatureOfName(c.name)
		if math.Abs(got-c.want) > 1e-9 && (ok || c.want != 0) {
			t.Errorf("%q: %v K, want %v", c.name, got, c.want)
		}
	}
	r, err := Read("x", []byte(table("f,Z',Z''\n", func(f float64, z complex128) string { return fmt.Sprintf("%v,%v,%v", f, real(z), imag(z)) })), ReadOptions{})
	if err != nil || !r.TemperatureMissing {
		t.Errorf("missing temperature: %v %+v", err, r)
	}
	if _, _, err := Combine(r); err == nil {
		t.Error("Combine takes a reading without temperature")
	}
}

// Files of an independent program; what they hold is in the truth files beside them.
func TestReadInventedSpectra(t *testing.T) {
	for name, groups := range map[string]int{"barrier-demo": 7, "barrier-commas": 7, "barrier-spread": 6} {
		r := readSpectra(t, name)
		if len(r.Groups) != groups || len(r.Skipped) != 0 {
			t.Errorf("%s: %d temperatures, %d skipped", name, len(r.Groups), len(r.Skipped))
		}
		for _, g := range r.Groups {
			if g.Points != 61 {
				t.Errorf("%s: %d points at %g K, want 61", name, g.Points, g.T)
			}
		}
		back, err := Read("link", Encode(r.Spectra), ReadOptions{})
		if err != nil {
			t.Fatal(err)
		}
		sameSpectra(t, r.Spectra, back.Spectra)
	}
}

func readSpectra(t testing.TB, name string) Reading {
	t.Helper()
	data, err := os.ReadFile("../../testdata/spectra/" + name + ".csv")
	if err != nil {
		t.Fatal(err)
	}
	r, err := Read(name+".csv", data, ReadOptions{})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func sameSpectra(t *testing.T, a, b []Spectrum) {
	t.Helper()
	if len(a) != len(b) {
		t.Fatalf("%d spectra came back as %d", len(a), len(b))
	}
	for i := range a {
		if a[i].T != b[i].T || len(a[i].Points) != len(b[i].Points) {
			t.Fatalf("spectrum %d: %v K with %d points came back as %v K with %d", i, a[i].T, len(a[i].Points), b[i].T, len(b[i].Points))
		}
		for k := range a[i].Points {
			if a[i].Points[k].F != b[i].Points[k].F || a[i].Points[k].Z != b[i].Points[k].Z {
				t.Fatalf("point %d of spectrum %d: %v came back as %v", k, i, a[i].Points[k], b[i].Points[k])
			}
		}
	}
}

func TestEncodeKeepsInductiveAndTwins(t *testing.T) {
	coil := Spectrum{T: 300}
	for _, f := range tableFrequencies {
		coil.Points = append(coil.Points, Point{F: f, Z: complex(1.0/3, f*1e-7)})
	}
	all := []Spectrum{coil, coil}
	back, err := Read("link", Encode(all), ReadOptions{})
	if err != nil {
		t.Fatal(err)
	}
	sameSpectra(t, all, back.Spectra)
}

func TestCombine(t *testing.T) {
	part := func(name string, fs []float64, T float64) Reading {
		s := Spectrum{T: T, Source: name}
		for _, f := range fs {
			s.Points = append(s.Points, Point{F: f, Z: parallelRC(f)})
		}
		return Reading{File: name, Spectra: []Spectrum{s}}
	}
	high, low := []float64{1e6, 5e5, 2e5}, []float64{1e5, 5e4, 2e4}
	out, notes, err := Combine(part("b", high, 600), part("a", high, 500), part("c", low, 500), part("d", low, 600.5), part("e", high, 600))
	if err != nil {
		t.Fatal(err)
	}
	if len(out) != 4 || out[0].T != 500 || len(out[0].Points) != 6 || out[0].Points[5].F != 2e4 || out[0].Source != "a + c" || len(notes) != 2 {
		t.Errorf("%+v %+v", out, notes)
	}
	var many []Reading
	for i := 0; i < 3; i++ {
		many = append(many, part("x", make([]float64, MaxRows/2), float64(300+i)))
	}
	if _, _, err := Combine(many...); err == nil || !strings.Contains(err.Error(), "30000") {
		t.Errorf("error %v, want the count", err)
	}
}

func TestGatherTemperatureReadings(t *testing.T) {
	var b strings.Builder
	b.WriteString("f/Hz,Z'/ohm,Z''/ohm,T/K\n")
	for i, T := range []float64{500, 550} {
		for k, f := range tableFrequencies {
			z := parallelRC(f)
			fmt.Fprintf(&b, "%v,%v,%v,%.2f\n", f, real(z), imag(z), T+0.13*float64(k)+float64(i))
		}
	}
	r, err := Read("x", []byte(b.String()), ReadOptions{})
	if err != nil {
		t.Fatal(err)
	}
	// means of nine readings rising by 0.13 K: 500.52 and 551.52
	if len(r.Groups) != 2 || math.Abs(r.Groups[0].T-500.52) > 0.01 || math.Abs(r.Groups[1].T-551.52) > 0.01 {
		t.Errorf("%+v", r.Groups)
	}
}

func FuzzRead(f *testing.F) {
	for _, name := range []string{"barrier-demo", "barrier-commas"} {
		data, err := os.ReadFile("../../testdata/spectra/" + name + ".csv")
		if err != nil {
			f.Fatal(err)
		}
		f.Add(name+"_300C.csv", data[:2000])
	}
	f.Add("x", []byte("\xff\xfef\x00,\x00"))
	f.Add("", []byte("# T = 5 K\n| f | Z' |\n1 2 3\n1;2;3\n\"1,2\",3,4\n"))
	f.Add("a", Encode([]Spectrum{{T: 300, Points: []Point{{F: 1, Z: 1}, {F: 2, Z: 1}, {F: 3, Z: 1}, {F: 4, Z: 1}, {F: 5, Z: 1}, {F: 6, Z: 1}}}}))
	f.Fuzz(func(t *testing.T, name string, data []byte) {
		r, err := Read(name, data, ReadOptions{})
		if err != nil {
			var re *ReadError
			if !errors.As(err, &re) {
				t.Fatalf("error of type %T", err)
			}
			return
		}
		if r.TemperatureMissing {
			return
		}
		back, err := Read("again", Encode(r.Spectra), ReadOptions{})
		if err != nil {
			t.Fatalf("what was read does not read back: %v", err)
		}
		sameSpectra(t, r.Spectra, back.Spectra)
	})
}

// Header cells as they occur; common practice of the trade, no source.
func TestReadHeader(t *testing.T) {
	for _, c := range []struct {
		cell string
		q    ColumnQuantity
		unit string
	}{
		{"f", Frequency, ""}, {"Freq. [Hz]", Frequency, "Hz"}, {"frequency_Hz", Frequency, "Hz"}, {"f/kHz", Frequency, "kHz"}, {"Frequency, MHz", Frequency, "MHz"},
		{"f in mHz", Frequency, "mHz"}, {"Hz", Frequency, "Hz"}, {"ν / Hz", Frequency, "Hz"}, {"Frequenz (Hz)", Frequency, "Hz"}, {"FREQ(HZ)", Frequency, "Hz"},
		{"ω", AngularFrequency, ""}, {"omega (rad/s)", AngularFrequency, "rad/s"}, {"angular frequency / s^-1", AngularFrequency, "rad/s"}, {"omega_rad/s", AngularFrequency, "rad/s"}, {"w/s-1", AngularFrequency, "rad/s"},
		{"Z'", RealPart, ""}, {"Z′ / Ω", RealPart, "Ω"}, {"Zre_ohm", RealPart, "Ω"}, {"Re(Z)/Ohm", RealPart, "Ω"}, {"Z_real [kOhm]", RealPart, "kΩ"}, {"Re Z (MΩ)", RealPart, "MΩ"}, {"real", RealPart, ""}, {"Z' (ohms)", RealPart, "Ω"}, {"ReZ_Mohm", RealPart, "MΩ"}, {"R/mohm", RealPart, "mΩ"},
		{"Z''", ImaginaryPart, ""}, {"Z\"/ohm", ImaginaryPart, "Ω"}, {"Z″ (GΩ)", ImaginaryPart, "GΩ"}, {"Im(Z) [Ω]", ImaginaryPart, "Ω"}, {"Z_im", ImaginaryPart, ""}, {"imag", ImaginaryPart, ""}, {"Zimag (Ohm)", ImaginaryPart, "Ω"},
		{"-Z''", NegatedImaginary, ""}, {"−Z″ / kΩ", NegatedImaginary, "kΩ"}, {"-Im(Z)/Ohm", NegatedImaginary, "Ω"}, {"neg Zim", NegatedImaginary, ""}, {"- Im Z", NegatedImaginary, ""}, {"minus Z''", NegatedImaginary, ""}, {"-Z_im_ohm", NegatedImaginary, "Ω"},
		{"|Z|", Modulus, ""}, {"|Z| / kOhm", Modulus, "kΩ"}, {"Zmod", Modulus, ""}, {"Impedance magnitude (Ohm)", Modulus, "Ω"}, {"mod(Z)", Modulus, ""}, {"|Z|_ohm", Modulus, "Ω"},
		{"phase", Phase, ""}, {"phase/deg", Phase, "deg"}, {"theta (°)", Phase, "deg"}, {"φ / rad", Phase, "rad"}, {"Phase Angle [degrees]", Phase, "deg"}, {"arg(Z)", Phase, ""}, {"-phase/°", NegatedPhase, "deg"}, {"phi_mrad", Phase, "mrad"},
		{"T/K", Temperature, "K"}, {"T", Temperature, ""}, {"temperature_C", Temperature, "°C"}, {"Temp. (°C)", Temperature, "°C"}, {"t/°C", Temperature, "°C"}, {"Temperature [degC]", Temperature, "°C"}, {"temp_K", Temperature, "K"}, {"temperature in celsius", Temperature, "°C"},
		{"t", Ignored, ""}, {"t/s", Ignored, ""}, {"time", Ignored, ""}, {"Z'/V", Ignored, ""}, {"Y'/S", Ignored, ""}, {"E/V", Ignored, ""}, {"", Ignored, ""}, {"#", Ignored, ""}, {"C/F", Ignored, ""},
	} {
		q, u, odd := readHeader(c.cell)
		if q != c.q || u.label != c.unit || odd != "" {
			t.Errorf("%q: %s in %q (%s), want %s in %q", c.cell, q, u.label, odd, c.q, c.unit)
		}
	}
	for _, cell := range []string{"Z' (Ohm cm²)", "Z' / Ohm*cm", "Re(Z) [kΩ m]"} {
		if _, _, odd := readHeader(cell); odd == "" {
			t.Errorf("%q: an area-specific unit passes", cell)
		}
	}
}

func TestReadOddLayouts(t *testing.T) {
	z := func(f float64) (float64, float64) { v := parallelRC(f); return real(v), imag(v) }
	build := func(head, format string, change func(string) string) string {
		return head + table("", func(f float64, _ complex128) string {
			a, b := z(f)
			return change(fmt.Sprintf(format, f, a, b))
		})
	}
	same := func(s string) string { return s }
	for name, text := range map[string]string{
		"blanks and decimal commas":    build("f / Hz   Z' / Ohm   -Z'' / Ohm\n", "%v  %v  %v", comma),
		"single blanks in header":      build("f (Hz) Z' (Ohm) Z'' (Ohm)\n", "%v %v %v", same),
		"tabs and decimal commas":      build("f/Hz\tZ'/Ohm\tZ''/Ohm\n", "%v\t%v\t%v", comma),
		"comma and blank":              build("f/Hz, Z'/Ohm, Z''/Ohm\n", "%v, %v, %v", same),
		"trailing delimiters":          build("f/Hz,Z'/Ohm,Z''/Ohm,\n", "%v,%v,%v,", same),
		"number sign heads numbers":    build("#\tf/Hz\tZ'/Ohm\tZ''/Ohm\n", "7\t%v\t%v\t%v", same),
		"quoted numbers":               build("\"f/Hz\",\"Z'/Ohm\",\"Z''/Ohm\"\n", "\"%v\",\"%v\",\"%v\"", same),
		"empty column":                 build("f/Hz;;Z'/Ohm;Z''/Ohm\n", "%v;;%v;%v", same),
		"text column":                  build("mark;f/Hz;Z'/Ohm;Z''/Ohm\n", "ok;%v;%v;%v", same),
		"typographic minus":            build("f/Hz;Z'/Ohm;Z''/Ohm\n", "%v;%v;%v", func(s string) string { return strings.ReplaceAll(s, "-", "−") }),
		"header repeated below itself": build("f/Hz;Z'/Ohm;Z''/Ohm\nf/Hz;Z'/Ohm;Z''/Ohm\n", "%v;%v;%v", same),
		"old Mac line ends":            strings.ReplaceAll(build("f/Hz,Z'/Ohm,Z''/Ohm\n", "%v,%v,%v", same), "\n", "\r"),
		"head with numbers":            build("12 34\nrun 5; area 0.5; 3\nf/Hz,Z'/Ohm,Z''/Ohm\n", "%v,%v,%v", same),
	} {
		r, err := Read("p_300C.csv", []byte(text), ReadOptions{})
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if len(r.Spectra) != 1 || len(r.Spectra[0].Points) != len(tableFrequencies) {
			t.Errorf("%s: %+v", name, r.Groups)
			continue
		}
		for i, p := range r.Spectra[0].Points {
			if f := tableFrequencies[i]; p.F != f || cmplx.Abs(p.Z/parallelRC(f)-1) > 1e-13 {
				t.Errorf("%s: point %d is %v %v\n%+v", name, i, p.F, p.Z, r.Columns)
				break
			}
		}
	}
}

func BenchmarkReadMaxRows(b *testing.B) {
	var text strings.Builder
	text.WriteString("f/Hz,Z'/ohm,Z''/ohm,T/K\n")
	for i := range MaxRows {
		fmt.Fprintf(&text, "%d,%d,-%d,%d\n", i%100+1, i, i+1, 300+i/100)
	}
	data := []byte(text.String())
	for b.Loop() {
		if _, err := Read("x", data, ReadOptions{}); err != nil {
			b.Fatal(err)
		}
	}
}
