package signal

import (
	"math"

	"gonum.org/v1/gonum/mathext"
	"gonum.org/v1/gonum/stat/distuv"
)

// LackOfFitRule says what lack of fit does to the intervals.
type LackOfFitRule int

const (
	// WidenIfFound widens the intervals by the heterogeneity factor where the
	// test finds lack of fit at the 10 % level.
	WidenIfFound LackOfFitRule = iota
	// WidenAlways widens them by the factor wherever it is above 1.
	WidenAlways
	// WidenNever reports the test only.
	WidenNever
)

// LackOfFit compares the parts with the curve: do calls scatter about it as
// binomial counts do, or do parts differ by more than their value?
//
// Pearson's X² is summed over the parts with n·P·Q of at least 0.1 by the
// fitted curve: a part that is nearly sure to be accepted or rejected carries
// no information on scatter, and one stray call there would swamp the sum
// (such a part is an outlier's matter), nor does a part called once, whose X² is
// its odds whatever the curve. Even so the counts are small, so the
// tail is that of a gamma distribution with the exact mean and variance of X²
// given the curve, rather than chi-square. The factor X²/df follows Finney
// (Probit Analysis, 3rd ed. 1971, heterogeneity factor); where it applies, the
// cut-off of a likelihood-ratio interval is the factor times the F(1, df)
// quantile.
type LackOfFit struct {
	Deviance   float64 // over all parts, against a share of its own for each
	DevianceDF int     // parts minus parameters; meaningful if positive
	X2         float64 // Pearson's, over the parts that count
	Parts      int     // how many count
	DF         int
	P          float64 // meaningful if Tested
	Tested     bool
	Factor     float64 // X2/DF, at least 1
	Applied    bool    // the factor widens the intervals
	Why        string  // why there is no test
}

const (
	mixingFloor     = 0.1
	lackOfFitSignif = 0.10
)

// judgeFit fills LackOfFit, the factor and the interval cut-off.
func (c *Curve) judgeFit() {
	f := &c.LackOfFit
	at := c.at()
	var variance float64
	parts, once := 0, false
	for i := range c.Parts {
		p := &c.Parts[i]
		if p.NoCut {
			continue
		}
		parts++
		f.Deviance += p.Residual * p.Residual
		pr := p.Fitted
		npq := float64(p.Calls) * pr * (1 - pr)
		if npq < mixingFloor || !c.likelihoodNear(at, c.sc.in(p.Value)) {
			continue
		}
		if p.Calls < 2 {
			once = true
			continue
		}
		f.Parts++
		f.X2 += sq(float64(p.Accepted)-float64(p.Calls)*pr) / npq
		variance += 2 + (1-6*pr*(1-pr))/npq
	}
	f.DevianceDF = parts - c.Parameters
	f.DF = f.Parts - c.free
	f.Factor = 1
	c.crit = sq(twoSided(c.Options.Confidence))
	if c.free == 0 {
		f.DF, f.Why = 0, "no limit was fitted by maximum likelihood"
		return
	}
	if f.DF < 1 {
		f.DF, f.Why = 0, "too few parts near the limits with both kinds of call to be expected"
		if once {
			f.Why = "too few parts near the limits were called more than once: only repeated calls show whether parts scatter"
		}
		return
	}
	mean := float64(f.DF)
	v := math.Max(variance*mean/float64(f.Parts), 1e-9)
	f.P = mathext.GammaIncRegComp(mean*mean/v, f.X2*mean/v)
	f.Tested = true
	f.Factor = math.Max(1, f.X2/mean)
	f.Applied = f.Factor > 1 && (c.Options.LackOfFit == WidenAlways || c.Options.LackOfFit == WidenIfFound && f.P < lackOfFitSignif)
	if f.Applied {
		c.factor = f.Factor
		t := distuv.StudentsT{Mu: 0, Sigma: 1, Nu: mean}.Quantile(0.5 + c.Options.Confidence/2)
		c.crit = f.Factor * t * t
		c.warn(WarnLackOfFit, "parts differ by more than their value and chance explain (lack of fit, p = %.2g): intervals are widened by the factor √%.3g", f.P, f.Factor)
	}
}

// likelihoodNear tells whether the limit nearest to t was fitted by maximum
// likelihood.
func (c *Curve) likelihoodNear(at curveAt, t float64) bool {
	z := at.z(t)
	switch {
	case !at.has[1]:
		return c.hasCov[cutL]
	case !at.has[0]:
		return c.hasCov[cutU]
	case math.Abs(z[0]) <= math.Abs(z[1]):
		return c.hasCov[cutL]
	}
	return c.hasCov[cutU]
}
