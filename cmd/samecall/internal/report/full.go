package report

import (
	"cmp"
	"slices"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
	"samecall/cmd/samecall/internal/verdict"
	"samecall/signal"
)

// section is a group of tables under a heading, by the headings of the page.
type section struct {
	Title  string
	Notes  []string // to be read before the tables
	Tables []Table
}

// fullSections are the tables for people, all that there are: no figure stands
// in two of them. Programs get numberTables.
func fullSections(r *Record) []section {
	appraisers := []Table{criteriaTable(r), otherLimitsTable(r)}
	if r.Agreement.All != nil {
		appraisers = []Table{againstTable(r, true), criteriaTable(r), otherLimitsTable(r), errorsTable(r), detectionTable(r)}
	}
	var noReference, noZone []string
	if r.Agreement.All == nil {
		noReference = []string{"Against the reference: " + judge.ErrNoReference.Error() + "."}
	}
	if r.Zone == nil {
		noZone = []string{sentence(r.NoZone.Error())}
	}
	within := []Table{withinTable(r)}
	if len(r.Study.Appraisers) > 1 {
		within = append(within, newSquare(r).table(true), pairsTable(r), leanTable(r), kindsTable(r, r.Agreement.Between.Pairs))
	}
	all := []section{
		{Title: "Appraisers", Notes: noReference, Tables: appraisers},
		{Title: "Agreement", Tables: append(within, coefficientsTable(r), weightedTable(r), categoryKappas(r))},
		{Title: "Calls", Tables: []Table{crossTogether(r), directionTable(r), partsTable(r), callsTable(r)}},
		{Title: "Grey zone", Notes: append(noZone, zoneNotes(r, besideTables)...), Tables: []Table{curveLimitsTable(r), cutsAtLimitsTable(r), zonesTable(r), unanimousTable(r), gapsTable(r), curveFitTable(r)}},
		{Title: "How it was computed", Tables: []Table{methodsTable(newDocument(r))}},
	}
	for i := range all {
		all[i].Tables = slices.DeleteFunc(all[i].Tables, func(t Table) bool { return len(t.Rows) == 0 })
	}
	return slices.DeleteFunc(all, func(s section) bool { return len(s.Tables)+len(s.Notes) == 0 })
}

// otherLimitsTable gives the one-sided limits that no answer rests on, beside
// those of criteriaTable that one does, and how many parts each figure rests on.
func otherLimitsTable(r *Record) Table {
	t := Table{
		Name:    "other limits",
		Title:   "The other one-sided limits, and how many parts each figure rests on",
		Columns: []Column{{Name: "appraiser"}},
		Note:    "Each limit holds for itself; with the one of the criteria it holds less often.",
	}
	cell := func(c verdict.Criterion) Cell {
		_, upper, ok := c.Deciding()
		parts := ", " + format.Counted(c.Parts, c.Kind)
		switch {
		case c.Estimate.Absent != nil:
			return dashFor(c.Estimate.Absent)
		case !ok:
			none := dashFor(cmp.Or(c.Estimate.Absent, c.Estimate.Unbounded))
			none.Text += parts
			return none
		case upper:
			limit := c.Estimate.OneSided.Lower
			return valueCell("≥ "+c.Exact(limit)+parts, limit)
		}
		limit := c.Estimate.OneSided.Upper
		return valueCell("≤ "+c.Exact(limit)+parts, limit)
	}
	if r.Agreement.All != nil {
		for _, a := range r.Verdict.Appraisers {
			row := []Cell{say(a.Name)}
			for _, c := range a.Criteria {
				if len(t.Rows) == 0 {
					t.Columns = append(t.Columns, Column{Name: c.Label(), Long: true})
				}
				row = append(row, cell(c))
			}
			t.Rows = append(t.Rows, row)
		}
	}
	if b := r.Verdict.Between; b != nil {
		if len(t.Rows) == 0 {
			t.Columns = append(t.Columns, Column{Name: "kappa", Long: true})
		}
		row := make([]Cell, len(t.Columns))
		row[0], row[len(row)-1] = say("between"), cell(*b)
		t.Rows = append(t.Rows, row)
	}
	return t
}

// categoryKappas gives the kappas of categoriesTable with every interval: a
// row for all calls, for each appraiser and for all together.
func categoryKappas(r *Record) Table {
	if len(r.Study.Categories) < 3 {
		return Table{}
	}
	t := Table{Name: "categories", Title: "Kappa of each category against all others", Columns: []Column{{Name: "of"}}}
	between, whose := []Cell{say("all calls")}, [][]Cell{}
	for k, name := range r.Study.Categories {
		t.Columns = append(t.Columns, Column{Name: name, Numbers: true})
		between = append(between, kappaCell(r.Agreement.Between.Categories[k]))
	}
	if r.Agreement.All != nil {
		row := func(name string, a agreement.Against) {
			cells := []Cell{say(name)}
			for _, e := range a.Categories {
				cells = append(cells, kappaCell(e))
			}
			whose = append(whose, cells)
		}
		for i, a := range r.Agreement.Against {
			row(r.Study.Appraisers[i], a)
		}
		if len(r.Study.Appraisers) > 1 {
			row(together, *r.Agreement.All)
		}
		t.Note = "All calls: Fleiss' kappa between them; of an appraiser, and of all together, Cohen's kappa against the reference."
	}
	t.Rows = append([][]Cell{between}, whose...)
	return t
}

// cutsAtLimitsTable says where each appraiser cuts and what is accepted at the
// limit itself, limit by limit; empty with one appraiser.
func cutsAtLimitsTable(r *Record) Table {
	t := cutsTable(r)
	if len(t.Rows) == 0 {
		return t
	}
	s, all := r.Scale(), r.Zone.Curves
	t.Title = inUnit(t.Title, s)
	t.Keys = 2
	t.Columns = []Column{{Name: "limit"}, {Name: "appraiser"}, {Name: rowOffset, Numbers: true}, {Name: "accepted at the limit", Numbers: true}}
	t.Rows = nil
	for _, side := range []signal.Side{signal.Lower, signal.Upper} {
		for a, own := range all.Each {
			for _, l := range limitsOf(own, all.Pooled) {
				if l.side != side {
					continue
				}
				cut, accepted := l.none, l.none
				if own == nil {
					cut = dashFor(all.Errors[a])
				}
				if l.fit != nil {
					cut, accepted = placeCell(s, l.fit, l.fit.Offset, s.Signed), atLimitCell(s, l.fit)
				}
				t.Rows = append(t.Rows, []Cell{say(side.String()), say(r.Study.Appraisers[a]), cut, accepted})
			}
		}
	}
	return t
}

// crossTogether puts the tables of crossTables into one; empty without a
// reference.
func crossTogether(r *Record) Table {
	t := Table{Name: "calls", Title: "Calls by reference", Keys: 2}
	for i, x := range crossTables(r) {
		who := together
		if i < len(r.Study.Appraisers) {
			who = r.Study.Appraisers[i]
		}
		t.Columns = append([]Column{{Name: "appraiser"}}, x.Columns...)
		for _, row := range x.Rows[:len(x.Rows)-1] { // without the sums
			t.Rows = append(t.Rows, append([]Cell{say(who)}, row...))
		}
	}
	return t
}
