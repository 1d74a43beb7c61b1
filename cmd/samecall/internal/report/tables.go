package report

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"samecall/agreement"
	"samecall/agreement/interval"
	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/verdict"
	"samecall/signal"
)

const together = "all together"

// numberTables are all tables for programs: what was studied first, then the
// findings. Two figures do not share a cell, and every figure has its standard
// error, or the reason why it is absent.
func numberTables(r *Record) []Table {
	d := newDocument(r)
	out := []Table{withCommand(studyTable(r), r), causesTable(r), criteriaTable(r), restsTable(r)}
	if r.Agreement.All != nil {
		out = append(out, againstTable(r, true), errorsTable(r), detectionTable(r))
	}
	out = append(out, zoneTable(r), unanimousTable(r), curveLimitsTable(r), cutsTable(r), zonesTable(r), curvesTable(r), gapsTable(r),
		curveFitTable(r), curveErrorsTable(r), withinTable(r))
	if len(r.Study.Appraisers) > 1 {
		out = append(out, newSquare(r).numbers()...)
		out = append(out, pairsTable(r), leanTable(r), kindsTable(r, r.Agreement.Between.Pairs))
	}
	out = append(out, coefficientsTable(r), weightedTable(r), categoriesTable(r))
	out = append(out, crossTables(r)...)
	out = append(out, directionTable(r), partsTable(r), standardErrorsTable(d), methodsTable(d), absentTable(r, d), callsTable(r))
	return slices.DeleteFunc(out, func(t Table) bool { return len(t.Rows) == 0 })
}

// studyTable says what was studied and decided, and how it came about.
func studyTable(r *Record) Table {
	t := Table{Name: "study", Title: "What was studied", Columns: []Column{{Name: "what"}, {Name: "value", Long: true}}}
	add := func(what, value string) {
		if value != "" {
			t.Rows = append(t.Rows, []Cell{say(what), say(value)})
		}
	}
	number := func(what, text string, value any) {
		t.Rows = append(t.Rows, []Cell{say(what), valueCell(text, value)})
	}
	d := newStudy(r)
	set := r.Study.Settings
	add("title", title(r))
	add("characteristic", set.Characteristic)
	add("gauge", set.Gauge)
	add("limits", limitsText(r))
	add("calibrated size", memberText(r.Scale(), "lower", set.GaugeSizes.Lower))
	add("calibrated size", memberText(r.Scale(), "upper", set.GaugeSizes.Upper))
	parts := format.Count(d.Parts)
	if d.BadParts != nil {
		parts += fmt.Sprintf(": %s bad, %s good", format.Count(*d.BadParts), format.Count(*d.GoodParts))
	}
	if d.BadParts == nil {
		number("parts", parts, d.Parts)
	} else {
		add("parts", parts)
	}
	add("appraisers", strings.Join(r.Study.Appraisers, ", "))
	add("trials", trials(r))
	add("trials of each", trialsOfEach(r))
	number("calls", format.Count(d.Calls), d.Calls)
	if d.Missing > 0 {
		number("missing calls", format.Count(d.Missing), d.Missing)
	}
	categories := strings.Join(r.Study.Categories, ", ")
	if d.Ordered {
		categories += ", from best to worst"
	}
	add("categories", categories)
	add("accepted", strings.Join(d.Accept, ", "))
	add("words that accept", strings.Join(set.Accept, ", "))
	add("words that reject", strings.Join(set.Reject, ", "))
	add("reference", referenceText(r.Study))
	add("verdict", r.Verdict.Overall.String()+carriedBy(r.Verdict))
	number("confidence", format.Confidence(r.Options.Confidence), r.Options.Confidence)
	add("resamples", resamplesText(r))
	add("pairing of trials", r.Options.Pairing.String())
	if r.Zone != nil && r.Zone.Curves != nil {
		sigma := "one σ for both limits"
		if r.Zone.Curves.Pooled.Options.TwoSigmas {
			sigma = "a σ for each limit"
		}
		add("acceptance curve", r.Zone.Curves.Pooled.Options.Link.String()+", "+sigma)
	}
	for _, in := range r.Study.Inputs {
		add("sheet of "+in.File, in.Sheet)
		add("SHA-256 of "+in.File, in.SHA256)
	}
	add("samecall", r.Version)
	return t
}

// withCommand adds the line that computes a record again, for outputs that
// neither break nor escape what stands in a cell.
func withCommand(t Table, r *Record) Table {
	t.Rows = slices.Clip(t.Rows)
	t.Rows = append(t.Rows, []Cell{say(computedBy), say(r.Command)})
	if r.RunIn != "" {
		t.Rows = append(t.Rows, []Cell{say("run in"), say(r.RunIn)})
	}
	return t
}

const computedBy = "computed by"

// aboveCommand is read before the line that computes a record again, where it
// stands on its own.
func aboveCommand(r *Record) string {
	if r.RunIn == "" {
		return "Computed by this line:"
	}
	return "Computed by this line, run in " + r.RunIn + ":"
}

// trialsOfEach lists the trials of each appraiser, where they are not 1, 2 and
// so on of all; empty elsewhere.
func trialsOfEach(r *Record) string {
	plain := true
	var out []string
	for a, numbers := range r.Study.TrialNames {
		var list []string
		for i, n := range numbers {
			plain = plain && n == i+1
			list = append(list, fmt.Sprint(n))
		}
		plain = plain && len(numbers) == len(r.Study.TrialNames[0])
		out = append(out, r.Study.Appraisers[a]+" "+strings.Join(list, ", "))
	}
	if plain {
		return ""
	}
	return strings.Join(out, "; ")
}

// resamplesText says how many resamples the intervals of kappas rest on: those
// that were drawn, not those that were asked for.
func resamplesText(r *Record) string {
	n := r.Agreement.Intervals
	drawn := fmt.Sprintf("%d, seed %d", r.Options.Resamples, r.Options.Seed)
	none := "none"
	if n := r.Options.Resamples; n > 0 {
		none = fmt.Sprintf("none of the %d asked for", n)
	}
	switch {
	case n.Resampled > 0 && n.Linearised > 0:
		return fmt.Sprintf("%s, for %s of %s kappas and coefficients; none for the others (linearised)", drawn, format.Count(n.Resampled), format.Count(n.Resampled+n.Linearised))
	case n.Resampled > 0:
		return drawn
	case n.Linearised > 0:
		return none + " (linearised)"
	}
	return none + " (no interval rests on them)"
}

// causesTable lists causes and what to do next.
func causesTable(r *Record) Table {
	t := Table{Name: "findings", Title: "Findings", Columns: []Column{{Name: "kind"}, {Name: "text", Long: true}}}
	add := func(kind, text string) { t.Rows = append(t.Rows, []Cell{say(kind), say(text)}) }
	for _, why := range reasonLines(r) {
		add("reason", why)
	}
	if each := byAppraiser(r.Verdict); each != "" {
		add("by appraiser", strings.TrimPrefix(each, "By appraiser: "))
	}
	for _, c := range r.Verdict.Causes {
		add("cause", c.Text)
	}
	for _, n := range r.Verdict.Next {
		add("next", n)
	}
	for _, n := range allNotes(r) {
		add("note", n)
	}
	for _, c := range r.Verdict.Cautions {
		add("caution", c)
	}
	return t
}

// allNotes are the sentences to be said with the result.
func allNotes(r *Record) []string {
	var out []string
	out = append(out, zoneNotes(r, onPage)...)
	for _, w := range r.Warnings {
		out = append(out, w.Text)
	}
	return out
}

func shareCell(s agreement.Share) Cell {
	if s.Absent != nil {
		return dashFor(s.Absent)
	}
	return bounded(format.Share(s), s.Estimate)
}

func bounded(text string, e agreement.Estimate) Cell {
	c := Cell{Text: text, Value: e.Value}
	if e.Unbounded == nil {
		c.Bounded, c.Lower, c.Upper = true, e.Interval.Lower, e.Interval.Upper
	} else {
		c.Why = []string{"No interval: " + e.Unbounded.Error()}
	}
	return c
}

// valueCell is a cell with a number behind it.
func valueCell(text string, value any) Cell { return Cell{Text: text, Value: value} }

func kappaCell(e agreement.Estimate) Cell {
	if e.Absent != nil {
		return dashFor(e.Absent)
	}
	return bounded(format.Kappa(e), e)
}

func ofCell(s agreement.Share) Cell {
	if s.Absent != nil {
		return dashFor(s.Absent)
	}
	return countCell(s.Count, s.Of)
}

// countCell is a count of so many.
func countCell(n, of int) Cell {
	return Cell{Text: format.Count(n) + " of " + format.Count(of), Value: n, Of: of}
}

func intCell(n int) Cell { return valueCell(format.Count(n), n) }

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

// levelsFrom says of each criterion who set its levels.
func levelsFrom(r *Record) string {
	c := r.Study.Settings.Criteria
	const manual = "the Measurement Systems Analysis reference manual, 4th ed. 2010 (the default)"
	by := make(map[string][]string)
	for _, x := range []struct {
		label, key string
		own        *[2]float64
	}{{"effectiveness", verdict.Effectiveness, c.Effectiveness}, {"miss rate", verdict.Miss, c.Miss}, {"false-alarm rate", verdict.FalseAlarm, c.FalseAlarm}, {"kappa", verdict.Kappa, c.Kappa}} {
		source := manual
		switch {
		case x.own != nil && r.FlagLevels[x.key]:
			source = "the command line"
		case x.own != nil:
			source = "the study file"
		}
		by[source] = append(by[source], x.label)
	}
	var out []string
	for _, source := range []string{"the command line", "the study file", manual} {
		if of := by[source]; len(of) == 4 {
			out = append(out, "all from "+source)
		} else if len(of) > 0 {
			out = append(out, strings.Join(of, ", ")+" from "+source)
		}
	}
	return "Levels: " + strings.Join(out, "; ") + "."
}

// oneSidedHead heads the limits that answers rest on.
func oneSidedHead(r *Record) string {
	return "one-sided " + format.Confidence(r.Options.Confidence) + " limit"
}

// decidingCell is the one-sided limit that the answer for a criterion rests on.
// For programs it stands in the column of lower or of upper limits.
func decidingCell(c verdict.Criterion) Cell {
	limit, upper, ok := c.Deciding()
	switch {
	case !ok:
		return dashFor(cmp.Or(c.Estimate.Absent, c.Estimate.Unbounded))
	case upper:
		return Cell{Text: "≤ " + c.Exact(limit), Bounded: true, Upper: limit}
	}
	return Cell{Text: "≥ " + c.Exact(limit), Bounded: true, Lower: limit}
}

const moreParts = "parts more to settle it"

// settling says how many parts more would settle a criterion, in fewer words
// than a sentence has: "20 bad"; else why none would. For programs the number
// and the kind of part, or the reason, stand in two columns.
func settling(c verdict.Criterion) Cell {
	text := c.ToSettle()
	if c.More == 0 || text != format.Counted(c.More, c.Kind)+" more" {
		if text == "" {
			return say("")
		}
		return Cell{Text: text, Of: text}
	}
	return Cell{Text: strings.TrimSpace(format.Count(c.More) + " " + strings.TrimSuffix(c.Kind, "part")), Value: c.More, Of: c.Kind}
}

// criteriaTable holds each figure of each appraiser against its levels.
func criteriaTable(r *Record) Table {
	t := Table{
		Name:  "criteria",
		Title: "Criteria",
		Keys:  2,
		Columns: []Column{{Name: "appraiser"}, {Name: "figure", Whole: true}, {Name: "found", Numbers: true}, {Name: "accept", Numbers: true},
			{Name: "conditional", Numbers: true}, {Name: "by estimate"}, {Name: oneSidedHead(r), Numbers: true, Limits: true}, {Name: "data"}, {Name: moreParts, Long: true, Of: "kind of part, or why no more would"}},
		Note: levelsFrom(r) + " " + fmt.Sprintf("One-sided: at %s confidence the truth is at most, or at least, that; it is not an end of the two-sided interval. Shown: that limit, too, meets the level that the estimate meets (of a reject, misses the conditional level). Open: it does not.", format.Confidence(r.Options.Confidence)),
	}
	setAside := false
	add := func(name, figure string, c verdict.Criterion) {
		found, evidence, settle := dashFor(c.Estimate.Absent), "", say("")
		if c.Met != verdict.NotShown {
			found, evidence, settle = valueCell(c.Found(), c.Estimate.Value), c.Shows(), settling(c)
			setAside = setAside || c.Aside != ""
		}
		t.Rows = append(t.Rows, []Cell{say(name), say(figure), found, valueCell(c.Level(c.Levels[0]), c.Levels[0]), valueCell(c.Level(c.Levels[1]), c.Levels[1]), say(c.Met.String()), decidingCell(c), say(evidence), settle})
	}
	if r.Agreement.All != nil { // else nothing is known of any of these
		for _, a := range r.Verdict.Appraisers {
			for _, c := range a.Criteria {
				add(a.Name, c.Label(), c)
			}
		}
	}
	if b := r.Verdict.Between; b != nil {
		add("between", "kappa", *b)
	}
	if setAside {
		t.Note += " Set aside: the verdict does not rest on it, for the reason given."
	}
	return t
}
