package verdict

import (
	"fmt"
	"slices"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
	"samecall/signal"
)

// mostOf is the share of the appraisers, and at least two, from which on a
// fault of each is taken for one of the method. Our own choice, no source.
const mostOf = 0.75

// most reports whether n appraisers are most of several.
func (f *finder) most(n int) bool {
	return n > 1 && float64(n) >= mostOf*float64(len(f.Study.Appraisers))
}

// widerSigma is how many times the σ of the others an appraiser's must be
// for its doubt to be its own, where σ is known. Our own choice, no source.
const widerSigma = 1.5

// leastRepeated is how many parts an appraiser must have called twice for the
// calls to be known to differ: one part tells of itself only. Our own choice,
// no source.
const leastRepeated = 2

// inconsistent: the data show that an appraiser's calls differ from trial to
// trial. If that goes for most, it is not the person; nor is it where all are
// in doubt over the same width.
func inconsistent(f *finder) []Cause {
	var out []Cause
	var all []unrepeated
	for a, w := range f.Agreement.Within {
		u := f.unrepeated(a)
		if !u.known || f.has(a, codeKinds, codeGrades) {
			continue
		}
		if all = append(all, u); f.asSureAsOthers(a) {
			continue
		}
		out = append(out, Cause{
			Code: codeInconsistent, Appraisers: []int{a},
			Text: fmt.Sprintf("%s does not repeat the same calls: %s of %s %s mixed; %s.",
				f.name(a), format.Count(len(w.Mixed)), format.Counted(w.Share.Of, "part"), are(len(w.Mixed)), u.text),
			Do: stop(fmt.Sprintf("Go through the mixed parts with %s: lighting, handling, what counts as a reject. Then repeat the trials. Mixed: %s",
				f.name(a), f.theParts(w.Mixed))),
		})
	}
	if len(all) == 0 {
		return f.togetherInconsistent()
	}
	if !f.most(len(all)) {
		return out
	}
	why := "kappa over their trials is less than " + levelText(f.levels[Kappa][0])
	if slices.ContainsFunc(all, func(u unrepeated) bool { return u.byShare }) {
		why += ", or less than " + Criterion{Name: Effectiveness}.Level(f.levels[Effectiveness][0]) + " of the parts are called alike"
	}
	return []Cause{{
		Code: codeInconsistent,
		Text: fmt.Sprintf("%d of %d appraisers do not repeat their own calls (%s). That points to the method or the gauge, not to one person.%s",
			len(all), len(f.Study.Appraisers), why, f.zoneWidth()),
		Do: stop("Look at the method first: gauge and fixture, lighting, the written standard for the call. " + f.mixedForMany()),
	}}
}

// togetherInconsistent: no appraiser's own trials show it, but those of all
// together do.
func (f *finder) togetherInconsistent() []Cause {
	k, level := f.Agreement.Between.SameAppraiser, f.levels[Kappa][0]
	n := len(f.Study.Appraisers)
	if n < 2 || k.Absent != nil || k.Prevalent || k.Unbounded != nil || side(k.OneSided.Upper, level) >= 0 ||
		unusable(k, comparedBySame(f.Result), called(f.Result, Everyone)) != "" {
		return nil
	}
	for a := range n { // these have a cause of their own
		if f.has(a, codeKinds, codeGrades) {
			return nil
		}
	}
	return []Cause{{
		Code: codeInconsistent,
		Text: fmt.Sprintf("The appraisers together do not repeat their own calls: kappa within appraisers is %s. Of none alone does the study show it.%s",
			below(k, level), f.zoneWidth()),
		Do: stop("Look at the method first: gauge and fixture, lighting, the written standard for the call. " + f.mixedForMany()),
	}}
}

// unrepeated is what shows that an appraiser's calls differ from trial to trial.
type unrepeated struct {
	known   bool
	byShare bool // by the share of parts called alike, since one category prevails
	text    string
}

// unrepeated: kappa over an appraiser's trials is below the accept level of
// kappa, and the data show it. Where one category prevails, which pulls kappa
// down, the share of parts called alike must show it instead.
func (f *finder) unrepeated(a int) unrepeated {
	w, level := f.Agreement.Within[a], f.levels[Kappa][0]
	k := w.Kappa
	switch {
	case k.Absent != nil || side(k.Value, level) >= 0 || w.Share.Of < leastRepeated:
		return unrepeated{}
	case k.Prevalent:
		return unrepeated{known: f.tooFewAlike(w.Share), byShare: true, text: f.alikeText(w.Share)}
	case k.Unbounded != nil || side(k.OneSided.Upper, level) >= 0 || unusable(k, w.Share.Of, called(f.Result, a)) != "":
		return unrepeated{}
	}
	return unrepeated{known: true, text: "kappa over the trials is " + below(k, level)}
}

// levelText writes a level of kappa.
func levelText(level float64) string { return Criterion{Name: Kappa}.Level(level) }

// below tells a kappa that is less than a level.
func below(e agreement.Estimate, level float64) string {
	text := besides(e.Value, format.Figure(e.Value), level)
	if e.Unbounded == nil {
		text += " " + format.FigureRange(e.Interval)
	}
	return text + ", less than " + levelText(level)
}

// alsoInconsistent completes a cause that keeps the rule above from an
// appraiser, confused kinds or leaning grades: its calls may differ from trial
// to trial as well.
func alsoInconsistent(f *finder) {
	level := f.levels[Kappa][0]
	told := make(map[int]bool)
	for i, c := range f.found {
		if c.Code != codeKinds && c.Code != codeGrades {
			continue
		}
		var who, kappas []string
		for a, w := range f.Agreement.Within {
			if !c.of(a) || told[a] {
				continue
			}
			u := f.unrepeated(a)
			if !u.known {
				continue
			}
			told[a] = true
			if who = append(who, f.name(a)); !u.byShare {
				kappas = append(kappas, besides(w.Kappa.Value, format.Figure(w.Kappa.Value), level))
			}
		}
		verb, found := "do", "is "+and(kappas)+", "
		if len(who) == 1 {
			verb = "does"
		}
		if len(who) > manyNames {
			found = "is "
		}
		switch {
		case len(kappas) < len(who): // shares of parts among them
			f.found[i].Text += fmt.Sprintf(" Nor %s %s repeat the same calls.", verb, some(who))
		case len(who) > 0:
			f.found[i].Text += fmt.Sprintf(" Nor %s %s repeat the same calls: kappa over the trials %sless than %s.", verb, some(who), found, levelText(level))
		}
	}
}

// asSureAsOthers reports whether an appraiser is in doubt over a width of
// values no larger than that of the others.
func (f *finder) asSureAsOthers(a int) bool {
	if f.Zone == nil || f.Zone.Curves == nil {
		return false
	}
	own, known := sigma(f.Zone.Curves.Each[a])
	var others []float64
	for b, c := range f.Zone.Curves.Each {
		if s, ok := sigma(c); ok && b != a {
			others = append(others, s)
		}
	}
	if !known || len(others) == 0 {
		return false
	}
	slices.Sort(others)
	median := (others[(len(others)-1)/2] + others[len(others)/2]) / 2
	return own < widerSigma*median
}

// sigma is the larger σ of a curve, where it has one.
func sigma(c *signal.Curve) (s float64, known bool) {
	if c == nil {
		return 0, false
	}
	for _, l := range sides(c) {
		s, known = max(s, l.Sigma.Value), true
	}
	return s, known
}

// mixedForMany names the parts that are mixed for at least half of the
// appraisers or, if there are none, for any.
func (f *finder) mixedForMany() string {
	half := (len(f.Agreement.Within) + 1) / 2
	if parts := f.mixedFor(half); len(parts) > 0 {
		return "Mixed for at least half of the appraisers: " + f.theParts(parts)
	}
	return "Mixed for one of them or more: " + f.theParts(f.mixedFor(1))
}

// mixedFor returns the parts that are mixed for so many appraisers or more.
func (f *finder) mixedFor(least int) []int {
	times := make(map[int]int)
	for _, w := range f.Agreement.Within {
		for _, part := range w.Mixed {
			times[part]++
		}
	}
	var out []int
	for part, n := range times {
		if n >= least {
			out = append(out, part)
		}
	}
	slices.Sort(out)
	return out
}
