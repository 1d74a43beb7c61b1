package verdict

import (
	"cmp"
	"fmt"
	"slices"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
)

// ground is a figure that decides the verdict, and those whose it is.
type ground struct {
	who []string
	c   Criterion
}

// betweenAll stands for all appraisers in a ground.
const betweenAll = "between appraisers"

// mostReasons is how many reasons are told in full, and mostAlso how many
// more by name.
const (
	mostReasons = 2
	mostAlso    = 6
)

// reasons returns the one or two sentences that decide the verdict, how far
// the data carry each, and, after them, what else misses its level.
func reasons(r *judge.Result, v *Verdict) (why, carry []string) {
	switch {
	case v.Overall == Accept:
		return []string{"Every figure meets its accept level."}, []string{shownOf(v)}
	case len(v.Appraisers) == 0:
		return []string{"The study has no appraiser."}, nil
	case r.Agreement.All == nil && v.Overall == NotShown:
		return []string{"No part has a reference: whether the calls are right cannot be told."}, nil
	}
	grounds := v.grounds()
	// The furthest from its level first.
	slices.SortStableFunc(grounds, func(a, b ground) int { return cmp.Compare(b.c.distance(), a.c.distance()) })
	for _, g := range grounds[:min(mostReasons, len(grounds))] {
		why = append(why, stop(some(g.who)+": "+g.c.Text()))
		carry = append(carry, g.c.EvidenceText())
	}
	if len(grounds) > mostReasons {
		why = append(why, also(grounds[mostReasons:]))
	}
	return why, carry
}

// also names the figures that are not told in full.
func also(grounds []ground) string {
	text := ""
	for i, g := range grounds {
		if i == mostAlso {
			return fmt.Sprintf("Also %s and %s more.", text, format.Count(len(grounds)-mostAlso))
		}
		if i > 0 {
			text += "; "
		}
		text += fmt.Sprintf("%s: %s", some(g.who), g.c.Label())
		if g.c.Met == NotShown {
			text += " not known"
		} else {
			text += " " + g.c.found()
		}
	}
	return stop("Also " + text)
}

// some names a few of several, in a sentence.
func some(who []string) string {
	if len(who) > manyNames {
		return fmt.Sprintf("%s appraisers", format.Count(len(who)))
	}
	return and(who)
}

// grounds returns the figures that are at the level of the verdict, those
// that read alike together.
func (v *Verdict) grounds() []ground {
	var out []ground
	at := make(map[string]int)
	add := func(who string, c Criterion) {
		if c.Met != v.Overall {
			return
		}
		key := c.Text() + c.EvidenceText()
		if i, ok := at[key]; ok && who != betweenAll {
			out[i].who = append(out[i].who, who)
			return
		}
		at[key] = len(out)
		out = append(out, ground{[]string{who}, c})
	}
	for _, a := range v.Appraisers {
		for _, c := range a.Criteria {
			add(a.Name, c)
		}
	}
	if v.Between != nil && v.Between.Met != NotShown { // calls all alike are no fault
		add(betweenAll, *v.Between)
	}
	return out
}

// distance is how far a figure is from its level, in units of what the level
// leaves.
func (c Criterion) distance() float64 {
	if c.Met == NotShown {
		return 0
	}
	d := c.Against - c.Estimate.Value
	if c.atMost() {
		return -d / max(c.Against, 0.01)
	}
	return d / max(1-c.Against, 0.01)
}

// shownOf says how many figures of an accepted inspection the data show, and
// which is furthest from being shown.
func shownOf(v *Verdict) string {
	n, open := 0, 0
	var furthest ground
	for _, g := range v.grounds() {
		n += len(g.who)
		if g.c.Evidence != Open {
			continue
		}
		open += len(g.who)
		if furthest.who == nil || needsMore(g.c, furthest.c) {
			furthest = g
		}
	}
	switch {
	case open == 0:
		return "The data show every one of them."
	case open == n:
		return fmt.Sprintf("The data show none of them at the stated confidence. %s", furthest.say())
	}
	return fmt.Sprintf("The data show %d of the %d; %d %s open. %s", n-open, n, open, are(open), furthest.say())
}

func (g ground) say() string {
	return stop(fmt.Sprintf("Furthest from being shown is that the %s of %s is %s: %s", g.c.Label(), some(g.who), g.c.claim(), g.c.open()))
}

// needsMore reports whether a takes more parts than b to be shown; a figure
// that no number of parts would show takes most.
func needsMore(a, b Criterion) bool {
	if a.More == 0 || b.More == 0 {
		return a.More == 0 && b.More > 0
	}
	return a.More > b.More
}
