// Package shell writes values as they are typed on a command line.
package shell

import (
	"encoding/csv"
	"strings"
)

// Word writes a value, in quotes where a shell would take it for something
// else. Double quotes serve every shell; what they do not protect stands in
// single ones.
func Word(value string) string {
	switch {
	case value != "" && !strings.ContainsFunc(value, special):
		return value
	case strings.ContainsAny(value, "\"$`\\!"):
		return "'" + strings.ReplaceAll(value, "'", `'\''`) + "'"
	}
	return `"` + value + `"`
}

// special reports whether a shell may take a character for something else than
// itself.
func special(r rune) bool {
	return r < 0x80 && !(r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z' || r >= '0' && r <= '9' || strings.ContainsRune("-+_.,:/%@=", r))
}

// List writes words as a flag reads a list: a line of CSV.
func List(words []string) string {
	var line strings.Builder
	w := csv.NewWriter(&line)
	_ = w.Write(words) // a Builder takes everything
	w.Flush()
	return strings.TrimSuffix(line.String(), "\n")
}
