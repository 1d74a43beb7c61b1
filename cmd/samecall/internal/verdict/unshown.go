package verdict

import (
	"slices"
	"strings"
)

// Unshown names the figures, of those that the verdict rests on, that the data
// do not show to meet a level, Accept or Conditional, at the confidence; it is
// empty where they show it of every one. An estimate may meet the level all
// the same.
func (v *Verdict) Unshown(level Level) string {
	return v.figures(func(c Criterion) bool { return !c.shows(level) })
}

// Missed names the figures, of those that the verdict rests on, whose estimate
// does not meet a level, Accept or Conditional, or is not known.
func (v *Verdict) Missed(level Level) string {
	return v.figures(func(c Criterion) bool { return c.Met > level })
}

// figures names the figures that the verdict rests on and that are asked for,
// each with the appraisers whose it is.
func (v *Verdict) figures(asked func(Criterion) bool) string {
	var open []ground
	add := func(who string, c Criterion) {
		if !c.counts() || !asked(c) {
			return
		}
		i := slices.IndexFunc(open, func(g ground) bool { return g.c.Label() == c.Label() })
		if i < 0 {
			i = len(open)
			open = append(open, ground{c: c})
		}
		open[i].who = append(open[i].who, who)
	}
	for _, a := range v.Appraisers {
		for _, c := range a.Criteria {
			add(a.Name, c)
		}
	}
	if v.betweenCounts() {
		add("", *v.Between)
	}
	var out []string
	for _, g := range open {
		out = append(out, g.c.of(g.who))
	}
	return strings.Join(out, "; ")
}

// shows reports whether the limit on the worse side meets a level.
func (c Criterion) shows(level Level) bool {
	if c.Met == NotShown || c.Estimate.Unbounded != nil {
		return false
	}
	worse := c.Estimate.OneSided.Lower
	if c.atMost() {
		worse = c.Estimate.OneSided.Upper
	}
	return c.meets(worse, c.Levels[level])
}
