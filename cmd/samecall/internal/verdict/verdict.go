package verdict

import (
	"samecall/agreement"
	"samecall/cmd/samecall/internal/judge"
)

// Verdict is the answer to whether an inspection is fit for use.
type Verdict struct {
	Overall    Level
	Appraisers []Appraiser
	Between    *Criterion // Fleiss' kappa of all calls against the levels of kappa; nil with one appraiser
	Reasons    []string   // the one or two that decide
	Carry      []string   // how far the data carry the reasons
	Causes     []Cause
	Next       []string
	Cautions   []string
}

// Appraiser is the verdict on one appraiser.
type Appraiser struct {
	Name     string
	Verdict  Level
	Criteria []Criterion
}

// Cautions go with every verdict.
var cautions = []string{
	"The customer's requirements, local rules and the judgement of licensed practice come before this verdict.",
	"An attribute study alone should not release a safety characteristic.",
}

// Decide returns the verdict on a result.
func Decide(r *judge.Result) *Verdict {
	levels := criteria(r.Study.Settings.Criteria)
	v := &Verdict{Cautions: cautions}
	for a, name := range r.Study.Appraisers {
		ap := Appraiser{Name: name, Criteria: appraiserCriteria(r, a, levels)}
		ap.Verdict = worst(ap.Criteria)
		v.Appraisers = append(v.Appraisers, ap)
		v.Overall = max(v.Overall, ap.Verdict)
	}
	if b := r.Agreement.Between; b.Share.Absent == nil {
		c := newCriterion(Kappa, levels[Kappa], b.Fleiss, "part", b.Share.Of, r.Options.Confidence)
		c.settle(c.coefficient())
		v.Between = &c
		// Calls that are all alike have no kappa, and are no fault.
		if c.Met != NotShown {
			v.Overall = max(v.Overall, c.Met)
		}
	}
	if len(v.Appraisers) == 0 {
		v.Overall = NotShown
	}
	v.Causes = causes(r, levels)
	v.Reasons, v.Carry = reasons(r, v)
	v.Next = next(r, v)
	return v
}

func worst(criteria []Criterion) Level {
	level := Accept
	for _, c := range criteria {
		level = max(level, c.Met)
	}
	return level
}

// appraiserCriteria holds the figures of one appraiser against the levels.
func appraiserCriteria(r *judge.Result, a int, levels map[string]Levels) []Criterion {
	confidence := r.Options.Confidence
	if r.Agreement.All == nil {
		none := func(name string) Criterion {
			return newCriterion(name, levels[name], agreement.Estimate{Absent: judge.ErrNoReference}, "part", 0, confidence)
		}
		return []Criterion{none(Effectiveness), none(Miss), none(FalseAlarm), none(Kappa)}
	}
	g := r.Agreement.Against[a]
	bad, good := calledParts(r, a)
	effectiveness := newCriterion(Effectiveness, levels[Effectiveness], g.Effectiveness.Estimate, "part", g.Effectiveness.Of, confidence)
	effectiveness.settle(effectiveness.share(float64(g.Effectiveness.Of), confidence))
	miss := newCriterion(Miss, levels[Miss], g.Miss.Estimate, "bad part", bad, confidence)
	miss.settle(miss.share(g.Miss.Effective, confidence))
	falseAlarm := newCriterion(FalseAlarm, levels[FalseAlarm], g.FalseAlarm.Estimate, "good part", good, confidence)
	falseAlarm.settle(falseAlarm.share(g.FalseAlarm.Effective, confidence))
	kappa := newCriterion(Kappa, levels[Kappa], g.Kappa, "part", g.Effectiveness.Of, confidence)
	kappa.settle(kappa.coefficient())
	return []Criterion{effectiveness, miss, falseAlarm, kappa}
}

// calledParts counts the bad and the good parts that an appraiser called.
func calledParts(r *judge.Result, a int) (bad, good int) {
	for part := range r.Study.Parts {
		ref := r.Study.Ratings.Reference(part)
		if ref == agreement.Missing || !called(r.Study.Ratings.Calls(part, a)) {
			continue
		}
		if r.Study.Ratings.Accepts(ref) {
			good++
		} else {
			bad++
		}
	}
	return bad, good
}

func called(calls []agreement.Category) bool {
	for _, c := range calls {
		if c != agreement.Missing {
			return true
		}
	}
	return false
}
