package impedance

import (
	"bytes"
	"fmt"
	"strings"
	"unicode/utf16"
	"unicode/utf8"
)

// Limits of reading.
const (
	MaxRows     = 20000 // data rows in one file, and points in one set of spectra
	MinPoints   = 6     // usable points in one spectrum
	MaxBytes    = 64 << 20
	headAllowed = 5000 // comment and head lines tolerated beside MaxRows
	maxLine     = 1 << 16
)

// line is one line of a file with its number.
type line struct {
	number  int
	text    string // trimmed, without the comment mark
	raw     string
	comment bool
}

// decode turns bytes into text and names the encoding. Latin-1 is assumed for
// what is not UTF-8: no other 8-bit table can be told from it, and in a table of
// numbers only ° and µ differ.
func decode(name string, data []byte) (text, encoding string, err error) {
	if len(bytes.TrimSpace(data)) == 0 {
		return "", "", &ReadError{File: name, What: "the file is empty", Expected: "a table of numbers"}
	}
	if n := bytes.Count(data, []byte{'\n'}); n > MaxRows+headAllowed {
		return "", "", tooMany(name, n)
	} else if cr := bytes.Count(data, []byte{'\r'}); n == 0 && cr > MaxRows+headAllowed {
		return "", "", tooMany(name, cr)
	}
	if len(data) > MaxBytes {
		return "", "", &ReadError{File: name, What: fmt.Sprintf("the file is too large (%d MB)", len(data)>>20), Expected: fmt.Sprintf("at most %d MB", MaxBytes>>20)}
	}
	switch {
	case bytes.HasPrefix(data, []byte{0xEF, 0xBB, 0xBF}):
		data, encoding = data[3:], "UTF-8 with byte order mark"
	case bytes.HasPrefix(data, []byte{0xFF, 0xFE}):
		return utf16Text(data[2:], false), "UTF-16 little-endian", nil
	case bytes.HasPrefix(data, []byte{0xFE, 0xFF}):
		return utf16Text(data[2:], true), "UTF-16 big-endian", nil
	default:
		if big, ok := zeroSide(data); ok {
			return utf16Text(data, big), "UTF-16 without byte order mark", nil
		}
		encoding = "UTF-8"
	}
	if binary(data) {
		return "", "", &ReadError{File: name, What: "the file is not text", Expected: "a table of numbers as plain text (spreadsheets: save as CSV)"}
	}
	if utf8.Valid(data) {
		return string(data), encoding, nil
	}
	r := make([]rune, len(data))
	for i, b := range data {
		r[i] = rune(b)
	}
	return string(r), "Latin-1", nil
}

func tooMany(name string, n int) error {
	return &ReadError{File: name, What: fmt.Sprintf("too many rows (%d)", n), Expected: fmt.Sprintf("at most %d", MaxRows)}
}

func utf16Text(b []byte, big bool) string {
	u := make([]uint16, len(b)/2)
	for i := range u {
		lo, hi := b[2*i], b[2*i+1]
		if big {
			lo, hi = hi, lo
		}
		u[i] = uint16(lo) | uint16(hi)<<8
	}
	return string(utf16.Decode(u))
}

// zeroSide recognises UTF-16 by zero bytes on one side of nearly every pair.
func zeroSide(data []byte) (big, ok bool) {
	head := data[:min(len(data), 4096)]
	var even, odd int
	for i, b := range head {
		if b == 0 {
			if i%2 == 0 {
				even++
			} else {
				odd++
			}
		}
	}
	half := len(head) / 2
	return even > odd, half > 4 && even+odd > half*9/10 && min(even, odd) == 0
}

// binary: a NUL, or more than one control character in fifty.
func binary(data []byte) bool {
	head := data[:min(len(data), 1<<16)]
	control := 0
	for _, b := range head {
		if b == 0 {
			return true
		}
		if b < 32 && b != '\t' && b != '\n' && b != '\r' && b != '\f' {
			control++
		}
	}
	return control*50 > len(head)
}

// commentMarks open a line that is not data.
var commentMarks = []string{"#", "%", "!", "//", ";"}

// splitLines numbers the lines, whatever ends them, and sets comments apart.
func splitLines(name, text string) ([]line, error) {
	text = strings.ReplaceAll(text, "\r\n", "\n")
	text = strings.ReplaceAll(text, "\r", "\n")
	var out []line
	rows := 0
	for i, raw := range strings.Split(text, "\n") {
		if len(raw) > maxLine {
			return nil, &ReadError{File: name, Line: i + 1, What: fmt.Sprintf("the line has %d characters", len(raw)),
				Expected: fmt.Sprintf("a table with at most %d a line", maxLine)}
		}
		l := line{number: i + 1, raw: raw, text: strings.Trim(raw, " \r\f\v\u00a0\ufeff\x00")}
		probe := strings.TrimSpace(l.text)
		for _, mark := range commentMarks {
			if strings.HasPrefix(probe, mark) {
				l.comment = true
				l.text = strings.Trim(probe, "#%!/; \t")
				break
			}
		}
		if !l.comment && probe != "" {
			rows++
		}
		out = append(out, l)
	}
	if rows > MaxRows+headAllowed {
		return nil, tooMany(name, rows)
	}
	return out, nil
}
