package verdict

import (
	"fmt"
	"slices"

	"samecall/cmd/samecall/internal/format"
)

// mostOf is the share of the appraisers, and at least two, from which on a
// fault of each is taken for one of the method. Our own choice, no source.
const mostOf = 0.75

// most reports whether n appraisers are most of several.
func (f *finder) most(n int) bool {
	return n > 1 && float64(n) >= mostOf*float64(len(f.Study.Appraisers))
}

// inconsistent: kappa over an appraiser's own trials is below the accept
// level of kappa. If that goes for most, it is not the person.
func inconsistent(f *finder) []Cause {
	var out []Cause
	level := f.levels[Kappa][0]
	for a, w := range f.Agreement.Within {
		if w.Kappa.Absent != nil || w.Kappa.Value >= level {
			continue
		}
		out = append(out, Cause{
			Code: codeInconsistent, Appraiser: a,
			Text: fmt.Sprintf("%s does not repeat its own calls: %s of %s %s mixed; kappa over its trials is %s, less than %s.",
				f.name(a), format.Count(len(w.Mixed)), format.Counted(w.Share.Of, "part"), are(len(w.Mixed)), format.Kappa(w.Kappa), format.Figure(level)),
			Do: stop(fmt.Sprintf("Go through the mixed parts with %s: lighting, handling, what counts as a reject. Then repeat its trials. Mixed: %s",
				f.name(a), f.list(w.Mixed))),
		})
	}
	if !f.most(len(out)) {
		return out
	}
	return []Cause{{
		Code: codeInconsistent, Appraiser: Everyone,
		Text: fmt.Sprintf("%d of %d appraisers do not repeat their own calls (kappa over their trials is less than %s). That points to the method or the gauge, not to one person.%s",
			len(out), len(f.Study.Appraisers), format.Figure(level), f.zoneWidth()),
		Do: stop("Look at the method first: gauge and fixture, lighting, the written standard for the call. Mixed for at least half of the appraisers: " + f.list(f.commonMixed())),
	}}
}

// commonMixed returns the parts that are mixed for at least half of the
// appraisers.
func (f *finder) commonMixed() []int {
	times := make(map[int]int)
	for _, w := range f.Agreement.Within {
		for _, part := range w.Mixed {
			times[part]++
		}
	}
	var out []int
	for part, n := range times {
		if 2*n >= len(f.Agreement.Within) {
			out = append(out, part)
		}
	}
	slices.Sort(out)
	return out
}
