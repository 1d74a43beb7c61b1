package agreement

import (
	"errors"

	"samecall/agreement/interval"
)

// Against is the agreement of one appraiser, or of all together, with the reference.
type Against struct {
	Effectiveness Share    // parts called right on every trial, of parts called
	Table         Table    // rows the calls, columns the reference
	Kappa         Estimate // Cohen's kappa of Table
	// Categories is Cohen's kappa of each category against all others;
	// filled in with more than two categories.
	Categories        []Estimate
	Linear, Quadratic *Estimate // weighted kappas; nil unless Options.Ordered and three categories or more
	Miss              Share     // bad parts accepted, of calls on bad parts
	FalseAlarm        Share     // good parts rejected, of calls on good parts
	WrongEveryTime    []int     // parts with a reference, none of whose calls is right, in order
	Mixed             []int     // parts whose calls differ, with a reference or not, in order
	// Tests of direction over Table: McNemar with two categories, the others
	// with more. Nil where nothing disagrees. They take the calls as
	// independent; with several calls on a part p comes out too small.
	McNemar, Bowker, StuartMaxwell *Test
}

var (
	errNoReference          = errors.New("no part has a reference: nothing is known to be right or wrong")
	errNeverCalled          = errors.New("no part with a reference was called")
	errNoBad                = errors.New("no bad part was called: the miss rate is unknown")
	errNoGood               = errors.New("no good part was called: the false-alarm rate is unknown")
	errNoAccept             = errors.New("no category is set as acceptable: there are no misses and no false alarms")
	errOneReference         = errors.New("the parts called are all of one reference category: kappa against it has nothing to measure")
	errOneReferenceCategory = errors.New("of the parts called, none or all are of this reference category: kappa against it has nothing to measure")
	errOneSided             = errors.New("the calls and the reference are of one category only, the same: kappa has nothing to measure")
)

// against compares the calls in some columns of each row with the reference.
// mixed are the parts on which those calls differ.
func (s *study) against(calls func(row []Category) []Category, mixed []int) Against {
	out := Against{Table: newTable(s.Categories())}
	counts := s.counts(calls)
	right, called := 0, 0
	wrong := make([]bool, len(s.rows))
	var bad, good []interval.Cluster
	for i, ref := range s.ref {
		n, _ := total(counts[i])
		if ref == Missing || n == 0 {
			continue
		}
		parts := s.times[i]
		called += parts
		hits := counts[i][ref]
		if hits == n {
			right += parts
		}
		wrong[i] = hits == 0
		accepted := 0
		for k, c := range counts[i] {
			out.Table[k][ref] += c * parts
			if s.Accepts(Category(k)) {
				accepted += c
			}
		}
		if s.Accepts(ref) {
			good = append(good, interval.Cluster{Events: n - accepted, Calls: n, Parts: parts})
		} else {
			bad = append(bad, interval.Cluster{Events: accepted, Calls: n, Parts: parts})
		}
	}
	nothing := errNeverCalled
	if !s.HasReference() {
		nothing = errNoReference
	}
	out.Effectiveness = shareOfParts(right, called, s.opt.Confidence, nothing)
	out.Mixed = mixed
	out.WrongEveryTime = s.where(func(i int) bool { return wrong[i] })
	noBad, noGood := errNoBad, errNoGood
	switch {
	case called == 0:
		noBad, noGood = nothing, nothing
	case !s.HasAccept():
		noBad, noGood = errNoAccept, errNoAccept
		bad, good = nil, nil
	}
	out.Miss = rateOverCalls(bad, s.opt, noBad)
	out.FalseAlarm = rateOverCalls(good, s.opt, noGood)
	pairs := func(i int, add func(j, k Category)) {
		if ref := s.ref[i]; ref != Missing {
			for _, c := range calls(s.rows[i]) {
				if c != Missing {
					add(c, ref)
				}
			}
		}
	}
	kappa := func(w Weights) Estimate {
		if out.Table.oneColumn() {
			s.progress()
			return absent(errOneReference) // it would be 0, whatever the calls are
		}
		return s.cross(w, out.Table, pairs, nothing, errOneSided)
	}
	out.Kappa = kappa(Nominal)
	if s.Categories() > 2 {
		for k := range s.Categories() {
			only := out.Table.only(k)
			if only.oneColumn() {
				s.progress()
				out.Categories = append(out.Categories, absent(errOneReferenceCategory))
				continue
			}
			out.Categories = append(out.Categories, s.cross(Nominal, only, func(i int, add func(j, k Category)) {
				pairs(i, func(j, ref Category) { add(Category(is(int(j), k)), Category(is(int(ref), k))) })
			}, nothing, errCategoryUnused))
		}
	}
	if s.weighted() {
		linear, quadratic := kappa(Linear), kappa(Quadratic)
		out.Linear, out.Quadratic = &linear, &quadratic
	}
	out.direction()
	return out
}

func (a *Against) direction() {
	test := func(f func() (Test, error)) *Test {
		t, err := f()
		if err != nil { // nothing disagreed, or nothing was called
			return nil
		}
		return &t
	}
	if len(a.Table) == 2 {
		a.McNemar = test(a.Table.McNemar)
		return
	}
	a.Bowker = test(a.Table.Bowker)
	a.StuartMaxwell = test(a.Table.StuartMaxwell)
}
