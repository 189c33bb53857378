// Package study runs one calculation from typed inputs to findings. It is the
// single door that the page, the engine and the terminal command use.
//
// Inputs hold what a person typed, one text per field (table Fields); they are
// read from and written to the parameters of a link and the case file. Run
// checks them, fits the spectra, and carries every temperature through the
// stations: specimen, spectra, boundary, profile. The Result holds numbers with
// unit, interval, equation and flags, and the findings in words.
//
//	in, problems := study.Parse("grain=350 nm&spectra=demo")
//	var r study.Runner
//	result, err := r.Run(ctx, in, study.Options{Samples: 400})
//
// Intervals are 95 %: the fit's covariance and the stated ± of the inputs (95 %
// half-widths) by sampling with a fixed seed; the spread between routes is never
// part of one. A new station is a section file here, its fields in Fields, and
// one line in sections.
package study
