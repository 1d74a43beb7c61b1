package report

import (
	"fmt"
	"io"
	"strings"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

// SmallStudy is a study that is one small table.
type SmallStudy struct {
	Title string
	Unit  string
	Input study.Input
}

func (p *printer) smallHead(s SmallStudy, facts string) {
	name := s.Title
	if name == "" {
		name = fileName(s.Input)
	}
	p.title(name)
	p.wrap(facts, "")
}

// Short writes the analysis of a short study at one limit.
func Short(w io.Writer, st SmallStudy, s *signal.ShortStudy, term Terminal) error {
	p := &printer{w: w, term: term}
	scale := shortScale(st, s)
	p.smallHead(st, fmt.Sprintf("short study at the %s limit %s · %s", s.Side, scale.WithUnit(scale.Value(s.Limit)), format.Counted(len(s.Points), "part")))
	p.line("")
	for _, line := range shortConclusion(st, s) {
		p.wrap(line, "")
	}
	p.table(preconditionsTable(s))
	p.table(shortTable(st, s))
	p.table(shortPartsTable(s))
	p.line("")
	for _, line := range shortNotes(s) {
		p.wrap(line, "")
	}
	return p.err
}

func shortScale(st SmallStudy, s *signal.ShortStudy) format.Scale {
	var spreads []float64
	if s.HasLine {
		spreads = append(spreads, s.Sigma)
	}
	return format.NewScale(st.Unit, []*float64{&s.Limit}, spreads...)
}

// failed names the preconditions that are not met.
func failed(s *signal.ShortStudy) []string {
	var out []string
	for _, c := range s.Preconditions {
		if !c.Met {
			out = append(out, fmt.Sprintf("%s (there are %d)", c.Name, c.Have))
		}
	}
	return out
}

func shortConclusion(st SmallStudy, s *signal.ShortStudy) []string {
	scale := shortScale(st, s)
	var out []string
	if not := failed(s); len(not) > 0 {
		out = append(out, "The method asks for what this study does not have: "+strings.Join(not, "; ")+".")
	}
	switch {
	case !s.HasLine:
		return append(out, "No figures by the analytic method: "+s.Why+".")
	case len(out) > 0:
		return append(out, fmt.Sprintf("Without that its t of %.2f (against %.3f) shows nothing; its figures below are a hint. The maximum-likelihood fit beside them does not ask for it, and its interval says how little or much the study tells.", s.T, s.Critical))
	case s.Significant:
		who := "parts beyond the limit are accepted"
		if s.Bias < 0 {
			who = "good parts within the limit are rejected"
		}
		out = append(out, fmt.Sprintf("The bias is not zero: the inspection cuts %s %s the limit, so that %s (t %.2f is above %.3f).",
			scale.WithUnit(scale.Value(abs(s.Bias))), beyond(s.Bias), who, s.T, s.Critical))
	default:
		out = append(out, fmt.Sprintf("The study does not show a bias: t %.2f is not above %.3f. That is no proof that there is none.", s.T, s.Critical))
	}
	return out
}

func beyond(bias float64) string {
	if bias < 0 {
		return "inside"
	}
	return "beyond"
}

func abs(x float64) float64 { return max(x, -x) }

func preconditionsTable(s *signal.ShortStudy) Table {
	t := Table{Name: "preconditions", Title: "What the method asks for", Columns: []Column{{Name: "precondition", Long: true}, {Name: "needed", Numbers: true}, {Name: "found", Numbers: true}, {Name: "met"}}}
	for _, c := range s.Preconditions {
		met := "yes"
		if !c.Met {
			met = "NO"
		}
		t.Rows = append(t.Rows, []Cell{say(c.Name), intCell(c.Need), intCell(c.Have), say(met)})
	}
	return t
}

// outward turns an offset of the cut into a bias: above 0 beyond the limit.
func outward(side signal.Side, offset signal.Estimate) signal.Estimate {
	if side == signal.Upper {
		return offset
	}
	b := offset
	b.Value = -offset.Value
	b.Lower, b.Upper, b.HasLower, b.HasUpper = -offset.Upper, -offset.Lower, offset.HasUpper, offset.HasLower
	if !b.HasLower {
		b.Lower = 0
	}
	if !b.HasUpper {
		b.Upper = 0
	}
	return b
}

// shortFit is the limit of the maximum-likelihood fit; nil without one.
func shortFit(s *signal.ShortStudy) *signal.LimitFit {
	if s.Fit == nil {
		return nil
	}
	l := s.Fit.Lower
	if s.Side == signal.Upper {
		l = s.Fit.Upper
	}
	if !l.Known() {
		return nil
	}
	return l
}

// shortTable sets the analytic method beside the fit of the same data.
func shortTable(st SmallStudy, s *signal.ShortStudy) Table {
	scale := shortScale(st, s)
	t := Table{Name: "short", Title: inUnit("Bias and repeatability", scale), Columns: []Column{{Name: "figure", Long: true}, {Name: "analytic method", Numbers: true}, {Name: "maximum likelihood", Numbers: true}}}
	fit := shortFit(s)
	add := func(name string, write func(float64) string, analytic float64, likely func() signal.Estimate) {
		a, m := say(format.Dash), say(format.Dash)
		if s.HasLine {
			a = valueCell(write(analytic), analytic)
		}
		if likely == nil {
			m = say("")
		} else if fit != nil {
			m = boundedCell(scale, likely(), write)
		}
		t.Rows = append(t.Rows, []Cell{say(name), a, m})
	}
	two := func(x float64) string { return fmt.Sprintf("%.2f", x) }
	add("cut: accepted half of the time", scale.Value, s.Cut, func() signal.Estimate { return fit.Cut })
	add("bias: cut beyond the limit", scale.Signed, s.Bias, func() signal.Estimate { return outward(s.Side, fit.Offset) })
	add("σ", scale.Value, s.Sigma, func() signal.Estimate { return fit.Sigma })
	add("repeatability", scale.Value, s.Repeatability, nil)
	add("t", two, s.T, nil)
	add("t(0.975, 19)", func(x float64) string { return fmt.Sprintf("%.3f", x) }, s.Critical, nil)
	t.Note = "Repeatability is the distance from 0.5 to 99.5 % acceptance over 1.08; t is 31.3 |bias| over repeatability."
	if fit != nil {
		t.Note += fmt.Sprintf(" In brackets the %s interval, by profile likelihood.", format.Confidence(s.Fit.Options.Confidence))
	}
	return t
}

func shortPartsTable(s *signal.ShortStudy) Table {
	t := Table{Name: "parts", Title: "Parts", Columns: []Column{{Name: "value", Numbers: true}, {Name: "accepted", Numbers: true}, {Name: "adjusted share", Numbers: true}, {Name: "fitted share", Numbers: true}, {Name: "in the line", Long: true}}}
	var values []float64
	for _, p := range s.Points {
		values = append(values, p.Value)
	}
	for i, v := range format.Alike(values...) {
		p := s.Points[i]
		used, fitted := "yes", say(format.Dash)
		if !p.Used {
			used = "no: farther out than the next extreme"
		}
		if shortFit(s) != nil {
			share := s.Fit.Accept(p.Value)
			fitted = valueCell(format.Percent(share), share)
		}
		t.Rows = append(t.Rows, []Cell{valueCell(v, p.Value), valueCell(fmt.Sprintf("%d of %d", p.Accepted, p.Trials), p.Accepted), valueCell(fmt.Sprintf("%.3f", p.Adjusted), p.Adjusted), fitted, say(used)})
	}
	return t
}

var shortCautions = []string{
	"Customer requirements, local rules and licensed practice come first. A short study at one limit alone should not release a safety characteristic.",
}

func shortNotes(s *signal.ShortStudy) []string {
	var out []string
	switch {
	case s.Fit == nil:
		out = append(out, "No maximum-likelihood fit: "+s.FitError.Error()+".")
	default:
		l := s.Fit.Lower
		if s.Side == signal.Upper {
			l = s.Fit.Upper
		}
		if l != nil && l.Status != signal.Fitted && l.Why != "" {
			out = append(out, sentence(l.Why))
		}
		if f := s.Fit.LackOfFit; f.Applied {
			out = append(out, fmt.Sprintf("The parts scatter about the fitted curve more than calls by chance would (p %s); the intervals are widened for it.", format.Probability(f.P)))
		}
		for _, i := range s.Fit.Outliers {
			p := s.Fit.Parts[i]
			out = append(out, fmt.Sprintf("The part at %s does not fit the curve: accepted in %d of %d trials where the other parts make %s expected.", format.Number(p.Value), p.Accepted, p.Calls, format.Percent(s.Fit.ExpectedByOthers(i))))
		}
	}
	return append(out, shortCautions...)
}
