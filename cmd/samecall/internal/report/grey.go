package report

import (
	"errors"
	"fmt"
	"io"
	"math"
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"

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

var greyCautions = []string{
	"Customer requirements, local rules and licensed practice come first. The grey zone of an attribute study alone should not release a safety characteristic.",
}

// boundedCell is an estimate with its interval, each number by write.
func boundedCell(s format.Scale, e signal.Estimate, write func(float64) string) Cell {
	if e.Absent {
		return say(format.Dash)
	}
	c := Cell{Text: s.Estimate(e, write), Value: e.Value, Bounded: true}
	if !e.HasLower && !e.HasUpper {
		c.Text = write(e.Value)
	}
	if e.HasLower {
		c.Lower = e.Lower
	}
	if e.HasUpper {
		c.Upper = e.Upper
	}
	return c
}

func inUnit(title string, s format.Scale) string {
	if s.Unit == "" {
		return title
	}
	return title + ", in " + s.Unit
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

// outlierNames names the parts that do not fit the curve; empty if there are none.
func outlierNames(g *judge.Grey) string {
	c := curveOf(g)
	if c == nil || c.Without == nil {
		return ""
	}
	var names []string
	for _, i := range c.Outliers {
		names = append(names, c.Parts[i].Name)
	}
	return strings.Join(names, ", ")
}

const (
	notKnown  = "not known"
	rowCut    = "cut: accepted half of the time"
	rowOffset = "cut − limit"
)

// oneBound is what is known of a cut at a limit where calls do not turn: where
// every part was accepted, that it lies beyond the outermost of them.
func oneBound(s format.Scale, l *signal.LimitFit, e signal.Estimate, write func(float64) string) Cell {
	switch {
	case l == nil:
		return say(format.Dash)
	case e.HasLower:
		return Cell{Text: "above " + write(e.Lower), Bounded: true, Lower: e.Lower}
	case e.HasUpper:
		return Cell{Text: "below " + write(e.Upper), Bounded: true, Upper: e.Upper}
	}
	return noFit(l)
}

// informs reports whether the calls say how wide the grey zone at a limit is:
// rejected and accepted ones overlap there, and the width has an upper bound.
// What a fit gives otherwise is a number without a meaning.
func informs(l *signal.LimitFit) bool {
	return l.Known() && l.Status == signal.Fitted && l.Width.HasUpper
}

// gapWidth is the gap that the grey zone is narrower than, where no part in it
// is mixed.
func gapWidth(l *signal.LimitFit) (float64, bool) {
	if g := l.Gap; l.Status != signal.Fitted && g != nil && g.HasReject && g.HasAccept {
		return math.Abs(g.Accept - g.Reject), true
	}
	return 0, false
}

// placeCell is where the curve cuts. A cut that nothing bounds on either side,
// where the calls do not say how steep the curve is, is not known.
func placeCell(s format.Scale, l *signal.LimitFit, e signal.Estimate, write func(float64) string) Cell {
	if !informs(l) && !e.HasLower && !e.HasUpper {
		return say(notKnown)
	}
	return boundedCell(s, e, write)
}

// atLimitCell is the acceptance at the limit itself.
func atLimitCell(s format.Scale, l *signal.LimitFit) Cell {
	switch e := l.AtLimit; {
	case !l.HasAtLimit:
		return say("")
	case !e.HasLower && !e.HasUpper: // it lies where no calls tell of the curve
		return say(notKnown)
	}
	return boundedCell(s, l.AtLimit, format.Percent)
}

// zoneShare is the width of the grey zone, of the tolerance.
func zoneShare(l *signal.LimitFit) Cell {
	gap, separated := gapWidth(l)
	switch {
	case informs(l):
		return boundedCell(format.Scale{}, l.Share, format.Percent)
	case separated && l.Width.Value > 0:
		return say("under " + format.Percent(gap*l.Share.Value/l.Width.Value))
	}
	return say(notKnown)
}

// zoneEnd is an end of the grey zone.
func zoneEnd(s format.Scale, l *signal.LimitFit, x float64) Cell {
	if !informs(l) {
		return say(notKnown)
	}
	return valueCell(s.Value(x), x)
}

// zoneWidth is the width of the grey zone; without mixed parts, the gap that
// it is narrower than.
func zoneWidth(s format.Scale, l *signal.LimitFit, interval bool) Cell {
	gap, separated := gapWidth(l)
	switch {
	case separated:
		return say("under " + s.Value(gap))
	case !informs(l):
		return say(notKnown)
	case interval:
		return boundedCell(s, l.Width, s.Value)
	}
	return valueCell(s.Value(l.Width.Value), l.Width.Value)
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

// WhyTheyDiffer says at each limit why the two methods give different widths.
func WhyTheyDiffer(g *judge.Grey) []string {
	const alike = 0.1 // of the curve's width
	s := g.Result.Scale()
	var out []string
	compared := false
	for _, l := range g.Limits {
		at := "At the " + l.Side.String() + " limit "
		z := l.Unanimous
		switch {
		case !z.Found:
			out = append(out, at+"there is no unanimous zone: "+z.Why+".")
			continue
		case !l.Curve.Known():
			out = append(out, at+"the curve has no cut: "+whyNoCut(g, l)+".")
			continue
		case z.Between == 0:
			out = append(out, at+"no part is mixed: the unanimous zone is only the gap between two neighbouring parts, and the true zone is narrower.")
			continue
		case !informs(l.Curve):
			out = append(out, at+"the calls do not say how wide the zone of the curve is: there is nothing to compare.")
			continue
		}
		compared = true
		switch ratio := z.Width / l.Curve.Width.Value; {
		case ratio > 1+alike && l.Outermost >= 0:
			p := g.Parts[l.Outermost]
			out = append(out, fmt.Sprintf("%sthe unanimous zone is the wider one: it reaches beyond the farthest mixed part, %s at %s (accepted in %d of %d calls), to the next unanimous one, however rare such a call is.",
				at, p.Name, s.Value(p.Value), p.Accepted, p.Calls))
		case ratio > 1+alike:
			out = append(out, at+"the unanimous zone is the wider one: it runs between two parts, however far they lie apart.")
		case ratio < 1-alike:
			out = append(out, at+"the unanimous zone is the narrower one: it ends where the parts of this study happen to be called alike, the curve where 1 call in 200 still differs.")
		default:
			out = append(out, at+"the two agree.")
		}
	}
	if compared {
		out = append(out, "The unanimous zone rests on two parts at a limit and grows with every call made; the curve uses all calls and has an interval.")
	}
	return out
}

func whyNoCut(g *judge.Grey, l judge.GreyLimit) string {
	if l.Curve == nil {
		return g.Result.Zone.NoCurve.Error()
	}
	return l.Curve.Why
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
			share := dash("a share of the tolerance needs both limits")
			if fit.at.HasShare {
				share = zoneShare(fit.at)
			}
			t.Rows = append(t.Rows, append(row, placeCell(s, fit.at, fit.at.Offset, s.Signed), zoneCells(s, fit.at)[0], zoneWidth(s, fit.at, true), share))
		}
	}
	return t
}

func curveOf(g *judge.Grey) *signal.Curve {
	if g.Result.Zone.Curves == nil {
		return nil
	}
	return g.Result.Zone.Curves.Pooled
}

// greyFit says in sentences how the curve was fitted and how well it fits.
func greyFit(g *judge.Grey) []string {
	c := curveOf(g)
	if c == nil {
		return []string{"No acceptance curve: " + g.Result.Zone.NoCurve.Error() + "."}
	}
	s := g.Result.Scale()
	var out []string
	for _, l := range g.Limits {
		if l.Curve.Known() && l.Curve.Status == signal.Fitted && !informs(l.Curve) {
			out = append(out, "At the "+l.Side.String()+" limit the calls set no upper bound to σ, so that the width of the grey zone is not known. More parts around the limit, and some beyond the zone on either side, would tell it.")
		}
		if l.Curve == nil || l.Curve.Status == signal.Fitted || l.Curve.Why == "" {
			continue
		}
		text := sentence(l.Curve.Why)
		if gap := l.Curve.Gap; gap != nil && gap.HasReject && gap.HasAccept {
			text += fmt.Sprintf(" The gap runs from %s (always rejected) to %s (always accepted). Cut and σ there are bias-reduced and say little; parts inside the gap would tell more.",
				s.Value(gap.Reject), s.Value(gap.Accept))
		}
		out = append(out, text)
	}
	fit := fmt.Sprintf("Fit: %s link, log-likelihood %s of the parts' counts (%s of the single calls), %s, %s.",
		c.Options.Link, minusFigure(c.LogLikelihood), minusFigure(c.CallLogLikelihood), format.Counted(c.Parameters, "parameter"), format.Counted(c.Calls, "call"))
	switch {
	case c.SameSigma != nil && c.SameSigma.Done && c.Options.TwoSigmas:
		fit += fmt.Sprintf(" Each limit has its own σ; one σ for both would do as well with p %s.", format.Probability(c.SameSigma.P))
	case c.SameSigma != nil && c.SameSigma.Done:
		fit += fmt.Sprintf(" Both limits have one σ (p %s that it is the same; --two-sigmas gives each its own).", format.Probability(c.SameSigma.P))
	}
	out = append(out, fit)
	if c.HasLapse {
		out = append(out, "Calls made at random, whatever the part: "+boundedCell(s, c.Lapse, format.Percent).Text+".")
	}
	switch l := c.LackOfFit; {
	case !l.Tested:
		out = append(out, "Lack of fit is not tested: "+l.Why+".")
	case l.Applied:
		out = append(out, fmt.Sprintf("The parts scatter about the curve more than calls by chance would (X² %.1f on %d degrees of freedom, p %s): parts differ by more than their value. The intervals are widened by the root of the factor %.2f.", l.X2, l.DF, format.Probability(l.P), l.Factor))
	default:
		out = append(out, fmt.Sprintf("The parts scatter about the curve as calls by chance would (X² %.1f on %d degrees of freedom, p %s).", l.X2, l.DF, format.Probability(l.P)))
	}
	out = append(out, curveWarnings(append(slices.Clone(c.Warnings), g.Result.Zone.Curves.Warnings...))...)
	for a, err := range g.Result.Zone.Curves.Errors {
		if err != nil {
			out = append(out, fmt.Sprintf("%s has no curve of its own: %s.", g.Result.Study.Appraisers[a], err))
		}
	}
	if len(g.Members) == 0 {
		out = append(out, "With the gauge's calibrated sizes (gauge_sizes in the study file, or --gauge-sizes-lower and --gauge-sizes-upper) zone says whether they explain where the cuts lie.")
	}
	return out
}

// curveWarnings are those that nothing else in the text says.
func curveWarnings(list []error) []string {
	var out []string
	for _, err := range list {
		var w signal.Warning
		if !errors.As(err, &w) {
			continue
		}
		switch w.Code {
		case signal.WarnNoLapse, signal.WarnFewValues, signal.WarnOverlap, signal.WarnRoughTest:
			out = append(out, sentence(w.Text))
		}
	}
	return out
}

// sentence makes a sentence of a text.
func sentence(s string) string {
	first, size := utf8.DecodeRuneInString(s)
	return string(unicode.ToUpper(first)) + s[size:] + "."
}

func minusFigure(x float64) string { return strings.Replace(fmt.Sprintf("%.2f", x), "-", "−", 1) }

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

// greyMembers says whether the gauge's sizes explain the offsets.
func greyMembers(g *judge.Grey) []string {
	s := g.Result.Scale()
	var out []string
	for _, m := range g.Members {
		at := "At the " + m.Member.Side.String() + " limit "
		if m.Error != nil {
			out = append(out, at+"the gauge cannot be compared: "+m.Error.Error()+".")
			continue
		}
		e := m.Explanation
		text := ""
		none := e.Offset.HasLower && e.Offset.HasUpper && e.Offset.Lower <= 0 && e.Offset.Upper >= 0
		switch {
		case none && e.Finding != signal.Unexplained:
			text = "there is no offset to explain: its interval includes 0."
		case e.Finding == signal.Explained:
			text = "the gauge's size explains where the cut lies: the offset is within the uncertainty of its calibration."
		case e.Finding == signal.PartlyExplained:
			text = "the gauge's size explains the offset in part: the two intervals overlap."
		default:
			text = "the gauge's size does not explain where the cut lies: " + s.WithUnit(s.Signed(e.Remainder.Value)) + " is left over. Look at how the gauge is used, at its form and at the reference values."
		}
		switch {
		case e.Worn && !e.PerhapsWorn:
			text += fmt.Sprintf(" The member is worn beyond its limit of %s: take it out of use.", s.WithUnit(s.Value(m.Member.WearLimit)))
		case e.Worn || e.PerhapsWorn:
			text += fmt.Sprintf(" The member is at its wear limit of %s within the uncertainty.", s.WithUnit(s.Value(m.Member.WearLimit)))
		}
		out = append(out, at+text)
	}
	return out
}
