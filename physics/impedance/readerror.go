package impedance

import (
	"fmt"
	"strings"
)

// ReadError says where a file cannot be read and what was expected there.
type ReadError struct {
	File     string
	Line     int // 1-based, 0: the file as a whole
	Column   int // 1-based, 0: the line as a whole
	What     string
	Expected string
}

func (e *ReadError) Error() string {
	var b strings.Builder
	b.WriteString("impedance: ")
	if e.File != "" {
		b.WriteString(e.File + ": ")
	}
	if e.Line > 0 {
		fmt.Fprintf(&b, "line %d: ", e.Line)
	}
	if e.Column > 0 {
		fmt.Fprintf(&b, "column %d: ", e.Column)
	}
	b.WriteString(e.What)
	if e.Expected != "" {
		b.WriteString(", expected " + e.Expected)
	}
	return b.String()
}
