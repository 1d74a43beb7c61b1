package report

import (
	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
)

func withinTable(r *Record) Table {
	t := Table{
		Name:    "within",
		Title:   "Within appraiser: does each repeat its own call?",
		Columns: []Column{{Name: "appraiser"}, {Name: "parts alike", Numbers: true, Of: "parts with two calls or more"}, {Name: "share", Numbers: true}, {Name: "kappa over trials", Numbers: true}},
	}
	for a, w := range r.Agreement.Within {
		t.Rows = append(t.Rows, []Cell{say(r.Study.Appraisers[a]), ofCell(w.Share), shareCell(w.Share), kappaCell(w.Kappa)})
	}
	t.Note = belowNote(withinKappas(r.Agreement.Within)...)
	return t
}

func pairsTable(r *Record) Table {
	t := Table{
		Name:    "pairs",
		Title:   "Between appraisers: each two",
		Keys:    2,
		Columns: []Column{{Name: "first"}, {Name: "second"}, {Name: "parts alike", Numbers: true, Of: "parts both called"}, {Name: "share", Numbers: true}, {Name: "calls alike", Numbers: true, Of: "pairs of calls"}, {Name: "kappa", Numbers: true}},
		Note:    pairingNote(r.Options.Pairing),
	}
	for _, p := range r.Agreement.Between.Pairs {
		row := []Cell{say(r.Study.Appraisers[p.A]), say(r.Study.Appraisers[p.B]), ofCell(p.Share), shareCell(p.Share),
			countCell(p.Alike, p.Pairs), kappaCell(p.Kappa)}
		t.Rows = append(t.Rows, row)
	}
	return t
}

// weightedTable gives the kappas that weigh errors by their steps; empty
// where categories have no order.
func weightedTable(r *Record) Table {
	t := Table{
		Name:    "weighted",
		Title:   "Kappa weighted by the steps between grades",
		Keys:    2,
		Columns: []Column{{Name: "first"}, {Name: "second"}, {Name: "linear", Numbers: true}, {Name: "quadratic", Numbers: true}},
	}
	add := func(first, second string, linear, quadratic *agreement.Estimate) {
		if linear != nil && quadratic != nil {
			t.Rows = append(t.Rows, []Cell{say(first), say(second), kappaCell(*linear), kappaCell(*quadratic)})
		}
	}
	for _, p := range r.Agreement.Between.Pairs {
		add(r.Study.Appraisers[p.A], r.Study.Appraisers[p.B], p.Linear, p.Quadratic)
	}
	for a, g := range r.Agreement.Against {
		add(r.Study.Appraisers[a], "reference", g.Linear, g.Quadratic)
	}
	if all := r.Agreement.All; all != nil {
		add(together, "reference", all.Linear, all.Quadratic)
	}
	return t
}

func pairingNote(p agreement.Pairing) string {
	if p == agreement.All {
		return "Each trial of the one beside each trial of the other."
	}
	return "Trials of the same number are set beside each other."
}

func coefficientsTable(r *Record) Table {
	b := r.Agreement.Between
	t := Table{
		Name:    "between",
		Title:   "All appraisers together",
		Columns: []Column{{Name: "figure"}, {Name: "value", Numbers: true}, {Name: "what it tells", Long: true}},
	}
	add := func(name string, c Cell, what string) { t.Rows = append(t.Rows, []Cell{say(name), c, say(what)}) }
	alike := "every call of every appraiser is the same"
	if b.Share.Absent == nil {
		alike += ": " + ofCell(b.Share).Text
	}
	add("parts alike", shareCell(b.Share), alike)
	if b.Share.Absent == nil {
		add("calls alike", valueCell(format.Percent(b.Agreement), b.Agreement), "of the pairs of calls on one part")
	}
	add("Fleiss' kappa", kappaCell(b.Fleiss), "agreement of all calls beyond chance")
	add("Gwet's AC1", kappaCell(b.AC1), "the same, not pulled down where one category prevails")
	add("Krippendorff's alpha", kappaCell(b.Alpha), "the same, corrected for few calls")
	add("kappa within appraisers", kappaCell(b.SameAppraiser), "pairs of calls on a part by one appraiser")
	add("kappa between appraisers", kappaCell(b.DifferentAppraisers), "pairs of calls on a part by two appraisers")
	t.Note = belowNote(b.Fleiss, b.AC1, b.Alpha, b.SameAppraiser, b.DifferentAppraisers)
	return t
}

// categoriesTable gives the kappa of each category; empty with two
// categories, whose kappas are those of the whole.
func categoriesTable(r *Record) Table {
	if len(r.Study.Categories) < 3 {
		return Table{}
	}
	t := Table{
		Name:    "categories",
		Title:   "Kappa of each category against all others",
		Columns: []Column{{Name: "category"}, {Name: "between", Numbers: true}},
	}
	against := r.Agreement.All != nil
	if against {
		for _, n := range r.Study.Appraisers {
			t.Columns = append(t.Columns, Column{Name: n, Numbers: true})
		}
		if len(r.Study.Appraisers) > 1 {
			t.Columns = append(t.Columns, Column{Name: together, Numbers: true})
		}
	}
	for k, name := range r.Study.Categories {
		row := []Cell{say(name), kappaCell(r.Agreement.Between.Categories[k])}
		if against {
			for _, a := range r.Agreement.Against {
				if len(r.Study.Appraisers) > 3 && a.Categories[k].Absent == nil { // intervals would not fit
					row = append(row, valueCell(format.Figure(a.Categories[k].Value), a.Categories[k].Value))
					continue
				}
				row = append(row, kappaCell(a.Categories[k]))
			}
			if len(r.Study.Appraisers) > 1 {
				row = append(row, kappaCell(r.Agreement.All.Categories[k]))
			}
		}
		t.Rows = append(t.Rows, row)
	}
	if against {
		t.Note = "Between: Fleiss' kappa of all calls; under an appraiser's name, and of all together, Cohen's kappa against the reference."
	}
	return t
}
