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

// Plain is an error as it is shown to a person, without the names of packages.
func Plain(err error) string { return plainError(err) }
