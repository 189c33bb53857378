package main

import (
	"encoding/json"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"slices"
	"strings"

	"github.com/evanw/esbuild/pkg/api"
)

// licences lists the licence texts of what the page ships: Go itself, the modules
// compiled into the program, and the packages bundled into the plots.
func licences(site string) (string, error) {
	sections := map[string]string{}
	if err := goLicences(sections); err != nil {
		return "", err
	}
	if err := plotsLicences(site, sections); err != nil {
		return "", err
	}
	names := make([]string, 0, len(sections))
	for name := range sections {
		names = append(names, name)
	}
	slices.Sort(names)
	var b strings.Builder
	b.WriteString("Brinkfield ships parts of these works, each under its own licence.\n")
	for _, name := range names {
		fmt.Fprintf(&b, "\n%s\n%s\n\n%s\n", name, strings.Repeat("=", len(name)), strings.TrimSpace(sections[name]))
	}
	return b.String(), nil
}

func goLicences(sections map[string]string) error {
	root, err := exec.Command("go", "env", "GOROOT", "GOVERSION").Output()
	if err != nil {
		return err
	}
	env := strings.Fields(string(root))
	if sections["The Go programming language, "+env[1]], err = licenceIn(env[0]); err != nil {
		return err
	}
	list := exec.Command("go", "list", "-deps", "-f", "{{with .Module}}{{if not .Main}}{{.Path}} {{.Version}}\t{{.Dir}}{{end}}{{end}}", "./wasm")
	list.Env = append(os.Environ(), "GOOS=js", "GOARCH=wasm")
	out, err := list.Output()
	if err != nil {
		return fmt.Errorf("pack: go list of the program's modules: %w", err)
	}
	for line := range strings.Lines(string(out)) {
		name, dir, ok := strings.Cut(strings.TrimSpace(line), "\t")
		if !ok || sections[name] != "" {
			continue
		}
		if sections[name], err = licenceIn(dir); err != nil {
			return err
		}
	}
	return nil
}

var packagePath = regexp.MustCompile(`node_modules/((?:@[^/]+/)?[^/]+)/`)

// plotsLicences asks the bundler which packages really go into the script.
func plotsLicences(site string, sections map[string]string) error {
	r := api.Build(api.BuildOptions{EntryPoints: []string{filepath.Join(site, "plots", "index.js")},
		Bundle: true, Metafile: true, Format: api.FormatIIFE, LogLevel: api.LogLevelSilent})
	if len(r.Errors) > 0 {
		return failure("plots", r.Errors)
	}
	var meta struct {
		Inputs map[string]json.RawMessage `json:"inputs"`
	}
	if err := json.Unmarshal([]byte(r.Metafile), &meta); err != nil {
		return err
	}
	for path := range meta.Inputs {
		m := packagePath.FindStringSubmatch(path)
		if m == nil {
			continue
		}
		dir := filepath.Join(site, "node_modules", m[1])
		var about struct{ Version string }
		text, err := os.ReadFile(filepath.Join(dir, "package.json"))
		if err != nil {
			return err
		}
		if err := json.Unmarshal(text, &about); err != nil {
			return fmt.Errorf("pack: %s: %w", dir, err)
		}
		name := m[1] + " " + about.Version
		if sections[name] != "" {
			continue
		}
		if sections[name], err = licenceIn(dir); err != nil {
			return err
		}
	}
	return nil
}

// licenceIn reads the licence file of a folder, whatever its spelling.
func licenceIn(dir string) (string, error) {
	entries, err := os.ReadDir(dir)
	if err != nil {
		return "", err
	}
	for _, e := range entries {
		stem := strings.ToUpper(strings.TrimSuffix(e.Name(), filepath.Ext(e.Name())))
		if stem == "LICENSE" || stem == "LICENCE" || stem == "COPYING" {
			text, err := os.ReadFile(filepath.Join(dir, e.Name()))
			return string(text), err
		}
	}
	return "", fmt.Errorf("pack: no licence file in %s, expected LICENSE", dir)
}
