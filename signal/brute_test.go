package signal

import (
	"math"
	"testing"
)

// The checks here compute intervals by brute force: nested golden sections and
// bisection on the likelihood as it is written, sharing nothing with the
// package's Newton steps, starts or profiles but the helper golden.

// bruteLower is the log-likelihood of a lower limit with normal errors.
func bruteLower(parts []Part, cut, sigma float64) float64 {
	var l float64
	for _, p := range parts {
		z := (p.Value - cut) / sigma
		if p.Accepted > 0 {
			l += float64(p.Accepted) * math.Log(math.Max(normalCDF(z), 1e-300))
		}
		if r := p.Calls - p.Accepted; r > 0 {
			l += float64(r) * math.Log(math.Max(normalCDF(-z), 1e-300))
		}
	}
	return l
}

// largest is the largest value of f between a and b, where it has one maximum.
func largest(f func(float64) float64, a, b float64) float64 {
	return f(golden(func(x float64) float64 { return -f(x) }, a, b))
}

// leaves returns where lost, 0 at from, reaches target on the way to to.
func leaves(lost func(float64) float64, from, to, target float64) float64 {
	for range 100 {
		mid := (from + to) / 2
		if lost(mid) < target {
			from = mid
		} else {
			to = mid
		}
	}
	return from
}

const chiSquare95 = 3.841458820694124 // any table

func TestProfileOfSigmaByBruteForce(t *testing.T) {
	parts := beetles(t)
	c := mustFit(t, parts, AtLeast(1.77), Options{LackOfFit: WidenNever})
	profile := func(logSigma float64) float64 {
		return largest(func(cut float64) float64 { return bruteLower(parts, cut, math.Exp(logSigma)) }, 1.74, 1.80)
	}
	top := largest(profile, -4, -2)
	lost := func(s float64) float64 { return 2 * (top - profile(s)) }
	s := c.Lower.Sigma
	best := math.Log(s.Value)
	nearRel(t, "σ from", s.Lower, math.Exp(leaves(lost, best, best-1, chiSquare95)), 1e-6)
	nearRel(t, "σ to", s.Upper, math.Exp(leaves(lost, best, best+1, chiSquare95)), 1e-6)
}

// The profile of the acceptance probability at the limit: the curve is held to
// pass through (limit, p), so that only σ is free.
func TestProfileAtLimitByBruteForce(t *testing.T) {
	parts := beetles(t)
	const limit = 1.76
	c := mustFit(t, parts, AtLeast(limit), Options{LackOfFit: WidenNever})
	top := c.CallLogLikelihood
	lost := func(z float64) float64 { // z = Φ⁻¹(p)
		return 2 * (top - largest(func(logSigma float64) float64 {
			s := math.Exp(logSigma)
			return bruteLower(parts, limit-z*s, s)
		}, -5, -1))
	}
	z := normalQuantile(c.Lower.AtLimit.Value)
	nearRel(t, "p from", c.Lower.AtLimit.Lower, normalCDF(leaves(lost, z, z-2, chiSquare95)), 1e-6)
	nearRel(t, "p to", c.Lower.AtLimit.Upper, normalCDF(leaves(lost, z, z+2, chiSquare95)), 1e-6)
	// The delta interval of the band is close to it.
	b := c.Band(limit)
	near(t, "band from", b.Lower, c.Lower.AtLimit.Lower, 0.01)
	near(t, "band to", b.Upper, c.Lower.AtLimit.Upper, 0.01)
}

// Without a mixed part σ's upper bound is where the likelihood, maximised over
// the cut, has fallen by half the chi-square quantile of two degrees of freedom
// from its supremum: 1 for complete separation, the mixed part's own share for
// quasi-complete.
func TestSeparatedSigmaByBruteForce(t *testing.T) {
	const chiSquare2 = 5.991464547107979 // any table
	for name, accepted := range map[string][]int{"separated": {0, 0, 0, 10, 10, 10}, "quasi-separated": {0, 0, 3, 10, 10, 10}} {
		t.Run(name, func(t *testing.T) {
			var parts []Part
			var sup float64
			for i, a := range accepted {
				parts = append(parts, Part{Value: float64(i), Accepted: a, Calls: 10})
				if a > 0 && a < 10 {
					sup += saturated(float64(a), float64(10-a))
				}
			}
			c := mustFit(t, parts, AtLeast(2), Options{})
			lost := func(logSigma float64) float64 {
				s := math.Exp(logSigma)
				return 2 * (sup - largest(func(cut float64) float64 { return bruteLower(parts, cut, s) }, 1, 4))
			}
			s := c.Lower.Sigma
			nearRel(t, "σ to", s.Upper, math.Exp(leaves(lost, math.Log(0.05), 1, chiSquare2)), 1e-5)
			if name == "quasi-separated" {
				lostCut := func(cut float64) float64 {
					return 2 * (sup - largest(func(logSigma float64) float64 { return bruteLower(parts, cut, math.Exp(logSigma)) }, -12, 2))
				}
				nearRel(t, "cut to", c.Lower.Cut.Upper, leaves(lostCut, 2.1, 4, chiSquare2), 1e-5)
			}
		})
	}
}

// The change of a cut without a part, in one step, is near that of a full fit
// without it.
func TestInfluenceAgainstRefit(t *testing.T) {
	parts := study(t)
	c := mustFit(t, parts, studyLimits, Options{})
	most := 0.0
	for _, p := range c.Parts {
		most = math.Max(most, math.Abs(p.CutChange[0]))
	}
	checked := 0
	var leverage float64
	for i, p := range c.Parts {
		leverage += p.Leverage
		if math.Abs(p.CutChange[0]) < most/5 {
			continue
		}
		rest := append(append([]Part{}, parts[:i]...), parts[i+1:]...)
		without := mustFit(t, rest, studyLimits, Options{SkipIntervals: true})
		got, want := p.CutChange[0], without.Lower.Cut.Value-c.Lower.Cut.Value
		if math.Abs(got-want) > 0.25*math.Abs(want) {
			t.Errorf("part %d: %v in one step, %v by a fit", i+1, got, want)
		}
		checked++
	}
	if checked < 3 {
		t.Errorf("only %d parts checked", checked)
	}
	// Leverages sum to the number of parameters where observed and expected
	// information agree; they nearly do.
	near(t, "sum of leverages", leverage/3, 1, 0.05)
}

func TestPercentGRR(t *testing.T) {
	c := mustFit(t, study(t), studyLimits, Options{})
	e, ok := c.Lower.PercentGRR(studyLimits)
	if !ok {
		t.Fatal("no percent GRR")
	}
	var want struct {
		Sigma float64 `json:"sigma"`
	}
	reference(t, "msa_manual.curve_common_sigma", &want)
	nearRel(t, "percent GRR", e.Value, 600*want.Sigma/0.095, 1e-5)
	if _, ok := c.Lower.PercentGRR(AtLeast(0.45)); ok {
		t.Error("percent GRR without a tolerance")
	}
}
