package main

import (
	"bytes"
	"compress/gzip"
	"fmt"
	"io"
	"os/exec"
)

// gzipped packs reproducibly: no time and no name in the head.
func gzipped(data []byte) ([]byte, error) {
	var b bytes.Buffer
	w, err := gzip.NewWriterLevel(&b, gzip.BestCompression)
	if err != nil {
		return nil, err
	}
	if _, err := w.Write(data); err != nil {
		return nil, err
	}
	err = w.Close()
	return b.Bytes(), err
}

// sizes prints what a visitor has to fetch.
func sizes(w io.Writer, wasm, packed []byte, files map[string][]byte) error {
	total := 0
	for name, data := range files {
		if name != "brinkfield.html" {
			total += len(data)
		}
	}
	_, err := fmt.Fprintf(w, "program      %8s raw, %s gzip (shipped), %s brotli\nhosted page  %8s in %d files\nsingle file  %8s\n",
		kB(len(wasm)), kB(len(packed)), brotli(wasm), kB(total), len(files)-1, kB(len(files["brinkfield.html"])))
	return err
}

func kB(n int) string { return fmt.Sprintf("%d kB", (n+500)/1000) }

// brotli asks the tool of that name, where it is installed, for the size a host
// that compresses by itself would reach.
func brotli(data []byte) string {
	c := exec.Command("brotli", "--best", "--stdout", "-")
	c.Stdin = bytes.NewReader(data)
	out, err := c.Output()
	if err != nil {
		return "not measured"
	}
	return kB(len(out))
}
