package signal

import (
	"math"
	"strings"
	"testing"
)

// A σ that was not filled in is a step, not NaN.
func TestGaugeWithoutSigma(t *testing.T) {
	both := Gauge{LowerCut: 3, UpperCut: 5, HasLower: true, HasUpper: true}
	lower := Gauge{LowerCut: 3, HasLower: true}
	for _, c := range []struct {
		g       Gauge
		x, want float64
	}{{lower, 2, 0}, {lower, 3, 0.5}, {lower, 4, 1}, {both, 2, 0}, {both, 3, 0.5}, {both, 4, 1}, {both, 5, 0.5}, {both, 6, 0}} {
		for _, link := range []Link{Probit, Logit} {
			c.g.Link = link
			if p, q := c.g.Accept(c.x); p != c.want || q != 1-c.want {
				t.Errorf("%+v at %v: %v and %v, want %v", c.g, c.x, p, q, c.want)
			}
		}
	}
	if _, err := Assess(Process{Mean: 4, SD: 1}, Known{lower, AtLeast(3)}, 0); err == nil {
		t.Error("a risk without σ: no error")
	}
}

// A value that is no number, or infinite.
func TestAcceptAtNoNumber(t *testing.T) {
	c := mustFit(t, study(t), studyLimits, Options{})
	if p := c.Accept(math.NaN()); !math.IsNaN(p) {
		t.Errorf("acceptance %v", p)
	}
	if e := c.Band(math.NaN()); !e.Absent || e.Why == "" || !finite(e.Value, e.Lower, e.Upper, e.SE) {
		t.Errorf("%+v", e)
	}
	for _, x := range []float64{math.Inf(1), math.Inf(-1)} {
		if p, e := c.Accept(x), c.Band(x); p != 0 || !finite(e.Value, e.Lower, e.Upper, e.SE) {
			t.Errorf("at %v: %v, %+v", x, p, e)
		}
	}
}

// Counts that add up to more than an int holds, in rows of one name, of several
// parts and of several appraisers.
func TestTooManyCalls(t *testing.T) {
	one := []Part{{Name: "a", Value: 1, Calls: math.MaxInt}, {Name: "b", Value: 2, Calls: 0}}
	for name, parts := range map[string][]Part{
		"one name": {{Name: "a", Value: 1, Calls: math.MaxInt}, {Name: "a", Value: 1, Calls: math.MaxInt}, {Name: "b", Value: 2, Accepted: 1, Calls: 1}},
		"parts":    {{Value: 1, Calls: math.MaxInt}, {Value: 2, Accepted: 1, Calls: 1}},
	} {
		if _, err := Fit(parts, AtLeast(1.5), Options{}); err == nil || !strings.Contains(err.Error(), "more than can be counted") {
			t.Errorf("%s: %v", name, err)
		}
	}
	if _, err := FitAppraisers([][]Part{one, one}, AtLeast(1.5), Options{}); err == nil || !strings.Contains(err.Error(), "appraiser 2: part a") {
		t.Errorf("appraisers: %v", err)
	}
}
