package study

import (
	"fmt"
	"slices"

	"samecall/agreement"
)

// A table is refused as nearly empty when it has more cells than this and
// calls in less than one of a hundred.
const roomyCells = 1 << 26

// Where there are more appraisers than this and more than parts, the two
// columns are taken to be swapped: every pair of appraisers has its kappa, so
// that thousands of them do not fit. Our own choice, no source.
const maxCrowd = 300

// fill puts the calls into Ratings.
func (m *merge) fill(trials []int) {
	if n := len(trials); n > maxCrowd && n > len(m.study.Parts) {
		p := Problem{Line: m.line, Found: fmt.Sprintf("%d appraisers on %s", n, counted(len(m.study.Parts), "part", "parts")),
			Expected: fmt.Sprintf("no more appraisers than parts, or at most %d", maxCrowd), Text: "are the columns part and appraiser swapped?"}
		if !m.layout.long {
			p.Text = "is there a row for each part, and a column for each appraiser and trial?"
		}
		m.add(p)
		return
	}
	columns, calls := 0, 0
	for _, n := range trials {
		columns += n
	}
	for _, b := range m.builders {
		calls += b.records.n
	}
	parts := len(m.study.Parts)
	if cells := parts * columns; cells > roomyCells && calls < cells/100 {
		m.add(Problem{Line: m.line, Found: fmt.Sprintf("%d calls on %d parts in %d trials of all appraisers", calls, parts, columns),
			Expected: "appraisers who call the same parts", Text: "the table would be nearly empty; are the columns part, appraiser and trial what they say?"})
		return
	}
	ratings, err := agreement.New(parts, min(len(m.words.names), agreement.MaxCategories), trials)
	if err != nil {
		m.add(Problem{Line: m.line, Text: "the study is too large: " + err.Error()})
		return
	}
	// Matched by their numbers: appraisers may have taken part in different trials.
	if err := ratings.SetTrialNumbers(m.study.TrialNames); err != nil {
		m.add(Problem{Text: err.Error()})
		return
	}
	m.study.Ratings = ratings
	if m.words.accept != nil && len(m.words.names) <= agreement.MaxCategories {
		if err := ratings.SetAccept(m.words.accept); err != nil {
			m.add(Problem{Text: err.Error()})
		}
	}
	twice := false
	for i, b := range m.builders {
		rank, column, meaning := m.rank[i], m.columns[i], m.meaning[i]
		b.records.each(func(r record) {
			if r.word == 0 {
				return
			}
			cell := &ratings.Row(int(rank[r.part]))[column[r.column]]
			if *cell != agreement.Missing {
				twice = true
			}
			*cell = meaning[r.word]
		})
	}
	if twice && m.layout.long { // in a wide table the part stands twice, which is said already
		m.callsGivenTwice(columns)
	}
}

// callsGivenTwice says which calls stand on two lines.
func (m *merge) callsGivenTwice(columns int) {
	first := make([]uint32, len(m.study.Parts)*columns) // line of each call
	each := func(do func(cell, line int, b *builder, r record)) {
		for i, b := range m.builders {
			b.eachRecord(func(row uint32, r record) {
				if r.word != 0 {
					do(int(m.rank[i][r.part])*columns+int(m.columns[i][r.column]), b.line(row), b, r)
				}
			})
		}
	}
	each(func(cell, line int, _ *builder, _ record) {
		if f := first[cell]; f == 0 || line < int(f) {
			first[cell] = uint32(line)
		}
	})
	each(func(cell, line int, b *builder, r record) {
		if f := int(first[cell]); line > f {
			key := b.columns[r.column]
			m.add(Problem{
				Line: line, Column: m.layout.call + 1,
				Found: fmt.Sprintf("the call of %s on part %s in trial %d a second time",
					quote(b.appraisers.list[key.appraiser]), quote(m.study.Parts[m.rankOf(b)[r.part]]), key.trial),
				Expected: "each call once", Text: "it stands " + m.on(f) + " already",
			})
		}
	})
}

func (m *merge) rankOf(b *builder) []uint32 { return m.rank[slices.Index(m.builders, b)] }

// rareWords notes kinds that occur in one call only: maybe a typing error,
// where every word that is not accepted makes a kind.
func (m *merge) rareWords() {
	if len(m.words.own) == 0 {
		return
	}
	total, counts := 0, make([]int, len(m.words.names)+1)
	for p := range m.study.Parts {
		for _, c := range m.study.Ratings.Row(p) {
			if c != agreement.Missing {
				total++
				counts[c]++
			}
		}
	}
	if total < 20 {
		return
	}
	for c, name := range m.words.names {
		if m.words.accept[c] || counts[c] != 1 {
			continue
		}
		if m.study.PassFail {
			for _, w := range m.words.own { // there is one
				name = w
			}
		}
		meant := ""
		if near := nearest(name, slices.Concat(m.settings.Accept, slices.Delete(slices.Clone(m.words.names), c, c+1))); near != "" {
			meant = ", or " + shown(near) + " meant"
		}
		m.note("rare_word", "The call %s occurs once among %d calls; is it spelt right%s? The setting categories or reject lists the words that are expected.", quote(name), total, meant)
	}
}
