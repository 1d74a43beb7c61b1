package verdict

import (
	"slices"

	"samecall/agreement"
	"samecall/agreement/interval"
	"samecall/cmd/samecall/internal/judge"
)

// Verdict is the answer to whether an inspection is fit for use.
type Verdict struct {
	Overall    Level
	Appraisers []Appraiser
	// Between is the kappa of calls by different appraisers against the levels
	// of kappa; nil with one appraiser.
	Between  *Criterion
	Reasons  []string // the one or two that decide, and what else misses its level
	Carry    []string // how far the data carry each of the deciding reasons
	Causes   []Cause
	Next     []string
	Cautions []string
}

// Appraiser is the verdict on one appraiser.
type Appraiser struct {
	Name     string
	Verdict  Level
	Criteria []Criterion
}

// Cautions go with every verdict.
var cautions = []string{
	"The customer's requirements, local rules and licensed practice come before this verdict.",
	"An attribute study alone should not release a safety characteristic.",
}

// Decide returns the verdict on a result.
func Decide(r *judge.Result) *Verdict {
	levels := criteria(r.Study.Settings.Criteria)
	v := &Verdict{Cautions: slices.Clone(cautions)}
	for a, name := range r.Study.Appraisers {
		ap := Appraiser{Name: name, Criteria: appraiserCriteria(r, a, levels)}
		ap.Verdict = worst(ap.Criteria)
		v.Appraisers = append(v.Appraisers, ap)
		v.Overall = max(v.Overall, ap.Verdict)
	}
	if b := r.Agreement.Between; b.Share.Absent == nil {
		c := newCriterion(Kappa, levels[Kappa], b.DifferentAppraisers, "part", b.Share.Of, r.Options.Confidence)
		c.settle(coefficient(b.DifferentAppraisers, c.Parts))
		c.between = true
		c.Aside = aside(c.Estimate, b.Share.Of, called(r, Everyone))
		v.Between = &c
		if v.betweenCounts() {
			v.Overall = max(v.Overall, c.Met)
		}
	}
	if len(v.Appraisers) == 0 {
		v.Overall = NotShown
	}
	v.Causes = causes(r, levels, v.Overall != Accept)
	v.Reasons, v.Carry = reasons(r, v)
	v.Next = next(r, v)
	return v
}

// betweenCounts reports whether the verdict rests on the kappa between
// appraisers. Calls that are all alike have none, and are no fault.
func (v *Verdict) betweenCounts() bool {
	return v.Between != nil && v.Between.Met != NotShown && v.Between.counts()
}

// worst is the worst level of the criteria that count.
func worst(criteria []Criterion) Level {
	level := Accept
	for _, c := range criteria {
		if c.counts() {
			level = max(level, c.Met)
		}
	}
	return level
}

// appraiserCriteria holds the figures of one appraiser against the levels.
func appraiserCriteria(r *judge.Result, a int, levels map[string]Levels) []Criterion {
	confidence := r.Options.Confidence
	if r.Agreement.All == nil {
		var out []Criterion
		for _, name := range []string{Effectiveness, Miss, FalseAlarm, Kappa} {
			out = append(out, newCriterion(name, levels[name], agreement.Estimate{Absent: judge.ErrNoReference}, "part", 0, confidence))
		}
		return out
	}
	g := r.Agreement.Against[a]
	bad, good := wrongByPart(r, a)
	parts := g.Effectiveness.Of

	effectiveness := newCriterion(Effectiveness, levels[Effectiveness], g.Effectiveness.Estimate, "part", parts, confidence)
	effectiveness.settle(shareOfParts(g.Effectiveness.Value, confidence))
	miss := newCriterion(Miss, levels[Miss], g.Miss.Estimate, "bad part", total(bad), confidence)
	miss.settle(rateOverCalls(bad, confidence))
	falseAlarm := newCriterion(FalseAlarm, levels[FalseAlarm], g.FalseAlarm.Estimate, "good part", total(good), confidence)
	falseAlarm.settle(rateOverCalls(good, confidence))
	kappa := newCriterion(Kappa, levels[Kappa], g.Kappa, "part", parts, confidence)
	kappa.settle(coefficient(g.Kappa, parts))
	kappa.Aside = aside(g.Kappa, parts, parts) // its chance is that of the calls it compares
	return []Criterion{effectiveness, miss, falseAlarm, kappa}
}

// wrongByPart counts the bad and the good parts that an appraiser called, by
// how many calls it made on them and how many of those accept a bad part or
// reject a good one. Without accepting categories there are neither bad nor
// good parts.
func wrongByPart(r *judge.Result, a int) (bad, good []interval.Cluster) {
	s := r.Study.Ratings
	if !s.HasAccept() {
		return nil, nil
	}
	// parts[good or bad][calls][events], made as they occur
	var parts [2][][]int
	for _, p := range r.Agreement.Patterns.List {
		ref := p.Reference
		if ref == agreement.Missing {
			continue
		}
		accept := s.Accepts(ref)
		calls, events := 0, 0
		for _, call := range s.CallsIn(p.Row, a) {
			if call == agreement.Missing {
				continue
			}
			calls++
			if call != ref && s.Accepts(call) != accept {
				events++
			}
		}
		if calls == 0 {
			continue
		}
		kind := 0
		if accept {
			kind = 1
		}
		if parts[kind] == nil {
			parts[kind] = make([][]int, s.Trials(a)+1)
		}
		if parts[kind][calls] == nil {
			parts[kind][calls] = make([]int, calls+1)
		}
		parts[kind][calls][events] += p.Parts
	}
	return clusters(parts[0]), clusters(parts[1])
}

// clusters lists how many parts had so many events in so many calls, fewest
// calls first: sums over them depend on the order.
func clusters(parts [][]int) []interval.Cluster {
	var out []interval.Cluster
	for calls, byEvents := range parts {
		for events, n := range byEvents {
			if n > 0 {
				out = append(out, interval.Cluster{Events: events, Calls: calls, Parts: n})
			}
		}
	}
	return out
}

// total is the number of parts in clusters.
func total(clusters []interval.Cluster) int {
	n := 0
	for _, c := range clusters {
		n += c.Parts
	}
	return n
}
