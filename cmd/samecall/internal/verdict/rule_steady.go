package verdict

import (
	"fmt"

	"samecall/cmd/samecall/internal/format"
	"samecall/signal"
)

// Our own choice, no source. repeatShare lies between what a right cut gives
// with parts spread evenly about it, 0.29, and what a cut two σ beside the
// limit gives, 0.72 (docs/verdict.md has the formula).
const (
	repeatShare = 0.6 // wrong calls that another call on the part repeats
	steadyParts = 3   // parts wrong every time
)

// steadyErrors: wrong about the same parts every time. Shared by all it is
// the standard, or the reference itself; otherwise the appraiser's own. Where
// the acceptance curve turns at each limit it has said so better.
func steadyErrors(f *finder) []Cause {
	if f.patterns == nil {
		return nil
	}
	turns := f.Zone != nil && f.Zone.Curves != nil && turnsAtEachLimit(f.Zone.Curves.Pooled, f.Zone.Limits)
	if t := f.together; f.several() && steady(t) && !turns && !has(f.found, Everyone, codeKinds, codeGrades) {
		return []Cause{{
			Code: codeStandard,
			Text: fmt.Sprintf("All appraisers are wrong about the same %s every time (%s). That points to a shifted standard or gauge, or to a wrong reference.",
				format.Counted(len(t.steady), "part"), t.steadyCalls),
			Do: fmt.Sprintf("Judge or measure the reference of parts %s again. If it holds, correct the standard or gauge that all work by.", f.list(t.steady)),
		}}
	}
	var out []Cause
	for a, p := range f.patterns {
		if !steady(p) || f.has(a, codeKinds, codeGrades, codeInconsistent) {
			continue
		}
		if turns && turnsAtEachLimit(f.Zone.Curves.Each[a], f.Zone.Limits) {
			continue
		}
		out = append(out, Cause{
			Code: codeSteady, Appraisers: []int{a},
			Text: fmt.Sprintf("%s is wrong about the same parts every time: %s of %s, on %s (%s).",
				f.name(a), format.Count(p.steadyCalls.total()), format.Counted(p.wrong, "wrong call"), format.Counted(len(p.steady), "part"), p.steadyCalls),
			Do: f.steadyStep(p, f.name(a)),
		})
	}
	return out
}

// oneWay is the share of the calls that are wrong every time above which they
// go one way: too strict, or too lenient. Our own choice, no source.
const oneWay = 0.8

// steadyStep says what to do about calls that one appraiser makes wrong every
// time. Only where they go one way is the idea of a good part shifted; parts
// mixed up and calls copied look the same else.
func (f *finder) steadyStep(p pattern, who string) string {
	step := fmt.Sprintf("Go through parts %s with %s beside the standard", f.list(p.steady), who)
	if w := p.steadyCalls; float64(max(w.misses, w.falseAlarms)) >= oneWay*float64(w.total()) {
		return step + ": it is the idea of a good part that is shifted, rather than attention that is at fault."
	}
	return stop(fmt.Sprintf("Check the labels and the records of parts %s first: parts mixed up, calls copied from another sheet. Then go through them with %s beside the standard", f.list(p.steady), who))
}

// turnsAtEachLimit reports whether the calls turn at every limit that there is.
func turnsAtEachLimit(c *signal.Curve, l signal.Limits) bool {
	return c != nil && (!l.HasLower || c.Lower.Known()) && (!l.HasUpper || c.Upper.Known())
}

func steady(p pattern) bool {
	return len(p.steady) >= steadyParts && p.repeat() >= repeatShare
}
