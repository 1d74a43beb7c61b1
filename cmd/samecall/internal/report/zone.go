package report

import (
	"fmt"
	"slices"
	"strings"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
	"samecall/signal"
)

// zoneTable says at each limit where the calls turn and how wide the band of
// doubt is.
func zoneTable(r *Record) Table {
	t := Table{
		Name:  "zone",
		Title: "Grey zone: where the calls of all appraisers turn",
		Columns: []Column{{Name: "limit"}, {Name: "at", Numbers: true}, {Name: "cut − limit", Numbers: true}, {Name: "σ", Numbers: true},
			{Name: "grey zone", Numbers: true}, {Name: "of tolerance", Numbers: true}},
	}
	if r.Zone == nil || r.Zone.Curves == nil {
		return t
	}
	s := r.Scale()
	t.Title = inUnit(t.Title, s)
	c := r.Zone.Curves.Pooled
	for _, l := range []*signal.LimitFit{c.Lower, c.Upper} {
		if l == nil || !l.HasLimit {
			continue
		}
		row := []Cell{say(l.Side.String()), valueCell(s.Value(l.Limit), l.Limit)}
		if !l.Known() {
			row = append(row, oneBound(s, l, l.Offset, s.Signed))
			for range 3 {
				row = append(row, noFit(l))
			}
			t.Rows = append(t.Rows, row)
			continue
		}
		cells := zoneCells(s, l)
		sigma, wide, share := cells[0], cells[3], dash(needsBothLimits)
		if widthKnown(l) { // their intervals are in zone
			sigma = valueCell(s.Value(l.Sigma.Value), l.Sigma.Value)
		}
		switch {
		case !l.HasShare:
		case widthKnown(l):
			share = valueCell(format.Percent(l.Share.Value), l.Share.Value)
		case informs(l):
			share = say("under " + format.Percent(l.Share.Upper))
		default:
			share = zoneShare(l)
		}
		t.Rows = append(t.Rows, append(row, placeCell(s, l, l.Offset, s.Signed), sigma, wide, share))
	}
	return t
}

// widthKnown reports whether the calls say how wide the grey zone at a limit
// is, from above and from below.
func widthKnown(l *signal.LimitFit) bool { return informs(l) && l.Sigma.HasLower }

// Where notes on the grey zone stand: on the one screen, which points at the
// command that shows more; on a page, which has no table of the unanimous zone;
// or beside all tables.
type placeOfNotes int

const (
	onScreen placeOfNotes = iota
	onPage
	besideTables
)

// zoneNotes says in sentences what the tables of the grey zone do not; nothing
// of a study without values.
func zoneNotes(r *Record, at placeOfNotes) []string {
	z, screen := r.Zone, at == onScreen
	if z == nil {
		return nil
	}
	s := r.Scale()
	var out []string
	if z.Curves == nil {
		out = append(out, "No acceptance curve: "+z.NoCurve.Error()+".")
	} else {
		c := z.Curves.Pooled
		for _, l := range []*signal.LimitFit{c.Lower, c.Upper} {
			told := screen && l != nil && l.HasLimit && !l.Known() // below the table
			if l != nil && l.Status != signal.Fitted && l.Why != "" && !told {
				out = append(out, "At the "+l.Side.String()+" limit: "+l.Why+".")
			}
		}
		for _, i := range c.Outliers {
			p := c.Parts[i]
			out = append(out, fmt.Sprintf("Part %s at %s does not fit the curve: accepted in %d of %d calls where the other parts make %s expected. The command samecall zone shows the fit without it.",
				p.Name, s.Value(p.Value), p.Accepted, p.Calls, format.Percent(c.ExpectedByOthers(i))))
		}
		if c.LackOfFit.Applied {
			out = append(out, fmt.Sprintf("The parts scatter about the curve more than calls by chance would (factor %.1f); the intervals are widened for it.", c.LackOfFit.Factor))
		}
	}
	if !screen && z.Curves != nil {
		out = append(out, otherWarnings(r)...)
	}
	u := z.Unanimous
	if u.HasGRR && at == besideTables {
		return out // the table says it
	}
	if u.HasGRR {
		var widths []string
		for _, l := range []*signal.Zone{u.Lower, u.Upper} {
			if l != nil && l.Found {
				width := s.Value(l.Width) + " wide at the " + l.Side.String() + " limit"
				if !screen {
					width += fmt.Sprintf(" (%s to %s)", s.Value(min(l.Reject, l.Accept)), s.Value(max(l.Reject, l.Accept)))
				}
				widths = append(widths, width)
			}
		}
		note := fmt.Sprintf("Unanimous zone: %s. As %.2f σ, %%GRR is %.0f %% of the tolerance: %s by common practice (below 10 good, to 30 conditional).",
			strings.Join(widths, ", "), u.Spread, u.PercentGRR, signal.BandGRR(u.PercentGRR))
		if screen {
			note += " See samecall zone."
		}
		out = append(out, note)
	} else if note := gradeOfCurve(z); note != "" {
		out = append(out, note)
	}
	return out
}

// gradeOfCurve grades the grey zone by the curve, where there is no unanimous
// zone to grade; empty where the curve does not tell it either.
func gradeOfCurve(z *judge.Zone) string {
	if z.Unanimous.HasGRR || z.Curves == nil {
		return ""
	}
	worst, known := 0.0, false
	for _, l := range []*signal.LimitFit{z.Curves.Pooled.Lower, z.Curves.Pooled.Upper} {
		if l == nil || !widthKnown(l) {
			continue
		}
		if grr, ok := l.PercentGRR(z.Limits); ok {
			worst, known = max(worst, grr.Value), true
		}
	}
	if !known {
		return ""
	}
	return fmt.Sprintf("By the curve %%GRR, 6 σ of the tolerance, is %.0f %%: %s by common practice (below 10 good, to 30 conditional). %s",
		worst, signal.BandGRR(worst), sentence(z.Unanimous.Why))
}

// otherWarnings are those of the curves that no note tells in other words;
// appraisers who are not compared for the same reason stand together.
func otherWarnings(r *Record) []string {
	all := r.Zone.Curves
	out := curveWarnings(slices.Concat(all.Pooled.Warnings, all.Warnings))
	left := make(map[string][]string)
	var whys []string
	for a, own := range all.Each {
		if slices.Contains(all.Compared, a) {
			continue
		}
		why := "calls do not turn at each limit"
		if own == nil {
			why = all.Errors[a].Error()
		}
		if left[why] == nil {
			whys = append(whys, why)
		}
		left[why] = append(left[why], r.Study.Appraisers[a])
	}
	for _, why := range whys {
		out = append(out, "The tests between appraisers leave out "+named(left[why])+": "+why+".")
	}
	return out
}

// cutsTable says which appraiser cuts where; empty with one appraiser.
func cutsTable(r *Record) Table {
	t := Table{Name: "cuts", Title: "Which appraiser cuts where", Columns: []Column{{Name: "appraiser"}}}
	if r.Zone == nil || r.Zone.Curves == nil || len(r.Study.Appraisers) < 2 {
		return t
	}
	all := r.Zone.Curves
	s := r.Scale()
	sides := []func(c *signal.Curve) *signal.LimitFit{}
	for _, side := range []func(c *signal.Curve) *signal.LimitFit{
		func(c *signal.Curve) *signal.LimitFit { return c.Lower },
		func(c *signal.Curve) *signal.LimitFit { return c.Upper },
	} {
		if l := side(all.Pooled); l != nil && l.HasLimit {
			sides = append(sides, side)
			t.Columns = append(t.Columns, Column{Name: l.Side.String() + ": cut − limit", Numbers: true})
		}
	}
	for a, own := range all.Each {
		row := []Cell{say(r.Study.Appraisers[a])}
		for _, side := range sides {
			cell := dashFor(all.Errors[a])
			if own != nil {
				cell = noFit(side(own))
			}
			if own != nil && side(own).Known() {
				cell = placeCell(s, side(own), side(own).Offset, s.Signed)
			}
			row = append(row, cell)
		}
		t.Rows = append(t.Rows, row)
	}
	t.Note = testNote(all.SameCut, "all appraisers cut alike")
	return t
}

// testNote says what a likelihood-ratio test tells; empty if it was not made.
func testNote(test signal.Test, what string) string {
	if !test.Done {
		return ""
	}
	return "Likelihood-ratio test that " + what + ": p " + format.Probability(test.P) + ". A small p says that they differ."
}

// zonesTable says how wide the grey zone of each appraiser is; empty with one
// appraiser.
func zonesTable(r *Record) Table {
	t := Table{Name: "zones", Title: "How wide each appraiser's grey zone is", Keys: 2, Columns: []Column{{Name: "appraiser"}, {Name: "limit"},
		{Name: "σ", Numbers: true}, {Name: "from", Numbers: true}, {Name: "to", Numbers: true}, {Name: "wide", Numbers: true}}}
	if r.Zone == nil || r.Zone.Curves == nil || len(r.Study.Appraisers) < 2 {
		return t
	}
	s := r.Scale()
	t.Title = inUnit(t.Title, s)
	all := r.Zone.Curves
	for a, own := range all.Each {
		for _, l := range limitsOf(own, all.Pooled) {
			cells := []Cell{l.none, l.none, l.none, l.none}
			if l.fit != nil {
				cells = zoneCells(s, l.fit)
			} else if own == nil {
				cells[0] = dashFor(all.Errors[a])
			}
			t.Rows = append(t.Rows, append([]Cell{say(r.Study.Appraisers[a]), say(l.side.String())}, cells...))
		}
	}
	t.Note = testNote(all.SameSigma, "all have one σ")
	return t
}

// sideFit is the fit at a limit, nil where there is none.
type sideFit struct {
	side signal.Side
	fit  *signal.LimitFit
	none Cell // stands for what the calls do not tell
}

// limitsOf are an appraiser's fits at the limits that the pooled curve has.
func limitsOf(own, pooled *signal.Curve) []sideFit {
	var out []sideFit
	add := func(of *signal.LimitFit, fit func(*signal.Curve) *signal.LimitFit) {
		if of == nil || !of.HasLimit {
			return
		}
		x := sideFit{side: of.Side, none: say(format.Dash)}
		switch {
		case own == nil:
		case fit(own).Known():
			x.fit = fit(own)
		default:
			x.none = noFit(fit(own))
		}
		out = append(out, x)
	}
	add(pooled.Lower, func(c *signal.Curve) *signal.LimitFit { return c.Lower })
	add(pooled.Upper, func(c *signal.Curve) *signal.LimitFit { return c.Upper })
	return out
}

const needsBothLimits = "a share of the tolerance needs both limits"

// noFit is a cell at a limit where the calls do not turn.
func noFit(l *signal.LimitFit) Cell {
	if l == nil || l.Why == "" {
		return say(format.Dash)
	}
	return dash(l.Why)
}

// zoneCells are σ, both ends and the width of a grey zone, no more of it than
// the calls tell: a σ that may be nearly 0 is less than its upper bound, and
// ends that lie anywhere are not known.
func zoneCells(s format.Scale, l *signal.LimitFit) []Cell {
	switch {
	case widthKnown(l):
		return []Cell{boundedCell(s, l.Sigma, s.Value), zoneEnd(s, l, l.From), zoneEnd(s, l, l.To), zoneWidth(s, l, false)}
	case informs(l):
		return []Cell{say("under " + s.Value(l.Sigma.Upper)), say(notKnown), say(notKnown), say("under " + s.Value(l.Width.Upper))}
	}
	return []Cell{say(notKnown), say(notKnown), say(notKnown), zoneWidth(s, l, false)}
}
