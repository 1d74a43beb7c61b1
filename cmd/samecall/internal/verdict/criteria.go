package verdict

import (
	"cmp"
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
	// Aside says why the verdict does not rest on it; empty where it does.
	Aside    string
	Evidence Evidence
	// Against is the level that Evidence speaks of: the accept level if the
	// estimate meets it, else the conditional level.
	Against float64

	Confidence float64 // of the one-sided limits that Evidence rests on
	Kind       string  // of the parts that it rests on: "bad part", "good part" or "part"
	Parts      int     // how many there are
	// More is how many parts more, of that kind, would settle an open
	// criterion if the rate stayed as it is; 0 where none would.
	More    int
	between bool // the kappa between appraisers, not that of one
	// Best is the level that so many parts can show at the very best, without
	// a single error; meaningful for rates and shares.
	Best float64
}

// atMost reports whether a criterion is met from below, as a rate of errors is.
func (c Criterion) atMost() bool { return c.Name == Miss || c.Name == FalseAlarm }

// meets reports whether x is good enough for a level.
func (c Criterion) meets(x, level float64) bool {
	if c.atMost() {
		return side(x, level) <= 0
	}
	return side(x, level) >= 0
}

// side tells on which side of a level a figure lies: −1, 1, or 0 on it. A
// kappa of three quarters, computed from sums, may differ from it in its last
// digit.
func side(x, level float64) int {
	if onLevel(x, level) {
		return 0
	}
	return cmp.Compare(x, level)
}

func onLevel(x, level float64) bool { return math.Abs(x-level) <= 1e-12 }

// newCriterion holds an estimate against its levels.
func newCriterion(name string, levels Levels, e agreement.Estimate, kind string, parts int, confidence float64) Criterion {
	c := Criterion{Name: name, Levels: levels, Estimate: e, Confidence: confidence, Kind: kind, Parts: parts, Met: NotShown, Against: levels[1]}
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
	if e.Unbounded == nil && c.settledBy(c.deciding(e.OneSided)) {
		c.Evidence = Shown
		if c.Met == Reject {
			c.Evidence = Contradicted
		}
	}
	return c
}

// deciding picks the one-sided limit that settles a criterion. A level that
// is met is shown by the limit on the worse side; one that is missed is
// contradicted by the limit on the better side.
func (c Criterion) deciding(oneSided interval.Interval) float64 {
	if c.atMost() == (c.Met != Reject) {
		return oneSided.Upper
	}
	return oneSided.Lower
}

// settledBy reports whether the deciding limit lies on the same side of the
// level as the estimate.
func (c Criterion) settledBy(limit float64) bool {
	return c.meets(limit, c.Against) == (c.Met != Reject)
}
