package report

import (
	"fmt"
	"io"
	"math"
	"strings"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
	"samecall/signal"
)

// Grey writes the grey zone in full. With every, each part is listed, not
// only those near the limits.
func Grey(w io.Writer, g *judge.Grey, term Terminal, every bool) error {
	p := &printer{w: w, term: term}
	r := &Record{Result: g.Result}
	p.head(r)
	some := func(t Table) {
		if len(t.Rows) > 0 {
			p.table(t)
		}
	}
	sentences := func(list []string) {
		for _, s := range list {
			p.wrap(s, "")
		}
	}
	some(greyLimitsTable(g))
	some(greyMembersTable(g))
	sentences(greyMembers(g))
	some(greyMethodsTable(g))
	sentences(WhyTheyDiffer(g))
	some(cutsTable(r))
	some(zonesTable(r))
	some(greyPartsTable(g, every))
	some(greyWithoutTable(g))
	p.line("")
	sentences(greyFit(g))
	p.line("")
	sentences(greyCautions)
	p.warnings(r)
	return p.err
}

// greyLimitsTable gives every figure of the curve at each limit.
func greyLimitsTable(g *judge.Grey) Table {
	s := g.Result.Scale()
	t := Table{Name: "limits", Title: inUnit("Acceptance curve at each limit, calls of all appraisers", s), Columns: []Column{{Name: "figure", Long: true}}}
	if g.Result.Zone.Curves == nil {
		return Table{}
	}
	rows := []struct {
		name string
		cell func(judge.GreyLimit) Cell
	}{
		{"limit", func(l judge.GreyLimit) Cell { return valueCell(s.Value(l.Limit), l.Limit) }},
		{rowCut, func(l judge.GreyLimit) Cell { return placeCell(s, l.Curve, l.Curve.Cut, s.Value) }},
		{rowOffset, func(l judge.GreyLimit) Cell { return placeCell(s, l.Curve, l.Curve.Offset, s.Signed) }},
		{"σ", func(l judge.GreyLimit) Cell {
			if !informs(l.Curve) {
				return say(notKnown)
			}
			return boundedCell(s, l.Curve.Sigma, s.Value)
		}},
		{"grey zone from", func(l judge.GreyLimit) Cell { return zoneEnd(s, l.Curve, l.Curve.From) }},
		{"grey zone to", func(l judge.GreyLimit) Cell { return zoneEnd(s, l.Curve, l.Curve.To) }},
		{"wide", func(l judge.GreyLimit) Cell { return zoneWidth(s, l.Curve, true) }},
		{"of tolerance", func(l judge.GreyLimit) Cell {
			if !l.Curve.HasShare {
				return dash(needsBothLimits)
			}
			return zoneShare(l.Curve)
		}},
		{"accepted at the limit itself", func(l judge.GreyLimit) Cell { return atLimitCell(s, l.Curve) }},
	}
	for _, row := range rows {
		cells := []Cell{say(row.name)}
		for _, l := range g.Limits {
			switch {
			case row.name == "limit" || l.Curve.Known():
				cells = append(cells, row.cell(l))
			case row.name == rowCut:
				cells = append(cells, oneBound(s, l.Curve, l.Curve.Cut, s.Value))
			case row.name == rowOffset:
				cells = append(cells, oneBound(s, l.Curve, l.Curve.Offset, s.Signed))
			default:
				cells = append(cells, noFit(l.Curve))
			}
		}
		t.Rows = append(t.Rows, cells)
	}
	for _, l := range g.Limits {
		name := l.Side.String()
		if l.Curve.Known() && l.Curve.Status != signal.Fitted {
			name += ", bias-reduced"
		}
		t.Columns = append(t.Columns, Column{Name: name, Numbers: true})
	}
	t.Note = fmt.Sprintf("The grey zone runs from 0.5 to 99.5 %% acceptance. In brackets the %s interval, by profile likelihood.", format.Confidence(g.Result.Options.Confidence))
	if who := outlierNames(g); who != "" {
		t.Note += fmt.Sprintf(" The calls on %s do not fit this curve, and may make it flatter: the fit without them stands below.", who)
	}
	return t
}

// greyMethodsTable sets the unanimous zone beside that of the curve.
func greyMethodsTable(g *judge.Grey) Table {
	s := g.Result.Scale()
	u := g.Result.Zone.Unanimous
	t := Table{
		Name: "methods", Title: inUnit("Both methods side by side", s),
		Columns: []Column{{Name: "limit"}, {Name: "method"}, {Name: "rejected to", Numbers: true}, {Name: "accepted from", Numbers: true},
			{Name: "wide", Numbers: true}, {Name: "σ", Numbers: true}, {Name: "%GRR", Numbers: true}},
	}
	add := func(limit, method string, cells ...Cell) {
		t.Rows = append(t.Rows, append([]Cell{say(limit), say(method)}, cells...))
	}
	value := func(x float64) Cell { return valueCell(s.Value(x), x) }
	grr := func(has bool, x float64) Cell {
		if !has {
			return say(format.Dash)
		}
		return valueCell(fmt.Sprintf("%.0f %%", x), x)
	}
	none := say(format.Dash)
	for _, l := range g.Limits {
		if z := l.Unanimous; z.Found {
			add(l.Side.String(), "unanimous", value(z.Reject), value(z.Accept), value(z.Width), value(l.Sigma), grr(l.HasTolerance, l.PercentGRR[0]))
		} else {
			add(l.Side.String(), "unanimous", none, none, none, none, none)
		}
		if c := l.Curve; c.Known() {
			from, to := c.From, c.To
			if l.Side == signal.Upper {
				from, to = to, from
			}
			sigma, share := say(notKnown), none
			if informs(c) {
				sigma, share = value(c.Sigma.Value), grr(l.HasTolerance, l.PercentGRR[1])
			}
			add(l.Side.String(), "curve", zoneEnd(s, c, from), zoneEnd(s, c, to), zoneWidth(s, c, false), sigma, share)
		} else {
			add(l.Side.String(), "curve", none, none, none, none, none)
		}
	}
	if u.Found && len(g.Limits) > 1 {
		add("mean", "unanimous", say(""), say(""), value(u.MeanWidth), value(u.Sigma), grr(u.HasGRR, u.PercentGRR))
	}
	note := []string{fmt.Sprintf("Unanimous: from the last part always rejected to the first always accepted, taken as %s σ. Curve: from 0.5 to 99.5 %% acceptance.", format.Number(u.Spread))}
	if u.HasGRR {
		note = append(note, fmt.Sprintf("%%GRR is 6 σ over the tolerance; the mean, %.0f %%, is %s by common practice (below 10 good, to 30 conditional).", u.PercentGRR, signal.BandGRR(u.PercentGRR)))
	}
	if grade := gradeOfCurve(g.Result.Zone); grade != "" {
		note = append(note, grade)
	}
	t.Note = strings.Join(note, " ")
	return t
}

// manyRows is how many parts are listed near the limits.
const manyRows = 60

// greyPartsTable lists the parts beside the curve.
func greyPartsTable(g *judge.Grey, every bool) Table {
	s := g.Result.Scale()
	t := Table{
		Name: "fit", Title: "Parts beside the curve",
		Columns: []Column{{Name: "part"}, {Name: "value", Numbers: true}, {Name: "accepted", Numbers: true}, {Name: "fitted", Numbers: true},
			{Name: "residual", Numbers: true}, {Name: "without it: cut", Numbers: true}, {Name: "σ", Numbers: true}, {Name: "note", Long: true}},
	}
	if len(g.Rows) == 0 {
		return Table{}
	}
	var values []float64
	for _, r := range g.Rows {
		values = append(values, r.Value)
	}
	limits := g.Result.Zone.Limits
	finer := s
	finer.Decimals++
	written := format.Alike(values...)
	left, more := 0, 0
	for i, r := range g.Rows {
		switch {
		case every || r.Matters && len(t.Rows) < manyRows:
		case r.Matters:
			more++
			continue
		default:
			left++
			continue
		}
		var notes []string
		if r.Outlier {
			notes = append(notes, "does not fit the curve")
		}
		if r.Drives {
			notes = append(notes, "drives the fit")
		}
		if !limits.Inside(r.Value) {
			notes = append(notes, "bad")
		}
		fitted, residual := say(format.Dash), say(format.Dash)
		if r.NoCut {
			notes = append(notes, "no cut here")
		} else {
			fitted, residual = valueCell(format.Percent(r.Fitted), r.Fitted), valueCell(signedFigure(r.Residual), r.Residual)
		}
		change, log := r.CutChange[r.Side], r.LogSigmaChange[r.Side]
		cut, sigma := say(format.Dash), say(format.Dash)
		if change != 0 || log != 0 { // a limit without mixed parts has no such fit
			cut, sigma = valueCell(finer.Signed(change), change), valueCell(changePercent(log), math.Expm1(log))
		}
		t.Rows = append(t.Rows, []Cell{say(r.Name), valueCell(written[i], r.Value), valueCell(fmt.Sprintf("%d of %d", r.Accepted, r.Calls), r.Accepted),
			fitted, residual, cut, sigma, say(strings.Join(notes, ", "))})
	}
	notes := []string{"Residual: how far the calls lie from the fitted share, beyond ±2 is much. Without it: by how much cut and σ would change if the part were left out."}
	if more > 0 {
		notes = append(notes, fmt.Sprintf("%s more near the limits; --every-part lists all.", format.Counted(more, "part")))
	}
	if left > 0 {
		notes = append(notes, fmt.Sprintf("%s far from the limits, called as the curve expects, left out; --every-part lists them.", format.Counted(left, "part")))
	}
	t.Note = strings.Join(notes, " ")
	return t
}

// signedFigure writes a figure with two digits and its sign.
func signedFigure(x float64) string {
	s := format.Figure(x)
	if x > 0 && s != "0.00" {
		s = "+" + s
	}
	return s
}

// changePercent writes a change of a logarithm as a change in percent.
func changePercent(log float64) string {
	s := fmt.Sprintf("%+.0f %%", 100*math.Expm1(log))
	switch s {
	case "+0 %", "-0 %":
		return "0 %"
	}
	return strings.Replace(s, "-", "−", 1)
}

// greyWithoutTable sets the fit without its outliers beside it.
func greyWithoutTable(g *judge.Grey) Table {
	c := curveOf(g)
	if c == nil || c.Without == nil {
		return Table{}
	}
	s := g.Result.Scale()
	t := Table{
		Name: "without", Title: inUnit("The fit without "+outlierNames(g), s),
		Columns: []Column{{Name: "limit"}, {Name: "parts"}, {Name: "cut − limit", Numbers: true}, {Name: "σ", Numbers: true}, {Name: "grey zone", Numbers: true}, {Name: "of tolerance", Numbers: true}},
		Note:    "These parts were called against all the others. Look at them first: a wrong value or reference, parts mixed up, or a far error that the curve cannot describe.",
	}
	for _, l := range g.Limits {
		without := c.Without.Lower
		if l.Side == signal.Upper {
			without = c.Without.Upper
		}
		for _, fit := range []struct {
			parts string
			at    *signal.LimitFit
		}{{"all", l.Curve}, {"without", without}} {
			row := []Cell{say(l.Side.String()), say(fit.parts)}
			if !fit.at.Known() {
				for range 4 {
					row = append(row, noFit(fit.at))
				}
				t.Rows = append(t.Rows, row)
				continue
			}
			share := dash(needsBothLimits)
			if fit.at.HasShare {
				share = zoneShare(fit.at)
			}
			t.Rows = append(t.Rows, append(row, placeCell(s, fit.at, fit.at.Offset, s.Signed), zoneCells(s, fit.at)[0], zoneWidth(s, fit.at, true), share))
		}
	}
	return t
}

// greyMembersTable sets the gauge's calibrated sizes beside the offsets.
func greyMembersTable(g *judge.Grey) Table {
	s := g.Result.Scale()
	t := Table{
		Name: "gauge", Title: inUnit("The gauge's own sizes, as calibrated", s),
		Columns: []Column{{Name: "limit"}, {Name: "member", Numbers: true}, {Name: "member − limit", Numbers: true}, {Name: "cut − member", Numbers: true}},
	}
	for _, m := range g.Members {
		row := []Cell{say(m.Member.Side.String()), valueCell(s.Value(m.Member.Size)+" ± "+s.Value(m.Member.Uncertainty), m.Member.Size)}
		if e := m.Explanation; e != nil {
			row = append(row, valueCell(s.Signed(e.Deviation), e.Deviation), boundedCell(s, e.Remainder, s.Signed))
		} else {
			row = append(row, say(format.Dash), say(format.Dash))
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}
