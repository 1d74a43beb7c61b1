package study

import (
	"fmt"
	"strings"
)

// alike collects names that differ so little that one may be a misspelling
// of the other.
type alike struct {
	what  string
	pairs []string
	more  int
}

func newAlike(what string) *alike { return &alike{what: what} }

func (a *alike) add(x, y string) {
	if len(a.pairs) == 3 {
		a.more++
		return
	}
	a.pairs = append(a.pairs, quote(x)+" and "+quote(y))
}

// consider takes two neighbours in natural order.
func (a *alike) consider(x, y string) {
	if string(naturalKey(nil, x)) == string(naturalKey(nil, y)) && decimals(x) == decimals(y) {
		a.add(x, y)
	}
}

// decimals returns the digits behind decimal points: a zero there is no leading
// one, and 10.05 is not 10.5.
func decimals(name string) string {
	var b strings.Builder
	behind := false // a point that stands behind a digit
	for i := 1; i < len(name); i++ {
		switch isDigit := digits([]byte(name[i : i+1])); {
		case name[i] == '.' && digits([]byte(name[i-1:i])):
			behind = true
			b.WriteByte('.')
		case isDigit && behind:
			b.WriteByte(name[i])
		default:
			behind = false
		}
	}
	return b.String()
}

func (a *alike) notes() []Note {
	if len(a.pairs) == 0 {
		return nil
	}
	text := fmt.Sprintf("These names of %s differ only by case, white space or leading zeros, and count as different: %s", a.what, strings.Join(a.pairs, "; "))
	if a.more > 0 {
		text += fmt.Sprintf("; and %d more", a.more)
	}
	return []Note{{"similar_names", text + "."}}
}

func (m *merge) similarAppraisers() {
	a := newAlike("appraisers")
	first := make(map[string]string)
	for _, name := range m.study.Appraisers {
		bare := strings.Join(strings.Fields(name), "")
		key := string(naturalKey(nil, bare)) + "\x00" + decimals(bare)
		if was, ok := first[key]; ok {
			a.add(was, name)
			continue
		}
		first[key] = name
	}
	m.study.Notes = append(m.study.Notes, a.notes()...)
}
