package agreement

import (
	"errors"

	"samecall/agreement/interval"
)

// Between is the agreement of appraisers with each other. It is absent where
// no part was called by two appraisers; where some parts were, the
// coefficients over all calls take in every part with two calls or more.
type Between struct {
	Share      Share      // parts whose calls by all appraisers are alike, of parts that two or more appraisers called
	Agreement  float64    // mean over parts of the share of pairs of calls that agree; 0 where Share is absent
	Pairs      []Pair     // each two appraisers
	Fleiss     Estimate   // Fleiss' kappa over all calls, generalised for missing calls (Counts.FleissKappa)
	Categories []Estimate // Fleiss' kappa of each category against the others
	// SameAppraiser and DifferentAppraisers are kappas of pairs of calls on
	// one part by the same and by two different appraisers. Both take chance
	// from the pooled shares of the categories, so that they can be
	// compared: where the first is well above the second, appraisers are
	// consistent but different.
	SameAppraiser, DifferentAppraisers Estimate
	// AC1 is Gwet's coefficient (Counts.AC1), Alpha Krippendorff's (Counts.Alpha).
	AC1, Alpha Estimate
}

// Pair is the agreement of two appraisers.
type Pair struct {
	A, B              int       // the two appraisers, A before B
	Table             Table     // rows A, columns B; each pair of calls on a part as Options.Pairing says
	Pairs, Alike      int       // pairs of calls, and those that agree
	Share             Share     // parts on which all calls of both are alike, of parts that both called
	Kappa             Estimate  // Cohen's kappa of Table
	Linear, Quadratic *Estimate // weighted kappas; nil unless Options.Ordered and three categories or more
}

var (
	errOneAppraiser = errors.New("no part was called by two appraisers: there is nobody to compare with")
	errSingleCalls  = errors.New("no part has two calls")
	errNoTwoTrials  = errors.New("no part has two calls by the same appraiser: repeat the trial to see whether the calls repeat")
	errPairMissed   = errors.New("the two appraisers called no part in common, or none in the same trial")
	errPairAlike    = errors.New("both appraisers used one category only, the same: kappa has nothing to measure")
)

func (s *study) between() Between {
	var b Between
	counts := s.counts(func(row []Category) []Category { return row })
	alike, parts := 0, 0
	for i, row := range s.rows {
		if s.callers(row) < 2 {
			continue
		}
		parts += s.times[i]
		if oneCategory(counts[i]) {
			alike += s.times[i]
		}
	}
	b.Share = shareOfParts(alike, parts, s.opt.Confidence, errOneAppraiser)
	s.overall(&b, counts, parts)
	n := s.Appraisers()
	s.begin(s.ofTables(n * (n - 1) / 2))
	for a := range n {
		for c := a + 1; c < n; c++ {
			b.Pairs = append(b.Pairs, s.pair(a, c))
		}
	}
	return b
}

// overall fills in the coefficients over all calls, given how many parts two
// or more appraisers called.
func (s *study) overall(b *Between, counts [][]int, parts int) {
	K := s.Categories()
	s.begin((5*(K+3) + K*5) * len(s.rows))
	if parts == 0 { // one appraiser: its own agreement is Within
		e := absent(errOneAppraiser)
		b.Fleiss, b.AC1, b.Alpha, b.DifferentAppraisers = e, e, e, e
		b.SameAppraiser = s.byPairs(counts, true)
		b.Categories = make([]Estimate, s.Categories())
		for k := range b.Categories {
			b.Categories[k] = e
		}
		return
	}
	m, z := fleiss(counts, s.times)
	b.Fleiss = s.estimate(m, z, errSingleCalls, errAlike)
	if s.opt.Independent && b.Fleiss.Absent == nil {
		b.Fleiss.Independent = s.fleissIndependent(counts, b.Fleiss.Value)
	}
	if sums := z.sums(); sums[compared] > 0 {
		b.Agreement = 1 - sums[disagreed]/sums[compared]
	}
	for k := range s.Categories() {
		m, z := fleiss(onlyCategory(counts, k), s.times)
		b.Categories = append(b.Categories, s.estimate(m, z, errSingleCalls, errCategoryUnused))
	}
	b.SameAppraiser = s.byPairs(counts, true)
	b.DifferentAppraisers = s.byPairs(counts, false)
	if s.Categories() < 2 {
		b.AC1, b.Alpha = absent(errOneChoice), absent(errOneChoice)
		return
	}
	m, z = ac1(counts, s.times)
	b.AC1 = s.estimate(m, z, errSingleCalls, errAlike)
	m, z = alpha(counts, s.times)
	b.Alpha = s.estimate(m, z, errSingleCalls, errAlike)
}

var errCategoryUnused = errors.New("no call, or every call, is of this category: kappa has nothing to measure")

// byPairs returns the kappa of all pairs of calls on a part, by the same
// appraiser or by two different ones, over the pooled margins.
func (s *study) byPairs(counts [][]int, same bool) Estimate {
	m := oneMargin{s.Categories(), func(S, _ float64) (expected, byS, byN float64) { return 1 - S, -1, 0 }}
	z := newContributions(m.size(), s.times)
	own := make([]int, s.Categories())
	for i, row := range s.rows {
		v := z.of(i)
		var pairs, disagree int // ordered pairs, as total counts them
		for a := range s.Appraisers() {
			clear(own)
			tally(s.of(row, a), own)
			n, d := total(own)
			pairs += n * (n - 1)
			disagree += d
		}
		n, d := total(counts[i])
		if !same {
			pairs, disagree = n*(n-1)-pairs, d-disagree
		}
		v[compared] = float64(pairs)
		v[disagreed] = float64(disagree)
		v[inOneMargin] = float64(n)
		for k, c := range counts[i] {
			v[inOneMargin+1+k] = float64(c)
		}
	}
	nothing := errOneAppraiser
	if same {
		nothing = errNoTwoTrials
	}
	return s.estimate(m, z, nothing, errAlike)
}

// fleissIndependent is the interval from the standard error of 1979; nil
// where that is not defined.
func (s *study) fleissIndependent(counts [][]int, kappa float64) *interval.Interval {
	var rows Counts
	for i, row := range counts {
		for range s.times[i] {
			rows = append(rows, row)
		}
	}
	se, _, err := rows.Fleiss1979()
	if err != nil {
		return nil
	}
	return normal(kappa, se, s.opt.Confidence)
}

func (s *study) pair(a, b int) Pair {
	trials := s.trialPairs(a, b)
	p := Pair{A: a, B: b, Table: newTable(s.Categories())}
	alike, parts := 0, 0
	both := make([]int, s.Categories())
	for i, row := range s.rows {
		x, y := s.of(row, a), s.of(row, b)
		clear(both)
		if tally(x, both) == 0 || tally(y, both) == 0 {
			continue
		}
		parts += s.times[i]
		if oneCategory(both) {
			alike += s.times[i]
		}
		trials.each(x, y, func(j, k Category) { p.Table[j][k] += s.times[i] })
	}
	p.Pairs, p.Alike = p.Table.Total()
	p.Share = shareOfParts(alike, parts, s.opt.Confidence, errPairMissed)
	kappa := func(w Weights) Estimate {
		return s.cross(w, p.Table, func(i int, add func(j, k Category)) {
			trials.each(s.of(s.rows[i], a), s.of(s.rows[i], b), add)
		}, errPairMissed, errPairAlike)
	}
	p.Kappa = kappa(Nominal)
	if s.weighted() {
		linear, quadratic := kappa(Linear), kappa(Quadratic)
		p.Linear, p.Quadratic = &linear, &quadratic
	}
	return p
}

// TrialPairs returns the trials of two appraisers that are put side by side,
// the first's and the second's. It panics on another Pairing than Matched and
// All.
func (r *Ratings) TrialPairs(a, b int, p Pairing) [][2]int {
	if err := p.check(); err != nil {
		panic(err.Error())
	}
	var pairs [][2]int
	for t := range r.Trials(a) {
		for u := range r.Trials(b) {
			if p == All || r.trialNumber(a, t) == r.trialNumber(b, u) {
				pairs = append(pairs, [2]int{t, u})
			}
		}
	}
	return pairs
}

// trialPairs are the trials of two appraisers that are put side by side.
type trialPairs [][2]int

func (s *study) trialPairs(a, b int) trialPairs { return s.TrialPairs(a, b, s.opt.Pairing) }

// each calls f for each pair of calls that were both made.
func (p trialPairs) each(x, y []Category, f func(j, k Category)) {
	for _, t := range p {
		if j, k := x[t[0]], y[t[1]]; j != Missing && k != Missing {
			f(j, k)
		}
	}
}
