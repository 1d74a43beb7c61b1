package verdict

import (
	"cmp"
	"fmt"
	"slices"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
)

// Kinds of bad parts are named as missed from so many misses on, and so many
// kinds at most. Our own choice, no source.
const (
	leastMisses = 3
	mostKinds   = 3
)

// missedKinds says, of kinds or grades of bad parts, which are accepted most by
// whose miss rate decides the verdict: what to train.
func missedKinds(r *judge.Result, v *Verdict) (out []string) {
	if len(r.Study.Categories) < 3 || r.Agreement.All == nil || v.Overall != Conditional && v.Overall != Reject || has(v.Causes, Everyone, codeAlike, codeReversed) {
		return nil
	}
	s := r.Study.Ratings
	for a, g := range r.Agreement.Against {
		if v.Appraisers[a].criterion(Miss).Met != v.Overall {
			continue
		}
		type missed struct{ kind, misses, calls int }
		var kinds []missed
		for kind := range g.Table {
			m := missed{kind: kind, calls: callsOn(g.Table, kind)}
			for call := range g.Table {
				if s.Accepts(agreement.Category(call)) && !s.Accepts(agreement.Category(kind)) {
					m.misses += g.Table[call][kind]
				}
			}
			if m.misses >= leastMisses {
				kinds = append(kinds, m)
			}
		}
		slices.SortStableFunc(kinds, func(x, y missed) int { return cmp.Compare(y.misses, x.misses) })
		var told []string
		for _, m := range kinds[:min(mostKinds, len(kinds))] {
			told = append(told, fmt.Sprintf("%s (%s of %s)", r.Study.Categories[m.kind], format.Count(m.misses), format.Counted(m.calls, "call")))
		}
		if len(told) > 0 {
			out = append(out, fmt.Sprintf("Show %s samples of what is accepted though bad, beside good parts: %s.", v.Appraisers[a].Name, and(told)))
		}
	}
	if len(out) > mostSteps {
		return nil // the tables by reference tell it of so many
	}
	return out
}
