package verdict

import (
	"errors"
	"testing"

	"samecall/agreement"
	"samecall/agreement/interval"
)

var errUnknownHere = errors.New("unknown, for the test")

// rate is a miss rate against the default levels, with its one-sided limits.
func rate(x, lower, upper float64) Criterion {
	e := agreement.Estimate{Value: x, OneSided: interval.Interval{Lower: lower, Upper: upper}}
	return newCriterion(Miss, Default[Miss], e, "bad part", 100, 0.95)
}

// The verdict on an appraiser is shown as that on each figure is: a rejection
// by one figure that the data show, anything else by all.
func TestAppraiserShown(t *testing.T) {
	var (
		acceptShown      = rate(0.001, 0, 0.015)
		acceptOpen       = rate(0.01, 0, 0.03)
		conditionalShown = rate(0.03, 0.01, 0.04)
		conditionalOpen  = rate(0.03, 0.01, 0.07)
		rejectShown      = rate(0.20, 0.10, 0.30)
		rejectOpen       = rate(0.07, 0.04, 0.30)
		unknown          = newCriterion(Miss, Default[Miss], agreement.Estimate{Absent: errUnknownHere}, "bad part", 0, 0.95)
		setAside         = rate(0.20, 0.10, 0.30)
	)
	setAside.Aside = "for the test"
	for _, c := range []struct {
		name     string
		criteria []Criterion
		verdict  Level
		shown    bool
	}{
		{"all shown", []Criterion{acceptShown, acceptShown}, Accept, true},
		{"one open", []Criterion{acceptShown, acceptOpen}, Accept, false},
		{"what is set aside bears on nothing", []Criterion{acceptShown, setAside}, Accept, true},
		{"conditional, the other shown to be conditional too", []Criterion{acceptOpen, conditionalShown}, Conditional, true},
		{"conditional, open", []Criterion{acceptShown, conditionalOpen}, Conditional, false},
		{"one rejection shown", []Criterion{acceptOpen, rejectOpen, rejectShown}, Reject, true},
		{"a rejection that is open", []Criterion{acceptShown, rejectOpen}, Reject, false},
		{"a rejection set aside beside one that is open", []Criterion{rejectOpen, setAside}, Reject, false},
		{"not known", []Criterion{acceptShown, unknown}, NotShown, false},
	} {
		a := Appraiser{Name: "x", Criteria: c.criteria, Verdict: worst(c.criteria)}
		if a.Verdict != c.verdict || a.Shown() != c.shown {
			t.Errorf("%s: %v, shown: %v; want %v, %v", c.name, a.Verdict, a.Shown(), c.verdict, c.shown)
		}
	}
}

// The limit that decides stands on the worse side of a level that is met, and
// on the better side of one that is missed; the sentence names the same.
func TestDecidingLimit(t *testing.T) {
	for _, c := range []struct {
		criterion Criterion
		limit     float64
		upper     bool
		text      string
	}{
		{rate(0.01, 0, 0.03), 0.03, true, "3.0 %"},
		{rate(0.03, 0.01, 0.07), 0.07, true, "7.0 %"},
		{rate(0.07, 0.04, 0.30), 0.04, false, "4.0 %"},
		{newCriterion(Effectiveness, Default[Effectiveness], agreement.Estimate{Value: 0.95, OneSided: interval.Interval{Lower: 0.85, Upper: 0.99}}, "part", 40, 0.95), 0.85, false, "85 %"},
		{newCriterion(Kappa, Default[Kappa], agreement.Estimate{Value: 0.3, OneSided: interval.Interval{Lower: 0.1, Upper: 0.5}}, "part", 40, 0.95), 0.5, true, "0.50"},
	} {
		limit, upper, ok := c.criterion.Deciding()
		if limit != c.limit || upper != c.upper || !ok || c.criterion.Exact(limit) != c.text {
			t.Errorf("%s: %v, upper %v, %v, %q; want %v, %v, %q", c.criterion.Text(), limit, upper, ok, c.criterion.Exact(limit), c.limit, c.upper, c.text)
		}
	}
	for _, e := range []agreement.Estimate{{Absent: errUnknownHere}, {Value: 0.5, Unbounded: errUnknownHere}} {
		c := newCriterion(Kappa, Default[Kappa], e, "part", 1, 0.95)
		if limit, _, ok := c.Deciding(); ok {
			t.Errorf("%v has a limit: %v", e, limit)
		}
	}
}
