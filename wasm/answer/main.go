// Command answer prints what the page would save: it takes a link or its
// parameters, and optionally spectra from files, and writes the case as JSON.
//
//	answer ['LINK-OR-PARAMETERS'] [--spectra FILE]... [--temperature '300 °C'] [--findings] [--parameters]
//
// Without arguments it answers the demo case. With --findings it prints the
// findings as text; with --parameters the table of all parameters and fields.
package main

import (
	"context"
	"flag"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"

	"brinkfield/physics/impedance"
	"brinkfield/physics/quantity"
	"brinkfield/physics/study"
)

func main() {
	if err := run(os.Args[1:], os.Stdout, os.Stderr); err != nil {
		fmt.Fprintln(os.Stderr, "answer:", err)
		os.Exit(1)
	}
}

// files collects repeated --spectra.
type files []string

func (f *files) String() string { return strings.Join(*f, " ") }

func (f *files) Set(name string) error {
	*f = append(*f, name)
	return nil
}

func run(args []string, out, notes io.Writer) error {
	flags := flag.NewFlagSet("answer", flag.ContinueOnError)
	flags.SetOutput(notes)
	var spectra files
	flags.Var(&spectra, "spectra", "file of impedance spectra; may be repeated, one file a temperature")
	temperature := flags.String("temperature", "", "temperature of files that name none")
	findings := flags.Bool("findings", false, "print the findings as text instead of JSON")
	parameters := flags.Bool("parameters", false, "print the table of parameters and fields")
	link, err := parse(flags, args)
	if err != nil {
		return err
	}
	if *parameters {
		_, err := io.WriteString(out, study.ParameterTable())
		return err
	}
	in, err := inputs(link, spectra, *temperature, notes)
	if err != nil {
		return err
	}
	var runner study.Runner
	result, err := runner.Run(context.Background(), in, study.Options{Samples: study.DefaultSamples})
	if err != nil {
		return err
	}
	if *findings {
		_, err := io.WriteString(out, study.FindingsText(result))
		return err
	}
	text, err := result.JSON()
	if err != nil {
		return err
	}
	_, err = out.Write(text)
	return err
}

// parse allows the link before or after the options.
func parse(flags *flag.FlagSet, args []string) (link string, err error) {
	for len(args) > 0 {
		if err := flags.Parse(args); err != nil {
			return "", err
		}
		if args = flags.Args(); len(args) == 0 {
			break
		}
		if link != "" {
			return "", fmt.Errorf("more than one link is given (%q and %q), expected one in quotes", link, args[0])
		}
		link, args = args[0], args[1:]
	}
	return link, nil
}

// inputs reads the link (or a saved case file) and the files.
func inputs(link string, names []string, temperature string, notes io.Writer) (study.Inputs, error) {
	in, problems := study.Parse(link)
	if data, err := os.ReadFile(link); link != "" && err == nil {
		if in, err = study.Open(data); err != nil {
			return in, err
		}
		problems = nil
	}
	if len(problems) > 0 {
		return in, problems
	}
	if len(names) == 0 {
		return in, nil
	}
	options := impedance.ReadOptions{}
	if temperature != "" {
		t, err := quantity.Parse(temperature, quantity.Temperature)
		if err != nil {
			return in, err
		}
		options.Temperature = t.SI
	}
	var readings []impedance.Reading
	for _, name := range names {
		data, err := os.ReadFile(name)
		if err != nil {
			return in, err
		}
		reading, err := impedance.Read(filepath.Base(name), data, options)
		if err != nil {
			return in, err
		}
		for _, line := range study.Understanding(reading) {
			fmt.Fprintf(notes, "%s: %s\n", name, line)
		}
		readings = append(readings, reading)
	}
	all, joined, err := impedance.Combine(readings...)
	if err != nil {
		return in, err
	}
	for _, n := range joined {
		fmt.Fprintln(notes, n.Text)
	}
	return in.WithSpectra(all)
}
