package report

import (
	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
)

// square is the agreement square: appraisers, and the reference, along both
// sides. The diagonal is each appraiser with itself, off it each pair, the
// last column each against the reference.
type square struct {
	names  []string
	within []agreement.Within
	pair   map[[2]int]agreement.Pair
	ref    []agreement.Against // nil without a reference
}

func newSquare(r *Record) square {
	s := square{
		names:  r.Study.Appraisers,
		within: r.Agreement.Within,
		pair:   make(map[[2]int]agreement.Pair),
		ref:    r.Agreement.Against,
	}
	for _, p := range r.Agreement.Between.Pairs {
		s.pair[[2]int{p.A, p.B}] = p
	}
	return s
}

// at returns the share of parts and the kappa of row a, column b of the
// square; b is len(names) for the reference.
func (s square) at(a, b int) (agreement.Share, agreement.Estimate) {
	switch {
	case b == len(s.names):
		return s.ref[a].Effectiveness, s.ref[a].Kappa
	case a == b:
		return s.within[a].Share, s.within[a].Kappa
	}
	p := s.pair[[2]int{min(a, b), max(a, b)}]
	return p.Share, p.Kappa
}

// table lays the square out for reading. With kappas, each cell holds the
// share of parts and the kappa.
func (s square) table(kappas bool) Table {
	t := Table{Name: "square", Title: "Agreement square", Columns: []Column{{Name: ""}}, Note: "Share of parts on which all calls are alike"}
	if kappas {
		t.Note += " · kappa"
	}
	t.Note += "; in brackets, each appraiser with itself."
	if note := belowNote(withinKappas(s.within)...); kappas && note != "" {
		t.Note += " " + note
	}
	for _, n := range s.names {
		t.Columns = append(t.Columns, Column{Name: n, Numbers: true})
	}
	columns := len(s.names)
	if s.ref != nil {
		t.Columns = append(t.Columns, Column{Name: "reference", Numbers: true})
		columns++
	}
	for a, n := range s.names {
		row := []Cell{say(n)}
		for b := range columns {
			if b < a { // the same pair as above the diagonal
				row = append(row, say(""))
				continue
			}
			share, kappa := s.at(a, b)
			row = append(row, squareCell(share, kappa, kappas, a == b))
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}

func squareCell(share agreement.Share, kappa agreement.Estimate, kappas, itself bool) Cell {
	c := dashFor(share.Absent)
	if share.Absent == nil {
		c = Cell{Text: format.Percent(share.Value), Value: share.Value}
	}
	if kappas {
		k := dashFor(kappa.Absent)
		if kappa.Absent == nil {
			k.Text = format.Figure(kappa.Value)
		}
		c.Text += " · " + k.Text
		c.Why = append(c.Why, k.Why...)
	}
	if itself {
		c.Text = "[" + c.Text + "]"
	}
	return c
}

// numbers lays the square out for programs: a table of the shares and one of
// the kappas, each with its interval.
func (s square) numbers() []Table {
	shares, kappas := s.table(false), s.table(false)
	shares.Title += ": share of parts alike"
	kappas.Name, kappas.Title = "square kappas", "Agreement square: kappa"
	shares.Note, kappas.Note = "", ""
	kappas.Rows = nil
	for a, n := range s.names {
		row := []Cell{say(n)}
		for b := range shares.Columns[1:] {
			if b < a {
				row = append(row, say(""))
				continue
			}
			share, kappa := s.at(a, b)
			shares.Rows[a][b+1] = shareCell(share)
			row = append(row, kappaCell(kappa))
		}
		kappas.Rows = append(kappas.Rows, row)
	}
	return []Table{shares, kappas}
}
