package verdict

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
	"gonum.org/v1/gonum/stat/distuv"
)

// The share of wrong calls that another call repeats, by hand: of two calls a
// part, one part is wrong twice and one once; of three calls, one part is
// wrong twice.
func TestRepeat(t *testing.T) {
	var p pattern
	steady := 0
	for _, t := range []tally{
		{calls: 2, wrong: 2, ways: ways{misses: 2}},
		{calls: 2, wrong: 1, ways: ways{misses: 1}},
		{calls: 3, wrong: 2, ways: ways{falseAlarms: 2}},
		{calls: 1, wrong: 1, ways: ways{misses: 1}}, // one call repeats nothing
		{calls: 3},
	} {
		if p.add(t, 1) {
			steady++
		}
	}
	// Part 0: each of 2 wrong calls is repeated; part 1: not; part 2: each of
	// 2 by one of the other two. (2 + 0 + 1)/(2 + 1 + 2).
	if got := p.repeat(); math.Abs(got-0.6) > 1e-15 {
		t.Errorf("repeat %v, want 0.6", got)
	}
	if steady != 1 || p.steadyCalls.misses != 2 || p.wrong != 6 {
		t.Errorf("%d wrong every time, %+v", steady, p)
	}
	if (pattern{}).repeat() != 0 {
		t.Error("no wrong call is repeated")
	}
}

// docs/verdict.md rests the threshold on what theory gives for parts spread
// evenly about a limit: the share for a cut at the limit and for one so many
// σ beside it.
func TestRepeatShareOfACut(t *testing.T) {
	theory := func(shift float64) float64 {
		wrong := func(power float64) float64 {
			return quad.Fixed(func(x float64) float64 {
				good, bad := distuv.UnitNormal.CDF(shift-x), distuv.UnitNormal.CDF(-shift-x)
				return math.Pow(good, power) + math.Pow(bad, power)
			}, 0, shift+12, 400, nil, 0)
		}
		return wrong(2) / wrong(1)
	}
	// ∫Φ = dΦ + φ and ∫Φ² = dΦ² + 2φΦ − Φ(√2 d)/√π, both from −∞ to d, by parts.
	first := func(d float64) float64 { return d*distuv.UnitNormal.CDF(d) + distuv.UnitNormal.Prob(d) }
	second := func(d float64) float64 {
		p, f := distuv.UnitNormal.CDF(d), distuv.UnitNormal.Prob(d)
		return d*p*p + 2*f*p - distuv.UnitNormal.CDF(math.Sqrt2*d)/math.Sqrt(math.Pi)
	}
	for _, c := range []struct{ shift, page float64 }{{0, 0.29}, {1, 0.52}, {2, 0.72}, {3, 0.81}} {
		got, closed := theory(c.shift), (second(c.shift)+second(-c.shift))/(first(c.shift)+first(-c.shift))
		if math.Abs(got-closed) > 1e-9 || math.Abs(got-c.page) > 0.005 {
			t.Errorf("a cut %v σ beside the limit: %.4f, in closed form %.4f, the page says %v", c.shift, got, closed, c.page)
		}
	}
	if got := theory(0); math.Abs(got-(1-math.Sqrt2/2)) > 1e-9 {
		t.Errorf("at the limit %v, want 1 − ½√2", got)
	}
	if !(theory(1) < repeatShare && repeatShare < theory(2)) {
		t.Error("the threshold does not lie between")
	}
}
