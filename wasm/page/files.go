package page

import (
	"strings"

	"brinkfield/physics/impedance"
	"brinkfield/physics/quantity"
	"brinkfield/physics/study"
	"brinkfield/wasm/browser"
)

// Preview is what was understood of files that came in, before anything is
// computed from them.
type Preview struct {
	Files []*PreviewFile
}

// PreviewFile is one file with what a person corrected and what was understood.
type PreviewFile struct {
	Name    string
	Data    []byte
	Options impedance.ReadOptions
	Reading impedance.Reading
	Err     string
	Typed   string // temperature as typed
	TypedNo string // what is wrong with it
}

// PickSpectra asks for files of spectra.
func (a *App) PickSpectra() {
	a.Host.PickFiles(".csv,.txt,.dat,.tsv,text/plain", true, a.takeFiles)
}

// ReadPasted takes the text of the paste field.
func (a *App) ReadPasted() {
	if strings.TrimSpace(a.Pasted) == "" {
		a.problem("The field for pasted spectra is empty; expected lines of frequency and impedance.")
		return
	}
	a.takeText(a.Pasted)
}

// takeText takes text pasted anywhere on the page: a link, a case or a table.
func (a *App) takeText(text string) {
	trimmed := strings.TrimSpace(text)
	if !strings.Contains(trimmed, "\n") && strings.Contains(trimmed, "#") && strings.Contains(trimmed, "://") {
		a.openLink(trimmed)
		return
	}
	a.takeFiles([]browser.File{{Name: "pasted text", Data: []byte(text)}})
}

// takeFiles opens a case file, or reads spectra into the preview. What stands on
// the page stays until the preview is accepted.
func (a *App) takeFiles(files []browser.File) {
	p := &Preview{}
	for _, f := range files {
		switch {
		case f.Err != nil:
			a.problem(f.Name + ": " + plain(f.Err))
			return
		case study.IsCase(f.Data):
			a.openCase(f)
			return
		}
		one := &PreviewFile{Name: f.Name, Data: f.Data}
		one.read()
		p.Files = append(p.Files, one)
	}
	if len(p.Files) == 0 {
		return
	}
	a.Preview, a.Station, a.Message = p, "spectra", ""
	a.Host.Focus("preview")
}

func (a *App) openCase(f browser.File) {
	in, err := study.Open(f.Data)
	if err != nil {
		a.problem(f.Name + ": " + plain(err))
		return
	}
	a.Preview = nil
	a.tell("%s is open. Undo takes you back to the former case.", f.Name)
	a.set(in, "")
}

func (f *PreviewFile) read() {
	f.Err = ""
	reading, err := impedance.Read(f.Name, f.Data, f.Options)
	if err != nil {
		f.Err = plain(err)
		if f.Reading.File == "" {
			f.Reading = reading
		}
		return
	}
	f.Reading = reading
}

// SetTemperature takes the temperature typed for a file that names none.
func (f *PreviewFile) SetTemperature(text string) {
	f.Typed, f.TypedNo = text, ""
	if strings.TrimSpace(text) == "" {
		f.Options.Temperature = 0
		f.read()
		return
	}
	v, err := quantity.Parse(text, quantity.Temperature)
	if err != nil || v.SI <= 0 {
		f.TypedNo = "expected " + quantity.Temperature.Expected
		return
	}
	f.Options.Temperature = v.SI
	f.read()
}

// columnChoices are what a column may hold, in the order of the list.
var columnChoices = []impedance.ColumnQuantity{impedance.Ignored, impedance.Frequency, impedance.AngularFrequency, impedance.RealPart,
	impedance.ImaginaryPart, impedance.NegatedImaginary, impedance.Modulus, impedance.Phase, impedance.NegatedPhase, impedance.Temperature}

// unitChoices are the units of a column by what it holds.
func unitChoices(q impedance.ColumnQuantity) []string {
	switch q {
	case impedance.Frequency:
		return []string{"mHz", "Hz", "kHz", "MHz"}
	case impedance.AngularFrequency:
		return []string{"rad/s"}
	case impedance.Phase, impedance.NegatedPhase:
		return []string{"deg", "rad"}
	case impedance.Temperature:
		return []string{"°C", "K"}
	case impedance.Ignored:
		return []string{"—"}
	}
	return []string{"mΩ", "Ω", "kΩ", "MΩ", "GΩ"}
}

// SetColumn says what a column holds, SetUnit in which unit.
func (f *PreviewFile) SetColumn(number int, choice string) {
	for _, q := range columnChoices {
		if q.String() == choice {
			f.choose(number, impedance.ColumnChoice{Quantity: q, Unit: ""})
		}
	}
}

// SetUnit is the counterpart of SetColumn for the unit.
func (f *PreviewFile) SetUnit(number int, unit string) {
	for _, c := range f.Reading.Columns {
		if c.Number == number {
			f.choose(number, impedance.ColumnChoice{Quantity: c.Quantity, Unit: unit})
		}
	}
}

func (f *PreviewFile) choose(number int, choice impedance.ColumnChoice) {
	if f.Options.Columns == nil {
		f.Options.Columns = map[int]impedance.ColumnChoice{}
		for _, c := range f.Reading.Columns {
			f.Options.Columns[c.Number] = impedance.ColumnChoice{Quantity: c.Quantity, Unit: c.Unit}
		}
	}
	f.Options.Columns[number] = choice
	f.read()
}

// SetSign takes "as is" or "negated", or "" for what the file says.
func (f *PreviewFile) SetSign(choice string) {
	f.Options.Sign = map[string]impedance.Sign{"as is": impedance.SignAsIs, "negated": impedance.SignFlipped}[choice]
	f.read()
}

// SetDecimal takes ".", "," or "" for what the file says.
func (f *PreviewFile) SetDecimal(mark string) {
	f.Options.Decimal = mark
	f.read()
}

// Ready says why the preview cannot be accepted yet, or nothing.
func (p *Preview) Ready() string {
	for _, f := range p.Files {
		switch {
		case f.Err != "":
			return f.Name + " cannot be used as it is"
		case f.Reading.TemperatureMissing:
			return f.Name + " needs a temperature"
		}
	}
	return ""
}

// Count is how many spectra the preview holds.
func (p *Preview) Count() (n int) {
	for _, f := range p.Files {
		n += len(f.Reading.Spectra)
	}
	return n
}

// Drop leaves one file out of the preview.
func (a *App) Drop(i int) {
	a.Preview.Files = append(a.Preview.Files[:i:i], a.Preview.Files[i+1:]...)
	if len(a.Preview.Files) == 0 {
		a.Preview = nil
	}
}

// Accept makes the previewed spectra those of the case; add keeps the present ones.
func (a *App) Accept(add bool) {
	if why := a.Preview.Ready(); why != "" {
		a.problem(why + ".")
		return
	}
	var readings []impedance.Reading
	for _, f := range a.Preview.Files {
		readings = append(readings, f.Reading)
	}
	if add {
		present := impedance.Reading{File: "this case"}
		for _, s := range a.Typed.Spectra() {
			s.Source = "this case"
			present.Spectra = append(present.Spectra, s)
		}
		readings = append(readings, present)
	}
	all, notes, err := impedance.Combine(readings...)
	if err != nil {
		a.problem(plain(err))
		return
	}
	in, err := a.Typed.WithoutControls().WithSpectra(all)
	if err != nil {
		a.problem(plain(err))
		return
	}
	if _, titled := in.Text["title"]; !titled {
		in = in.With("title", nameOf(a.Preview.Files[0].Name))
	}
	a.Preview, a.Pasted, a.Message = nil, "", ""
	a.Host.Focus("spectra")
	for _, n := range notes {
		a.tell("%s", n.Text)
	}
	a.set(in, "")
}

// nameOf is a file's name as a title.
func nameOf(file string) string {
	if i := strings.LastIndexByte(file, '.'); i > 0 {
		file = file[:i]
	}
	return file
}

// Discard forgets the preview.
func (a *App) Discard() { a.Preview = nil }

// RemoveSpectrum takes one spectrum out of the case.
func (a *App) RemoveSpectrum(i int) {
	all := a.Typed.Spectra()
	if i < 0 || i >= len(all) {
		return
	}
	if len(all) == 1 {
		a.set(a.Typed.WithoutControls().With("spectra", "none").With("data", ""), "")
		return
	}
	rest := append(append([]impedance.Spectrum{}, all[:i]...), all[i+1:]...)
	controls := a.Typed.ControlsOf()
	in, err := a.Typed.WithSpectra(rest)
	if err != nil {
		a.problem(plain(err))
		return
	}
	a.set(in.WithControls(append(controls[:i:i], controls[i+1:]...)), "")
	a.tell("%s is taken out; Undo brings it back.", study.Celsius(all[i].T))
}

// pick leaves a measured point out of the fit, or takes it back.
func (a *App) pick(p browser.Pick) {
	if p.Series != measuredName || a.Result == nil || a.Result.View.Spectrum < 0 {
		return
	}
	a.ToggleOmit(a.Result.View.Spectrum, p.Index)
}
