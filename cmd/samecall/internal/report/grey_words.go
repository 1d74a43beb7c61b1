package report

import (
	"errors"
	"fmt"
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
	"samecall/signal"
)

var greyCautions = []string{
	"Customer requirements, local rules and licensed practice come first. The grey zone of an attribute study alone should not release a safety characteristic.",
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
