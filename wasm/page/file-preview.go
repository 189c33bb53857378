package page

import (
	"brinkfield/physics/impedance"
	"brinkfield/physics/study"
)

// FilePreview shows what was understood of one file and lets it be corrected.
type FilePreview struct {
	App   *App
	File  *PreviewFile
	Index int
}

func (c *FilePreview) understood() []string {
	if c.File.Err != "" {
		return nil
	}
	return study.Understanding(c.File.Reading)
}

func (c *FilePreview) columns() []impedance.Column {
	return c.File.Reading.Columns
}

func (c *FilePreview) signs() []string { return []string{"as understood", "as written", "turned"} }

func (c *FilePreview) sign() string {
	return map[impedance.Sign]string{impedance.SignAuto: "as understood", impedance.SignAsIs: "as written", impedance.SignFlipped: "turned"}[c.File.Options.Sign]
}

func (c *FilePreview) temperatureClass() string {
	if c.File.TypedNo != "" || (c.File.Reading.TemperatureMissing && c.File.Err == "") {
		return "field row wrong"
	}
	return "field row"
}

func (c *FilePreview) temperatureReason() string {
	if c.File.TypedNo != "" {
		return c.File.TypedNo
	}
	if c.File.Reading.TemperatureMissing && c.File.Err == "" {
		return "the file names no temperature; give one such as 300 °C"
	}
	return ""
}
