package verdict

import (
	"fmt"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
)

// kappaGap is how far kappa between appraisers must be below kappa within for
// them to count as different. Our own choice, no source.
const kappaGap = 0.1

// apart: each appraiser repeats its calls, and they differ from each other.
// With another cause found, that is what makes them differ.
func apart(f *finder) []Cause {
	if len(f.found) > 0 {
		return nil
	}
	b := f.Agreement.Between
	same, other := b.SameAppraiser, b.DifferentAppraisers
	if same.Absent != nil || other.Absent != nil || side(same.Value, f.levels[Kappa][0]) < 0 || same.Value-other.Value < kappaGap {
		return nil
	}
	if all := called(f.Result, Everyone); unusable(same, comparedBySame(f.Result), all) != "" || unusable(other, b.Share.Of, all) != "" {
		return nil
	}
	differ := "kappa between appraisers " + format.Kappa(other)
	if other.Prevalent {
		if !f.tooFewAlike(b.Share) {
			return nil
		}
		differ = f.alikeText(b.Share)
	}
	text := fmt.Sprintf("Each appraiser repeats the same calls, kappa within appraisers %s, but they differ from each other, %s.", format.Kappa(same), differ)
	do := "Have all appraisers call together, beside one standard, the parts on which they differ every time"
	var appraisers []int
	if who := Apart(f.Result); who != Everyone {
		appraisers = []int{who}
		text += fmt.Sprintf(" %s stands apart; the others agree with each other.", f.name(who))
		do = fmt.Sprintf("Compare the calls of %s with those of the others, beside one standard, on the parts on which they differ every time", f.name(who))
	}
	if parts := f.differing(); len(parts) > 0 {
		do += ": " + f.theParts(parts)
	}
	return []Cause{{Code: codeApart, Appraisers: appraisers, Text: text, Do: stop(do)}}
}

// Apart returns the appraiser with whom every pair agrees less, by the gap of
// kappas that counts, than every pair without; Everyone if there is no such one.
func Apart(r *judge.Result) int {
	n := len(r.Study.Appraisers)
	if n < 3 {
		return Everyone
	}
	for a := range n {
		bestWith, worstWithout := -1.0, 1.0
		for _, p := range r.Agreement.Between.Pairs {
			switch {
			case p.Kappa.Absent != nil:
				return Everyone
			case p.A == a || p.B == a:
				bestWith = max(bestWith, p.Kappa.Value)
			default:
				worstWithout = min(worstWithout, p.Kappa.Value)
			}
		}
		if bestWith < worstWithout-kappaGap {
			return a
		}
	}
	return Everyone
}

// differing returns the parts that no appraiser is mixed on and on which
// appraisers differ.
func (f *finder) differing() []int {
	mixed := make(map[int]bool)
	for _, w := range f.Agreement.Within {
		for _, part := range w.Mixed {
			mixed[part] = true
		}
	}
	var out []int
	for part := range f.Study.Parts {
		if mixed[part] {
			continue
		}
		first := agreement.Missing
		for _, c := range f.Study.Ratings.Row(part) {
			if c == agreement.Missing {
				continue
			}
			if first == agreement.Missing {
				first = c
			} else if c != first {
				out = append(out, part)
				break
			}
		}
	}
	return out
}
