package report

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"samecall/agreement/interval"
	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/verdict"
)

// The tables of this file and of zone_rest.go hold what the others leave out,
// so that the outputs with every table say all that the JSON says.

// restsTable says what each criterion rests on: how many parts, and both
// one-sided limits, of which the table of criteria has the one that decides.
func restsTable(r *Record) Table {
	t := Table{
		Name:  "one-sided limits",
		Title: "What each criterion rests on",
		Keys:  2,
		Columns: []Column{{Name: "appraiser"}, {Name: "figure"}, {Name: "parts", Numbers: true}, {Name: "kind"},
			{Name: "one-sided: at least", Numbers: true}, {Name: "one-sided: at most", Numbers: true}},
		Note: fmt.Sprintf("Each limit holds for itself at %s confidence; the two together hold less often.", format.Confidence(r.Options.Confidence)),
	}
	add := func(name, figure string, c verdict.Criterion) {
		none := dashFor(cmp.Or(c.Estimate.Absent, c.Estimate.Unbounded))
		least, most := none, none
		if e := c.Estimate; e.Absent == nil && e.Unbounded == nil {
			least, most = valueCell(c.Exact(e.OneSided.Lower), e.OneSided.Lower), valueCell(c.Exact(e.OneSided.Upper), e.OneSided.Upper)
		}
		t.Rows = append(t.Rows, []Cell{say(name), say(figure), intCell(c.Parts), say(c.Kind), least, most})
	}
	if r.Agreement.All != nil {
		for _, a := range r.Verdict.Appraisers {
			for _, c := range a.Criteria {
				add(a.Name, c.Label(), c)
			}
		}
	}
	if b := r.Verdict.Between; b != nil {
		add("between", "kappa", *b)
	}
	return t
}

// figureOf is an estimate of a document: what it is and whose. The figures of
// acceptance curves are in the unit of the study.
type figureOf struct {
	figure, of string
	kind       string // the figure without the name of a category
	share      bool   // it is a share or a rate
	estimateJSON
}

// every returns every estimate of a document.
func (d document) every() []figureOf {
	var out []figureOf
	add := func(figure, of string, e *estimateJSON) {
		if e != nil {
			out = append(out, figureOf{figure: figure, of: of, kind: figure, estimateJSON: *e})
		}
	}
	share := func(figure, of string, s shareJSON) {
		out = append(out, figureOf{figure: figure, of: of, kind: figure, share: true, estimateJSON: s.estimateJSON})
	}
	categories := func(figure, of string, kappas []categoryJSON) {
		if len(kappas) < 3 {
			return // either is the kappa of the whole
		}
		for _, c := range kappas {
			out = append(out, figureOf{figure: fmt.Sprintf(figure, c.Category), of: of, kind: fmt.Sprintf(figure, "a category"), estimateJSON: c.Kappa})
		}
	}
	weighted := func(of string, w weightedJSON) {
		add("kappa, linear weights", of, w.Linear)
		add("kappa, quadratic weights", of, w.Quadratic)
	}
	for _, w := range d.Within {
		share("parts alike within", w.Appraiser, w.Share)
		add("kappa over trials", w.Appraiser, &w.Kappa)
	}
	for _, p := range d.Between.Pairs {
		of := p.Appraisers[0] + " and " + p.Appraisers[1]
		share("parts alike of a pair", of, p.Share)
		add("kappa of a pair", of, &p.Kappa)
		weighted(of, p.weightedJSON)
	}
	b := d.Between
	share("parts alike", together, b.Share)
	add("Fleiss' kappa", together, &b.Fleiss)
	add("Gwet's AC1", together, &b.AC1)
	add("Krippendorff's alpha", together, &b.Alpha)
	add("kappa within appraisers", together, &b.SameAppraiser)
	add("kappa between appraisers", together, &b.DifferentAppraisers)
	categories("Fleiss' kappa of %s", together, b.Categories)
	against := func(of string, a againstAllJSON) {
		share("effectiveness", of, a.Effectiveness)
		share("miss rate", of, a.Miss)
		share("false-alarm rate", of, a.FalseAlarm)
		add("kappa against the reference", of, &a.Kappa)
		weighted(of+" and reference", a.weightedJSON)
		categories("kappa of %s against the reference", of, a.Categories)
	}
	for _, a := range d.Against.Appraisers {
		against(a.Appraiser, a.againstAllJSON)
		add("d′", a.Appraiser, a.DPrimeInterval)
		add("criterion", a.Appraiser, a.CriterionInterval)
		add("ROC area", a.Appraiser, a.ROCArea)
	}
	if a := d.Against.All; a != nil {
		against(together, *a)
	}
	return out
}

// curves returns every estimate of the curves of a document.
func (d document) curves() []figureOf {
	var out []figureOf
	limit := func(of string, side string, l *curveLimitJSON) {
		if l == nil {
			return
		}
		of += " (" + side + " limit)"
		for _, f := range []struct {
			figure string
			e      *estimateJSON
		}{{"cut", l.Cut}, {"cut − limit", l.Offset}, {"σ", l.Sigma}, {"grey zone of tolerance", l.ShareOfTolerance}, {"accepted at the limit", l.AcceptedAtLimit}} {
			if f.e != nil {
				out = append(out, figureOf{figure: f.figure, of: of, kind: f.figure, estimateJSON: *f.e})
			}
		}
	}
	c := d.Zone.Curve
	if c == nil {
		return nil
	}
	limit("all appraisers", "lower", c.Lower)
	limit("all appraisers", "upper", c.Upper)
	for _, a := range c.Appraisers {
		limit(a.Appraiser, "lower", a.Lower)
		limit(a.Appraiser, "upper", a.Upper)
	}
	if c.Lapse != nil {
		out = append(out, figureOf{figure: "lapse rate", of: "all appraisers", kind: "lapse rate", estimateJSON: *c.Lapse})
	}
	return out
}

// standardErrorsTable gives every kappa, coefficient and index with its
// standard error.
func standardErrorsTable(d document) Table {
	t := Table{
		Name:    "standard errors",
		Title:   "Kappas, coefficients and indices with their standard errors",
		Keys:    2,
		Columns: []Column{{Name: "figure"}, {Name: "of"}, {Name: "found", Numbers: true}, {Name: "standard error", Numbers: true}},
		Note:    "Linearised over parts. The intervals of kappas do not rest on them where parts were resampled.",
	}
	for _, e := range d.every() {
		if e.Estimate == nil || e.share {
			continue
		}
		found, se := valueCell(format.Figure(*e.Estimate), *e.Estimate), dash("nothing disagreed, or but one part counts")
		if e.Lower != nil && e.Upper != nil {
			found.Text += " " + format.FigureRange(interval.Interval{Lower: *e.Lower, Upper: *e.Upper})
			found.Bounded, found.Lower, found.Upper = true, *e.Lower, *e.Upper
		}
		if e.StandardError != nil {
			se = valueCell(format.Short(*e.StandardError), *e.StandardError)
		}
		t.Rows = append(t.Rows, []Cell{say(e.figure), say(e.of), found, se})
	}
	return t
}

// methodsTable says which intervals were found by which method, and how many.
func methodsTable(d document) Table {
	t := Table{
		Name:    "intervals",
		Title:   "How the intervals were found",
		Columns: []Column{{Name: "method", Long: true}, {Name: "intervals", Numbers: true}, {Name: "of", Long: true}},
	}
	kinds, count := make(map[string][]string), make(map[string]int)
	var methods []string
	for _, e := range append(d.every(), d.curves()...) {
		if e.Method == "" {
			continue
		}
		if count[e.Method] == 0 {
			methods = append(methods, e.Method)
		}
		if count[e.Method]++; !slices.Contains(kinds[e.Method], e.kind) {
			kinds[e.Method] = append(kinds[e.Method], e.kind)
		}
	}
	for _, m := range methods {
		t.Rows = append(t.Rows, []Cell{say(m), intCell(count[m]), say(strings.Join(kinds[m], ", "))})
	}
	return t
}

// absentTable says why figures, or ends of their intervals, are absent.
func absentTable(r *Record, d document) Table {
	t := Table{
		Name:    "not known",
		Title:   "What is not known, and why",
		Columns: []Column{{Name: "figure"}, {Name: "of", Long: true}, {Name: "why", Long: true}},
	}
	of := make(map[[2]string][]string)
	var order [][2]string
	add := func(figure, whose, why string) {
		if why == "" {
			return
		}
		key := [2]string{figure, why}
		if of[key] == nil {
			order = append(order, key)
		}
		of[key] = append(of[key], whose)
	}
	for _, e := range append(d.every(), d.curves()...) {
		add(e.figure, e.of, e.Reason)
	}
	add("figures against the reference", together, d.Against.Reason)
	for _, a := range r.Verdict.Appraisers {
		for _, c := range a.Criteria {
			if c.Estimate.Absent != nil && d.Against.Reason == "" {
				add(c.Label()+", as a criterion", a.Name, c.Estimate.Absent.Error())
			}
		}
	}
	if b := d.Verdict.Between; b != nil {
		add("kappa between appraisers, as a criterion", together, b.Reason)
	}
	add("grey zone", "all appraisers", d.Zone.Reason)
	if u := d.Zone.Unanimous; u != nil {
		add("unanimous zone", "all appraisers", u.Reason)
		if u.Lower != nil {
			add("unanimous zone, lower limit", "all appraisers", u.Lower.Reason)
		}
		if u.Upper != nil {
			add("unanimous zone, upper limit", "all appraisers", u.Upper.Reason)
		}
	}
	if c := d.Zone.Curve; c != nil {
		add("acceptance curve", "all appraisers", c.Reason)
		limit := func(whose, side string, l *curveLimitJSON) {
			if l != nil {
				add("acceptance curve, "+side+" limit", whose, l.Reason)
			}
		}
		limit("all appraisers", "lower", c.Lower)
		limit("all appraisers", "upper", c.Upper)
		for _, a := range c.Appraisers {
			add("acceptance curve", a.Appraiser, a.Reason)
			limit(a.Appraiser, "lower", a.Lower)
			limit(a.Appraiser, "upper", a.Upper)
		}
	}
	for _, key := range order {
		t.Rows = append(t.Rows, []Cell{say(key[0]), say(named(of[key])), say(key[1])})
	}
	return t
}
