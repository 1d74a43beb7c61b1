package study

import (
	"strings"

	"golang.org/x/text/unicode/norm"
)

// fold returns the form in which words are compared: white space around it
// trimmed, lower case, composed Unicode.
func fold(word string) string {
	return norm.NFC.String(strings.ToLower(strings.TrimSpace(word)))
}
