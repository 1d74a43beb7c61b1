package verdict

import (
	"math"

	"samecall/agreement"
	"samecall/agreement/interval"
	"samecall/cmd/samecall/internal/study"
)

// Names of the criteria, as in the study file.
const (
	Effectiveness = "effectiveness"
	Miss          = "miss"
	FalseAlarm    = "false_alarm"
	Kappa         = "kappa"
)

// Levels are the accept and the conditional level of a criterion.
type Levels [2]float64

// Default holds the levels of the MSA reference manual (4th ed. 2010,
// chapter III C), the ones used where the study file says nothing.
var Default = map[string]Levels{
	Effectiveness: {0.90, 0.80},
	Miss:          {0.02, 0.05},
	FalseAlarm:    {0.05, 0.10},
	Kappa:         {0.75, 0.40},
}

// criteria are the levels in force: those of the study file, else the default.
func criteria(c study.Criteria) map[string]Levels {
	out := make(map[string]Levels)
	for name, own := range map[string]*[2]float64{
		Effectiveness: c.Effectiveness, Miss: c.Miss, FalseAlarm: c.FalseAlarm, Kappa: c.Kappa,
	} {
		out[name] = Default[name]
		if own != nil {
			out[name] = *own
		}
	}
	return out
}

// Criterion is one figure held against its levels.
type Criterion struct {
	Name     string
	Levels   Levels
	Estimate agreement.Estimate
	Met      Level // by the estimate; NotShown if there is none
	Evidence Evidence
	// Against is the level that Evidence speaks of: the accept level if the
	// estimate meets it, else the conditional level.
	Against float64

	Kind  string // of the parts that it rests on: "bad part", "good part" or "part"
	Parts int    // how many there are
	// More is how many parts more, of that kind, would settle an open
	// criterion if the rate stayed as it is; 0 where none would.
	More int
	// Best is the level that so many parts can show at the very best, without
	// a single error; meaningful for rates and shares.
	Best float64
}

// atMost reports whether a criterion is met from below, as a rate of errors is.
func (c Criterion) atMost() bool { return c.Name == Miss || c.Name == FalseAlarm }

// meets reports whether x is good enough for a level.
func (c Criterion) meets(x, level float64) bool {
	if c.atMost() {
		return x <= level
	}
	return x >= level
}

// newCriterion holds an estimate against its levels.
func newCriterion(name string, levels Levels, e agreement.Estimate, kind string, parts int, confidence float64) Criterion {
	c := Criterion{Name: name, Levels: levels, Estimate: e, Kind: kind, Parts: parts, Met: NotShown, Against: levels[1]}
	switch name {
	case Effectiveness:
		c.Best = interval.LowerLimit(parts, parts, confidence)
	case Miss, FalseAlarm:
		c.Best = interval.UpperLimit(0, parts, confidence)
	}
	if e.Absent != nil {
		return c
	}
	switch {
	case c.meets(e.Value, levels[0]):
		c.Met, c.Against = Accept, levels[0]
	case c.meets(e.Value, levels[1]):
		c.Met = Conditional
	default:
		c.Met = Reject
	}
	if e.Unbounded != nil {
		return c
	}
	// The limit on the far side of the level decides, for itself at the
	// confidence: the worse one that a level met is kept, the better one that
	// a level missed stays missed.
	worse, better := e.OneSided.Lower, e.OneSided.Upper
	if c.atMost() {
		worse, better = better, worse
	}
	switch {
	case c.Met != Reject && c.meets(worse, c.Against):
		c.Evidence = Shown
	case c.Met == Reject && !c.meets(better, c.Against):
		c.Evidence = Contradicted
	}
	return c
}

// manyTimes is how much larger a study may get before more parts are no
// answer any longer.
const manyTimes = 1000

// settle finds how many parts more would settle an open criterion, given the
// one-sided limit of the figure in a study so many times as large.
func (c *Criterion) settle(limit func(times float64) float64) {
	if c.Evidence != Open || c.Estimate.Absent != nil || c.Estimate.Unbounded != nil || c.Parts == 0 {
		return
	}
	settled := func(parts int) bool {
		at := limit(float64(parts) / float64(c.Parts))
		return c.meets(at, c.Against) == (c.Met != Reject)
	}
	most := manyTimes * c.Parts
	if !settled(most) {
		return
	}
	lo, hi := c.Parts, most // settled(hi) and, as a rule, not settled(lo)
	for hi-lo > 1 {
		if mid := lo + (hi-lo)/2; settled(mid) {
			hi = mid
		} else {
			lo = mid
		}
	}
	c.More = hi - c.Parts
}

// share gives the one-sided limit of a share of parts, or of a rate worth so
// many calls, in a larger study of the same rate.
func (c Criterion) share(worth, confidence float64) func(times float64) float64 {
	return func(times float64) float64 {
		i := interval.Exact(c.Estimate.Value*worth*times, worth*times, max(0, 2*confidence-1))
		if c.wantsUpper() {
			return i.Upper
		}
		return i.Lower
	}
}

// coefficient gives the one-sided limit of a coefficient in a larger study:
// its distance from the estimate shrinks with the square root.
func (c Criterion) coefficient() func(times float64) float64 {
	limit := c.Estimate.OneSided.Lower
	if c.wantsUpper() {
		limit = c.Estimate.OneSided.Upper
	}
	return func(times float64) float64 {
		return c.Estimate.Value + (limit-c.Estimate.Value)/math.Sqrt(times)
	}
}

// wantsUpper reports which limit settles the criterion: the upper one for a
// rate that is low enough, or for a figure that is too low.
func (c Criterion) wantsUpper() bool { return c.atMost() == (c.Met != Reject) }
