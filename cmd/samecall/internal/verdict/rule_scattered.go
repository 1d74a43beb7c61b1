package verdict

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/stat/distuv"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
	"samecall/signal"
)

// Our own choice, no source.
const (
	// The chance below which calls that keep to their values look as if some
	// were made at random; the same as for a part that the curve cannot explain.
	scatteredChance = 0.001
	// So many parts must have been called wrong outside the grey zone: fewer are
	// a matter of these parts, or of their records.
	scatteredParts = 5
	// The share of what all show, from which on an appraiser does the same, and the
	// chance below which its own calls must look so: the calls of appraisers who
	// are not equally sure look so together, and of none alone.
	alikeScattered = 0.25
	ownChance      = 0.01
)

// stray is how calls went outside the grey zone, where nobody should be in doubt.
type stray struct {
	calls, wrong int
	parts        []int   // called wrong
	away         float64 // the largest distance of these from the nearest limit
}

func (s stray) rate() float64 { return float64(s.wrong) / max(1, float64(s.calls)) }

// scattered: a share of the calls goes without regard to the value, also where
// nobody should be in doubt. A curve that knows no such calls becomes flatter
// for them: its grey zone is then not that of the gauge.
func scattered(f *finder) []Cause {
	if !f.missed || f.patterns == nil || f.Zone == nil || f.Zone.Curves == nil {
		return nil
	}
	zone := f.zoneOfTheRest()
	if zone == nil {
		return nil
	}
	var each []stray
	var all stray
	for a := range f.Study.Appraisers {
		s := f.outside(zone, a)
		each = append(each, s)
		all.calls += s.calls
		all.wrong += s.wrong
		all.parts = append(all.parts, s.parts...)
		all.away = max(all.away, s.away)
	}
	slices.Sort(all.parts)
	if all.parts = slices.Compact(all.parts); len(all.parts) < scatteredParts {
		return nil
	}
	alike := f.several() && len(f.found) == 0
	var out []Cause
	for a, s := range each {
		does := s.rate() >= alikeScattered*all.rate() && withLapses(f.Zone.Curves.Each[a], ownChance) != nil
		if alike = alike && does; does && len(s.parts) >= scatteredParts && !f.has(a, codeInconsistent) {
			out = append(out, f.scatteredCause([]int{a}, f.name(a), s))
		}
	}
	if alike {
		return []Cause{f.scatteredCause(nil, "all appraisers", all)}
	}
	return out
}

func (f *finder) scatteredCause(who []int, name string, s stray) Cause {
	scale := f.Scale()
	return Cause{
		Code: codeScattered, Appraisers: who,
		Text: fmt.Sprintf("Some calls of %s go without regard to the value: outside the grey zone %s of %s are wrong, up to %s from the nearest limit. Neither the width nor the place of the zone explains them.",
			name, format.Count(s.wrong), format.Counted(s.calls, "call"), scale.WithUnit(scale.Value(s.away))),
		Do: stop(fmt.Sprintf("Look with %s at attention, lighting, handling and how calls are written down, before the gauge. Called wrong outside the grey zone: %s",
			name, f.theParts(s.parts))),
	}
}

// zoneOfTheRest returns the grey zone of the calls that keep to their values,
// where the others need a share of calls made at random; nil where they do not.
func (f *finder) zoneOfTheRest() func(x float64) bool {
	c := f.Zone.Curves.Pooled
	s := withLapses(c, scatteredChance)
	switch {
	case s == nil:
		return nil
	case !s.HasLapse: // it is narrower than the values tell
		return nextToCuts(s)
	}
	return func(x float64) bool { return inZone(s, x) }
}

// withLapses fits a curve anew with a share of calls made at random, where its
// calls need one: nil where the chance of as much without is above the one given.
// The statistic of the likelihood-ratio test of no such share is 0 in half of the
// cases and chi-square in the other half, since none is at the edge of what the
// share can be (Self and Liang 1987, J Am Stat Assoc 82:605).
func withLapses(c *signal.Curve, chance float64) *signal.Curve {
	if c == nil {
		return nil
	}
	var parts []signal.Part
	for _, p := range c.Parts {
		parts = append(parts, signal.Part{Name: p.Name, Value: p.Value, Calls: p.Calls, Accepted: p.Accepted})
	}
	options := c.Options
	options.Lapse, options.SkipIntervals = true, true
	s, err := signal.Fit(parts, c.Limits, options)
	if err != nil || len(sides(s)) < len(sides(c)) || (distuv.ChiSquared{K: 1}).Survival(2*s.LapseGain)/2 >= chance {
		return nil
	}
	return s
}

// nextToCuts takes the values next to each cut of a curve, one on either side,
// for its grey zone.
func nextToCuts(c *signal.Curve) func(x float64) bool {
	var below, above []float64
	for _, l := range sides(c) {
		lo, hi := math.Inf(-1), math.Inf(1)
		for _, p := range c.Parts {
			if p.Value <= l.Cut.Value {
				lo = max(lo, p.Value)
			} else {
				hi = min(hi, p.Value)
			}
		}
		below, above = append(below, lo), append(above, hi)
	}
	return func(x float64) bool {
		for i := range below {
			if x >= below[i] && x <= above[i] {
				return true
			}
		}
		return false
	}
}

// outside tells how an appraiser's calls went outside a grey zone.
func (f *finder) outside(zone func(x float64) bool, a int) (s stray) {
	r := f.Study.Ratings
	for part, x := range f.Study.Values {
		if !f.Study.HasValue[part] || zone(x) {
			continue
		}
		wrong := 0
		for _, call := range r.Calls(part, a) {
			if call != agreement.Missing {
				s.calls++
				wrong += btoi(r.Accepts(call) != f.Zone.Limits.Inside(x))
			}
		}
		if wrong > 0 {
			s.wrong += wrong
			s.parts = append(s.parts, part)
			s.away = max(s.away, toLimit(f.Zone.Limits, x))
		}
	}
	return s
}
