package verdict

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/judge"
)

// mostSteps is how many appraisers get a step each for their wrong calls;
// more are told in one.
const mostSteps = 3

// wrongCallsOf names the wrong calls of those who decide the verdict and whose
// wrong calls no cause is about.
func wrongCallsOf(r *judge.Result, v *Verdict) []string {
	if r.Agreement.All == nil || v.Overall != Conditional && v.Overall != Reject || has(v.Causes, Everyone, codeAlike, codeReversed, codeGauge, codeStandard) {
		return nil
	}
	var who []int
	for a, ap := range v.Appraisers {
		named := slices.ContainsFunc(ap.Criteria, func(c Criterion) bool { return c.counts() && c.Met == v.Overall })
		if named && !namesParts(v.Causes, a) && len(wrongParts(r, a, untold(v, a))) > 0 {
			who = append(who, a)
		}
	}
	if len(who) == 0 {
		return nil
	}
	noPattern := ""
	if len(v.Causes) == 0 {
		noPattern = " " + noPatternIn(r)
	}
	if len(who) > mostSteps {
		var people []string
		var parts []int
		for _, a := range who {
			people = append(people, v.Appraisers[a].Name)
			parts = append(parts, wrongParts(r, a, untold(v, a))...)
		}
		slices.Sort(parts)
		return []string{stop(fmt.Sprintf("Go through the wrong calls of %s, part by part: %s", some(people), theParts(r.Study.Parts, slices.Compact(parts)))) + noPattern}
	}
	// Whoever let the most bad parts pass comes first, whatever the names.
	slices.SortStableFunc(who, func(a, b int) int {
		return cmp.Or(
			cmp.Compare(missRate(v, b), missRate(v, a)),
			cmp.Compare(len(wrongParts(r, b, untold(v, b))), len(wrongParts(r, a, untold(v, a)))),
			slices.Compare(wrongParts(r, a, untold(v, a)), wrongParts(r, b, untold(v, b))),
		)
	})
	var out []string
	for _, a := range who {
		var told []string
		for _, kind := range []struct {
			says string
			way  func(ways) int
		}{
			{"bad, but accepted: ", func(w ways) int { return w.misses }},
			{"good, but rejected: ", func(w ways) int { return w.falseAlarms }},
			{"wrong category: ", func(w ways) int { return untold(v, a)(ways{others: w.others}) }},
		} {
			if parts := wrongParts(r, a, kind.way); len(parts) > 0 {
				told = append(told, kind.says+theParts(r.Study.Parts, parts))
			}
		}
		out = append(out, stop(fmt.Sprintf("Go through the wrong calls with %s (%s)", v.Appraisers[a].Name, strings.Join(told, "; ")))+noPattern)
		noPattern = "" // said once
	}
	return out
}

// noPatternIn says that no pattern tells what is behind the wrong calls and, where
// there are values, how near to a limit they lie all the same.
func noPatternIn(r *judge.Result) string {
	none := "No pattern tells what is behind the wrong calls."
	if r.Zone == nil {
		return none
	}
	away := 0.0
	var on []int
	for a := range r.Study.Appraisers {
		for _, part := range wrongParts(r, a, ways.total) {
			if !r.Study.HasValue[part] {
				return none
			}
			d := toLimit(r.Zone.Limits, r.Study.Values[part])
			if away = max(away, d); d == 0 && !slices.Contains(on, part) {
				on = append(on, part)
			}
		}
	}
	s := r.Scale()
	text := fmt.Sprintf("No wrong call lies farther than %s from a limit; no pattern tells more.", s.WithUnit(s.Value(away)))
	if len(on) > 0 {
		slices.Sort(on)
		text += fmt.Sprintf(" On a limit itself, where a call can go either way: %s.", theParts(r.Study.Parts, on))
	}
	return text
}

// missRate is an appraiser's, 0 where it is not known.
func missRate(v *Verdict, a int) float64 {
	if c := v.Appraisers[a].criterion(Miss); c.Met != NotShown {
		return c.Estimate.Value
	}
	return 0
}

// untold counts the wrong calls of an appraiser that no cause tells of:
// confused kinds and leaning grades tell of the wrong categories.
func untold(v *Verdict, a int) func(ways) int {
	if has(v.Causes, a, codeKinds, codeGrades) {
		return func(w ways) int { return w.misses + w.falseAlarms }
	}
	return ways.total
}

// namesParts reports whether an appraiser has a cause of its own that says
// which parts, or which limit, it is about.
func namesParts(found []Cause, a int) bool {
	return slices.ContainsFunc(found, func(c Cause) bool {
		return c.Appraisers != nil && c.of(a) && c.Code != codeKinds && c.Code != codeGrades
	})
}

// wrongParts returns the parts that an appraiser called wrong in a way that
// is counted.
func wrongParts(r *judge.Result, a int, way func(ways) int) []int {
	s := r.Study.Ratings
	return r.Agreement.Patterns.Where(func(p agreement.Pattern) bool {
		return p.Reference != agreement.Missing && way(count(s, s.CallsIn(p.Row, a), p.Reference).ways) > 0
	})
}
