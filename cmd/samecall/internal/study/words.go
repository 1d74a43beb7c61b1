package study

import (
	"fmt"
	"slices"
	"strings"

	"golang.org/x/text/unicode/norm"

	"samecall/agreement"
)

// Calls that are understood where the settings do not name any.
var (
	acceptWords = []string{"accept", "pass", "go", "ok", "good", "conforming", "yes", "1", "+"}
	rejectWords = []string{"reject", "fail", "nogo", "no-go", "nok", "ng", "bad", "nonconforming", "no", "0", "-"}
)

// Names of the two categories of a pass/fail study, by their index.
var passFailNames = []string{"reject", "accept"}

// fold returns the form in which words are compared: white space around it
// trimmed, lower case, composed Unicode.
func fold(word string) string {
	return norm.NFC.String(strings.ToLower(strings.TrimSpace(word)))
}

// vocabulary is the meaning of the words of one study.
type vocabulary struct {
	names    []string // of the categories, by index
	accept   []bool   // by index; nil: the categories are not split
	passFail bool
	of       map[string]agreement.Category // folded word to category

	expected, hint string // for a word that has no meaning
	candidates     []string
	own            map[string]string // words that are a category only because they occur, as spelt
}

// newVocabulary gives the words seen their meaning. spelt holds, for each
// folded word of calls and reference, the smallest of its spellings. Words
// that have no meaning are left out of it.
func newVocabulary(s Settings, spelt map[string]string) *vocabulary {
	switch {
	case len(s.Order) > 0:
		return listed(s, s.Order, "order")
	case len(s.Categories) > 0:
		return listed(s, s.Categories, "categories")
	case len(s.Reject) > 0:
		return passFail(s)
	case len(s.Accept) > 0:
		return acceptOnly(s, spelt)
	default:
		return passFail(s)
	}
}

// listed is a study whose categories are all named, in order.
func listed(s Settings, words []string, key string) *vocabulary {
	accept := folded(s.Accept)
	if len(s.Accept) == 0 {
		accept = folded(acceptWords)
		if len(s.Reject) > 0 { // what is not rejected may be used
			for _, w := range words {
				accept[fold(w)] = true
			}
			for _, w := range s.Reject {
				delete(accept, fold(w))
			}
		}
	}
	good := func(w string) bool { return accept[fold(w)] }
	words = slices.Clone(words)
	for i, w := range words {
		words[i] = strings.TrimSpace(w)
	}
	goods := 0
	for _, w := range words {
		if good(w) {
			goods++
		}
	}
	v := &vocabulary{of: make(map[string]agreement.Category), candidates: words}
	v.passFail = len(words) == 2 && goods == 1
	if key == "categories" || v.passFail {
		slices.SortStableFunc(words, func(a, b string) int { return btoi(good(a)) - btoi(good(b)) })
	}
	v.names = words
	for i, w := range words {
		if i < agreement.MaxCategories {
			v.of[fold(w)] = agreement.Category(i)
		}
	}
	if goods > 0 {
		v.accept = make([]bool, len(words))
		for i, w := range words {
			v.accept[i] = good(w)
		}
	}
	v.expected = listOf(firstFew(words), "or") + ", as " + key + " lists"
	v.hint = "add the word to " + key + " if it is right"
	return v
}

// passFail is a study of two categories: the words of settings, and those
// that are understood without any.
func passFail(s Settings) *vocabulary {
	v := &vocabulary{names: passFailNames, accept: []bool{false, true}, passFail: true, of: make(map[string]agreement.Category)}
	accept, reject := s.Accept, s.Reject
	if len(reject) == 0 {
		reject = rejectWords
	}
	if len(accept) == 0 {
		accept = acceptWords
	}
	for _, w := range accept {
		v.of[fold(w)] = 1
	}
	for _, w := range reject {
		v.of[fold(w)] = 0
	}
	v.candidates = append(slices.Clone(accept), reject...)
	v.expected = fmt.Sprintf("a call such as %s or %s", accept[0], reject[0])
	if len(s.Accept)+len(s.Reject) > 0 {
		v.expected = fmt.Sprintf("accept (%s) or reject (%s)", listOf(firstFew(accept), "or"), listOf(firstFew(reject), "or"))
		v.hint = "add the word to accept or to reject if it is right"
	} else {
		v.expected = "accept or reject, or a usual word for one of them (pass, go, ok, 1; fail, nogo, nok, 0)"
		v.hint = "say what other words mean by accept and reject, or list kinds by categories, grades by order"
	}
	return v
}

// acceptOnly is a study in which each word that is not accepted is a kind of
// bad part.
func acceptOnly(s Settings, spelt map[string]string) *vocabulary {
	v := &vocabulary{of: make(map[string]agreement.Category), own: make(map[string]string)}
	accept := folded(s.Accept)
	var bad []string
	for w := range spelt {
		if !accept[w] {
			bad = append(bad, w)
			v.own[w] = spelt[w]
		}
	}
	slices.SortFunc(bad, compareNatural)
	for i, w := range bad {
		if i < agreement.MaxCategories {
			v.of[w] = agreement.Category(i)
		}
		v.names = append(v.names, spelt[w])
	}
	good := len(bad)
	if good <= 1 {
		v.names, v.passFail, good = passFailNames, true, 1
	} else {
		v.names = append(v.names, strings.TrimSpace(s.Accept[0]))
	}
	for w := range accept {
		v.of[w] = agreement.Category(min(good, agreement.MaxCategories))
	}
	v.accept = make([]bool, len(v.names))
	v.accept[good] = true
	return v
}

// tooMany returns a problem if there are more categories than can be held.
func (v *vocabulary) tooMany() (Problem, bool) {
	if len(v.names) <= agreement.MaxCategories {
		return Problem{}, false
	}
	return Problem{
		Found: fmt.Sprintf("%d different calls, such as %s", len(v.names), listOf(firstFew(v.names), "and")), Expected: fmt.Sprintf("at most %d", agreement.MaxCategories),
		Text: "is this the column of the calls?",
	}, true
}

// unknown is the problem of a word without a meaning.
func (v *vocabulary) unknown(spelling string) Problem {
	p := Problem{Found: quote(spelling), Expected: v.expected, Text: v.hint}
	if near := nearest(spelling, v.candidates); near != "" {
		p.Text = "did you mean " + near + "? Else " + p.Text
	}
	return p
}

func folded(words []string) map[string]bool {
	set := make(map[string]bool)
	for _, w := range words {
		if k := fold(w); k != "" {
			set[k] = true
		}
	}
	return set
}

func firstFew(words []string) []string {
	const few = 6
	if len(words) <= few {
		return words
	}
	return append(slices.Clone(words[:few]), "…")
}

func btoi(b bool) int {
	if b {
		return 1
	}
	return 0
}
