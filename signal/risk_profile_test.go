package signal

import (
	"encoding/json"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"testing"

	"pgregory.net/rapid"
)

// Profile-likelihood limits of risks by R's optim and integrate, for one
// appraiser and for all of the manual's study: testdata/reference-extra,
// compute-risk.R. The search there follows the cut-off by a penalty, to about
// 1e-5.
func TestRiskProfileAgainstR(t *testing.T) {
	b, err := os.ReadFile("../testdata/reference-extra/expected-r-risk.json")
	if err != nil {
		t.Fatal(err)
	}
	var want struct {
		Rows []struct {
			Calls, Quantity              string
			Band, Estimate, Lower, Upper float64
		} `json:"risk_profile"`
	}
	if err := json.Unmarshal(b, &want); err != nil {
		t.Fatal(err)
	}
	if len(want.Rows) != 18 {
		t.Fatalf("%d rows", len(want.Rows))
	}
	parts := map[string][]Part{}
	for _, row := range table(t, "msa-manual-50x3x3.csv") {
		for name, calls := range map[string][]float64{"C": row[9:], "all": row[3:]} {
			p := Part{Value: row[2], Calls: len(calls)}
			for _, call := range calls {
				p.Accepted += int(call)
			}
			parts[name] = append(parts[name], p)
		}
	}
	for _, w := range want.Rows {
		c := mustFit(t, parts[w.Calls], studyLimits, Options{LackOfFit: WidenNever})
		r, err := Assess(Process{Mean: 0.4975, SD: 0.02}, c, w.Band)
		if err != nil {
			t.Fatal(err)
		}
		got := map[string]Estimate{"escape": r.Escape, "false_reject": r.FalseReject, "bad_among_accepted": r.BadAmongAccepted}[w.Quantity]
		name := fmt.Sprintf("%s of %s with band %v", w.Quantity, w.Calls, w.Band)
		nearRel(t, name, got.Value, w.Estimate, 1e-5)
		nearRel(t, name+", lower", got.Lower, w.Lower, 1e-4)
		nearRel(t, name+", upper", got.Upper, w.Upper, 1e-4)
	}
}

// What holds for each single curve holds for the limits: escapes, and what can
// be said of them, fall as the band grows, and no more escape than is made bad.
func TestRiskLimitsFollowTheBand(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		parts := simulate(rng, rapid.IntRange(20, 40).Draw(t, "parts"), rapid.IntRange(2, 6).Draw(t, "calls"), 0, 10, rapid.Float64Range(0.3, 1.5).Draw(t, "sigma"), -3, 13)
		c, err := Fit(parts, Between(0, 10), Options{Link: Link(rapid.IntRange(0, 1).Draw(t, "link")), TwoSigmas: rapid.Bool().Draw(t, "two")})
		if err != nil {
			t.Skip(err)
		}
		p := Process{Mean: rapid.Float64Range(2, 8).Draw(t, "mean"), SD: rapid.Float64Range(0.5, 3).Draw(t, "sd")}
		if c.separatedAnywhere() || !c.Lower.Known() || !c.Upper.Known() {
			t.Skip("no likelihood region")
		}
		g, err := c.Gauge()
		if err != nil {
			t.Fatal(err)
		}
		last := 1.0
		for band := 0.0; band < 4; band += rapid.Float64Range(0.3, 2).Draw(t, "step") {
			now := p.shares(g.Tighten(band), c.Limits)
			escape := now.values()[qEscape]
			region := newRiskProfile(c, p, band)
			upper, ok := region.limit(qEscape, 1)
			if !ok {
				continue
			}
			if upper > now.bad*(1+1e-6) || upper < escape {
				t.Fatalf("escapes of %v and up to %v at band %v, made bad %v", escape, upper, band, now.bad)
			}
			if upper > last*(1+1e-4) {
				t.Fatalf("the upper bound of escapes grows from %v to %v at band %v", last, upper, band)
			}
			if lower, ok := region.limit(qEscape, -1); ok && lower > escape {
				t.Fatalf("escapes of %v, at least %v at band %v", escape, lower, band)
			}
			last = upper
		}
	})
}

// A study of very many parts has a quadratic likelihood: both ways to find the
// limits agree.
func TestRiskProfileOfManyParts(t *testing.T) {
	parts := simulate(rand.New(rand.NewPCG(3, 3)), quadraticParts+1, 3, 0, 10, 0.5, -3, 13)
	c := mustFit(t, parts, Between(0, 10), Options{})
	p := Process{Mean: 5, SD: 2.5}
	quick, exact := newRiskProfile(c, p, 0.5), newRiskProfile(c, p, 0.5)
	exact.quadratic = false
	for _, q := range []int{qEscape, qFalseReject, qAccepted} {
		for _, sign := range []float64{-1, 1} {
			a, okA := quick.limit(q, sign)
			b, okB := exact.limit(q, sign)
			if !okA || !okB || math.Abs(a-b) > 1e-3*b {
				t.Errorf("quantity %d, side %v: %v quick, %v exact", q, sign, a, b)
			}
		}
	}
}

// No curve that the likelihood does not rule out lies beyond the limits: curves
// are drawn about the maximum, and those within the cut-off compared.
func TestRiskLimitsHoldEveryCurve(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 2))
		parts := simulate(rng, rapid.IntRange(20, 40).Draw(t, "parts"), rapid.IntRange(2, 6).Draw(t, "calls"), 0, 10, rapid.Float64Range(0.3, 1.5).Draw(t, "sigma"), -3, 13)
		c, err := Fit(parts, Between(0, 10), Options{TwoSigmas: rapid.Bool().Draw(t, "two")})
		if err != nil || c.separatedAnywhere() || !c.Lower.Known() || !c.Upper.Known() {
			t.Skip("no likelihood region")
		}
		region := newRiskProfile(c, Process{Mean: 5, SD: 2.5}, rapid.Float64Range(0, 1).Draw(t, "band"))
		b := region.blocks[0]
		for _, q := range []int{qEscape, qFalseReject} {
			lower, okLower := region.limit(q, -1)
			upper, okUpper := region.limit(q, 1)
			if !okLower || !okUpper {
				t.Fatalf("quantity %d: no limit", q)
			}
			for range 60 {
				theta := append([]float64(nil), region.best...)
				for i := range theta {
					theta[i] += 1.5 * rng.NormFloat64() * math.Sqrt(b.cov(i, i))
				}
				x := region.at(theta)
				if x == nil || !x.defined[q] || x.lost > c.crit {
					continue
				}
				if l := x.logit[q]; l < logit(lower)-1e-3 || l > logit(upper)+1e-3 {
					t.Fatalf("quantity %d: %v of a curve within the cut-off, limits %v and %v", q, logistic(l), lower, upper)
				}
			}
		}
	})
}
