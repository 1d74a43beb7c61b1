package report

import (
	"fmt"
	"slices"
	"strings"

	"samecall/agreement"
	"samecall/agreement/interval"
	"samecall/cmd/samecall/internal/format"
	"samecall/signal"
)

// againstTable is the table of appraisers against the reference, with the
// verdict on each where there is room.
func againstTable(r *Record, verdicts bool) Table {
	t := Table{
		Name:    "appraisers",
		Title:   "Against the reference",
		Columns: []Column{{Name: "appraiser"}, {Name: "effectiveness", Numbers: true}, {Name: "miss rate", Numbers: true}, {Name: "false-alarm rate", Numbers: true}, {Name: "kappa", Numbers: true}},
		Note:    fmt.Sprintf("In brackets the two-sided %s interval by parts.", format.Confidence(r.Options.Confidence)),
	}
	if len(r.Study.Categories) > 2 {
		t.Note += " Effectiveness asks for the exact category on every trial, not only for accept or reject: it may be low without a miss."
	}
	if len(r.Agreement.Against) > 1 {
		t.Note += " All together: right in every call of every appraiser."
	}
	row := func(name string, a agreement.Against, v ...Cell) {
		t.Rows = append(t.Rows, append([]Cell{say(name), shareCell(a.Effectiveness), shareCell(a.Miss), shareCell(a.FalseAlarm), kappaCell(a.Kappa)}, v...))
	}
	if !verdicts {
		for i, a := range r.Agreement.Against {
			row(r.Study.Appraisers[i], a)
		}
		if len(r.Agreement.Against) > 1 {
			row(together, *r.Agreement.All)
		}
		return withoutRates(r, t)
	}
	t.Columns = append(t.Columns, Column{Name: "verdict"}, Column{Name: "data"})
	t.Note += " Verdict: the worst of the appraiser's criteria that count. " + evidenceNote
	for i, a := range r.Agreement.Against {
		v := r.Verdict.Appraisers[i]
		row(r.Study.Appraisers[i], a, say(v.Verdict.String()), say(evidenceWord(v)))
	}
	if len(r.Agreement.Against) > 1 {
		row(together, *r.Agreement.All, say(""), say(""))
	}
	return withoutRates(r, t)
}

// errorsTable gives the counts behind the rates.
func errorsTable(r *Record) Table {
	t := Table{
		Name:  "errors",
		Title: "Counts behind the rates",
		Columns: []Column{{Name: "appraiser"}, {Name: "parts right", Numbers: true, Of: "parts called"}, {Name: "misses", Numbers: true, Of: "calls on bad parts"}, {Name: "effective bad calls", Numbers: true},
			{Name: "false alarms", Numbers: true, Of: "calls on good parts"}, {Name: "effective good calls", Numbers: true}},
		Note: "Misses of the calls on bad parts, false alarms of those on good parts. Effective: how many independent calls they are worth, since calls on one part are alike.",
	}
	worth := func(s agreement.Share) Cell {
		if s.Absent != nil {
			return dashFor(s.Absent)
		}
		return valueCell(fmt.Sprintf("%.1f", s.Effective), s.Effective)
	}
	row := func(name string, a agreement.Against) {
		t.Rows = append(t.Rows, []Cell{say(name), ofCell(a.Effectiveness), ofCell(a.Miss), worth(a.Miss), ofCell(a.FalseAlarm), worth(a.FalseAlarm)})
	}
	for i, a := range r.Agreement.Against {
		row(r.Study.Appraisers[i], a)
	}
	if len(r.Agreement.Against) > 1 {
		row(together, *r.Agreement.All)
	}
	return withoutRates(r, t)
}

// detectionTable gives the detection indices; empty where nothing is
// acceptable, and bad is not told from good.
func detectionTable(r *Record) Table {
	t := Table{
		Name:    "detection",
		Title:   "How well bad is told from good",
		Columns: []Column{{Name: "appraiser"}, {Name: "d′", Numbers: true}, {Name: "criterion", Numbers: true}},
		Note:    "d′: how far calls on bad and on good parts lie apart; criterion: below 0 leans to rejecting, above 0 to accepting. In brackets the two-sided " + format.Confidence(r.Options.Confidence) + " interval.",
	}
	if !r.Study.Ratings.HasAccept() {
		return t
	}
	if r.Areas != nil {
		t.Columns = append(t.Columns, Column{Name: "ROC area", Numbers: true})
		t.Note += " ROC area: how often a bad part gets a worse grade than a good one."
	}
	for i, name := range r.Study.Appraisers {
		row := []Cell{say(name), dashFor(r.NoDetection[i]), dashFor(r.NoDetection[i])}
		if d := r.Detection[i]; d != nil {
			row[1], row[2] = areaCell(&d.DPrime, nil), areaCell(&d.Criterion, nil)
		}
		if r.Areas != nil {
			row = append(row, areaCell(r.Areas[i], r.NoArea[i]))
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}

func areaCell(e *signal.Estimate, none error) Cell {
	if e == nil {
		return dashFor(none)
	}
	c := Cell{Text: format.Figure(e.Value), Value: e.Value}
	if e.HasLower && e.HasUpper {
		i := interval.Interval{Lower: e.Lower, Upper: e.Upper}
		c.Text += " " + format.FigureRange(i)
		c.Bounded, c.Lower, c.Upper = true, e.Lower, e.Upper
	} else if e.Why != "" {
		c.Why = []string{"No interval: " + e.Why}
	}
	return c
}

// withoutRates leaves out the columns in which nothing stands, where no
// category is acceptable: such a study has no misses and no false alarms.
func withoutRates(r *Record, t Table) Table {
	if r.Study.Ratings.HasAccept() {
		return t
	}
	out := t
	out.Columns, out.Rows = nil, make([][]Cell, len(t.Rows))
	for i, c := range t.Columns {
		empty := i > 0
		for _, row := range t.Rows {
			empty = empty && (row[i].Text == format.Dash || row[i].Text == "")
		}
		if empty {
			continue
		}
		out.Columns = append(out.Columns, c)
		for j, row := range t.Rows {
			out.Rows[j] = append(out.Rows[j], row[i])
		}
	}
	return out
}

// crossTables gives the calls of each appraiser by the reference.
func crossTables(r *Record) []Table {
	var out []Table
	for a, g := range r.Agreement.Against {
		t := crossTable(r, g.Table)
		t.Name = fmt.Sprintf("calls %d", a+1)
		t.Title = "Calls of " + r.Study.Appraisers[a] + " by reference"
		out = append(out, t)
	}
	if len(out) > 1 {
		t := crossTable(r, r.Agreement.All.Table)
		t.Name, t.Title = "calls of all", "Calls of all together by reference"
		out = append(out, t)
	}
	return out
}

func crossTable(r *Record, x agreement.Table) Table {
	t := Table{Columns: []Column{{Name: "call"}}}
	for _, c := range r.Study.Categories {
		t.Columns = append(t.Columns, Column{Name: "truly " + c, Numbers: true})
	}
	t.Columns = append(t.Columns, Column{Name: "calls", Numbers: true})
	sums := make([]int, len(r.Study.Categories))
	row := func(name string, counts []int) {
		cells, sum := []Cell{say(name)}, 0
		for _, n := range counts {
			cells = append(cells, intCell(n))
			sum += n
		}
		t.Rows = append(t.Rows, append(cells, intCell(sum)))
	}
	for k, c := range r.Study.Categories {
		row(c, x[k])
		for j, n := range x[k] {
			sums[j] += n
		}
	}
	row("calls", sums)
	return t
}

// directionTable gives the tests of direction.
func directionTable(r *Record) Table {
	t := Table{
		Name:    "direction",
		Title:   "Do the errors lean one way?",
		Keys:    2,
		Columns: []Column{{Name: "appraiser"}, {Name: "test"}, {Name: "statistic", Numbers: true, Of: "wrong calls"}, {Name: "degrees of freedom", Numbers: true}, {Name: "p", Numbers: true}},
	}
	add := func(who, name string, table agreement.Table, test *agreement.Test) {
		if test == nil {
			return
		}
		df := say("") // an exact test has none
		if test.DF > 0 {
			df = intCell(test.DF)
		}
		statistic := valueCell(fmt.Sprintf("%.2f", test.Statistic), test.Statistic)
		if test.DF == 0 { // the exact test has counts
			statistic = countCell(int(test.Statistic), table[0][1]+table[1][0])
		}
		t.Rows = append(t.Rows, []Cell{say(who), say(name), statistic, df, valueCell(format.Probability(test.P), test.P)})
	}
	made := func(name string) bool {
		return slices.ContainsFunc(t.Rows, func(row []Cell) bool { return row[1].Text == name })
	}
	tests := func(who string, g agreement.Against) {
		add(who, "McNemar, exact", g.Table, g.McNemar)
		add(who, "Bowker", g.Table, g.Bowker)
		add(who, "Stuart–Maxwell", g.Table, g.StuartMaxwell)
	}
	for a, g := range r.Agreement.Against {
		tests(r.Study.Appraisers[a], g)
	}
	if len(r.Agreement.Against) > 1 {
		tests(together, *r.Agreement.All)
	}
	t.Note = "The tests take calls as independent; with several calls on a part p is too small."
	if made("Bowker") || made("Stuart–Maxwell") {
		t.Note = "Bowker's test asks whether each two categories are taken for each other as often one way as the other; Stuart–Maxwell's whether each is called as often as it is true. A small p: no. " + t.Note
	}
	if made("McNemar, exact") {
		t.Note = "McNemar's test: a small p says that the calls differ from the reference more often one way than the other; its statistic is the wrong calls of the rarer way, of all wrong calls. " + t.Note
	}
	return t
}

// manyParts is how many parts are named in a list before it is cut.
const manyParts = 40

// partsTable names the parts that were wrong every time or mixed.
func partsTable(r *Record) Table {
	t := Table{Name: "parts", Title: "Parts to look at", Keys: 2, Columns: []Column{{Name: "appraiser"}, {Name: "what"}, {Name: "parts", Numbers: true}, {Name: "which", Long: true}}}
	add := func(name, what string, list []int) {
		if len(list) > 0 {
			t.Rows = append(t.Rows, []Cell{say(name), say(what), intCell(len(list)), say(partList(r, list))})
		}
	}
	for a, w := range r.Agreement.Within {
		if r.Agreement.All != nil {
			add(r.Study.Appraisers[a], "wrong every time", r.Agreement.Against[a].WrongEveryTime)
		}
		add(r.Study.Appraisers[a], "mixed", w.Mixed)
	}
	if all := r.Agreement.All; all != nil && len(r.Study.Appraisers) > 1 {
		add(together, "wrong every time", all.WrongEveryTime)
		add(together, "mixed", all.Mixed)
	}
	for _, l := range parting(r) {
		onlyA, onlyB := r.Parted(l)
		a, b := r.Study.Appraisers[l.A], r.Study.Appraisers[l.B]
		add(a, "rejects, "+b+" accepts", onlyA)
		add(b, "rejects, "+a+" accepts", onlyB)
	}
	return t
}

func partList(r *Record, list []int) string {
	more := ""
	if len(list) > manyParts {
		more = fmt.Sprintf(", and %s more", format.Count(len(list)-manyParts))
		list = list[:manyParts]
	}
	return strings.Join(parts(r, list), ", ") + more
}
