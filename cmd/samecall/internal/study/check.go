package study

import (
	"fmt"
	"math"
	"slices"
	"strconv"

	"samecall/agreement"
	"samecall/agreement/interval"
	"samecall/cmd/samecall/internal/format"
)

// Summary is what a study holds and what it can show, as plain facts.
type Summary struct {
	Parts int
	// Good, Bad and Unreferenced parts; Good and Bad are 0 where categories
	// are not split into accept and reject.
	Good, Bad, Unreferenced int
	ByCategory              []int // parts by the category of their reference; nil without reference

	Appraisers []AppraiserSummary
	Calls      int           // calls made
	Missing    int           // calls that a complete study would have beside them
	Without    []MissingCall // the first of the missing calls, in the order of parts
	Balanced   bool          // every appraiser called every part in each of the same trials

	Values  *ValueSummary // nil without values
	CanShow []Showing     // what the study can and cannot show
}

// MissingCall is a call that a complete study would have.
type MissingCall struct {
	Part, Appraiser string
	Trial           int // its number
}

// maxWithout is how many missing calls are listed.
const maxWithout = 10

// AppraiserSummary counts the calls of one appraiser.
type AppraiserSummary struct {
	Appraiser string
	Trials    []int // numbers, ascending
	Calls     int
	Missing   int // parts × trials less the calls
	Parts     int // parts with one call or more
}

// ValueSummary is the range of the reference values, and how many parts lie
// near each limit.
type ValueSummary struct {
	Count    int
	Min, Max float64
	OnLimit  int           // parts exactly on a limit, hence inside
	Lower    *LimitSummary // nil without such a limit
	Upper    *LimitSummary
}

// LimitSummary counts the parts near one limit: no further from it than
// Width. NearGood lie on the good side of it or on it, NearBad beyond.
type LimitSummary struct {
	Limit             float64
	Width             float64
	OfTolerance       bool // Width is a share of the tolerance, else of the spread of the values
	NearGood, NearBad int
	Inside, Outside   int // parts on the good side of this limit or on it, and beyond
}

// NearShare is the share of the tolerance, or else of the spread of the
// values, within which a part counts as near a limit. Our choice, no source.
const NearShare = 0.10

// Showing is one thing that a study can or cannot show, with the numbers
// that its sentence is made from.
type Showing struct {
	Code  string  // such as miss_rate, no_bad_parts, one_trial
	Text  string  // a sentence
	Parts int     // number of parts that it rests on, where it does
	Limit float64 // upper limit of a rate, where there is one
}

// Summary counts what the study holds.
func (s *Study) Summary() Summary {
	r := s.Ratings
	sum := Summary{Parts: r.Parts()}
	s.countReference(&sum)
	alike := s.countCalls(&sum)
	sum.Values = s.valueSummary()
	sum.CanShow = s.canShow(&sum, alike)
	return sum
}

func (s *Study) countReference(sum *Summary) {
	r := s.Ratings
	if !r.HasReference() {
		sum.Unreferenced = sum.Parts
		return
	}
	sum.ByCategory = make([]int, len(s.Categories))
	for p := range sum.Parts {
		switch c := r.Reference(p); {
		case c == agreement.Missing:
			sum.Unreferenced++
		default:
			sum.ByCategory[c]++
		}
	}
	if !r.HasAccept() {
		return
	}
	for c, n := range sum.ByCategory {
		if r.Accepts(agreement.Category(c)) {
			sum.Good += n
		} else {
			sum.Bad += n
		}
	}
}

// countCalls counts calls, and returns the category of all of them if they
// are alike, else Missing.
func (s *Study) countCalls(sum *Summary) (alike agreement.Category) {
	r := s.Ratings
	alike = agreement.Missing
	differ := false
	sum.Appraisers = make([]AppraiserSummary, r.Appraisers())
	for a := range sum.Appraisers {
		sum.Appraisers[a] = AppraiserSummary{Appraiser: s.Appraisers[a], Trials: s.TrialNames[a]}
	}
	for p := range sum.Parts {
		for a := range sum.Appraisers {
			n := 0
			for k, c := range r.Calls(p, a) {
				if c == agreement.Missing {
					if len(sum.Without) < maxWithout {
						sum.Without = append(sum.Without, MissingCall{s.Parts[p], s.Appraisers[a], s.TrialNames[a][k]})
					}
					continue
				}
				n++
				if alike == agreement.Missing {
					alike = c
				}
				differ = differ || c != alike
			}
			sum.Appraisers[a].Calls += n
			if n > 0 {
				sum.Appraisers[a].Parts++
			}
		}
	}
	sum.Balanced = true
	for a := range sum.Appraisers {
		x := &sum.Appraisers[a]
		x.Missing = sum.Parts*len(x.Trials) - x.Calls
		sum.Calls += x.Calls
		sum.Missing += x.Missing
		sum.Balanced = sum.Balanced && x.Missing == 0 && slices.Equal(x.Trials, sum.Appraisers[0].Trials)
	}
	if differ {
		return agreement.Missing
	}
	return alike
}

func (s *Study) valueSummary() *ValueSummary {
	if s.Values == nil {
		return nil
	}
	v := &ValueSummary{Min: math.Inf(1), Max: math.Inf(-1)}
	for p, x := range s.Values {
		if s.HasValue[p] {
			v.Count++
			v.Min, v.Max = min(v.Min, x), max(v.Max, x)
		}
	}
	lower, upper := s.Settings.Lower, s.Settings.Upper
	for p, x := range s.Values {
		v.OnLimit += btoi(s.HasValue[p] && (lower != nil && x == *lower || upper != nil && x == *upper))
	}
	width, ofTolerance := v.Max/2*NearShare-v.Min/2*NearShare, false // halves: the difference may overflow
	width *= 2
	if lower != nil && upper != nil {
		width, ofTolerance = (*upper-*lower)*NearShare, true
	}
	if math.IsInf(width, 0) {
		width = math.MaxFloat64
	}
	near := func(limit *float64, isGood func(x float64) bool) *LimitSummary {
		if limit == nil {
			return nil
		}
		l := &LimitSummary{Limit: *limit, Width: width, OfTolerance: ofTolerance}
		for p, x := range s.Values {
			if !s.HasValue[p] {
				continue
			}
			// A part written as exactly so far from the limit is near: the
			// allowance is for decimal fractions, which are not exact in binary.
			within := math.Abs(x-*limit) <= width*(1+1e-9)
			switch good := isGood(x); {
			case good:
				l.Inside++
				l.NearGood += btoi(within)
			default:
				l.Outside++
				l.NearBad += btoi(within)
			}
		}
		return l
	}
	v.Lower = near(lower, func(x float64) bool { return x >= *lower })
	v.Upper = near(upper, func(x float64) bool { return x <= *upper })
	return v
}

// canShow says what the study can and cannot show.
func (s *Study) canShow(sum *Summary, alike agreement.Category) []Showing {
	var list []Showing
	say := func(code, format string, args ...any) {
		list = append(list, Showing{Code: code, Text: fmt.Sprintf(format, args...)})
	}
	r := s.Ratings
	switch {
	case !r.HasReference():
		say("no_reference", "No reference: the appraisers can be compared with themselves and with each other, but not with what the parts truly are.")
	case !r.HasAccept():
		say("no_accept", "No category is said to be acceptable: there are no misses and no false alarms. The setting accept names the categories of a part that may be used.")
	default:
		list = append(list, s.rateShown("miss_rate", "no_bad_parts", sum.Bad, "bad", "missed", "miss rate", "misses"))
		list = append(list, s.rateShown("false_alarm_rate", "no_good_parts", sum.Good, "good", "rejected", "false-alarm rate", "false alarms"))
	}
	if len(sum.Appraisers) == 1 {
		say("one_appraiser", "One appraiser: nothing can be said about agreement between appraisers.")
	}
	single := 0
	for _, a := range sum.Appraisers {
		if len(a.Trials) == 1 {
			single++
		}
	}
	switch {
	case single == len(sum.Appraisers):
		say("one_trial", "One trial: nothing can be said about how far an appraiser agrees with itself.")
	case single > 0:
		say("one_trial_some", "%s with one trial only: nothing can be said about how far they agree with themselves.", counted(single, "appraiser", "appraisers"))
	}
	if alike != agreement.Missing {
		say("calls_alike", "Every call is %s: the appraisers agree, but parts of which all are called alike cannot show that they tell parts apart.", shown(s.Categories[alike]))
	}
	return append(list, s.zoneShown(sum)...)
}

// rateShown tells what the number of parts of one kind can show of the rate
// of wrong calls on them at best: with none wrong.
func (s *Study) rateShown(code, none string, n int, kind, wrong, rate, events string) Showing {
	if n == 0 {
		return Showing{Code: none, Text: fmt.Sprintf("No part is %s: nothing can be said about %s.", kind, events)}
	}
	limit := interval.UpperLimit(0, n, s.Settings.Confidence)
	return Showing{Code: code, Parts: n, Limit: limit,
		Text: fmt.Sprintf("%s, none ever %s, would still leave a %s of up to %s possible (one-sided limit at %s confidence).",
			counted(n, kind+" part", kind+" parts"), wrong, rate, percent(limit), format.Confidence(s.Settings.Confidence))}
}

// zoneShown tells what can be said about the grey zone.
func (s *Study) zoneShown(sum *Summary) []Showing {
	v := sum.Values
	switch {
	case v == nil:
		return []Showing{{Code: "no_values", Text: "No values: the grey zone around the limits cannot be told."}}
	case v.Lower == nil && v.Upper == nil:
		return []Showing{{Code: "no_limits", Text: "No limits: the grey zone around them cannot be told. The settings lower and upper give them."}}
	}
	var list []Showing
	for _, l := range []struct {
		name string
		*LimitSummary
	}{{"lower", v.Lower}, {"upper", v.Upper}} {
		if l.LimitSummary == nil {
			continue
		}
		missing := ""
		switch {
		case l.NearBad == 0 && l.NearGood == 0:
			missing = "No part lies near the " + l.name + " limit"
		case l.NearBad == 0:
			missing = "No bad part lies near the " + l.name + " limit"
		case l.NearGood == 0:
			missing = "No good part lies near the " + l.name + " limit"
		default:
			continue
		}
		list = append(list, Showing{Code: "far_from_" + l.name, Parts: l.NearBad + l.NearGood,
			Text: missing + " (within " + short(l.Width) + " of it): the study says little about the calls that are hard there."})
	}
	return list
}

// short writes a width with three digits, and a small one without a power of
// ten.
func short(x float64) string {
	s := strconv.FormatFloat(x, 'g', 3, 64)
	if rounded, err := strconv.ParseFloat(s, 64); err == nil && x < 1 {
		s = strconv.FormatFloat(rounded, 'f', -1, 64)
	}
	return s
}

func percent(x float64) string {
	switch p := 100 * x; {
	case p >= 9.95 && p < 99:
		return fmt.Sprintf("%.0f %%", p)
	default:
		return strconv.FormatFloat(p, 'g', 3, 64) + " %"
	}
}
