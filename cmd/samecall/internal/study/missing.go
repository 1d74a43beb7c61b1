package study

import (
	"fmt"
	"maps"
	"slices"
	"strings"
)

// blankWords are written where nothing is to be said: by people, by
// spreadsheets and by statistics programs. Common practice, no source.
var blankWords = folded([]string{"-", "--", "–", "—", "−", "n/a", "n.a.", "na", "#n/a", "nan", "null", "?", "."})

// dashIsCall reports whether a dash can only be meant as a reject, by the
// words of a table: plus stands beside it, or nothing else does.
func dashIsCall[V any](words map[string]V) bool {
	_, plus := words["+"]
	return plus || len(words) == 1
}

// unsureWords are the words that may be meant as a missing call, and that no
// setting lists. None of them is taken for a call.
func unsureWords(s Settings, spelt map[string]string) map[string]bool {
	listed := folded(slices.Concat(s.Accept, s.Reject, s.Order, s.Categories))
	out := make(map[string]bool)
	for w := range spelt {
		if blankWords[w] && !listed[w] && !(w == "-" && dashIsCall(spelt)) {
			out[w] = true
		}
	}
	return out
}

// sure are the words that are left.
func sure(spelt map[string]string, unsure map[string]bool) map[string]string {
	out := maps.Clone(spelt)
	maps.DeleteFunc(out, func(w, _ string) bool { return unsure[w] })
	return out
}

// setUnsure leaves the unsure words without a meaning, and keeps what is to be
// said of them; spelt are the other words.
func (v *vocabulary) setUnsure(s Settings, spelt map[string]string, unsure map[string]bool) {
	v.unsure = unsure
	for w := range unsure {
		delete(v.of, w)
	}
	rejects := slices.Clone(s.Reject)
	known := folded(s.Reject)
	for _, w := range slices.SortedFunc(maps.Keys(spelt), compareNatural) {
		v.beside = append(v.beside, spelt[w])
		if c, ok := v.of[w]; ok && v.passFail && c == 0 && !known[w] {
			rejects = append(rejects, spelt[w])
		}
	}
	v.list = func(word string) string {
		switch {
		case len(s.Order) > 0:
			return "add it to order"
		case len(s.Categories) > 0:
			return "add it to categories"
		case !v.passFail:
			return "list it with all other words by categories"
		}
		if !slices.Equal(allShown(rejects), rejects) {
			return "list it by reject"
		}
		return fmt.Sprintf("list it by reject (%s)", asFlag("reject", append([]string{word}, rejects...)...))
	}
}

// missing is the problem of a word that may be meant as a missing call.
func (v *vocabulary) missing(spelling string) Problem {
	p := Problem{Found: quote(spelling), Expected: "a call or reference, or an empty field where there is none"}
	what := "such a word may be meant as a missing call"
	if strings.Trim(spelling, "-–—− ") == "" {
		what = "a dash may be meant as a missing call or as a reject"
		if len(v.beside) > 0 {
			what = "a dash beside " + listOf(firstFew(allShown(v.beside)), "and") + " may be meant as a missing call or as a reject"
		}
	}
	p.Text = what + ": leave the field empty for a missing call, or " + v.list(spelling)
	return p
}
