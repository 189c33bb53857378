package study

import "strings"

// plainError drops the package names from an error shown to a person.
func plainError(err error) string {
	text := err.Error()
	for _, p := range []string{"study: ", "spacecharge: ", "transport: ", "numerics: ", "impedance: ", "quantity: "} {
		text = strings.ReplaceAll(text, p, "")
	}
	return text
}
