package verdict

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"samecall/agreement"
	"samecall/agreement/interval"
)

// By definition: with More parts more of the same share the exact one-sided
// limit passes, and with one fewer it does not.
func TestMoreOfAShare(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(5, 200).Draw(t, "parts")
		x := rapid.IntRange(0, n).Draw(t, "right")
		confidence := rapid.SampledFrom([]float64{0.8, 0.9, 0.95, 0.99}).Draw(t, "confidence")
		share := float64(x) / float64(n)
		two := interval.Exact(float64(x), float64(n), 2*confidence-1)
		c := newCriterion(Effectiveness, Default[Effectiveness], one(share, two.Lower, two.Upper), "part", n, confidence)
		c.settle(shareOfParts(share, confidence))
		if c.More == 0 {
			return
		}
		passes := func(parts int) bool {
			i := interval.Exact(share*float64(parts), float64(parts), 2*confidence-1)
			if c.Met == Reject {
				return i.Upper < c.Against
			}
			return i.Lower >= c.Against
		}
		if !passes(n + c.More) {
			t.Fatalf("%d of %d: %d parts more do not settle it", x, n, c.More)
		}
		if passes(n + c.More - 1) {
			t.Fatalf("%d of %d: one fewer than %d settles it too", x, n, c.More)
		}
	})
}

// A study that holds each part k times has, by the agreement package itself,
// the limits that were projected for it.
func TestProjectionOfARate(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var now, then []interval.Cluster
		k := rapid.IntRange(1, 30).Draw(t, "times")
		parts := 0
		for range rapid.IntRange(1, 6).Draw(t, "kinds of part") {
			calls := rapid.IntRange(1, 4).Draw(t, "calls")
			c := interval.Cluster{Calls: calls, Events: rapid.IntRange(0, calls).Draw(t, "events"), Parts: rapid.IntRange(1, 20).Draw(t, "parts")}
			parts += c.Parts
			now = append(now, c)
			c.Parts *= k
			then = append(then, c)
		}
		if parts == 1 { // one part has no variance between parts, two have
			return
		}
		confidence := rapid.SampledFrom([]float64{0.6, 0.9, 0.95}).Draw(t, "confidence")
		want := interval.KornGraubard(then, 2*confidence-1)
		got := rateOverCalls(now, confidence)(float64(parts * k))
		if math.Abs(got.Lower-want.Lower) > 1e-9 || math.Abs(got.Upper-want.Upper) > 1e-9 {
			t.Fatalf("%v times %v: projected %v, is %v", now, k, got, want.Interval)
		}
	})
}

// Of a rate: at the multiples of the study that lie on either side of More,
// the agreement package's own limits pass or fail accordingly.
func TestMoreOfARate(t *testing.T) {
	for _, c := range [][]interval.Cluster{
		{{Events: 1, Calls: 3, Parts: 3}, {Events: 0, Calls: 3, Parts: 13}}, // the MSA manual's A: 3 of 48
		{{Events: 2, Calls: 3, Parts: 1}, {Events: 0, Calls: 3, Parts: 30}},
		{{Events: 3, Calls: 3, Parts: 1}, {Events: 0, Calls: 3, Parts: 79}},
	} {
		rate := interval.KornGraubard(c, 0.9)
		m := newCriterion(Miss, Default[Miss], one(rate.Value, rate.Lower, rate.Upper), "bad part", total(c), 0.95)
		m.settle(rateOverCalls(c, 0.95))
		if m.More == 0 {
			t.Errorf("%v: nothing settles %v against %v", c, rate.Value, m.Against)
			continue
		}
		for k := 1; k*m.Parts < 2*(m.Parts+m.More); k++ {
			larger := make([]interval.Cluster, len(c))
			for i := range c {
				larger[i] = c[i]
				larger[i].Parts *= k
			}
			i := interval.KornGraubard(larger, 0.9)
			passes := i.Upper <= m.Against
			if m.Met == Reject {
				passes = i.Lower > m.Against
			}
			if passes != (k*m.Parts >= m.Parts+m.More) {
				t.Errorf("%v: %d more are said to settle it; %d times the study: %v", c, m.More, k, passes)
			}
		}
	}
}

// Of a kappa: the limits come nearer with the square root, and at once where
// nothing disagreed.
func TestMoreOfAKappa(t *testing.T) {
	e := one(0.80, 0.70, 0.88)
	c := newCriterion(Kappa, Default[Kappa], e, "part", 50, 0.95)
	c.settle(coefficient(e, 50))
	// 0.80 − 0.10·√(50/n) ≥ 0.75 from n = 200 on.
	if c.More < 150 || c.More > 151 {
		t.Errorf("%d parts more, want 150", c.More)
	}
	e = one(1, 0.70, 1)
	c = newCriterion(Kappa, Default[Kappa], e, "part", 10, 0.95)
	c.settle(coefficient(e, 10))
	// 1 − 0.30·10/n ≥ 0.75 from n = 12 on.
	if c.More != 2 {
		t.Errorf("%d parts more, want 2", c.More)
	}
}

// More parts are no answer where the figure lies on its level, beside it, or
// where the level leaves no room.
func TestNothingSettles(t *testing.T) {
	for _, c := range []struct {
		name  string
		e     agreement.Estimate
		share float64
		level Levels
		say   string
	}{
		{Effectiveness, one(0.9, 0.8, 0.95), 0.9, Levels{0.9, 0.8}, "it lies on its level, which more parts would not settle"},
		{Effectiveness, one(0.90001, 0.8, 0.95), 0.90001, Levels{0.9, 0.8}, "it lies so close to its level that not even 1 000 times the parts would settle it"},
		{Effectiveness, one(1, 0.94, 1), 1, Levels{1, 0.9}, "50 parts cannot show more than 94 %; no number of parts can show that it is at least 100 %"},
		{Miss, one(0, 0, 0.06), 0, Levels{0, 0.05}, "50 parts cannot show less than 5.8 %; no number of parts can show that it is at most 0 %"},
	} {
		got := newCriterion(c.name, c.level, c.e, "part", 50, 0.95)
		got.settle(shareOfParts(c.share, 0.95))
		if got.More != 0 || got.Evidence != Open || got.open() != c.say {
			t.Errorf("%s %v: %d more, %v, %q", c.name, c.share, got.More, got.Evidence, got.open())
		}
	}
}
