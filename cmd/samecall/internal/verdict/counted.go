package verdict

import (
	"fmt"
	"slices"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
)

// Why a kappa does not count for the verdict. What it says of the inspection
// is then left to the shares and rates of calls.
const (
	prevails = "one category prevails"
	below1   = "it is below −1: its agreement and its chance are of different parts"
)

// leastOfParts is the share of the parts that chance is taken from which must
// be called twice or more for a kappa over those calls to be used. Our own
// choice, no source.
const leastOfParts = 0.2

// aside says why a kappa is not counted, so many of its parts being compared
// of those called; empty where it counts.
func aside(e agreement.Estimate, compared, called int) string {
	switch {
	case e.Absent != nil:
		return ""
	case e.Prevalent:
		return prevails
	}
	return unusable(e, compared, called)
}

// unusable says why a kappa over several calls on a part tells nothing: its
// agreement is that of the parts with two calls or more, its chance that of
// all parts called, and where those are many more the one says nothing of the
// other. Empty where it does tell.
func unusable(e agreement.Estimate, compared, called int) string {
	switch {
	case float64(compared) < leastOfParts*float64(called):
		return fmt.Sprintf("it rests on %s of %s", format.Count(compared), format.Counted(called, "part"))
	case e.Value < -1 && !onLevel(e.Value, -1):
		return below1
	}
	return ""
}

// called counts the parts with a call by an appraiser, or by anybody.
func called(r *judge.Result, a int) int {
	n := 0
	s := r.Study.Ratings
	for _, p := range r.Agreement.Patterns.List {
		row := p.Row
		if a != Everyone {
			row = s.CallsIn(p.Row, a)
		}
		if slices.ContainsFunc(row, func(c agreement.Category) bool { return c != agreement.Missing }) {
			n += p.Parts
		}
	}
	return n
}

// comparedBySame counts the parts with two calls by the same appraiser.
func comparedBySame(r *judge.Result) int {
	n := 0
	s := r.Study.Ratings
	for _, p := range r.Agreement.Patterns.List {
		for a := range r.Study.Appraisers {
			if count(s, s.CallsIn(p.Row, a), p.Reference).calls > 1 {
				n += p.Parts
				break
			}
		}
	}
	return n
}

// counts reports whether a criterion is among what the verdict rests on.
func (c Criterion) counts() bool { return c.Aside == "" }

// tooFewAlike reports whether the data show that a share of parts called alike
// is below the accept level of effectiveness. Where one category prevails, the
// share says what kappa cannot; and nobody is right on every trial on more
// parts than are called alike.
func (f *finder) tooFewAlike(s agreement.Share) bool {
	return s.Absent == nil && s.Of >= leastRepeated && side(s.OneSided.Upper, f.levels[Effectiveness][0]) < 0
}

// alikeText tells such a share.
func (f *finder) alikeText(s agreement.Share) string {
	return fmt.Sprintf("%s of the parts are called alike, less than %s", format.Share(s), Criterion{Name: Effectiveness}.Level(f.levels[Effectiveness][0]))
}

// asides says which figures stand worse than the verdict and are not counted,
// and why: one sentence for each reason.
func (v *Verdict) asides() []string {
	type named struct {
		why     string
		figures []string
		level   float64
	}
	var found []named
	add := func(who string, c Criterion) {
		if c.counts() || c.Met == NotShown || c.Met <= v.Overall {
			return
		}
		i := slices.IndexFunc(found, func(n named) bool { return n.why == c.Aside })
		if i < 0 {
			i = len(found)
			found = append(found, named{why: c.Aside, level: c.Levels[min(v.Overall, Conditional)]})
		}
		found[i].figures = append(found[i].figures, c.of([]string{who})+" "+c.Found())
	}
	for _, a := range v.Appraisers {
		for _, c := range a.Criteria {
			add(a.Name, c)
		}
	}
	if v.Between != nil {
		add("", *v.Between)
	}
	var out []string
	for _, n := range found {
		figures := n.figures
		if more := len(figures) - mostAlso; more > 0 {
			figures = append(slices.Clone(figures[:mostAlso]), format.Count(more)+" more")
		}
		verb := are(len(n.figures))
		out = append(out, stop(fmt.Sprintf("%s %s below %s and %s not counted, since %s", capital(and(figures)), verb, levelText(n.level), verb, n.why)))
	}
	return out
}
