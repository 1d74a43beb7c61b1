package agreement

import (
	"fmt"
	"math"
	"slices"
)

// Warning is something to be said with the result, not a failure.
type Warning struct {
	Code string // fixed, for programs: "prevalence"
	Text string // for people
}

// Error returns the text.
func (w Warning) Error() string { return w.Text }

const (
	// Kappa is called misleading when one category holds at least this share
	// of the calls and AC1, which does not suffer from that, is higher by at
	// least prevalenceGap. Our own choice, no source; the paradox itself is
	// Feinstein & Cicchetti's (Journal of Clinical Epidemiology 43 (1990) 543–549).
	prevalentShare = 0.8
	prevalenceGap  = 0.1
)

// prevalent reports whether one category holds so many calls that a coefficient
// is pulled down by it: AC1 of the same calls, which is not, is higher by far.
func prevalent(c coefficient, sums []float64, value float64) bool {
	shares := c.shares(sums)
	if len(shares) < 2 || slices.Max(shares) < prevalentShare {
		return false
	}
	observed, _, _ := c.disagreements(sums)
	var S float64
	for _, p := range shares {
		S += p * p
	}
	ac1 := 1 - observed/(1-(1-S)/float64(len(shares)-1))
	return ac1-value >= prevalenceGap
}

func (s *study) warnings(a *Analysis) []Warning {
	return slices.Concat(s.prevalence(a), s.fewResamples())
}

// fewResamples warns where the confidence asks for quantiles that so few
// resamples do not have.
func (s *study) fewResamples() []Warning {
	tail := (1 - s.opt.Confidence) / 2
	if s.weights == nil || float64(s.opt.Resamples)*tail >= fewestBeyond {
		return nil
	}
	return []Warning{{"few_resamples", fmt.Sprintf(
		"%d resamples are too few for limits of kappas at %.10g %%: fewer than %d lie beyond each. Ask for %.0f or more.",
		s.opt.Resamples, 100*s.opt.Confidence, fewestBeyond, math.Ceil(fewestBeyond/tail))}}
}

func (s *study) prevalence(a *Analysis) []Warning {
	affected := a.Between.Fleiss.Prevalent || a.All != nil && a.All.Kappa.Prevalent
	for i := range a.Within {
		affected = affected || a.Within[i].Kappa.Prevalent || a.Against != nil && a.Against[i].Kappa.Prevalent
	}
	if !affected {
		return nil
	}
	beside := "the shares of parts"
	if ac1 := a.Between.AC1; ac1.Absent == nil {
		beside += fmt.Sprintf(" and AC1 (%.2f)", ac1.Value)
	}
	return []Warning{{"prevalence", fmt.Sprintf(
		"%.3g %% of all calls are of one category: kappa is pulled down by that and understates the agreement. Read it beside %s.",
		math.Floor(1000*s.commonest())/10, beside)}}
}

// commonest returns the share of all calls that the commonest category holds.
func (s *study) commonest() float64 {
	counts := make([]int, s.Categories())
	calls := 0
	for i, row := range s.rows {
		one := make([]int, s.Categories())
		calls += s.times[i] * tally(row, one)
		for k, n := range one {
			counts[k] += s.times[i] * n
		}
	}
	most := 0
	for _, n := range counts {
		most = max(most, n)
	}
	if calls == 0 {
		return 0
	}
	return float64(most) / float64(calls)
}
