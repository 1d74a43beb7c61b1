package study

import (
	"fmt"
	"slices"
	"strings"

	"samecall/agreement"
)

// setReference takes each part's reference from the column; where that says
// nothing of it, from value and limits.
func (m *merge) setReference() {
	reference := m.givenReference()
	derived := m.derivedReference()
	lack := "a reference"
	switch {
	case reference != nil:
		m.study.Reference = Given
		m.agree(reference, derived)
		if n := complete(reference, derived); n > 0 {
			m.study.DerivedParts = n
			m.note("completed_reference", "%s without a given reference: %s from value and limits.",
				counted(n, "part", "parts"), either(n, "its own follows", "theirs follows"))
		}
	case derived != nil:
		m.study.Reference = Derived
		reference = derived
		lack = "a value, hence without a reference"
	default:
		return
	}
	if n := count(reference, agreement.Missing); n > 0 {
		m.note("partial_reference", "%d of %s %s without %s; calls on such parts count for agreement only.",
			n, counted(len(reference), "part", "parts"), either(n, "is", "are"), lack)
	}
	if err := m.study.Ratings.SetReference(reference); err != nil {
		m.add(Problem{Text: err.Error()})
	}
}

// complete fills what the table leaves blank of a reference with the one that
// follows from value and limits, and counts the parts.
func complete(given, derived []agreement.Category) (n int) {
	for p, d := range derived {
		if given[p] == agreement.Missing && d != agreement.Missing {
			given[p] = d
			n++
		}
	}
	return n
}

func count(list []agreement.Category, c agreement.Category) (n int) {
	for _, x := range list {
		if x == c {
			n++
		}
	}
	return n
}

// givenReference returns the reference of the table, nil if it has none.
func (m *merge) givenReference() []agreement.Category {
	if m.layout.reference < 0 {
		return nil
	}
	reference := slices.Repeat([]agreement.Category{agreement.Missing}, len(m.study.Parts))
	given := false
	for i, b := range m.builders {
		for id := range b.parts.n {
			if e := b.parts.entry(id); e.ref != 0 {
				reference[m.rank[i][id]] = m.meaning[i][e.ref]
				given = true
			}
		}
	}
	if !given {
		return nil
	}
	return reference
}

// derivedReference returns the reference that follows from values and
// limits, nil if there is none. A value on a limit is inside.
func (m *merge) derivedReference() []agreement.Category {
	s := m.settings
	limits := s.Lower != nil || s.Upper != nil
	switch {
	case !limits && m.study.Values == nil:
		return nil
	case m.study.Values == nil:
		m.note("no_values", "Limits are given, but the table has no values: nothing follows from the limits.")
		return nil
	case !limits:
		m.note("no_limits", "The parts have values, but no limit is given: set lower or upper.")
		return nil
	case !m.study.PassFail:
		if m.layout.reference < 0 {
			m.note("not_derived", "With more than two categories no reference follows from values and limits; a column reference would give it.")
		}
		return nil
	}
	reference := make([]agreement.Category, len(m.study.Parts))
	for p := range reference {
		switch x := m.study.Values[p]; {
		case !m.study.HasValue[p]:
			reference[p] = agreement.Missing
		case s.Lower != nil && x < *s.Lower, s.Upper != nil && x > *s.Upper:
			reference[p] = 0
		default:
			reference[p] = 1
		}
	}
	return reference
}

// agree checks that the reference given is the one that values and limits
// tell.
func (m *merge) agree(given, derived []agreement.Category) {
	if derived == nil {
		return
	}
	wrong := make(map[uint32]bool)
	var names []string
	for p, d := range derived {
		if g := given[p]; g != agreement.Missing && d != agreement.Missing && g != d {
			wrong[uint32(p)] = true
			if len(names) < maxProblems {
				names = append(names, quote(m.study.Parts[p]))
			}
		}
	}
	if len(wrong) == 0 {
		return
	}
	line := 0
	for i, b := range m.builders {
		for id := range b.parts.n {
			if e := b.parts.entry(id); e.ref != 0 && wrong[m.rank[i][id]] {
				if l := b.line(b.refRow(id, e)); line == 0 || l < line {
					line = l
				}
			}
		}
	}
	list := strings.Join(names, ", ")
	if n := len(wrong) - len(names); n > 0 {
		list += fmt.Sprintf(" and %d more", n)
	}
	m.add(Problem{
		Line: line, Column: m.layout.reference + 1,
		Found:    fmt.Sprintf("%s with a reference other than value and limits tell: %s", counted(len(wrong), "part", "parts"), list),
		Expected: "good inside the limits or on them, bad outside",
		Text:     "correct the reference, the value or the limits, or leave the column reference out",
	})
}
