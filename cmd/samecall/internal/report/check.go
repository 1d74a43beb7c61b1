package report

import (
	"fmt"
	"io"
	"slices"
	"strings"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/study"
)

// Check writes what a study holds and what it can show.
func Check(w io.Writer, s *study.Study, term Terminal) error {
	p := &printer{w: w, term: term}
	sum := s.Summary()
	p.title(studyTitle(s))
	notes := s.Notes
	if n, ok := s.UnmatchedTrials(); ok {
		notes = append(slices.Clip(notes), n)
	}
	p.wrap("The study is read without a problem"+notesBelow(len(notes))+".", "")
	p.table(Table{Columns: []Column{{Name: "what"}, {Name: "how many", Long: true}}, Rows: holds(s, sum)})
	p.table(appraisersTable(sum))
	if sum.Missing > 0 {
		p.table(missingTable(sum))
	}
	if sum.Values != nil && (sum.Values.Lower != nil || sum.Values.Upper != nil) {
		p.table(nearTable(sum.Values, s.Settings.Unit))
	}
	p.line("")
	p.line(term.bold("What it can and cannot show"))
	for _, c := range sum.CanShow {
		p.wrap("· "+c.Text, "  ")
	}
	for _, n := range notes {
		p.line("")
		p.wrap("Note: "+n.Text, "      ")
	}
	return p.err
}

func notesBelow(n int) string {
	switch n {
	case 0:
		return ""
	case 1:
		return "; a note stands at the end"
	default:
		return fmt.Sprintf("; %d notes stand at the end", n)
	}
}

func holds(s *study.Study, sum study.Summary) [][]Cell {
	var rows [][]Cell
	add := func(what, how string) { rows = append(rows, []Cell{say(what), say(how)}) }
	parts := format.Count(sum.Parts)
	if s.Ratings.HasReference() && s.Ratings.HasAccept() {
		parts += fmt.Sprintf(", of these %s bad, %s good", format.Count(sum.Bad), format.Count(sum.Good))
		if sum.Unreferenced > 0 {
			parts += ", " + format.Count(sum.Unreferenced) + " without reference"
		}
	}
	add("parts", parts)
	if sum.ByCategory != nil && !s.PassFail {
		var by []string
		for k, n := range sum.ByCategory {
			by = append(by, s.Categories[k]+" "+format.Count(n))
		}
		add("parts by reference", strings.Join(by, ", "))
	}
	add("reference", referenceText(s))
	categories := make([]string, len(s.Categories))
	for k, c := range s.Categories {
		categories[k] = c
		if s.Ratings.Accepts(uint8(k)) && !s.PassFail {
			categories[k] += " (accepted)"
		}
	}
	add("categories", strings.Join(categories, ", "))
	calls := format.Count(sum.Calls)
	if sum.Missing > 0 {
		calls += ", " + format.Count(sum.Missing) + " missing"
	}
	add("calls", calls)
	balance := "yes: every appraiser called every part in every trial"
	if !sum.Balanced {
		balance = "no: appraisers have different trials or missing calls; each figure says what it rests on"
	}
	add("balanced", balance)
	if v := sum.Values; v != nil {
		unit := s.Settings.Unit
		if unit != "" {
			unit = " " + unit
		}
		add("values", fmt.Sprintf("%s, from %s to %s%s", format.Counted(v.Count, "part"), format.Number(v.Min), format.Number(v.Max), unit))
		if v.OnLimit > 0 {
			lie := " lie"
			if v.OnLimit == 1 {
				lie = " lies"
			}
			add("on a limit", format.Counted(v.OnLimit, "part")+lie+" exactly on a limit; a value on a limit is inside")
		}
	}
	for _, in := range s.Inputs {
		sheet := ""
		if in.Sheet != "" {
			sheet = fmt.Sprintf(", sheet %q", in.Sheet)
		}
		add("read", in.File+sheet+", SHA-256 "+in.SHA256[:16]+"…")
	}
	return rows
}

func appraisersTable(sum study.Summary) Table {
	t := Table{Title: "Appraisers", Columns: []Column{{Name: "appraiser"}, {Name: "trials", Numbers: true}, {Name: "parts called", Numbers: true}, {Name: "calls", Numbers: true}, {Name: "missing", Numbers: true}}}
	for _, a := range sum.Appraisers {
		t.Rows = append(t.Rows, []Cell{say(a.Appraiser), say(study.TrialNumbers(a.Trials)), intCell(a.Parts), intCell(a.Calls), intCell(a.Missing)})
	}
	return t
}

func missingTable(sum study.Summary) Table {
	t := Table{Title: "Missing calls", Columns: []Column{{Name: "part"}, {Name: "appraiser"}, {Name: "trial", Numbers: true}}}
	for _, c := range sum.Without {
		t.Rows = append(t.Rows, []Cell{say(c.Part), say(c.Appraiser), intCell(c.Trial)})
	}
	if more := sum.Missing - len(sum.Without); more > 0 {
		t.Note = "and " + format.Count(more) + " more"
	}
	return t
}

func nearTable(v *study.ValueSummary, unit string) Table {
	t := Table{Title: "Parts near the limits", Columns: []Column{{Name: "limit"}, {Name: "at", Numbers: true}, {Name: "near means within", Numbers: true}, {Name: "near, bad", Numbers: true}, {Name: "near, good", Numbers: true}}}
	if unit != "" {
		unit = " " + unit
	}
	add := func(name, at string, l *study.LimitSummary) {
		t.Rows = append(t.Rows, []Cell{say(name), say(at + unit), say(format.Short(l.Width) + unit), intCell(l.NearBad), intCell(l.NearGood)})
	}
	switch lower, upper := v.Lower, v.Upper; {
	case lower != nil && upper != nil:
		at := format.Alike(lower.Limit, upper.Limit)
		add("lower", at[0], lower)
		add("upper", at[1], upper)
	case lower != nil:
		add("lower", format.Number(lower.Limit), lower)
	case upper != nil:
		add("upper", format.Number(upper.Limit), upper)
	}
	t.Note = "Only parts near a limit show where the calls turn; parts far away are called alike by anybody."
	return t
}

// referenceText says where the reference is from.
func referenceText(s *study.Study) string {
	text := map[study.ReferenceKind]string{
		study.Given:   "given in the calls file",
		study.Derived: "derived from values and limits; a value on a limit is inside",
		study.None:    "none",
	}[s.Reference]
	if n := s.DerivedParts; n > 0 {
		text += ", of " + format.Counted(n, "part") + " derived from value and limits"
	}
	return text
}
