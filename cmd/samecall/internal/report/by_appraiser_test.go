package report

import (
	"fmt"
	"strings"
	"testing"

	"samecall/agreement"
	"samecall/agreement/interval"
	"samecall/cmd/samecall/internal/verdict"
)

// appraisers returns so many of one verdict, shown by the data or not.
func appraisers(n int, name string, level verdict.Level, shown bool) []verdict.Appraiser {
	c := verdict.Criterion{Name: verdict.Effectiveness, Levels: verdict.Levels{0.9, 0.8}, Met: level, Estimate: agreement.Estimate{Value: 0.85}}
	if shown {
		c.Evidence, c.Estimate.OneSided = verdict.Shown, interval.Interval{Lower: 0.95, Upper: 1}
		if level == verdict.Reject {
			c.Evidence = verdict.Contradicted
		}
	}
	var out []verdict.Appraiser
	for i := range n {
		out = append(out, verdict.Appraiser{Name: fmt.Sprint(name, " ", i+1), Verdict: level, Criteria: []verdict.Criterion{c}})
	}
	return out
}

// The line on each appraiser groups them, worst first, names few and counts the
// others, and is left out where it says no more than the overall verdict.
func TestByAppraiser(t *testing.T) {
	join := func(lists ...[]verdict.Appraiser) (out []verdict.Appraiser) {
		for _, l := range lists {
			out = append(out, l...)
		}
		return out
	}
	const (
		accept, conditional, notShown, reject = verdict.Accept, verdict.Conditional, verdict.NotShown, verdict.Reject
	)
	for _, c := range []struct {
		name    string
		overall verdict.Level
		each    []verdict.Appraiser
		want    string
	}{
		{"one", reject, appraisers(1, "a", reject, false), ""},
		{"all accepted", accept, appraisers(3, "a", accept, true), ""},
		{"no reference", notShown, appraisers(3, "a", notShown, false), ""},
		{"two accepted, one of them shown", accept, join(appraisers(1, "a", accept, false), appraisers(1, "b", accept, true)),
			"By appraiser: accept (the data show it): b 1; accept (open): a 1."},
		{"three", reject, join(appraisers(2, "a", accept, false), appraisers(1, "c", reject, true)),
			"By appraiser: reject (the data show it): c 1; accept (open): a 1 and a 2."},
		{"all three rejected", reject, appraisers(3, "a", reject, false), "By appraiser: reject (open): a 1, a 2 and a 3."},
		{"rejected for what they do not share", reject, appraisers(2, "a", accept, true), "By appraiser: accept (the data show it): a 1 and a 2."},
		{"without a reference, rejected for what is between them", reject, appraisers(2, "a", notShown, false), "By appraiser: not shown: a 1 and a 2."},
		{"twelve", reject, join(appraisers(7, "a", conditional, false), appraisers(5, "b", reject, false)),
			"By appraiser: reject (open): b 1, b 2, b 3 and 2 more; conditional (open): a 1, a 2, a 3 and 4 more."},
		{"200 alike", reject, appraisers(200, "a", reject, true), "By appraiser: reject (the data show it): all 200."},
		{"200 of all kinds", reject, join(appraisers(30, "a", accept, true), appraisers(30, "b", accept, false), appraisers(30, "c", conditional, true),
			appraisers(30, "d", conditional, false), appraisers(20, "e", notShown, false), appraisers(30, "f", reject, true), appraisers(30, "g", reject, false)),
			"By appraiser: reject (the data show it): f 1, f 2, f 3 and 27 more; reject (open): g 1, g 2, g 3 and 27 more; not shown: e 1, e 2, e 3 and 17 more; " +
				"conditional (the data show it): c 1, c 2, c 3 and 27 more; conditional (open): d 1, d 2, d 3 and 27 more; " +
				"accept (the data show it): a 1, a 2, a 3 and 27 more; accept (open): b 1, b 2, b 3 and 27 more."},
		{"a name that ends with a stop", reject, []verdict.Appraiser{{Name: "A.", Verdict: notShown}, {Name: "B.", Verdict: notShown}}, "By appraiser: not shown: A. and B."},
	} {
		if got := byAppraiser(&verdict.Verdict{Overall: c.overall, Appraisers: c.each}); got != c.want {
			t.Errorf("%s: %q; want %q", c.name, got, c.want)
		}
		for _, width := range []int{80, 100} {
			for line := range strings.SplitSeq(wrapped(c.want, width), "\n") {
				if wide(line) > width {
					t.Errorf("%s: %q is wider than %d", c.name, line, width)
				}
			}
		}
	}
}
