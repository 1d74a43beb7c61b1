package report

import (
	"fmt"
	"strings"

	"samecall/cmd/samecall/internal/format"
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
	if s.Unit != "" {
		t.Title += ", in " + s.Unit
	}
	c := r.Zone.Curves.Pooled
	for _, l := range []*signal.LimitFit{c.Lower, c.Upper} {
		if l == nil || !l.HasLimit {
			continue
		}
		row := []Cell{say(l.Side.String()), valueCell(s.Value(l.Limit), l.Limit)}
		if !l.Known() {
			for range 4 {
				row = append(row, say(format.Dash))
			}
			t.Rows = append(t.Rows, row)
			continue
		}
		share := say(format.Dash)
		sigma, width := say(format.Dash), say(format.Dash)
		if drawn(l) {
			sigma, width = valueCell(s.Value(l.Sigma.Value), l.Sigma.Value), valueCell(s.Value(l.Width.Value), l.Width.Value)
		}
		if l.HasShare && drawn(l) {
			share = valueCell(format.Percent(l.Share.Value), l.Share.Value)
		}
		t.Rows = append(t.Rows, append(row,
			offsetCell(s, l.Offset),
			sigma, width, share))
	}
	return t
}

// drawn reports whether calls near a limit draw the curve there: without
// mixed parts, or with a σ that nothing bounds, its width is nobody's finding.
func drawn(l *signal.LimitFit) bool { return l.Status == signal.Fitted && l.Sigma.HasUpper }

// zoneNotes says in sentences what the table of the grey zone cannot.
func zoneNotes(r *Record) []string {
	z := r.Zone
	s := r.Scale()
	var out []string
	if z.Curves == nil {
		out = append(out, "No acceptance curve: "+z.NoCurve.Error()+".")
	} else {
		c := z.Curves.Pooled
		for _, l := range []*signal.LimitFit{c.Lower, c.Upper} {
			if l != nil && l.Status != signal.Fitted && l.Why != "" {
				out = append(out, "At the "+l.Side.String()+" limit: "+l.Why+".")
			}
		}
		for _, i := range c.Outliers {
			p := c.Parts[i]
			out = append(out, fmt.Sprintf("Part %s at %s does not fit the curve: accepted in %d of %d calls where %s is expected. See zone for the fit without it.",
				p.Name, s.Value(p.Value), p.Accepted, p.Calls, format.Percent(p.Fitted)))
		}
		if c.LackOfFit.Applied {
			out = append(out, fmt.Sprintf("The parts scatter about the curve more than calls by chance would (factor %.1f); the intervals are widened for it.", c.LackOfFit.Factor))
		}
	}
	u := z.Unanimous
	if u.HasGRR {
		var widths []string
		for _, l := range []*signal.Zone{u.Lower, u.Upper} {
			if l != nil && l.Found {
				widths = append(widths, s.Value(l.Width)+" wide at the "+l.Side.String()+" limit")
			}
		}
		out = append(out, fmt.Sprintf("Unanimous zone: %s. Taken as %.2f σ it makes %%GRR %.0f %% of the tolerance: %s by common practice (below 10 good, to 30 conditional). The command zone tells how it differs from the curve's.",
			strings.Join(widths, ", "), u.Spread, u.PercentGRR, signal.BandGRR(u.PercentGRR)))
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
	sigmas := sides
	if oneSigma(all) {
		sigmas = sides[:1]
	}
	for _, side := range sigmas {
		name := "σ"
		if len(sigmas) > 1 {
			name += " " + side(all.Pooled).Side.String()
		}
		t.Columns = append(t.Columns, Column{Name: name, Numbers: true})
	}
	for a, own := range all.Each {
		row := []Cell{say(r.Study.Appraisers[a])}
		known := func(side func(c *signal.Curve) *signal.LimitFit) *signal.LimitFit {
			if own == nil || !side(own).Known() {
				return nil
			}
			return side(own)
		}
		for _, side := range sides {
			cell := say(format.Dash)
			if l := known(side); l != nil {
				cell = offsetCell(s, l.Offset)
			}
			row = append(row, cell)
		}
		for _, side := range sigmas {
			cell := say(format.Dash)
			if l := known(side); l != nil {
				cell = valueCell(s.Value(l.Sigma.Value), l.Sigma.Value)
			}
			row = append(row, cell)
		}
		t.Rows = append(t.Rows, row)
	}
	var tests []string
	for _, x := range []struct {
		what string
		test signal.Test
	}{{"same cuts", all.SameCut}, {"same σ", all.SameSigma}} {
		if x.test.Done {
			tests = append(tests, x.what+": p "+format.Probability(x.test.P))
		}
	}
	if len(tests) > 0 {
		t.Note = "Likelihood-ratio tests of all appraisers, " + strings.Join(tests, "; ") + ". A small p says that they differ."
	}
	return t
}

func offsetCell(s format.Scale, e signal.Estimate) Cell {
	c := Cell{Text: s.Estimate(e, s.Signed), Value: e.Value, Bounded: true}
	if e.HasLower {
		c.Lower = e.Lower
	}
	if e.HasUpper {
		c.Upper = e.Upper
	}
	return c
}

// oneSigma reports whether every curve has one σ for its two limits, which
// then is told once.
func oneSigma(all *signal.Appraisers) bool {
	for _, c := range append([]*signal.Curve{all.Pooled}, all.Each...) {
		if c == nil {
			continue
		}
		if !c.Lower.Known() || !c.Upper.Known() || c.Lower.Sigma.Value != c.Upper.Sigma.Value {
			return false
		}
	}
	return true
}
