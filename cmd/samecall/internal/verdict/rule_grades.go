package verdict

import (
	"fmt"

	"samecall/cmd/samecall/internal/format"
)

// Grades lean when so many calls, a share of all calls and of the wrong ones,
// go wrong one way. Our own choice, no source.
const (
	leaningCalls = 4
	leaningRate  = 0.1
	leaningShare = 0.8
)

// leaningGrades: grades are given too strictly or too leniently. If most
// appraisers lean the same way, it is what they grade against.
func leaningGrades(f *finder) []Cause {
	if !f.Options.Ordered || f.patterns == nil {
		return nil
	}
	var out []Cause
	leaning := map[string]int{}
	for a, g := range f.Agreement.Against {
		worse := 0 // calls further down the order than the reference
		for call := range g.Table {
			for ref := range call {
				worse += g.Table[call][ref]
			}
		}
		wrong := wrongCalls(g.Table)
		n, lean := worse, "strictly"
		if 2*worse < wrong {
			n, lean = wrong-worse, "leniently"
		}
		calls, _ := g.Table.Total()
		if n < leaningCalls || float64(n) < leaningRate*float64(calls) || float64(n) < leaningShare*float64(wrong) {
			continue
		}
		leaning[lean]++
		out = append(out, Cause{
			Code: codeGrades, Appraisers: []int{a},
			Text: fmt.Sprintf("%s grades too %s: %s of %s are wrong, %s of them that way.", f.name(a), lean, format.Count(wrong), format.Counted(calls, "call"), allOr(n, wrong)),
			Do:   fmt.Sprintf("Set the grades of %s against the reference again, at each boundary between two grades.", f.name(a)),
		})
	}
	for _, lean := range []string{"strictly", "leniently"} {
		if f.most(leaning[lean]) {
			return []Cause{{
				Code: codeGrades,
				Text: fmt.Sprintf("%d of %d appraisers grade too %s. That points to what they grade against, or to the reference, not to one person.", leaning[lean], len(f.Study.Appraisers), lean),
				Do:   "Check the samples that all grade against, and the reference, at each boundary between two grades.",
			}}
		}
	}
	return out
}

// allOr writes n of so many, or all.
func allOr(n, of int) string {
	if n == of {
		return "all"
	}
	return format.Count(n)
}
