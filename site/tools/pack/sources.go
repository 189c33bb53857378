package main

import (
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"

	"github.com/evanw/esbuild/pkg/api"
)

// source is the page's text parts, ready to be shipped.
type source struct {
	scripts     []part // in the order they must run
	worker      string // the engine's worker
	style       string
	plotsStyles []string // style elements the plots write at run time
}

type part struct{ name, text string }

// sources bundles the scripts and the style sheet.
func sources(site string) (s source, err error) {
	support, err := goSupport()
	if err != nil {
		return s, err
	}
	helper, err := rendererHelper()
	if err != nil {
		return s, err
	}
	boot, err := bundle(filepath.Join(site, "boot", "index.js"))
	if err != nil {
		return s, err
	}
	plots, err := bundle(filepath.Join(site, "plots", "index.js"))
	if err != nil {
		return s, err
	}
	s.scripts = []part{{"go", support}, {"helper", helper}, {"boot", boot}, {"plots", plots}}
	worker, err := os.ReadFile(filepath.Join(site, "worker.js"))
	if err != nil {
		return s, err
	}
	if s.worker, err = minify(string(worker), api.LoaderJS); err != nil {
		return s, err
	}
	s.worker = support + s.worker
	if s.style, err = style(site); err != nil {
		return s, err
	}
	s.plotsStyles, err = plotsStyles(site)
	return s, err
}

// goSupport is the script every Go program needs in a browser, of this very Go.
func goSupport() (string, error) {
	root, err := exec.Command("go", "env", "GOROOT").Output()
	if err != nil {
		return "", fmt.Errorf("pack: go env GOROOT: %w", err)
	}
	text, err := os.ReadFile(filepath.Join(strings.TrimSpace(string(root)), "lib", "wasm", "wasm_exec.js"))
	if err != nil {
		return "", err
	}
	return minify(string(text), api.LoaderJS)
}

// style joins the style sheet for what stands around the program with the page's own.
func style(site string) (string, error) {
	text := ""
	for _, file := range []string{filepath.Join("boot", "boot.css"), "style.css"} {
		b, err := os.ReadFile(filepath.Join(site, file))
		if err != nil {
			return "", err
		}
		text += string(b) + "\n"
	}
	return minify(text, api.LoaderCSS)
}

// bundle makes one script of an entry and all it imports.
func bundle(entry string) (string, error) {
	r := api.Build(api.BuildOptions{
		EntryPoints: []string{entry}, Bundle: true, Format: api.FormatIIFE, Target: api.ES2022,
		MinifyWhitespace: true, MinifyIdentifiers: true, MinifySyntax: true,
		LegalComments: api.LegalCommentsNone, Charset: api.CharsetUTF8, LogLevel: api.LogLevelSilent,
	})
	if len(r.Errors) > 0 {
		return "", failure(entry, r.Errors)
	}
	return string(r.OutputFiles[0].Contents), nil
}

func minify(text string, loader api.Loader) (string, error) {
	r := api.Transform(text, api.TransformOptions{
		Loader: loader, Target: api.ES2022, Charset: api.CharsetUTF8, LegalComments: api.LegalCommentsNone,
		MinifyWhitespace: true, MinifyIdentifiers: true, MinifySyntax: true, LogLevel: api.LogLevelSilent,
	})
	if len(r.Errors) > 0 {
		return "", failure("text", r.Errors)
	}
	return string(r.Code), nil
}

func failure(entry string, list []api.Message) error {
	lines := api.FormatMessages(list, api.FormatMessagesOptions{Kind: api.ErrorMessage})
	return fmt.Errorf("pack: %s cannot be bundled:\n%s", entry, strings.Join(lines, ""))
}
