package report

import (
	"fmt"
	"io"
	"math"
	"strings"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

// Risk writes what an inspection does to a process. of is the study, nil where the gauge
// was given without one.
func Risk(w io.Writer, r *judge.Risks, of *Record, term Terminal) error {
	p := &printer{w: w, term: term}
	if of != nil {
		p.head(of)
	} else {
		p.line(term.bold("Risk of a gauge taken as known"))
	}
	p.line("")
	p.wrap("Process, assumed: "+processText(r)+".", "  ")
	p.wrap("Inspection"+whoseCurve(r)+": "+gaugeText(r)+".", "  ")
	p.table(riskTable(r))
	p.table(guardTable(r))
	if found := riskFound(r); len(found) > 0 {
		p.line("")
		for _, f := range found {
			p.wrap(f, "")
		}
	}
	p.line("")
	for _, c := range riskCautions(r) {
		p.wrap(c, "")
	}
	for _, e := range riskWarnings(r) {
		p.line("")
		p.wrap("Note: "+e, "      ")
	}
	return p.err
}

func processText(r *judge.Risks) string {
	f, s := r.Process, r.Scale
	var out []string
	if f.N > 0 {
		out = append(out, format.Counted(f.N, "measured value")+", each as likely", "mean "+s.WithUnit(s.Value(f.Mean)))
	} else {
		out = append(out, "normal, mean "+s.WithUnit(s.Value(f.Mean)))
	}
	if f.HasSD {
		out = append(out, "standard deviation "+s.WithUnit(s.Value(f.SD)))
	}
	if f.HasCp {
		out = append(out, "Cp "+capability(f.Cp))
	}
	if f.HasCpk {
		out = append(out, "Cpk "+capability(f.Cpk))
	}
	return strings.Join(out, ", ")
}

// whoseCurve says whose calls made the curve, and its shape where it is not the
// usual one.
func whoseCurve(r *judge.Risks) string {
	out := ""
	switch {
	case r.Appraiser != "":
		out = " by " + r.Appraiser + " alone"
	case r.Curve != nil:
		out = " by all appraisers"
	}
	if r.Gauge.Link != signal.Probit {
		out += ", " + r.Gauge.Link.String() + " curve"
	}
	return out
}

func capability(c float64) string { return strings.Replace(fmt.Sprintf("%.2f", c), "-", "−", 1) }

func gaugeText(r *judge.Risks) string {
	s, g := r.Scale, r.Gauge
	var out []string
	one := func(side signal.Side, limit, cut, sigma float64) {
		width := "σ " + s.WithUnit(s.Value(sigma))
		if r.Curve != nil {
			switch l := limitAt(r.Curve, side); {
			case l == nil || informs(l):
			case l.Status != signal.Fitted:
				width = "σ not known, " + s.WithUnit(s.Value(sigma)) + " assumed (bias-reduced)"
			default:
				width = "σ not known, " + s.WithUnit(s.Value(sigma)) + " assumed"
			}
		}
		out = append(out, fmt.Sprintf("%s limit %s cuts at %s, %s", side, s.WithUnit(s.Value(limit)), s.WithUnit(s.Value(cut)), width))
	}
	if g.HasLower {
		one(signal.Lower, r.Limits.Lower, g.LowerCut, g.LowerSigma)
	}
	if g.HasUpper {
		one(signal.Upper, r.Limits.Upper, g.UpperCut, g.UpperSigma)
	}
	if g.Lapse > 0 {
		out = append(out, format.Percent(g.Lapse)+" of the calls at random")
	}
	return strings.Join(out, "; ")
}

// ppmCell is a share in ppm with its interval.
func ppmCell(e signal.Estimate) Cell { return exactCell(e, format.PPM) }

// percentCell is a share in percent, whose sign is written once.
func percentCell(e signal.Estimate) Cell {
	write := percentApart(e)
	c := exactCell(e, func(share float64) string { return strings.TrimSuffix(write(share), " %") })
	if !e.Absent {
		value, interval, _ := strings.Cut(c.Text, " ")
		c.Text = strings.TrimSpace(value + " % " + interval)
	}
	return c
}

// exactCell is an estimate with its interval, or alone where the interval is
// nothing but the estimate.
func exactCell(e signal.Estimate, write func(float64) string) Cell {
	c := boundedCell(format.Scale{}, e, write)
	if !e.Absent && e.HasLower && e.HasUpper && e.Lower == e.Upper {
		c.Text = write(e.Value)
	}
	return c
}

// percentApart writes shares in percent so that the estimate is told from the
// ends of its interval.
func percentApart(e signal.Estimate) func(float64) string {
	if e.Absent || !e.HasLower || !e.HasUpper || e.Lower == e.Upper {
		return format.Percent
	}
	return format.PercentApart(e.Value, e.Lower, e.Upper)
}

// noneBeyond reports at which limits a process of measured values has none
// beyond.
func noneBeyond(r *judge.Risks) (lower, upper bool) {
	if r.Process.N == 0 {
		return false, false
	}
	lower, upper = r.Limits.HasLower, r.Limits.HasUpper
	for _, v := range r.Ask.Process.Values {
		lower = lower && v >= r.Limits.Lower
		upper = upper && v <= r.Limits.Upper
	}
	return lower, upper
}

// unlessNone is the share of escapes, or says that there is no value to escape.
func unlessNone(none bool, e signal.Estimate) Cell {
	c := ppmCell(e)
	if none {
		c.Text = "0: no value there"
	}
	return c
}

// riskTable gives the shares without a guard band, by limit.
func riskTable(r *judge.Risks) Table {
	t := Table{Name: "risk", Title: "What the inspection does to this process, in ppm and %", Columns: []Column{{Name: "share"}, {Name: "in all", Numbers: true}}}
	both := r.Limits.HasLower && r.Limits.HasUpper
	if both {
		t.Columns = append(t.Columns, Column{Name: "at lower limit", Numbers: true}, Column{Name: "at upper limit", Numbers: true})
	}
	add := func(name string, cells ...Cell) {
		for len(cells) < len(t.Columns)-1 {
			cells = append(cells, say(""))
		}
		t.Rows = append(t.Rows, append([]Cell{say(name)}, cells[:len(t.Columns)-1]...))
	}
	n := r.Now
	add("made bad", valueCell(format.PPM(n.Bad.Value), n.Bad.Value))
	noLower, noUpper := noneBeyond(r)
	add("escapes", unlessNone((noLower || !r.Limits.HasLower) && (noUpper || !r.Limits.HasUpper), n.Escape),
		unlessNone(noLower, n.EscapeLower), unlessNone(noUpper, n.EscapeUpper))
	add("false rejects", ppmCell(n.FalseReject), ppmCell(n.FalseRejectLower), ppmCell(n.FalseRejectUpper))
	add("accepted", percentCell(n.Accepted))
	add("bad among accepted", ppmCell(n.BadAmongAccepted))
	add("good among rejected", percentCell(n.GoodAmongRejected))
	t.Note = "Escapes are made bad and accepted, false rejects made good and rejected; both, like made bad, of all parts made; ppm where there is no %."
	if r.Curve != nil {
		t.Note += fmt.Sprintf(" In brackets the %s interval, which carries the uncertainty of the curve; the process is taken as given.", format.Confidence(r.Curve.Options.Confidence))
	}
	return t
}

// guardTable gives the risk over guard bands.
func guardTable(r *judge.Risks) Table {
	s := r.Scale
	s.Decimals++
	t := Table{
		Name: "guard bands", Title: inUnit("Guard bands: each cut moved inwards by so much", s),
		Columns: []Column{{Name: "band", Numbers: true}, {Name: "in σ", Numbers: true}, {Name: "escapes, ppm", Numbers: true},
			{Name: "false rejects, ppm", Numbers: true}, {Name: "bad among accepted, ppm", Numbers: true}},
	}
	for _, g := range r.Guards {
		row := []Cell{valueCell(s.Value(g.Band), g.Band), valueCell(format.Figure(g.Sigma), g.Sigma)}
		if g.Error != nil {
			row = append(row, say(format.Dash), say(format.Dash), say(format.Dash))
			t.Note = strings.TrimSpace(t.Note + " At " + s.Value(g.Band) + ": " + g.Error.Error() + ".")
		} else {
			row = append(row, ppmCell(g.Risk.Escape), ppmCell(g.Risk.FalseReject), valueCell(ppmText(g.Risk.BadAmongAccepted), g.Risk.BadAmongAccepted.Value))
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}

// ppmText is a share in ppm without its interval.
func ppmText(e signal.Estimate) string {
	if e.Absent {
		return format.Dash
	}
	return format.PPM(e.Value)
}

// riskFound says which guard band was found, or why none.
func riskFound(r *judge.Risks) []string {
	s := r.Scale
	s.Decimals++
	var out []string
	band := func(x signal.Risk) string {
		g := r.Gauge.Tighten(x.GuardBand)
		var cuts []string
		if g.HasLower {
			cuts = append(cuts, s.Value(g.LowerCut))
		}
		if g.HasUpper {
			cuts = append(cuts, s.Value(g.UpperCut))
		}
		way := "inwards"
		if x.GuardBand < 0 {
			way = "outwards"
		}
		return fmt.Sprintf("move each cut %s by %s, to %s", way, s.WithUnit(s.Value(math.Abs(x.GuardBand))), s.WithUnit(strings.Join(cuts, " and ")))
	}
	then := func(x signal.Risk) string {
		return fmt.Sprintf("Escapes are then %s ppm, false rejects %s ppm.", ppmCell(x.Escape).Text, ppmCell(x.FalseReject).Text)
	}
	if r.Ask.HasTarget {
		what := fmt.Sprintf("Escapes of at most %.6g ppm", 1e6*r.Ask.Target)
		if r.Ask.Shown {
			what += ", by the upper bound of the interval"
		}
		switch {
		case r.Unreachable != nil:
			out = append(out, what+": "+r.Unreachable.Error()+".")
		case r.Target.GuardBand == 0:
			out = append(out, what+": no guard band is needed. "+then(*r.Target))
		default:
			held := *r.Target
			held.GuardBand = s.RoundUp(held.GuardBand) // a band rounded down would miss the target
			out = append(out, what+": "+band(held)+". "+then(held))
		}
	}
	if r.Ask.HasCosts {
		what := fmt.Sprintf("Where an escape costs %s and a false reject %s", format.Number(r.Ask.CostEscape), format.Number(r.Ask.CostReject))
		if r.NoCost != nil {
			return append(out, what+": "+r.NoCost.Error()+".")
		}
		c := r.Cost
		switch {
		case c.Edge == signal.AcceptAll:
			out = append(out, fmt.Sprintf("%s, accepting every part is cheapest: %s a thousand parts made, in place of %s with the cuts where they are. No guard band pays for the inspection; look at the costs again.",
				what, costText(c.PerPartAcceptAll), costText(c.PerPartNow)))
		case c.Edge == signal.InwardEdge:
			out = append(out, fmt.Sprintf("%s, cost falls as far as the cuts can move inwards, by %s: %s a thousand parts made in place of %s. The inspection then rejects most of what is made; look at the costs again.",
				what, s.WithUnit(s.Value(c.Risk.GuardBand)), costText(c.PerPart), costText(c.PerPartNow)))
		default:
			out = append(out, fmt.Sprintf("%s, it is cheapest to %s: %s a thousand parts made in place of %s. %s",
				what, band(c.Risk), costText(c.PerPart), costText(c.PerPartNow), then(c.Risk)))
		}
	}
	return out
}

// costText writes the cost of a thousand parts.
func costText(perPart float64) string { return format.Short(1000 * perPart) }

// fewProcessValues is below how many values of a process a caution is given:
// our own choice, no source.
const fewProcessValues = 30

func riskCautions(r *judge.Risks) []string {
	out := []string{"The process figures are your assumption, not a finding of the study: another mean or spread gives other escapes. One call is taken to decide on each part, made as in the study."}
	if r.Process.N > 0 {
		out = append(out, fmt.Sprintf("The %s hold no tail beyond their own extremes: shares far below 1 in %s cannot be told from them.", format.Counted(r.Process.N, "value"), format.Count(r.Process.N)))
	}
	if n := r.Process.N; n > 0 && n < fewProcessValues {
		out = append(out, fmt.Sprintf("%s, fewer than %d, say little about where a process lies and how wide it is (that number is our own choice, without a source).", format.Counted(n, "value"), fewProcessValues))
	}
	lower, upper := noneBeyond(r)
	for _, l := range []struct {
		none bool
		side string
	}{{lower, "lower"}, {upper, "upper"}} {
		if l.none {
			out = append(out, "No process value lies beyond the "+l.side+" limit: that no part escapes there follows from the values given, and is not a finding about the inspection.")
		}
	}
	switch {
	case r.Curve == nil:
		out = append(out, "Cuts and σ are taken as exact: there is no interval.")
	case r.Gauge.Lapse == 0:
		out = append(out, "A slip of attention far from the limits is not in these figures (--lapse estimates a share of random calls).")
	}
	return append(out, "Escapes on a safety characteristic are not accepted on the strength of this number alone. Customer requirements, local rules and licensed practice come first.")
}

// riskWarnings are what the curve and the assessment say of themselves.
func riskWarnings(r *judge.Risks) []string {
	var out []string
	c := r.Curve
	if c == nil {
		return out
	}
	out = append(out, curveWarnings(c.Warnings)...)
	for _, l := range []*signal.LimitFit{c.Lower, c.Upper} {
		if l != nil && l.Status != signal.Fitted && l.Why != "" {
			out = append(out, sentence(l.Why)+" The risk there rests on a bias-reduced curve.")
		}
	}
	for _, i := range c.Outliers {
		p := c.Parts[i]
		out = append(out, fmt.Sprintf("Part %s at %s does not fit the curve and bears on these figures; zone shows the fit without it.", p.Name, r.Scale.Value(p.Value)))
	}
	if c.LackOfFit.Applied {
		out = append(out, "The parts scatter about the curve more than calls by chance would; the intervals are widened for it.")
	}
	return out
}

// StudyRecord is a record of which only the study is known.
func StudyRecord(s *study.Study) *Record {
	r := &judge.Result{Study: s}
	r.Options.Ordered = len(s.Settings.Order) > 0
	return &Record{Result: r}
}
