package agreement

import "samecall/agreement/interval"

// Estimate is a figure with its interval: a share or a rate between 0 and 1,
// or a coefficient, which is 1 for perfect agreement and 0 for that of chance.
// A coefficient may fall below −1 where chance is taken from calls that are
// not compared (single calls on a part, trials of unequal number).
//
// A figure that cannot be computed is absent: Absent says why, and all else
// is zero. Unbounded says why a figure has no interval.
type Estimate struct {
	Value    float64
	Interval interval.Interval
	// OneSided holds the lower and the upper limit, each for itself at the
	// confidence: what the data show to be reached, and not to be exceeded.
	OneSided interval.Interval
	Method   string // how the interval was found
	// StandardError is that of a coefficient, linearised over parts; 0 for a
	// share or a rate.
	StandardError float64
	Absent        error
	Unbounded     error
	// Prevalent marks a coefficient that is pulled down since one category
	// holds nearly all of the calls, while AC1 of the same calls is not: it
	// understates the agreement. Prevailing is then the share which that
	// category holds of what the coefficient compares.
	Prevalent  bool
	Prevailing float64
	// Independent is the interval that treats calls as independent, which
	// they are not: of a kappa, estimate ± z standard errors of 1969 (Cohen)
	// or 1979 (Fleiss), not cut at ±1; of a rate, Clopper–Pearson over
	// calls. Nil unless it was asked for, and where it is not defined.
	Independent *interval.Interval
}

// Share is a share of parts, or a rate over calls: Count of Of.
type Share struct {
	Estimate
	Count, Of int
	// Effective is, for a rate over calls, the number of independent calls
	// that would be worth as much.
	Effective float64
}

func absent(why error) Estimate { return Estimate{Absent: why} }

// normal is the interval estimate ± z·se; nil where that is not defined.
func normal(estimate, se, confidence float64) *interval.Interval {
	i, err := interval.Normal(estimate, se, confidence)
	if err != nil {
		return nil
	}
	return &i
}

// shareOfParts is a share of parts with its exact interval.
func shareOfParts(count, of int, confidence float64, none error) Share {
	if of == 0 {
		return Share{Estimate: absent(none)}
	}
	return Share{Count: count, Of: of, Estimate: Estimate{
		Value:    float64(count) / float64(of),
		Interval: interval.ClopperPearson(count, of, confidence),
		OneSided: interval.ClopperPearson(count, of, interval.EachSide(confidence)),
		Method:   "Clopper-Pearson over parts",
	}}
}

// rateOverCalls is a rate of events over calls, its interval by part.
func rateOverCalls(clusters []interval.Cluster, opt Options, none error) Share {
	r := interval.KornGraubard(clusters, opt.Confidence)
	if r.Calls == 0 {
		return Share{Estimate: absent(none)}
	}
	s := Share{Count: r.Events, Of: r.Calls, Effective: r.Effective, Estimate: Estimate{
		Value: r.Value, Interval: r.Interval, OneSided: interval.KornGraubard(clusters, interval.EachSide(opt.Confidence)).Interval,
		Method: "Korn-Graubard over parts, no surer than their number",
	}}
	if r.Events == 0 || r.Events == r.Calls {
		s.Method = "exact on the number of parts"
	}
	if opt.Independent {
		i := interval.ClopperPearson(r.Events, r.Calls, opt.Confidence)
		s.Independent = &i
	}
	return s
}
