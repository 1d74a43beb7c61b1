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

// UsualWords lists the calls that are understood where the settings do not
// name any.
func UsualWords() (accept, reject string) {
	return strings.Join(acceptWords, ","), strings.Join(rejectWords, ",")
}

// Names of the two categories of a pass/fail study, by their index.
var passFailNames = []string{"reject", "accept"}

// fold returns the form in which words are compared: white space around it
// trimmed, lower case, composed Unicode. A spreadsheet or a data frame may have
// written 1 as 1.0, as with trial numbers.
func fold(word string) string {
	word = norm.NFC.String(strings.ToLower(strings.TrimSpace(word)))
	if whole, zeros, ok := strings.Cut(word, "."); ok && digits([]byte(whole)) && zeros != "" && strings.Trim(zeros, "0") == "" {
		return whole
	}
	return word
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
	notes          []Note

	unsure map[string]bool          // words that may be meant as a missing call
	beside []string                 // the other words, as spelt
	list   func(word string) string // what to do where an unsure word is a call
}

// newVocabulary gives the words seen their meaning. spelt holds, for each
// folded word of calls and reference, the smallest of its spellings. Words
// that have no meaning are left out of it.
func newVocabulary(s Settings, spelt map[string]string) *vocabulary {
	unsure := unsureWords(s, spelt)
	spelt = sure(spelt, unsure)
	v := meanings(s, spelt)
	v.setUnsure(s, spelt, unsure)
	return v
}

func meanings(s Settings, spelt map[string]string) *vocabulary {
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
	v.expected = listOf(firstFew(allShown(words)), "or") + ", as " + key + " lists"
	v.hint = "add the word to " + key + " if it is right"
	return v
}

// senses are the folded words that accept and that reject a part: those that
// the settings list, and the usual ones that neither list claims.
//
// A list that turns a usual word round, such as accept = ["0"], gets no usual
// words beside its own: 1 would then accept too, which nobody can mean.
func senses(s Settings) (accept, reject map[string]bool) {
	accept, reject = folded(s.Accept), folded(s.Reject)
	usual := func(to, other map[string]bool, words, opposite []string) {
		turned := func(w string) bool { return to[w] }
		if slices.ContainsFunc(opposite, turned) {
			return
		}
		for _, w := range words {
			if !other[w] {
				to[w] = true
			}
		}
	}
	usual(accept, reject, acceptWords, rejectWords)
	usual(reject, folded(s.Accept), rejectWords, acceptWords)
	return accept, reject
}

// passFail is a study of two categories: the words of settings, and those
// that are understood without any.
func passFail(s Settings) *vocabulary {
	v := &vocabulary{names: passFailNames, accept: []bool{false, true}, passFail: true, of: make(map[string]agreement.Category)}
	accept, reject := senses(s)
	for w := range accept {
		v.of[w] = 1
	}
	for w := range reject {
		v.of[w] = 0
	}
	v.candidates = slices.Concat(s.Accept, s.Reject) // of equally near words, those of the settings
	for _, w := range slices.Concat(acceptWords, rejectWords) {
		if accept[w] || reject[w] {
			v.candidates = append(v.candidates, w)
		}
	}
	const usual = "a usual word for one of them (pass, go, ok, 1; fail, nogo, nok, 0)"
	if len(s.Accept)+len(s.Reject) == 0 {
		v.expected = "accept or reject, or " + usual
		v.hint = "say what other words mean with --accept and --reject, or list kinds with --categories, grades with --order"
		return v
	}
	v.expected = "accept" + inBrackets(s.Accept) + " or reject" + inBrackets(s.Reject)
	if len(accept)+len(reject) > len(folded(s.Accept))+len(folded(s.Reject)) {
		v.expected += ", or " + usual
	}
	v.hint = "add the word to accept or to reject if it is right"
	return v
}

func inBrackets(words []string) string {
	if len(words) == 0 {
		return ""
	}
	return " (" + listOf(firstFew(allShown(words)), "or") + ")"
}

// acceptOnly is a study in which each word that neither accepts nor rejects a
// part is a kind of bad part. Words that reject without saying why are one
// category beside the kinds. One kind at most makes a pass/fail study.
func acceptOnly(s Settings, spelt map[string]string) *vocabulary {
	v := &vocabulary{of: make(map[string]agreement.Category), own: make(map[string]string)}
	accept, reject := senses(s)
	var kinds []string
	var plain []string // words that reject and occur
	for w := range spelt {
		switch {
		case reject[w]:
			plain = append(plain, spelt[w])
		case !accept[w]:
			kinds = append(kinds, w)
			v.own[w] = spelt[w]
		}
	}
	slices.SortFunc(kinds, compareNatural)
	slices.SortFunc(plain, compareNatural)
	if len(kinds) > 1 && len(plain) > 0 {
		v.names = append(v.names, passFailNames[0])
	}
	for _, w := range kinds {
		if len(v.names) < agreement.MaxCategories {
			v.of[w] = agreement.Category(len(v.names))
		}
		v.names = append(v.names, spelt[w])
	}
	good := len(v.names)
	if good <= 1 {
		v.names, v.passFail, good = passFailNames, true, 1
	} else {
		v.names = append(v.names, strings.TrimSpace(s.Accept[0]))
	}
	for w := range accept {
		v.of[w] = agreement.Category(min(good, agreement.MaxCategories))
	}
	for w := range reject {
		v.of[w] = 0
	}
	v.accept = make([]bool, len(v.names))
	v.accept[good] = true
	v.mixed(kinds, plain)
	return v
}

// mixed notes what becomes of kinds beside words that reject without saying
// why.
func (v *vocabulary) mixed(kinds, plain []string) {
	if len(kinds) == 0 || len(plain) == 0 {
		return
	}
	var names []string
	for _, w := range kinds {
		names = append(names, quote(v.own[w]))
	}
	for i, w := range plain {
		plain[i] = quote(w)
	}
	kind, rejects := listOf(firstFew(names), "and"), listOf(firstFew(plain), "and")
	if len(plain) > 1 {
		rejects = "each of " + rejects
	}
	if v.passFail {
		v.own = nil // it is told here, and its calls are counted with others
		v.notes = append(v.notes, Note{"mixed_words", fmt.Sprintf("%s is taken as reject, as is %s. Where it is a kind of its own, the setting categories lists the kinds.", kind, rejects)})
		return
	}
	v.notes = append(v.notes, Note{"mixed_words", fmt.Sprintf("%s are kinds of bad parts, and %s is plain reject, a category of its own: a kind does not agree with it. Where they mean the same, list them all by reject.", kind, rejects)})
}

// absent looks for lists of words of which none occurs. That nothing is ever
// rejected may be; that nothing is accepted is a problem, unless all words that
// do occur are listed to reject.
func absent(s Settings, spelt map[string]string) (problems []Problem, notes []Note) {
	if len(spelt) == 0 || len(s.Order)+len(s.Categories) > 0 {
		return nil, nil
	}
	found := make([]string, 0, len(spelt))
	for _, w := range spelt {
		found = append(found, w)
	}
	slices.SortFunc(found, compareNatural)
	rejected := folded(s.Reject)
	listed := func(w string) bool { return rejected[fold(w)] }
	for _, l := range []struct {
		key   string
		words []string
		fatal bool
	}{
		{"accept", s.Accept, !(len(s.Reject) > 0 && !slices.ContainsFunc(found, func(w string) bool { return !listed(w) }))},
		{"reject", s.Reject, false},
	} {
		if len(l.words) == 0 || slices.ContainsFunc(l.words, func(w string) bool { return spelt[fold(w)] != "" }) {
			continue
		}
		what := quote(l.words[0])
		if len(l.words) > 1 {
			what = "one of " + listOf(firstFew(allShown(l.words)), "and")
		}
		hint := ""
		for _, w := range l.words {
			if near := nearest(w, found); near != "" && hint == "" {
				hint = "did you mean " + shown(near) + "? "
			}
		}
		there := "the table has " + listOf(firstFew(allShown(found)), "and")
		if l.fatal {
			problems = append(problems, Problem{Found: "no call or reference " + what + ", which the setting " + l.key + " lists",
				Expected: "it somewhere in the table", Text: hint + there})
			continue
		}
		notes = append(notes, Note{"unused_words", fmt.Sprintf("The setting %s lists %s, which occurs nowhere; %s%s.", l.key, what, hint, there)})
	}
	return problems, notes
}

// tooMany returns a problem if there are more categories than can be held.
func (v *vocabulary) tooMany() (Problem, bool) {
	if len(v.names) <= agreement.MaxCategories {
		return Problem{}, false
	}
	return Problem{
		Found: fmt.Sprintf("%d different calls, such as %s", len(v.names), listOf(firstFew(allShown(v.names)), "and")), Expected: fmt.Sprintf("at most %d", agreement.MaxCategories),
		Text: "is this the column of the calls?",
	}, true
}

// unknown is the problem of a word without a meaning.
func (v *vocabulary) unknown(spelling string) Problem {
	if v.unsure[fold(spelling)] {
		return v.missing(spelling)
	}
	p := Problem{Found: quote(spelling), Expected: v.expected, Text: v.hint}
	if near := nearest(spelling, v.candidates); near != "" {
		p.Text = "did you mean " + shown(near) + "? Else " + p.Text
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
