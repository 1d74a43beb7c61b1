package study

import "testing"

func TestNearest(t *testing.T) {
	for _, c := range []struct{ word, want string }{
		{"og", "go"}, {"Referense", "reference"}, {"apraiser", "appraiser"}, {"trail", "trial"}, {"x", ""}, {"comment", ""}, {"", ""}, {"1", ""},
	} {
		if got := nearest(c.word, []string{"part", "appraiser", "trial", "call", "reference", "value", "go", "0", "+"}); got != c.want {
			t.Errorf("nearest(%q) = %q, want %q", c.word, got, c.want)
		}
	}
	// Examples of edit distances: kitten to sitting is the textbook one; a
	// swap counts one.
	for _, c := range []struct {
		a, b string
		want int
	}{{"kitten", "sitting", 3}, {"", "abc", 3}, {"ab", "ba", 1}, {"ä", "a", 1}} {
		if got := distance(c.a, c.b); got != c.want {
			t.Errorf("distance(%q, %q) = %d, want %d", c.a, c.b, got, c.want)
		}
	}
}
