package agreement

import "fmt"

// Analysis is all that a study says about agreement. Appraisers, parts and
// categories are numbered as in its Ratings.
type Analysis struct {
	Within  []Within // one for each appraiser
	Between Between
	Against []Against // one for each appraiser; nil without a reference
	All     *Against  // all appraisers together; nil without a reference

	Intervals Intervals
	Warnings  []Warning
	Patterns  Patterns
}

// Intervals counts the coefficients of an analysis by how their intervals were
// found. In neither number are those on which nothing disagreed, whose interval
// is exact, and those without one.
type Intervals struct {
	Resampled, Linearised int
}

// study is what an analysis is computed from.
type study struct {
	*Ratings
	patterns
	*resampler
	opt Options
}

// Analyse computes the agreement of each appraiser with itself, of appraisers
// with each other, and of all with the reference. It returns an error if there
// are no Ratings, if an option is out of range, or if a call or a reference is
// no category of the study; what a study cannot say is absent from the result,
// with its reason.
func Analyse(r *Ratings, opt Options) (*Analysis, error) {
	if err := opt.check(); err != nil {
		return nil, err
	}
	if err := r.validate(); err != nil {
		return nil, err
	}
	if n := len(opt.Names); n != 0 && n != r.Appraisers() {
		return nil, fmt.Errorf("agreement: %d names for %d appraisers", n, r.Appraisers())
	}
	s := &study{Ratings: r, patterns: r.patterns(), opt: opt}
	s.resampler = newResampler(s.patterns, opt, s.coefficients())
	var out Analysis
	n, K, rows := r.Appraisers(), r.Categories(), len(s.rows)
	s.begin(n * (K + 3) * rows)
	for a := range n {
		out.Within = append(out.Within, s.within(a))
	}
	if r.HasReference() {
		s.begin(s.ofTables(n+1) + (n+1)*K*6*rows)
		for a := range n {
			out.Against = append(out.Against, s.against(func(row []Category) []Category { return s.of(row, a) }, out.Within[a].Mixed))
		}
		everyCall := func(row []Category) []Category { return row }
		all := s.against(everyCall, s.mixed(s.counts(everyCall)))
		out.All = &all
	}
	out.Between = s.between()
	out.Intervals = s.intervals
	out.Warnings = s.warnings(&out)
	out.Patterns = s.patterns.public()
	return &out, nil
}

// of returns the calls of one appraiser in a row.
func (s *study) of(row []Category, appraiser int) []Category { return s.CallsIn(row, appraiser) }

// callers returns how many appraisers made a call in a row.
func (s *study) callers(row []Category) int {
	n := 0
	for a := range s.Appraisers() {
		for _, c := range s.of(row, a) {
			if c != Missing {
				n++
				break
			}
		}
	}
	return n
}

// counts tallies, for each pattern, the calls in the columns chosen.
func (s *study) counts(calls func(row []Category) []Category) [][]int {
	K := s.Categories()
	cells := make([]int, len(s.rows)*K)
	counts := make([][]int, len(s.rows))
	for i, row := range s.rows {
		counts[i] = cells[i*K : (i+1)*K : (i+1)*K]
		tally(calls(row), counts[i])
	}
	return counts
}

// mixed returns the parts whose calls, counted by pattern, differ.
func (s *study) mixed(counts [][]int) []int {
	return s.where(func(i int) bool { return !oneCategory(counts[i]) })
}

// tally adds calls to counts by category and returns how many there are.
func tally(calls []Category, counts []int) int {
	n := 0
	for _, c := range calls {
		if c != Missing {
			counts[c]++
			n++
		}
	}
	return n
}

// cross returns Cohen's kappa of a table, given the pairs of calls that each
// pattern adds to it.
func (s *study) cross(w Weights, t Table, pairs func(pattern int, add func(j, k Category)), nothing, undefined error) Estimate {
	m := twoMargins{len(t), w.matrix(len(t))}
	z := newContributions(m.size(), s.times)
	for i := range s.rows {
		v := z.of(i)
		pairs(i, func(j, k Category) { m.add(v, int(j), int(k), 1) })
		v[disagreed] = m.whole(v[disagreed])
	}
	e := s.estimate(m, z, nothing, undefined)
	if s.opt.Independent && e.Absent == nil {
		if se, _, err := t.Kappa1969(w); err == nil {
			e.Independent = normal(e.Value, se, s.opt.Confidence)
		}
	}
	return e
}

// ofTables returns the additions that the kappas of n cross-tables take for
// each resample.
func (s *study) ofTables(n int) int {
	K := s.Categories()
	additions := n * (2*K + 2) * len(s.rows)
	if s.weighted() {
		additions = 3*additions + 2*n*K*K // each two margins
	}
	return additions
}

func (s *study) weighted() bool { return s.opt.Ordered && s.Categories() > 2 }

// coefficients returns how many coefficients an analysis estimates.
func (s *study) coefficients() int {
	n, K := s.Appraisers(), s.Categories()
	byTable := 1
	if s.weighted() {
		byTable = 3
	}
	total := n + byTable*n*(n-1)/2 + K + 5
	if s.HasReference() {
		if K > 2 {
			byTable += K
		}
		total += byTable * (n + 1)
	}
	return total
}
