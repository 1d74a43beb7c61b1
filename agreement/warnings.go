package agreement

import (
	"fmt"
	"math"
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

func (s *study) warnings(a *Analysis) []Warning {
	var out []Warning
	b := a.Between
	share := s.commonest()
	if share >= prevalentShare && b.Fleiss.Absent == nil && b.AC1.Absent == nil && b.AC1.Value-b.Fleiss.Value >= prevalenceGap {
		out = append(out, Warning{"prevalence", fmt.Sprintf(
			"%.3g %% of all calls are of one category: kappa is pulled down by that and understates the agreement. Read it beside the shares of parts and AC1 (%.2f).",
			math.Floor(1000*share)/10, b.AC1.Value)})
	}
	return out
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
