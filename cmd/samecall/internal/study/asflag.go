package study

import (
	"encoding/csv"
	"strings"
)

// asFlag writes a setting that lists words as the flag that gives it, as it is
// typed: --reject "-,not ok".
func asFlag(key string, words ...string) string {
	var b strings.Builder
	w := csv.NewWriter(&b) // a flag takes its list apart as a row of CSV
	if err := w.Write(words); err != nil {
		return "--" + key
	}
	w.Flush()
	return "--" + key + " " + shellWord(strings.TrimSuffix(b.String(), "\n"))
}

// shellWord writes a value as it is typed, in quotes where it needs them.
func shellWord(value string) string {
	switch {
	case !strings.ContainsFunc(value, needsQuotes):
		return value
	case strings.ContainsAny(value, "\"$`\\!") && !strings.Contains(value, "'"):
		return "'" + value + "'"
	default:
		return `"` + value + `"`
	}
}

// needsQuotes reports whether a shell may take a character for something else
// than itself.
func needsQuotes(r rune) bool {
	return r < 0x80 && !(r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z' || r >= '0' && r <= '9' || strings.ContainsRune("-+_.,:/%@=", r))
}
