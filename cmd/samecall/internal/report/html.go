package report

import (
	"cmp"
	_ "embed"
	"fmt"
	"html/template"
	"io"
	"slices"
	"strings"

	"github.com/jedib0t/go-pretty/v6/text"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/figure"
	"samecall/cmd/samecall/internal/format"
)

var (
	//go:embed record.html.tmpl
	pageSource string
	//go:embed record.css
	pageStyle string
)

// HTML writes the record for the file: one page that needs nothing else.
func HTML(w io.Writer, r *Record) error {
	t, err := template.New("record").Parse(pageSource)
	if err != nil {
		return err
	}
	return t.Execute(w, newPage(r))
}

type page struct {
	Version, Title, Facts string
	Style                 template.CSS
	Verdict, VerdictClass string
	Carried               string // how far the data carry the verdict
	Reasons, Causes       []string
	Next, Notes, Cautions []string
	Study                 pageTable
	Sections              []pageSection
	Methods               []string
}

type pageSection struct {
	ID, Title string
	Figures   []pageFigure
	Tables    []pageTable
}

type pageFigure struct {
	Name, Label, Caption string
	Markup               template.HTML
}

type pageTable struct {
	ID, Title string
	Notes     []string
	Heads     []pageCell
	Rows      [][]pageCell
	Class     string
}

type pageCell struct {
	Text, Class string
	Head        bool
}

const (
	smallTable = 9  // rows of a table that may stand beside another on a page
	wholeRows  = 14 // and of one that is kept on one page
	// halfPage is how many characters a table may be wide that is set in two
	// columns on a page.
	halfPage = 50
)

func newPage(r *Record) page {
	v := r.Verdict
	p := page{
		Version:      format.Plain(r.Version),
		Title:        format.Plain(title(r)),
		Facts:        format.Plain(facts(r)),
		Style:        template.CSS(pageStyle + figure.Style()),
		Verdict:      strings.ToUpper(v.Overall.String()),
		Carried:      strings.TrimSpace(carriedBy(v)),
		VerdictClass: strings.ReplaceAll(v.Overall.String(), " ", "-"),
		Reasons:      plainLines(verdictLines(r)),
		Next:         plainLines(v.Next),
		Notes:        plainLines(allNotes(r)),
		Cautions:     v.Cautions,
		Methods:      methods(r),
	}
	p.Study = newPageTable(withCommand(studyTable(r), r))
	p.Study.ID, p.Study.Title = "study", "" // the heading of its section
	for _, row := range p.Study.Rows {
		if what := row[0].Text; strings.HasPrefix(what, "SHA-256") || what == computedBy {
			row[1].Class = "code"
		}
	}
	for _, c := range v.Causes {
		p.Causes = append(p.Causes, format.Plain(c.Text))
	}
	p.Sections = sections(r)
	return p
}

// sections puts figures beside the tables that say the same in numbers.
func sections(r *Record) []pageSection {
	figures := make(map[string]*figure.Figure)
	for _, f := range Figures(r) {
		figures[f.Name] = f
	}
	var out []pageSection
	add := func(id, title string, pictures []string, tables ...Table) {
		s := pageSection{ID: id, Title: title}
		for _, name := range pictures {
			if f := figures[name]; f != nil {
				// The markup is made by package figure, which escapes every text.
				s.Figures = append(s.Figures, pageFigure{f.Name, f.Title, caption(r, name), template.HTML(f.Inline())})
			}
		}
		for _, t := range tables {
			if len(t.Rows) > 0 {
				p := newPageTable(t)
				if t.Title == title { // the heading of the section says it
					p.ID, p.Title = id, ""
				}
				s.Tables = append(s.Tables, p)
			}
		}
		if len(s.Figures)+len(s.Tables) > 0 {
			out = append(out, s)
		}
	}
	appraisers := []Table{criteriaTable(r)}
	if r.Agreement.All != nil {
		appraisers = []Table{againstTable(r, true), criteriaTable(r), errorsTable(r), detectionTable(r)}
	}
	add("appraisers", "Appraisers", []string{"errors"}, appraisers...)
	square := []Table{withinTable(r)}
	if len(r.Study.Appraisers) > 1 {
		square = append(square, cutPairs(pairsTable(r), "share", "agree least"), cutPairs(narrowLean(r), "p", "lean most"), fewKinds(r))
	}
	square = append(square, coefficientsTable(r), weightedTable(r), categoriesTable(r))
	add("agreement", "Agreement", []string{"square"}, square...)
	add("map", "Calls", []string{"calls"}, append(crossTables(r), directionTable(r))...)
	add("zone", "Grey zone", []string{"curve"}, zoneTable(r), cutsTable(r), zonesTable(r))
	add("parts", "Parts to look at", nil, partsTable(r))
	add("every-call", "Every call", nil, callsTable(r))
	return out
}

// cutPairs cuts a table of pairs down to those with the lowest number in a
// column, where it would fill page after page.
func cutPairs(t Table, column, says string) Table {
	const most = 120
	if len(t.Rows) <= most {
		return t
	}
	at := slices.IndexFunc(t.Columns, func(c Column) bool { return c.Name == column })
	value := func(row []Cell) float64 {
		if x, ok := row[at].Value.(float64); ok {
			return x
		}
		return 2 // not known: last
	}
	rows := slices.Clone(t.Rows)
	slices.SortStableFunc(rows, func(a, b []Cell) int { return cmp.Compare(value(a), value(b)) })
	t.Note = fmt.Sprintf("The %d pairs that %s, of %s; the JSON, the CSV and the workbook have them all. %s", most, says, format.Count(len(rows)), t.Note)
	t.Rows = rows[:most]
	return t
}

// narrowLean leaves out of who rejects more what the page can do without: the
// sum of the four counts and, with a reference, against which the rates tell
// it of each, the shares.
func narrowLean(r *Record) Table {
	t := leanTable(r)
	out := []string{"pairs"}
	if r.Agreement.All != nil {
		out = append(out, "first rejects", "second rejects")
	}
	for _, name := range out {
		i := slices.IndexFunc(t.Columns, func(c Column) bool { return c.Name == name })
		t.Columns = slices.Delete(t.Columns, i, i+1)
		for j, row := range t.Rows {
			t.Rows[j] = slices.Delete(row, i, i+1)
		}
	}
	return t
}

// fewKinds is the cross-table of each pair, of those that agree least where all
// would fill page after page.
func fewKinds(r *Record) Table {
	const most = 120 // rows
	all := r.Agreement.Between.Pairs
	n := max(1, most/max(1, len(r.Study.Categories)))
	if len(all) <= n {
		return kindsTable(r, all)
	}
	pairs := slices.Clone(all)
	share := func(p agreement.Pair) float64 {
		if p.Share.Absent != nil {
			return 2 // not known: last
		}
		return p.Share.Value
	}
	slices.SortStableFunc(pairs, func(a, b agreement.Pair) int { return cmp.Compare(share(a), share(b)) })
	t := kindsTable(r, pairs[:n])
	t.Note = fmt.Sprintf("The %s that agree least, of %s; the JSON, the CSV and the workbook have them all. %s", format.Counted(n, "pair"), format.Count(len(all)), t.Note)
	return t
}

// caption says how a figure is read.
func caption(r *Record, figure string) string {
	switch figure {
	case "square":
		c := "The share of parts on which all calls are alike, as a number and as the length of the bar, and kappa. Framed: each appraiser with itself."
		if r.Agreement.All != nil {
			c += " Last column: each against the reference."
		}
		return c
	case "errors":
		return "A point for each appraiser with its intervals. The solid box is the accept level of both rates, the dashed box the conditional level."
	case "calls":
		c := "Every call on every part, a row for each trial."
		switch {
		case r.Agreement.All == nil:
		case r.Study.Ratings.HasAccept():
			c += " Wrong calls are marked: a stroke where a bad part was accepted, a cross where a good part was rejected."
			if len(r.Study.Categories) > 2 {
				c += " A dash: bad or good as the reference says, but another category than the reference."
			}
		default:
			c += " Wrong calls are marked; the tables below say what was called instead."
		}
		if len(curveLimits(r)) > 0 {
			c += " The tan band is the grey zone of all appraisers: there the calls turn from one side to the other."
		}
		return c
	case "curve":
		thin := ""
		if len(r.Study.Appraisers) > 1 {
			thin = " A thin curve is one appraiser's own."
		}
		return "Rings are parts, or parts of like value together where there are many. The heavy curve is fitted to all calls, in its band where the data bound it; the grey zone reaches from 0.5 to 99.5 % acceptance." + thin
	}
	return ""
}

// Widths of names and of heads, in columns of a terminal: shorter ones stay
// on one line, longer ones are broken.
const (
	shortName = 22
	shortHead = 16
)

func newPageTable(t Table) pageTable {
	out := pageTable{ID: "table-" + strings.ReplaceAll(t.Name, " ", "-"), Title: format.Plain(t.Title), Notes: plainLines(t.notes())}
	switch n := len(t.Rows); {
	case n <= smallTable:
		out.Class = "small"
	case n <= wholeRows:
		out.Class = "whole"
	case total(t.least(wholeTable, false)) <= halfPage:
		out.Class = "narrow"
	}
	for _, c := range t.Columns {
		head := pageCell{Text: shortened(format.Plain(c.Name))}
		if c.Numbers {
			head.Class = "n"
		}
		if text.StringWidthWithoutEscSequences(head.Text) > shortHead {
			head.Class = strings.TrimSpace(head.Class + " broken")
		}
		out.Heads = append(out.Heads, head)
	}
	for _, row := range t.Rows {
		var cells []pageCell
		for i, c := range row {
			cell := pageCell{Text: format.Plain(c.Text), Head: i == 0}
			if !t.Columns[i].Long {
				cell.Text = shortened(cell.Text)
			}
			short := text.StringWidthWithoutEscSequences(cell.Text) <= shortName
			switch {
			case t.Columns[i].Numbers:
				cell.Class = "n"
			case t.Columns[i].Long:
				cell.Class = "long"
			case short:
				cell.Class = "short"
			default:
				cell.Class = "name"
			}
			cells = append(cells, cell)
		}
		out.Rows = append(out.Rows, cells)
	}
	return out
}

// shortened leaves out the middle of a name that is longer than anybody reads
// in row after row. The table of what was studied has all of it.
func shortened(name string) string {
	const longest, begin, end = 90, 60, 25
	runes := []rune(name)
	if len(runes) <= longest {
		return name
	}
	return string(runes[:begin]) + " … " + string(runes[len(runes)-end:])
}

func plainLines(lines []string) []string {
	out := make([]string, len(lines))
	for i, l := range lines {
		out[i] = format.Plain(l)
	}
	return out
}

// methods says in short how the figures of a record are found.
func methods(r *Record) []string {
	out := []string{
		fmt.Sprintf("The part is the sampled unit: several calls on one part are not several parts. All intervals are at %s confidence.", format.Confidence(r.Options.Confidence)),
		"Shares of parts: exact binomial limits (Clopper & Pearson, Biometrika 26, 1934).",
		"Miss and false-alarm rates: exact limits on the effective number of calls (Korn & Graubard, Survey Methodology 24, 1998); without an event, on the number of parts; and never surer than the number of parts allows.",
		"Kappa: Cohen (1960) for pairs and against the reference, Fleiss (1971) for more calls, in Gwet's form (2014) where calls are missing; AC1: Gwet (2008); alpha: Krippendorff.",
	}
	out = append(out, intervalsOfKappas(r))
	if r.Agreement.All != nil {
		out = append(out, "Direction of errors: exact test of McNemar (1947) with two categories; Bowker (1948), Stuart (1955) and Maxwell (1970) with more. Detection indices with the log-linear correction of Hautus (1995).")
	}
	if r.Agreement.All == nil && len(r.Leans) > 0 {
		out = append(out, "Who rejects more: exact test of McNemar (1947).")
	}
	if r.Zone != nil {
		out = append(out, "Grey zone: unanimous zone and signal detection as in the Measurement Systems Analysis reference manual, 4th ed. 2010, chapter III C; acceptance curve by maximum likelihood with profile-likelihood intervals; where calls are separated, bias-reduced (Firth, 1993).")
	}
	return append(out, "Criteria: l"+strings.TrimPrefix(levelsFrom(r), "L")+" Causes are read from the pattern of the errors by fixed rules; they are leads, not proofs.")
}

// intervalsOfKappas says how they were found.
func intervalsOfKappas(r *Record) string {
	const floor = "the exact limits of the share of parts that disagree"
	n := r.Agreement.Intervals
	resampled := fmt.Sprintf("%d resamples of whole parts, bias-corrected and accelerated (Efron, 1987), at a confidence expanded for few parts (Hesterberg, 2015)", r.Options.Resamples)
	seed := fmt.Sprintf(" The seed is %d.", r.Options.Seed)
	const linearised = "standard errors linearised over parts"
	how := "from " + floor + "."
	switch {
	case n.Resampled > 0 && n.Linearised > 0:
		how = fmt.Sprintf("%s, for %s of %s kappas and coefficients; for the others %s; never narrower than %s.%s",
			resampled, format.Count(n.Resampled), format.Count(n.Resampled+n.Linearised), linearised, floor, seed)
	case n.Resampled > 0:
		how = resampled + ", never narrower than " + floor + "." + seed
	case n.Linearised > 0:
		how = linearised + ", never narrower than " + floor + "."
	}
	return "Intervals of kappas: " + how
}
