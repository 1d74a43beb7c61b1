package signal

import (
	"math"
	"testing"
)

// The studies here are simulated with a σ as wide as the tolerance, limits 0 and
// 1. Their zones overlap, and the likelihood with a cut held has several maxima.

var wideStudy13 = []Part{
	{Value: -0.5858983586, Accepted: 1, Calls: 9}, {Value: -0.5369970518, Accepted: 2, Calls: 9}, {Value: -0.2047554998, Accepted: 2, Calls: 9},
	{Value: 0.0501557751, Accepted: 3, Calls: 9}, {Value: 0.0686631888, Accepted: 1, Calls: 9}, {Value: 0.0889847438, Accepted: 3, Calls: 9},
	{Value: 0.1516093287, Accepted: 2, Calls: 9}, {Value: 0.2287038057, Accepted: 5, Calls: 9}, {Value: 0.4320112912, Accepted: 2, Calls: 9},
	{Value: 0.8375985284, Accepted: 4, Calls: 9}, {Value: 0.8518543436, Accepted: 4, Calls: 9}, {Value: 1.3230310978, Accepted: 2, Calls: 9},
	{Value: 1.4565572291, Accepted: 2, Calls: 9},
}

var wideStudy25 = []Part{
	{Value: -0.5430415212, Accepted: 3, Calls: 9}, {Value: -0.4682224334, Accepted: 3, Calls: 9}, {Value: -0.4393916305, Accepted: 2, Calls: 9},
	{Value: -0.3343892109, Accepted: 1, Calls: 9}, {Value: -0.3164766273, Accepted: 6, Calls: 9}, {Value: -0.2706811106, Accepted: 3, Calls: 9},
	{Value: -0.2233489230, Accepted: 4, Calls: 9}, {Value: -0.1994361108, Accepted: 5, Calls: 9}, {Value: -0.1864690296, Accepted: 2, Calls: 9},
	{Value: -0.0882445691, Accepted: 4, Calls: 9}, {Value: 0.0213737011, Accepted: 3, Calls: 9}, {Value: 0.0493622314, Accepted: 0, Calls: 9},
	{Value: 0.0757142113, Accepted: 3, Calls: 9}, {Value: 0.2102973790, Accepted: 2, Calls: 9}, {Value: 0.3294452602, Accepted: 5, Calls: 9},
	{Value: 0.3719679884, Accepted: 4, Calls: 9}, {Value: 0.3759582873, Accepted: 7, Calls: 9}, {Value: 0.3837388850, Accepted: 4, Calls: 9},
	{Value: 0.5233313225, Accepted: 4, Calls: 9}, {Value: 0.5943527338, Accepted: 7, Calls: 9}, {Value: 0.6595069650, Accepted: 3, Calls: 9},
	{Value: 1.0080074128, Accepted: 4, Calls: 9}, {Value: 1.0437726319, Accepted: 3, Calls: 9}, {Value: 1.0715986422, Accepted: 3, Calls: 9},
	{Value: 1.1436354546, Accepted: 2, Calls: 9},
}

// Where less than half of the calls accept, a curve wide enough accepts the
// same share at every value, wherever one of its cuts is held. So no cut loses
// more than that curve does, a closed form: 3.3463 and 3.1110 here, below
// chi-square's 3.8415. No cut has a bound on the side of the other, then.
func TestFlatCurveLeavesNoBound(t *testing.T) {
	for name, study := range map[string]struct {
		parts []Part
		lost  float64 // R 4.2.2, optim over the other cut and σ from 30 starts, upper cut held at −1, −0.2 and 0.6
	}{"13 parts": {wideStudy13, 3.3463}, "25 parts": {wideStudy25, 3.1110}} {
		c := mustFit(t, study.parts, Between(0, 1), Options{LackOfFit: WidenNever})
		var accepted, calls int
		for _, p := range study.parts {
			accepted, calls = accepted+p.Accepted, calls+p.Calls
		}
		lost := 2 * (c.CallLogLikelihood - saturated(float64(accepted), float64(calls-accepted)))
		near(t, name+": the flat curve loses", lost, study.lost, 1e-4)
		if c.Upper.Cut.HasLower {
			t.Errorf("%s: the upper cut is held above %v, where less is lost than the cut-off", name, c.Upper.Cut.Lower)
		}
		if c.Lower.Cut.HasUpper {
			t.Errorf("%s: the lower cut is held below %v", name, c.Lower.Cut.Upper)
		}
		if c.Upper.Cut.Why != whyFlat {
			t.Errorf("%s: the reason is %q", name, c.Upper.Cut.Why)
		}
	}
}

// With most calls accepted there is no flat curve, but a second maximum: the
// followed one ended at −0.08, where only 0.33 is lost by the other. R 4.2.2
// (optim, 30 starts) finds 3.5906 lost with the lower cut at 0.185, 3.7786 at
// 0.19 and 3.9774 at 0.195.
func TestBoundOnTheHigherOfTwoMaxima(t *testing.T) {
	parts := []Part{
		{Value: 0.12950356807679, Accepted: 7, Calls: 9}, {Value: 0.37473152452799, Accepted: 44, Calls: 64}, {Value: 0.56231111803856, Accepted: 9, Calls: 9},
		{Value: 0.72327180270085, Accepted: 6, Calls: 9}, {Value: 1.15811241116697, Accepted: 6, Calls: 9},
	}
	c := mustFit(t, parts, Between(0, 1), Options{Link: Logit, LackOfFit: WidenNever})
	if e := c.Lower.Cut; !e.HasUpper || e.Upper < 0.19 || e.Upper > 0.195 {
		t.Errorf("lower cut %+v: want an upper bound between 0.19 and 0.195", e)
	}
}

// A profile that jumps past its target has no crossing.
func TestCrossingOfAJump(t *testing.T) {
	jump := func(x float64) float64 {
		if x < 1 {
			return x
		}
		return x + 2
	}
	if at, end := crossing(0, 0.4, 10, 2, jump); end != jumps || math.Abs(at-1) > 1e-6 {
		t.Errorf("at %v, ending %v: want a jump at 1", at, end)
	}
	if at, end := crossing(0, 0.4, 10, 0.75, jump); end != crossed || math.Abs(at-0.75) > 1e-6 {
		t.Errorf("at %v, ending %v: want a crossing at 0.75", at, end)
	}
	if _, end := crossing(0, 0.4, 10, 20, jump); end != level {
		t.Errorf("ending %v: want level", end)
	}
}
