package signal

import (
	"math"

	"gonum.org/v1/gonum/mathext"
	"gonum.org/v1/gonum/stat/distuv"
)

// Test is a likelihood-ratio test: twice the log-likelihood that a restriction
// costs, against chi-square; where lack of fit widens the intervals, over the
// factor and the degrees of freedom, against F.
type Test struct {
	Statistic   float64 // twice the difference of log-likelihoods
	DF          int
	Factor      float64 // heterogeneity factor it is measured by, 1 if none
	Denominator int     // degrees of freedom of the factor; 0: chi-square
	P           float64
	Done        bool
	Why         string // why there is no test
}

func likelihoodRatio(full, restricted float64, df int, fit LackOfFit) Test {
	t := Test{Statistic: math.Max(0, 2*(full-restricted)), DF: df, Factor: 1, Done: true}
	if !finite(t.Statistic) {
		return Test{Why: "a restricted fit did not converge"}
	}
	if fit.Applied {
		t.Factor, t.Denominator = fit.Factor, fit.DF
		f := distuv.F{D1: float64(df), D2: float64(fit.DF)}
		t.P = f.Survival(t.Statistic / t.Factor / float64(df))
		return t
	}
	t.P = mathext.GammaIncRegComp(float64(df)/2, t.Statistic/2)
	return t
}

// sameSigma tests whether both limits have one σ, by fitting the other model.
func (d *dataset) sameSigma(c *Curve) *Test {
	e := *d
	e.options.TwoSigmas = !d.options.TwoSigmas
	s := newSolver(e.model(0, len(d.x), d.has))
	g := s.m.groups[0]
	for k := range 2 {
		s.theta[g.cut[k]], s.theta[g.logSigma[k]] = c.local[2*k], c.local[2*k+1]
	}
	out := s.maximise(absent, 1e-11)
	if !out.converged || out.atBound {
		return &Test{Why: "the other fit did not converge"}
	}
	one, two := c.blockLogLikelihood, out.loglik
	if d.options.TwoSigmas {
		one, two = two, one
	}
	t := likelihoodRatio(two, one, 1, c.LackOfFit)
	return &t
}
