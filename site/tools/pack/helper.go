package main

import (
	"fmt"
	"go/ast"
	"go/parser"
	"go/token"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
)

// rendererHelper is the script vugu's renderer would evaluate at its start. A
// strict policy forbids that, so it is shipped as a normal script. It is a string
// constant in the module (the .js file beside it is a debugging version).
func rendererHelper() (string, error) {
	dir, err := exec.Command("go", "list", "-m", "-f", "{{.Dir}}", "github.com/vugu/vugu").Output()
	if err != nil {
		return "", fmt.Errorf("pack: go list of vugu: %w", err)
	}
	file := filepath.Join(strings.TrimSpace(string(dir)), "domrender", "renderer-js-script.go")
	tree, err := parser.ParseFile(token.NewFileSet(), file, nil, 0)
	if err != nil {
		return "", err
	}
	for _, d := range tree.Decls {
		if text, ok := constant(d, "jsHelperScript"); ok {
			return text, nil
		}
	}
	return "", fmt.Errorf("pack: no constant jsHelperScript in %s, expected vugu v0.4.0", file)
}

func constant(d ast.Decl, name string) (string, bool) {
	g, ok := d.(*ast.GenDecl)
	if !ok {
		return "", false
	}
	for _, s := range g.Specs {
		v, ok := s.(*ast.ValueSpec)
		if !ok || len(v.Names) != 1 || v.Names[0].Name != name || len(v.Values) != 1 {
			continue
		}
		if lit, ok := v.Values[0].(*ast.BasicLit); ok {
			text, err := strconv.Unquote(lit.Value)
			return text, err == nil
		}
	}
	return "", false
}

var (
	plotStyle = regexp.MustCompile("append\\(\"style\"\\)\\.text\\(\\s*`([^`]*)`")
	plotClass = regexp.MustCompile(`if \(name === undefined\) return "([^"]+)"`)
)

// plotsStyles are the style elements the plots' library writes into its drawings,
// which the policy allows by their hashes.
func plotsStyles(site string) ([]string, error) {
	dir := filepath.Join(site, "node_modules", "@observablehq", "plot", "src")
	class, err := os.ReadFile(filepath.Join(dir, "style.js"))
	if err != nil {
		return nil, fmt.Errorf("pack: the plots' library is missing (%w), expected npm ci in %s", err, site)
	}
	text, err := os.ReadFile(filepath.Join(dir, "plot.js"))
	if err != nil {
		return nil, err
	}
	m, style := plotClass.FindSubmatch(class), plotStyle.FindSubmatch(text)
	if m == nil || style == nil {
		return nil, fmt.Errorf("pack: no inline style found in %s, expected @observablehq/plot 0.6.17", dir)
	}
	return []string{strings.ReplaceAll(string(style[1]), "${className}", string(m[1]))}, nil
}
