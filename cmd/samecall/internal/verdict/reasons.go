package verdict

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
)

// ground is a figure that decides the verdict, and those whose it is; nobody
// where it is that between appraisers.
type ground struct {
	who []string
	c   Criterion
}

// text is the figure with those whose it is, against what is asked.
func (g ground) text() string {
	if g.c.between {
		return capital(g.c.Text())
	}
	return some(g.who) + ": " + g.c.Text()
}

// figures is how many figures read so.
func (g ground) figures() int { return max(1, len(g.who)) }

// mostReasons is how many reasons are told in full, and mostAlso how many
// more by name.
const (
	mostReasons = 2
	mostAlso    = 6
)

// reasons returns the one or two sentences that decide the verdict, how far
// the data carry each, and, after them, what else misses its level and what
// would if it counted.
func reasons(r *judge.Result, v *Verdict) (why, carry []string) {
	why, carry = deciding(r, v)
	return append(why, v.asides()...), carry
}

func deciding(r *judge.Result, v *Verdict) (why, carry []string) {
	switch {
	case v.Overall == Accept && len(v.asides()) > 0:
		return []string{"Every figure that counts meets its accept level."}, []string{shownOf(v)}
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
	told := ""
	for _, g := range grounds[:min(mostReasons, len(grounds))] {
		why = append(why, stop(g.text()))
		// What so few parts cannot show is said once.
		text, few := g.c.EvidenceText(), g.c.tooFew()
		if few != "" && strings.HasSuffix(text, few) {
			if few == told {
				text = strings.TrimSuffix(text, few)
			}
			told = few
		}
		carry = append(carry, text)
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
		if !g.c.between {
			text += some(g.who) + ": "
		}
		text += g.c.Label()
		if g.c.Met == NotShown {
			text += " not known"
		} else {
			text += " " + g.c.Found()
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
	for _, a := range v.Appraisers {
		for _, c := range a.Criteria {
			if !c.counts() || c.Met != v.Overall {
				continue
			}
			key := c.Text() + c.EvidenceText()
			if i, ok := at[key]; ok {
				out[i].who = append(out[i].who, a.Name)
				continue
			}
			at[key] = len(out)
			out = append(out, ground{[]string{a.Name}, c})
		}
	}
	if v.betweenCounts() && v.Between.Met == v.Overall {
		out = append(out, ground{c: *v.Between})
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
	var furthest *ground
	for _, g := range v.grounds() {
		n += g.figures()
		if g.c.Evidence != Open {
			continue
		}
		open += g.figures()
		if furthest == nil || needsMore(g.c, furthest.c) {
			furthest = &g
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
	return stop(fmt.Sprintf("Furthest from being shown is that the %s is %s: %s", g.c.of(g.who), g.c.claim(), g.c.open()))
}

// needsMore reports whether a takes more parts than b to be shown; a figure
// that no number of parts would show takes most. Bad parts are the scarcest, so
// what rests on them goes before what rests on good ones or on all, in what to
// do next as well.
func needsMore(a, b Criterion) bool {
	if a.More == 0 || b.More == 0 {
		return a.More == 0 && b.More > 0
	}
	if x, y := slices.Index(scarcest, a.Kind), slices.Index(scarcest, b.Kind); x != y {
		return x < y
	}
	return a.More > b.More
}
