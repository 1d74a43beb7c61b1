package report

import (
	"fmt"
	"strings"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
	"samecall/cmd/samecall/internal/verdict"
)

const callsAsIndependent = "takes calls as independent: with several calls on a part p is too small"

// leanTable sets the calls of each two appraisers side by side, a cross-table in
// a row, and tells who rejects more.
func leanTable(r *Record) Table {
	t := Table{
		Name:  "lean",
		Title: "Between appraisers: who rejects more?",
		Keys:  2,
		Columns: []Column{{Name: "first"}, {Name: "second"}, {Name: "pairs", Numbers: true}, {Name: "both reject", Numbers: true},
			{Name: "only the first", Numbers: true}, {Name: "only the second", Numbers: true}, {Name: "both accept", Numbers: true},
			{Name: "first rejects", Numbers: true}, {Name: "second rejects", Numbers: true}, {Name: "p", Numbers: true}},
		Note: "Of the pairs of calls on one part, how many both reject, only one, or none: the cross-table of the two. " + pairingNote(r.Options.Pairing) + " p: exact test of McNemar, small where one rejects more. It " + callsAsIndependent + ".",
	}
	for _, l := range r.Leans {
		byA, byB := l.Rejected()
		p := dashFor(l.NoTest)
		if l.Test != nil {
			p = valueCell(format.Probability(l.Test.P), l.Test.P)
		}
		t.Rows = append(t.Rows, []Cell{say(r.Study.Appraisers[l.A]), say(r.Study.Appraisers[l.B]), intCell(l.Pairs()),
			intCell(byA - l.OnlyA()), intCell(l.OnlyA()), intCell(l.OnlyB()), intCell(l.Pairs() - byA - l.OnlyB()),
			shareOfPairs(byA, l.Pairs()), shareOfPairs(byB, l.Pairs()), p})
	}
	return t
}

// kindsTable is the cross-table of each of some pairs, where it is more than
// the four counts of leanTable; else empty.
func kindsTable(r *Record, pairs []agreement.Pair) Table {
	t := Table{Name: "pair tables", Title: "Between appraisers: the calls of each two side by side", Keys: 3,
		Columns: []Column{{Name: "first"}, {Name: "second"}, {Name: "call of the first"}}, Note: pairingNote(r.Options.Pairing)}
	if len(r.Study.Categories) < 3 && r.Leans != nil {
		return t
	}
	for _, c := range r.Study.Categories {
		t.Columns = append(t.Columns, Column{Name: "second: " + c, Numbers: true})
	}
	for _, p := range pairs {
		for k, c := range r.Study.Categories {
			row := []Cell{say(r.Study.Appraisers[p.A]), say(r.Study.Appraisers[p.B]), say(c)}
			for _, n := range p.Table[k] {
				row = append(row, intCell(n))
			}
			t.Rows = append(t.Rows, row)
		}
	}
	return t
}

func shareOfPairs(n, of int) Cell {
	if of == 0 {
		return say(format.Dash) // as p, which says why
	}
	share := float64(n) / float64(of)
	return valueCell(format.Percent(share), share)
}

// parting are the pairs of a study without a reference that are told in words:
// the two of two, or those with the one who stands apart.
func parting(r *Record) []judge.Lean {
	if r.Agreement.All != nil {
		return nil
	}
	apart := verdict.Apart(r.Result)
	var out []judge.Lean
	for _, l := range r.Leans {
		if l.Test != nil && (len(r.Study.Appraisers) == 2 || l.A == apart || l.B == apart) {
			out = append(out, l)
		}
	}
	return out
}

// mostParting is how many pairs the one screen tells of.
const mostParting = 3

// leanLines say who rejects more, how often one rejects what the other
// accepts, and on which parts.
func leanLines(r *Record) []string {
	var out []string
	several := false
	pairs := parting(r)
	for _, l := range pairs[:min(mostParting, len(pairs))] {
		a, b := r.Study.Appraisers[l.A], r.Study.Appraisers[l.B]
		byA, byB := l.Rejected()
		n := l.Pairs()
		onlyA, onlyB := r.Parted(l)
		way := func(rejecter, accepter string, calls int, list []int) string {
			if calls == 0 {
				return fmt.Sprintf("%s rejects nothing that %s accepts", rejecter, accepter)
			}
			return fmt.Sprintf("%s rejects what %s accepts in %s of them (%s)", rejecter, accepter, format.Count(calls), briefly(r, list))
		}
		out = append(out, fmt.Sprintf("%s rejects %s and %s %s of %s of calls: %s, %s; p %s.",
			a, shareOfPairs(byA, n).Text, b, shareOfPairs(byB, n).Text, format.Counted(n, "pair"),
			way(a, b, l.OnlyA(), onlyA), way(b, a, l.OnlyB(), onlyB), probability(l.Test.P)))
		several = several || r.Study.Ratings.Trials(l.A) > 1 || r.Study.Ratings.Trials(l.B) > 1
	}
	if len(out) == 0 {
		return nil
	}
	note := "p: exact test of McNemar"
	if several {
		note += "; it " + callsAsIndependent
	}
	note += "."
	if len(pairs) > mostParting {
		note += " --full lists the other pairs."
	}
	return append(out, note)
}

func probability(p float64) string {
	text := format.Probability(p)
	if strings.HasPrefix(text, "<") {
		return text
	}
	return "= " + text
}

// briefly names the first parts of a list.
func briefly(r *Record, list []int) string {
	const most = 8
	more := ""
	if len(list) > most {
		more = fmt.Sprintf(" and %s more", format.Count(len(list)-most))
		list = list[:most]
	}
	return strings.Join(parts(r, list), ", ") + more
}
