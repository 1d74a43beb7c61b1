package study

import (
	"slices"
	"strings"
)

// nearest returns the name at a distance of at most 2 from s, and less than
// half of the name's length, or "". Two letters swapped are near however short
// the name: og is go. The first one wins a tie.
func nearest(s string, names []string) string {
	best, found := 3, ""
	for _, n := range names {
		a, b := strings.ToLower(s), strings.ToLower(n)
		if d := distance(a, b); d < best && (2*d < len(n) || d == 1 && isSwap(a, b)) {
			best, found = d, n
		}
	}
	return found
}

// isSwap reports whether a and b hold the same letters.
func isSwap(a, b string) bool {
	s, t := []rune(a), []rune(b)
	slices.Sort(s)
	slices.Sort(t)
	return slices.Equal(s, t)
}

// distance returns the number of insertions, deletions, substitutions and
// swaps of neighbours that turn a into b, each place edited once at most
// (optimal string alignment).
func distance(a, b string) int {
	s, t := []rune(a), []rune(b)
	if len(s) > 64 || len(t) > 64 { // no misspelling of a short word
		return len(s) + len(t)
	}
	d := make([][]int, len(s)+1)
	for i := range d {
		d[i] = make([]int, len(t)+1)
		d[i][0] = i
	}
	for j := range t {
		d[0][j+1] = j + 1
	}
	for i := range s {
		for j := range t {
			change := 1
			if s[i] == t[j] {
				change = 0
			}
			v := min(d[i][j+1]+1, d[i+1][j]+1, d[i][j]+change)
			if i > 0 && j > 0 && s[i] == t[j-1] && s[i-1] == t[j] {
				v = min(v, d[i-1][j-1]+1)
			}
			d[i+1][j+1] = v
		}
	}
	return d[len(s)][len(t)]
}
