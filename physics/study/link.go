package study

import (
	"bytes"
	"compress/flate"
	"encoding/base64"
	"fmt"
	"io"
	"net/url"
	"regexp"
	"slices"
	"strings"

	"brinkfield/physics/impedance"
)

// MaxDataBytes bounds the spectra a link may carry, inflated.
const MaxDataBytes = 16 << 20

// Parse reads the parameters of a link: a whole address, what stands behind its
// # or ?, or bare name=value pairs joined by &. What cannot be used is reported
// at its parameter; the rest is kept.
func Parse(link string) (Inputs, Problems) {
	in, problems := Defaults(), Problems(nil)
	for _, pair := range strings.Split(parameters(link), "&") {
		name, value, ok := strings.Cut(pair, "=")
		if pair == "" {
			continue
		}
		text, err := url.PathUnescape(unhand(value))
		switch {
		case !ok:
			problems = append(problems, Problem{name, fmt.Sprintf("parameter has no value (%q), expected name=value", pair)})
		case !known(name):
			problems = append(problems, Problem{name, fmt.Sprintf("parameter is not known (%q), expected %s", name, nearest(name))})
		case err != nil:
			problems = append(problems, Problem{name, fmt.Sprintf("text is not readable (%q), expected percent-encoding", value)})
		default:
			in.set(name, text)
		}
	}
	if data := in.Text["data"]; data != "" {
		spectra, err := unpack(data)
		if err != nil {
			delete(in.Text, "data")
			delete(in.Text, "spectra")
			problems = append(problems, Problem{"data", err.Error()})
		} else {
			in.Own = spectra
			in.set("spectra", "data")
		}
	}
	return in, problems
}

// powerPlus is the plus of 2.5e+28 in a link written by hand; every other plus
// stands for a blank.
var powerPlus = regexp.MustCompile(`([0-9][eE])\+([0-9])`)

// barePercent is a percent sign that starts no escape: "2 %" typed by hand.
var barePercent = regexp.MustCompile(`%($|[^0-9A-Fa-f]|[0-9A-Fa-f]($|[^0-9A-Fa-f]))`)

// unhand mends what a person writes into a link by hand.
func unhand(value string) string {
	value = barePercent.ReplaceAllString(value, "%25${1}")
	return strings.ReplaceAll(powerPlus.ReplaceAllString(value, "${1}${2}"), "+", " ")
}

// parameters cuts the name=value pairs out of a link.
func parameters(link string) string {
	link = strings.TrimSpace(link)
	if _, tail, ok := strings.Cut(link, "#"); ok && !strings.Contains(link[:len(link)-len(tail)-1], "=") {
		return tail
	}
	if head, tail, ok := strings.Cut(link, "?"); ok && !strings.Contains(head, "=") {
		tail, rest, _ := strings.Cut(tail, "#")
		return strings.Trim(tail+"&"+rest, "&")
	}
	if strings.Contains(link, "://") && !strings.Contains(link, "=") {
		return ""
	}
	return link
}

// nearest names the parameters that begin alike, or says where all are listed.
func nearest(name string) string {
	var list []string
	for _, n := range names() {
		if len(name) > 2 && strings.HasPrefix(n, name[:3]) {
			list = append(list, n)
		}
	}
	if len(list) == 0 {
		return "one of those listed in physics/study/PARAMETERS.md"
	}
	return strings.Join(list, " or ")
}

func names() (list []string) {
	for _, f := range Fields {
		list = append(list, f.Param)
		if f.PlusName != "" {
			list = append(list, f.PlusName)
		}
	}
	return list
}

func known(name string) bool {
	return slices.Contains(names(), name)
}

// Link writes the inputs as parameters, in the order of Fields; defaults are
// left out, so the demo case is the empty text. Values hold only characters that
// may stand in a fragment (RFC 3986).
func (in Inputs) Link() string {
	var parts []string
	add := func(name string) {
		if text, ok := in.Text[name]; name != "" && ok {
			parts = append(parts, name+"="+escape(strings.TrimSpace(text)))
		}
	}
	for _, f := range Fields {
		add(f.Param)
		add(f.PlusName)
	}
	return strings.Join(parts, "&")
}

// escape keeps what reads well in an address and percent-encodes the rest.
func escape(text string) string {
	var b strings.Builder
	for _, c := range []byte(text) {
		switch {
		case c == ' ':
			b.WriteByte('+')
		case c >= 'a' && c <= 'z', c >= 'A' && c <= 'Z', c >= '0' && c <= '9', strings.IndexByte("-._~:,;/*()!'=", c) >= 0:
			b.WriteByte(c)
		default:
			fmt.Fprintf(&b, "%%%02X", c)
		}
	}
	return b.String()
}

// pack writes spectra for a link: text, DEFLATE (RFC 1951), base64url (RFC 4648).
func pack(spectra []impedance.Spectrum) (string, error) {
	var b bytes.Buffer
	w, err := flate.NewWriter(&b, flate.BestCompression)
	if err != nil {
		return "", err
	}
	if _, err := w.Write(impedance.Encode(spectra)); err != nil {
		return "", err
	}
	if err := w.Close(); err != nil {
		return "", err
	}
	return base64.RawURLEncoding.EncodeToString(b.Bytes()), nil
}

func unpack(data string) ([]impedance.Spectrum, error) {
	raw, err := base64.RawURLEncoding.DecodeString(strings.TrimRight(data, "="))
	if err != nil {
		return nil, fmt.Errorf("measured data are damaged (%v), expected base64url as this program writes it", err)
	}
	text, err := io.ReadAll(io.LimitReader(flate.NewReader(bytes.NewReader(raw)), MaxDataBytes+1))
	if err != nil {
		return nil, fmt.Errorf("measured data are cut off or damaged (%v), expected the whole link", err)
	}
	if len(text) > MaxDataBytes {
		return nil, fmt.Errorf("measured data are too large (over %d MiB), expected less", MaxDataBytes>>20)
	}
	reading, err := impedance.Read("link", text, impedance.ReadOptions{})
	if err != nil {
		return nil, fmt.Errorf("measured data are not readable: %w", err)
	}
	for i := range reading.Spectra {
		s := &reading.Spectra[i]
		s.Source = ""
		for k := range s.Points {
			s.Points[k].Line = 0
		}
	}
	return reading.Spectra, nil
}
