// Command pack puts the page together: the folder site/dist for any static host,
// and in it brinkfield.html, the same page as one file.
//
// It takes the compiled program and the sources in site/, bundles the scripts,
// names every part by a hash of its content, writes a strict
// Content-Security-Policy with the hashes of what stands inline, the worker that
// keeps an offline copy, and the licences of everything shipped. It is run by
// build.sh from the root of the repository.
package main

import (
	"flag"
	"fmt"
	"os"
	"path/filepath"
)

func main() {
	program := flag.String("program", "", "the compiled program (.wasm)")
	site := flag.String("site", "site", "folder with the page's sources")
	out := flag.String("out", "site/dist", "folder to write; its old content is removed")
	flag.Parse()
	if err := pack(*program, *site, *out); err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
}

func pack(program, site, out string) error {
	wasm, err := os.ReadFile(program)
	if err != nil {
		return fmt.Errorf("pack: no compiled program (%w), expected -program FILE.wasm", err)
	}
	s, err := sources(site)
	if err != nil {
		return err
	}
	licences, err := licences(site)
	if err != nil {
		return err
	}
	packed, err := gzipped(wasm)
	if err != nil {
		return err
	}
	page := &page{sources: s, packed: packed, licences: licences}
	if page.template, err = os.ReadFile(filepath.Join(site, "index.html")); err != nil {
		return err
	}
	if page.offline, err = os.ReadFile(filepath.Join(site, "offline-worker.js")); err != nil {
		return err
	}
	files, err := page.hosted()
	if err != nil {
		return err
	}
	if files["brinkfield.html"], err = page.single(); err != nil {
		return err
	}
	files["licences.txt"] = []byte(licences)
	if err := write(out, files); err != nil {
		return err
	}
	return sizes(os.Stdout, wasm, packed, files)
}

// write fills a folder beside out first, so that a failed build leaves the old one.
func write(out string, files map[string][]byte) error {
	next := filepath.Clean(out) + ".next"
	if err := os.RemoveAll(next); err != nil {
		return err
	}
	if err := os.MkdirAll(next, 0o755); err != nil {
		return err
	}
	for name, data := range files {
		if err := os.WriteFile(filepath.Join(next, name), data, 0o644); err != nil {
			return err
		}
	}
	if err := os.RemoveAll(out); err != nil {
		return err
	}
	return os.Rename(next, out)
}
