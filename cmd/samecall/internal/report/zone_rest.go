package report

import (
	"cmp"
	"fmt"
	"strings"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
	"samecall/signal"
)

const grr = "%GRR"

// unanimousTable gives the zone between always rejected and always accepted.
func unanimousTable(r *Record) Table {
	t := Table{
		Name:  "unanimous",
		Title: "Unanimous zone",
		Columns: []Column{{Name: "limit"}, {Name: "rejected to", Numbers: true}, {Name: "accepted from", Numbers: true}, {Name: "wide", Numbers: true},
			{Name: "mixed parts", Numbers: true}, {Name: "σ", Numbers: true}, {Name: grr, Numbers: true}},
	}
	if r.Zone == nil {
		return t
	}
	s, u := r.Scale(), r.Zone.Unanimous
	t.Title = inUnit(t.Title, s)
	value := func(x float64) Cell { return valueCell(s.Value(x), x) }
	percent := func(has bool, x float64) Cell {
		if !has {
			return dash(cmp.Or(u.Why, needsBothLimits))
		}
		return valueCell(fmt.Sprintf("%.0f %%", x), x)
	}
	found := 0
	for _, l := range judge.GreyLimits(r.Zone) {
		row := []Cell{say(l.Side.String())}
		if z := l.Unanimous; z.Found {
			found++
			row = append(row, value(z.Reject), value(z.Accept), value(z.Width), intCell(z.Mixed), value(l.Sigma), percent(l.HasTolerance, l.PercentGRR[0]))
		} else {
			for range 6 {
				row = append(row, dash(z.Why))
			}
		}
		t.Rows = append(t.Rows, row)
	}
	if u.Found && found > 1 {
		t.Rows = append(t.Rows, []Cell{say("mean"), say(""), say(""), value(u.MeanWidth), say(""), value(u.Sigma), percent(u.HasGRR, u.PercentGRR)})
	}
	t.Note = fmt.Sprintf("From the last part always rejected to the first always accepted, taken as %s σ.", format.Number(u.Spread))
	if u.HasGRR {
		t.Note += fmt.Sprintf(" %%GRR is 6 σ over the tolerance; the mean is %s by common practice (below 10 good, to 30 conditional).", signal.BandGRR(u.PercentGRR))
	}
	if !u.Found && u.Why != "" {
		t.Note += " " + sentence(u.Why)
	}
	return t
}

// curveLimitsTable gives every figure of the curve of all appraisers.
func curveLimitsTable(r *Record) Table {
	if r.Zone == nil || r.Zone.Curves == nil {
		return Table{}
	}
	g := &judge.Grey{Result: r.Result}
	for _, l := range limitsOf(r.Zone.Curves.Pooled, r.Zone.Curves.Pooled) {
		fit := limitAt(r.Zone.Curves.Pooled, l.side)
		g.Limits = append(g.Limits, judge.GreyLimit{Side: l.side, Limit: fit.Limit, Curve: fit})
	}
	return greyLimitsTable(g)
}

func limitAt(c *signal.Curve, side signal.Side) *signal.LimitFit {
	if side == signal.Lower {
		return c.Lower
	}
	return c.Upper
}

// curvesTable gives what cuts and zones leave out of each appraiser's own
// curve; empty with one appraiser.
func curvesTable(r *Record) Table {
	t := Table{Name: "curves", Title: "Each appraiser's own acceptance curve", Keys: 2, Columns: []Column{{Name: "appraiser"}, {Name: "limit"},
		{Name: "cut", Numbers: true}, {Name: "grey zone of tolerance", Numbers: true}, {Name: "accepted at the limit", Numbers: true}}}
	if r.Zone == nil || r.Zone.Curves == nil || len(r.Study.Appraisers) < 2 {
		return t
	}
	s, all := r.Scale(), r.Zone.Curves
	t.Title = inUnit(t.Title, s)
	for a, own := range all.Each {
		for _, l := range limitsOf(own, all.Pooled) {
			cells := []Cell{l.none, l.none, l.none}
			if own == nil {
				cells[0] = dashFor(all.Errors[a])
			}
			if l.fit != nil {
				cells = []Cell{placeCell(s, l.fit, l.fit.Cut, s.Value), dash(needsBothLimits), atLimitCell(s, l.fit)}
				if l.fit.HasShare {
					cells[1] = zoneShare(l.fit)
				}
			}
			t.Rows = append(t.Rows, append([]Cell{say(r.Study.Appraisers[a]), say(l.side.String())}, cells...))
		}
	}
	return t
}

// gapsTable tells of the limits where the calls do not overlap, and between
// which values they turn there.
func gapsTable(r *Record) Table {
	t := Table{Name: "gaps", Title: "Limits where rejected and accepted parts do not overlap", Keys: 2, Columns: []Column{{Name: "calls of"}, {Name: "limit"},
		{Name: "kind"}, {Name: "rejected to", Numbers: true}, {Name: "accepted from", Numbers: true}, {Name: "mixed at", Numbers: true}},
		Note: "The grey zone is narrower than the gap."}
	if r.Zone == nil || r.Zone.Curves == nil {
		return t
	}
	s, all := r.Scale(), r.Zone.Curves
	t.Title = inUnit(t.Title, s)
	value := func(has bool, x float64) Cell {
		if !has {
			return say("")
		}
		return valueCell(s.Value(x), x)
	}
	add := func(who string, c *signal.Curve) {
		if c == nil {
			return
		}
		for _, l := range []*signal.LimitFit{c.Lower, c.Upper} {
			if l == nil || l.Status == signal.Fitted {
				continue
			}
			gap := signal.Gap{}
			if l.Gap != nil {
				gap = *l.Gap
			}
			kind := say(l.Status.String())
			if l.Why != "" {
				kind.Why = []string{strings.ToUpper(kind.Text[:1]) + kind.Text[1:] + ": " + l.Why}
			}
			t.Rows = append(t.Rows, []Cell{say(who), say(l.Side.String()), kind,
				value(gap.HasReject, gap.Reject), value(gap.HasAccept, gap.Accept), value(gap.HasMixed, gap.Mixed)})
		}
	}
	add("all appraisers", all.Pooled)
	for a, own := range all.Each {
		if len(all.Each) > 1 {
			add(r.Study.Appraisers[a], own)
		}
	}
	return t
}

// curveErrorsTable gives the standard errors of the curves' figures.
func curveErrorsTable(r *Record) Table {
	t := Table{Name: "curve errors", Title: "Standard errors of acceptance curves", Keys: 2, Columns: []Column{{Name: "calls of"}, {Name: "limit"},
		{Name: "cut", Numbers: true}, {Name: "σ", Numbers: true}, {Name: "grey zone of tolerance", Numbers: true}, {Name: "accepted at the limit", Numbers: true}},
		Note: "From the likelihood, in the unit of the values and, of shares, as fractions. Where rejected and accepted parts do not overlap there are none."}
	if r.Zone == nil || r.Zone.Curves == nil {
		return t
	}
	all := r.Zone.Curves
	add := func(who string, c *signal.Curve) {
		for _, l := range limitsOf(c, all.Pooled) {
			if l.fit == nil {
				continue
			}
			row, has := []Cell{say(who), say(l.side.String())}, false
			for _, e := range []signal.Estimate{l.fit.Cut, l.fit.Sigma, l.fit.Share, l.fit.AtLimit} {
				cell := say("")
				if e.SE > 0 {
					cell, has = valueCell(format.Short(e.SE), e.SE), true
				}
				row = append(row, cell)
			}
			if has {
				t.Rows = append(t.Rows, row)
			}
		}
	}
	add("all appraisers", all.Pooled)
	for a, own := range all.Each {
		if len(all.Each) > 1 {
			add(r.Study.Appraisers[a], own)
		}
	}
	return t
}

// curveFitTable says how well the curve fits, and what the tests on it give.
func curveFitTable(r *Record) Table {
	t := Table{Name: "curve fit", Title: "How well the acceptance curve fits, and whether appraisers differ", Columns: []Column{{Name: "figure", Long: true},
		{Name: "statistic", Numbers: true}, {Name: "degrees of freedom", Numbers: true}, {Name: "p", Numbers: true}}}
	if r.Zone == nil || r.Zone.Curves == nil {
		return t
	}
	all := r.Zone.Curves
	c := all.Pooled
	number := func(x float64) Cell { return valueCell(minusFigure(x), x) }
	t.Rows = append(t.Rows, []Cell{say("log-likelihood, " + c.Options.Link.String()), number(c.LogLikelihood), say(""), say("")})
	add := func(what string, statistic float64, df int, p float64) {
		t.Rows = append(t.Rows, []Cell{say(what), number(statistic), intCell(df), valueCell(format.Probability(p), p)})
	}
	l := c.LackOfFit
	if l.Tested {
		add("lack of fit, X²", l.X2, l.DF, l.P)
		t.Rows = append(t.Rows, []Cell{say("its factor, X² by degree of freedom, at least 1"), number(l.Factor), say(""), say("")})
	}
	for _, x := range []struct {
		what string
		test *signal.Test
	}{
		{"all appraisers have the same cuts", &all.SameCut}, {"all appraisers have the same σ", &all.SameSigma},
		{"all appraisers have the same curve", &all.SameCurve}, {"σ is the same at both limits", c.SameSigma},
	} {
		if x.test != nil && x.test.Done {
			add(x.what, x.test.Statistic, x.test.DF, x.test.P)
		}
	}
	switch {
	case l.Tested && !l.Applied: // else zoneNotes says it
		t.Note = "Lack of fit: the intervals are not widened for it."
	case !l.Tested && l.Why != "":
		t.Note = "Lack of fit is not tested: " + l.Why + "."
	}
	t.Note = strings.TrimSpace(t.Note + " The other tests are likelihood-ratio tests; a small p says that they differ.")
	return t
}
