package study

import (
	"errors"
	"fmt"
	"regexp"
	"slices"
	"sort"
	"strings"

	"github.com/BurntSushi/toml"
)

// DefaultConfidence is the confidence where none is said.
const DefaultConfidence = 0.95

// Settings is everything that a study file or a flag can say. A zero field
// says nothing.
type Settings struct {
	Title          string
	Characteristic string
	Unit           string
	Gauge          string

	Lower, Upper *float64 // specification limits, in Unit

	Accept     []string // spellings of the calls of a part that may be used
	Reject     []string // spellings of the calls of a part that may not
	Order      []string // grades from best to worst
	Categories []string // kinds without an order
	Ignore     []string // columns of the calls file to leave out

	Calls string // calls file; in a study file, relative to it
	Sheet string // sheet of a workbook

	Confidence float64 // of intervals, from 0.5 to 0.9999
	Criteria   Criteria

	GaugeSizes GaugeSizes // as calibrated, where they are known
}

// Criteria holds the accept and the conditional level of each criterion; nil
// where nothing is said.
type Criteria struct {
	Effectiveness *[2]float64
	Miss          *[2]float64
	FalseAlarm    *[2]float64
	Kappa         *[2]float64
}

// Confidences says which ones CheckConfidence takes.
const Confidences = "a number from 0.5 to 0.9999, such as 0.95"

// CheckConfidence refuses a confidence at which limits say nothing.
func CheckConfidence(c float64) error {
	if !(c >= 0.5 && c <= 0.9999) {
		return fmt.Errorf("confidence is %v; expected %s", c, Confidences)
	}
	return nil
}

// Merge returns s with everything that over says in place of what s says.
func (s Settings) Merge(over Settings) Settings {
	text := func(a *string, b string) {
		if b != "" {
			*a = b
		}
	}
	list := func(a *[]string, b []string) {
		if b != nil {
			*a = b
		}
	}
	number := func(a **float64, b *float64) {
		if b != nil {
			*a = b
		}
	}
	pair := func(a **[2]float64, b *[2]float64) {
		if b != nil {
			*a = b
		}
	}
	text(&s.Title, over.Title)
	text(&s.Characteristic, over.Characteristic)
	text(&s.Unit, over.Unit)
	text(&s.Gauge, over.Gauge)
	number(&s.Lower, over.Lower)
	number(&s.Upper, over.Upper)
	list(&s.Accept, over.Accept)
	list(&s.Reject, over.Reject)
	list(&s.Order, over.Order)
	list(&s.Categories, over.Categories)
	list(&s.Ignore, over.Ignore)
	text(&s.Calls, over.Calls)
	text(&s.Sheet, over.Sheet)
	if over.Confidence != 0 {
		s.Confidence = over.Confidence
	}
	pair(&s.Criteria.Effectiveness, over.Criteria.Effectiveness)
	pair(&s.Criteria.Miss, over.Criteria.Miss)
	pair(&s.Criteria.FalseAlarm, over.Criteria.FalseAlarm)
	pair(&s.Criteria.Kappa, over.Criteria.Kappa)
	s.GaugeSizes = s.GaugeSizes.merge(over.GaugeSizes)
	return s
}

// Validate returns an error that says what of the settings cannot be, nil if
// all is well.
func (s Settings) Validate() error {
	var errs []error
	for _, f := range s.faults() {
		errs = append(errs, errors.New(f.text))
	}
	return errors.Join(errs...)
}

// fault is a setting that cannot be: its key and what is wrong with it.
type fault struct{ key, text string }

func (s Settings) faults() []fault {
	var out []fault
	add := func(key, format string, args ...any) {
		out = append(out, fault{key, fmt.Sprintf(format, args...)})
	}
	for _, l := range []struct {
		key string
		v   *float64
	}{{"lower", s.Lower}, {"upper", s.Upper}} {
		if l.v == nil {
			continue
		}
		if err := CheckNumber(*l.v); err != nil {
			add(l.key, "%s is %v: %v; leave it out where there is no such limit", l.key, *l.v, err)
		}
	}
	if s.Lower != nil && s.Upper != nil && *s.Lower >= *s.Upper {
		add("upper", "lower is %v and upper is %v; lower must be less than upper", *s.Lower, *s.Upper)
	} else if s.Lower != nil && s.Upper != nil && *s.Upper-*s.Lower < smallest {
		add("upper", "lower is %v and upper is %v; the tolerance between them is too small (expected at least %v)", *s.Lower, *s.Upper, smallest)
	}
	if s.Confidence != 0 {
		if err := CheckConfidence(s.Confidence); err != nil {
			add("confidence", "%v", err)
		}
	}
	for _, c := range []struct {
		key        string
		v          *[2]float64
		least      float64
		moreIsGood bool
	}{
		{"effectiveness", s.Criteria.Effectiveness, 0, true},
		{"miss", s.Criteria.Miss, 0, false},
		{"false_alarm", s.Criteria.FalseAlarm, 0, false},
		{"kappa", s.Criteria.Kappa, -1, true},
	} {
		if c.v == nil {
			continue
		}
		key := "criteria." + c.key
		accept, conditional := c.v[0], c.v[1]
		if !(accept >= c.least && accept <= 1 && conditional >= c.least && conditional <= 1) {
			add(key, "%s is [%v, %v]; expected two numbers from %v to 1", key, accept, conditional, c.least)
		} else if c.moreIsGood && accept < conditional {
			add(key, "%s is [%v, %v]; the accept level stands first and must not be below the conditional level", key, accept, conditional)
		} else if !c.moreIsGood && accept > conditional {
			add(key, "%s is [%v, %v]; the accept level stands first and must not be above the conditional level", key, accept, conditional)
		}
	}
	out = append(out, s.GaugeSizes.faults()...)
	return append(out, s.wordFaults()...)
}

// wordFaults finds words that are empty, doubled or contradict each other.
func (s Settings) wordFaults() []fault {
	var out []fault
	sets := make(map[string]map[string]bool)
	for _, l := range []struct {
		key   string
		words []string
	}{{"accept", s.Accept}, {"reject", s.Reject}, {"order", s.Order}, {"categories", s.Categories}} {
		set := make(map[string]bool)
		for _, w := range l.words {
			k := fold(w)
			switch {
			case k == "":
				out = append(out, fault{l.key, l.key + " holds an empty word"})
			case set[k] && (l.key == "order" || l.key == "categories"):
				out = append(out, fault{l.key, fmt.Sprintf("%s names %s twice (words are matched without case)", l.key, quote(w))})
			}
			set[k] = true
		}
		sets[l.key] = set
	}
	if len(s.Order) > 0 && len(s.Categories) > 0 {
		out = append(out, fault{"categories", "order and categories are both given; use order for grades from best to worst, categories for kinds without an order"})
		return out
	}
	for _, w := range s.Reject {
		if sets["accept"][fold(w)] {
			out = append(out, fault{"reject", fmt.Sprintf("%s stands in both accept and reject", quote(w))})
		}
	}
	key, listed := "order", sets["order"]
	if len(s.Categories) > 0 {
		key, listed = "categories", sets["categories"]
	}
	if len(listed) > 0 {
		for _, l := range []struct {
			key   string
			words []string
		}{{"accept", s.Accept}, {"reject", s.Reject}} {
			for _, w := range l.words {
				if k := fold(w); k != "" && !listed[k] {
					out = append(out, fault{l.key, fmt.Sprintf("%s names %s, which %s does not list", l.key, quote(w), key)})
				}
			}
		}
	}
	return out
}

// keys maps each key of the study file to what takes its value. The error
// that a setter returns says what was found and expected.
func (s *Settings) keys() map[string]func(any) error {
	return map[string]func(any) error{
		"title":                  textKey(&s.Title),
		"characteristic":         textKey(&s.Characteristic),
		"unit":                   textKey(&s.Unit),
		"gauge":                  textKey(&s.Gauge),
		"lower":                  limitKey(&s.Lower),
		"upper":                  limitKey(&s.Upper),
		"accept":                 wordsKey(&s.Accept),
		"reject":                 wordsKey(&s.Reject),
		"order":                  wordsKey(&s.Order),
		"categories":             wordsKey(&s.Categories),
		"ignore":                 wordsKey(&s.Ignore),
		"calls":                  textKey(&s.Calls),
		"sheet":                  textKey(&s.Sheet),
		"confidence":             confidenceKey(&s.Confidence),
		"criteria.effectiveness": pairKey(&s.Criteria.Effectiveness),
		"criteria.miss":          pairKey(&s.Criteria.Miss),
		"criteria.false_alarm":   pairKey(&s.Criteria.FalseAlarm),
		"criteria.kappa":         pairKey(&s.Criteria.Kappa),
		"gauge_sizes.lower":      memberKey(&s.GaugeSizes.Lower, false),
		"gauge_sizes.upper":      memberKey(&s.GaugeSizes.Upper, true),
	}
}

func textKey(to *string) func(any) error {
	return func(v any) (err error) {
		s, ok := v.(string)
		if !ok {
			return wrongType(v, `text in quotes`)
		}
		*to = s
		return nil
	}
}

func wordsKey(to *[]string) func(any) error {
	return func(v any) error {
		const want = `a list of words in quotes, such as ["go", "pass"]`
		list, ok := v.([]any)
		if !ok {
			return wrongType(v, want)
		}
		words := make([]string, 0, len(list))
		for _, e := range list {
			s, ok := e.(string)
			if !ok {
				return wrongType(e, want)
			}
			words = append(words, s)
		}
		if len(words) > 0 { // an empty list says nothing
			*to = words
		}
		return nil
	}
}

func limitKey(to **float64) func(any) error {
	return func(v any) error {
		f, ok := number(v)
		if !ok {
			return wrongType(v, "a number without quotes, with a decimal point")
		}
		*to = &f
		return nil
	}
}

func confidenceKey(to *float64) func(any) error {
	return func(v any) error {
		f, ok := number(v)
		if !ok || CheckConfidence(f) != nil {
			return wrongType(v, Confidences)
		}
		*to = f
		return nil
	}
}

func pairKey(to **[2]float64) func(any) error {
	return func(v any) error {
		const want = "the accept and the conditional level, such as [0.90, 0.80]"
		list, ok := v.([]any)
		if !ok || len(list) != 2 {
			return wrongType(v, want)
		}
		var pair [2]float64
		for i, e := range list {
			if pair[i], ok = number(e); !ok {
				return wrongType(e, want)
			}
		}
		*to = &pair
		return nil
	}
}

func number(v any) (float64, bool) {
	switch n := v.(type) {
	case float64:
		return n, true
	case int64:
		return float64(n), true
	}
	return 0, false
}

// badValue is the error of a setter.
type badValue struct{ found, expected string }

func (e badValue) Error() string { return "found " + e.found + ", expected " + e.expected }

func wrongType(v any, expected string) error {
	var found string
	switch x := v.(type) {
	case string:
		found = "the text " + quote(x)
	case map[string]any, []map[string]any:
		found = "a table"
	case []any:
		found = "a list of " + counted(len(x), "value", "values")
	default:
		found = fmt.Sprint(x)
	}
	return badValue{found, expected}
}

// keyOf hands the value of one key of the study file to a setter. The TOML
// library adds the line to the error that the setter returns.
type keyOf struct{ set func(any) error }

func (k *keyOf) UnmarshalTOML(v any) error { return k.set(v) }

// maxStudyFile bounds the study file, which people write by hand.
const maxStudyFile = 1 << 20

// parseSettings reads the text of a study file; name is for messages.
func parseSettings(name string, data []byte) (Settings, error) {
	var s Settings
	if len(data) > maxStudyFile {
		return s, problemsOf([]Problem{{File: name, Text: fmt.Sprintf("the file is larger than %d bytes; is it a study file?", maxStudyFile)}}, 0)
	}
	data = []byte(strings.TrimPrefix(string(data), "\ufeff"))

	var top map[string]toml.Primitive
	meta, err := toml.Decode(string(data), &top)
	if err != nil {
		return s, problemsOf([]Problem{syntaxProblem(name, string(data), err)}, 0)
	}
	var list []Problem
	lines := make(map[string]int) // of each key
	keys := s.keys()
	take := func(key string, value toml.Primitive) {
		set, known := keys[key]
		var why error // the library keeps only the text of it
		at := keyOf{func(v any) error {
			if why = errUnknownKey; known {
				why = set(v)
			}
			return why
		}}
		if err := meta.PrimitiveDecode(value, &at); err != nil {
			p := Problem{File: name, Line: lineOf(err), Text: err.Error()}
			var bad badValue
			switch {
			case errors.Is(why, errUnknownKey):
				p.Found, p.Text = "the unknown key "+quote(key), knownKeys(key, keys)
			case errors.As(why, &bad):
				p.Found, p.Expected, p.Text = bad.found, bad.expected, "the key is "+key
			}
			list = append(list, p)
		}
		lines[key] = keyLine(meta, value)
	}
	for _, key := range sortedKeys(top) {
		what, isTable := tables[key]
		if !isTable {
			take(key, top[key])
			continue
		}
		var table map[string]toml.Primitive
		if err := meta.PrimitiveDecode(top[key], &table); err != nil || meta.Type(key) != "Hash" && meta.Type(key) != "" { // "": only [table.table] stand there
			list = append(list, Problem{File: name, Line: keyLine(meta, top[key]), Found: "the key " + key + " with a value",
				Expected: "a table", Text: "write [" + key + "] on its own line and " + what + " below it"})
			continue
		}
		for _, k := range sortedKeys(table) {
			take(key+"."+k, table[k])
		}
	}
	if len(list) == 0 {
		for _, f := range s.faults() {
			list = append(list, Problem{File: name, Line: lines[f.key], Text: f.text})
		}
	}
	return s, problemsOf(list, 0)
}

// tables are the keys that hold further keys, and what these are.
var tables = map[string]string{"criteria": "the levels", "gauge_sizes": "the members lower and upper"}

var errUnknownKey = errors.New("unknown key")

// knownKeys says which key may have been meant.
func knownKeys(key string, keys map[string]func(any) error) string {
	names := sortedKeys(keys)
	if near := nearest(key, names); near != "" {
		return "did you mean " + near + "?"
	}
	if tail := key[strings.LastIndexByte(key, '.')+1:]; tail != key && keys[tail] != nil {
		return tail + " belongs above the first [table]"
	}
	for _, n := range names { // a key that is known, in the wrong table
		if tail := n[strings.LastIndexByte(n, '.')+1:]; tail == key[strings.LastIndexByte(key, '.')+1:] {
			if i := strings.IndexByte(n, '.'); i >= 0 {
				return tail + " belongs under [" + n[:i] + "]"
			}
		}
	}
	return "known keys are " + listOf(names, "and")
}

// keyLine returns the line of a key: the library tells it with an error.
func keyLine(meta toml.MetaData, value toml.Primitive) int {
	return lineOf(meta.PrimitiveDecode(value, &keyOf{func(any) error { return errUnknownKey }}))
}

func lineOf(err error) int {
	var pe toml.ParseError
	if errors.As(err, &pe) {
		return pe.Position.Line
	}
	return 0
}

func syntaxProblem(name, text string, err error) Problem {
	var pe toml.ParseError
	if !errors.As(err, &pe) {
		return Problem{File: name, Text: strings.TrimPrefix(err.Error(), "toml: ")}
	}
	p := Problem{File: name, Line: pe.Position.Line, Column: pe.Position.Col, Text: "not valid TOML: " + pe.Message}
	if lines := strings.Split(text, "\n"); p.Line >= 1 && p.Line <= len(lines) {
		if hint := syntaxHint(lines[p.Line-1]); hint != "" {
			p.Text += "; " + hint
		}
	}
	return p
}

var (
	decimalComma = regexp.MustCompile(`^[^#"']*=\s*[+-]?\d+,\d`)
	bareText     = regexp.MustCompile(`^\s*[\w.-]+\s*=\s*[^\s#"'\[{]`)
	bareNumber   = regexp.MustCompile(`^[^=]*=\s*[+-]?[\d.][\d._eE+-]*\s*(#.*)?$`)
	numberUnit   = regexp.MustCompile(`^\s*(lower|upper|confidence)\s*=\s*[+-]?\d+(\.\d+)?\s*[^\s#\d._eE]`)
	bareWords    = regexp.MustCompile(`^[^#"']*=\s*\[\s*\pL`)
)

// syntaxHint says what is often meant by a line that is not valid.
func syntaxHint(line string) string {
	line = strings.TrimSuffix(line, "\r")
	switch {
	case decimalComma.MatchString(line):
		return "the decimal sign is a point, not a comma"
	case numberUnit.MatchString(line):
		return "a number stands alone, without a unit"
	case bareWords.MatchString(line):
		return "words need quotes, each its own"
	case bareText.MatchString(line) && !bareNumber.MatchString(line):
		return `text needs quotes, as in unit = "mm"`
	}
	return ""
}

func sortedKeys[V any](m map[string]V) []string {
	keys := make([]string, 0, len(m))
	for k := range m {
		keys = append(keys, k)
	}
	sort.Strings(keys)
	return slices.Clip(keys)
}
