package agreement

import (
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"samecall/agreement/interval"
)

// The figures of an analysis, once more from the formulas alone: loops over
// parts and calls, nothing shared with the package. ok is false where a
// figure does not exist.

// callsOn lists the calls made on a part by the appraisers given.
func (p plainStudy) callsOn(part int, appraisers ...int) []int {
	var out []int
	for _, a := range appraisers {
		for _, c := range p.calls[part][a] {
			if c != Missing {
				out = append(out, int(c))
			}
		}
	}
	return out
}

// shareOfAlike: parts whose calls are all alike, of those chosen.
func (p plainStudy) shareOfAlike(chosen func(part int) bool, appraisers ...int) (count, of int) {
	for part := range p.calls {
		if !chosen(part) {
			continue
		}
		of++
		calls := p.callsOn(part, appraisers...)
		if slices.Min(calls) == slices.Max(calls) {
			count++
		}
	}
	return count, of
}

// byGwet is 1 − (1 − p_a)/(1 − p_e) with p_a the mean over parts with two
// calls or more of Σ_k r_k(r_k − 1)/(r(r − 1)), and π_k the mean over parts
// with a call of r_k/r: p_e = Σ π_k² for Fleiss' kappa in its generalised
// form, Σ π_k(1 − π_k)/(q − 1) for AC1. in maps a category to the one it
// counts as.
func (p plainStudy) byGwet(ac1 bool, q int, in func(int) int, appraisers ...int) (float64, bool) {
	var agree, two, one float64
	share := make([]float64, q)
	for part := range p.calls {
		calls := p.callsOn(part, appraisers...)
		r := float64(len(calls))
		if r == 0 {
			continue
		}
		one++
		for _, c := range calls {
			share[in(c)] += 1 / r
		}
		if r < 2 {
			continue
		}
		two++
		for i, c := range calls {
			for j, d := range calls {
				if i != j && in(c) == in(d) {
					agree += 1 / (r * (r - 1))
				}
			}
		}
	}
	if two == 0 {
		return 0, false
	}
	var chance float64
	most := 0.0
	for _, s := range share {
		pi := s / one
		most = max(most, pi)
		if ac1 {
			chance += pi * (1 - pi) / float64(q-1)
		} else {
			chance += pi * pi
		}
	}
	if !ac1 && most > 1-1e-9 {
		return 0, false
	}
	return (agree/two - chance) / (1 - chance), true
}

// alphaByCoincidences is Krippendorff's alpha from the table of coincidences:
// each ordered pair of calls on a part adds 1/(calls − 1) to its cell.
func (p plainStudy) alphaByCoincidences() (float64, bool) {
	o := make([][]float64, p.categories)
	for k := range o {
		o[k] = make([]float64, p.categories)
	}
	margin := make([]float64, p.categories)
	var n, observed float64
	for part := range p.calls {
		calls := p.callsOn(part, sequence(len(p.trials))...)
		for i, c := range calls {
			for j, d := range calls {
				if i != j {
					o[c][d] += 1 / float64(len(calls)-1)
				}
			}
		}
	}
	for c := range o {
		for d, x := range o[c] {
			margin[c] += x
			n += x
			if c != d {
				observed += x
			}
		}
	}
	var expected float64
	for c := range margin {
		for d := range margin {
			if c != d {
				expected += margin[c] * margin[d]
			}
		}
	}
	if expected < 1e-9 {
		return 0, false
	}
	return 1 - (n-1)*observed/expected, true
}

// pooled is the kappa of all pairs of calls on one part that are by the same
// appraiser, or by different ones, with the shares of all calls as chance.
func (p plainStudy) pooled(same bool) (float64, bool) {
	var pairs, agree, n float64
	share := make([]float64, p.categories)
	for _, row := range p.calls {
		for a, x := range row {
			for i, c := range x {
				if c == Missing {
					continue
				}
				n++
				share[c]++
				for b, y := range row {
					for j, d := range y {
						if d == Missing || (a == b) != same || a == b && i == j {
							continue
						}
						pairs++
						if c == d {
							agree++
						}
					}
				}
			}
		}
	}
	if pairs == 0 || slices.Max(share) == n {
		return 0, false
	}
	var chance float64
	for _, s := range share {
		chance += s / n * s / n
	}
	return (agree/pairs - chance) / (1 - chance), true
}

// cohen is 1 − Σ w p_jk / Σ w p_j. p_.k of a list of pairs; w is 0 on the
// diagonal and, off it, 1, the steps or their square.
func cohen(pairs [][2]int, power int) (float64, bool) {
	w := func(j, k int) float64 {
		if j == k {
			return 0
		}
		return math.Pow(math.Abs(float64(j-k)), float64(power))
	}
	if len(pairs) == 0 {
		return 0, false
	}
	n := float64(len(pairs))
	var observed, expected float64
	for _, x := range pairs {
		observed += w(x[0], x[1]) / n
		for _, y := range pairs { // every call of the one with every call of the other
			expected += w(x[0], y[1]) / (n * n)
		}
	}
	if expected < 1e-12 {
		return 0, false
	}
	return 1 - observed/expected, true
}

func (p plainStudy) pairsOf(a, b int, pairing Pairing) [][2]int {
	var out [][2]int
	for _, row := range p.calls {
		for i, c := range row[a] {
			for j, d := range row[b] {
				if (pairing == All || i == j) && c != Missing && d != Missing {
					out = append(out, [2]int{int(c), int(d)})
				}
			}
		}
	}
	return out
}

func checkValue(t rapid.TB, what string, got Estimate, want float64, ok bool) {
	t.Helper()
	if (got.Absent == nil) != ok {
		t.Fatalf("%s: absent %v, and by definition %v, %v", what, got.Absent, want, ok)
	}
	if ok && !(math.Abs(got.Value-want) <= rounding*math.Max(1, math.Abs(want))) {
		t.Fatalf("%s: %.15g, by definition %.15g", what, got.Value, want)
	}
}

func checkCount(t rapid.TB, what string, got Share, count, of int) {
	t.Helper()
	if got.Count != count || got.Of != of || (got.Absent == nil) != (of > 0) {
		t.Fatalf("%s: %d of %d (%v), by definition %d of %d", what, got.Count, got.Of, got.Absent, count, of)
	}
}

// checkShare checks a share of parts.
func checkShare(t rapid.TB, what string, got Share, count, of int, confidence float64) {
	t.Helper()
	checkCount(t, what, got, count, of)
	if of > 0 {
		sameFigures(t, what, got.Interval, interval.ClopperPearson(count, of, confidence))
	}
}

// checkRate checks a rate over calls, given event or not of each call, part by part.
func checkRate(t rapid.TB, what string, got Share, parts [][]bool, confidence float64) {
	t.Helper()
	var clusters []interval.Cluster
	count, of := 0, 0
	for _, calls := range parts {
		c := interval.Cluster{Calls: len(calls), Parts: 1}
		for _, event := range calls {
			if event {
				c.Events++
			}
		}
		count, of = count+c.Events, of+c.Calls
		clusters = append(clusters, c)
	}
	checkCount(t, what, got, count, of)
	if of > 0 {
		want := interval.KornGraubard(clusters, confidence)
		// Korn & Graubard's, but no surer than no event, or nothing but events, on
		// so many parts: there the limits are the roots of (1−p)ⁿ = tail.
		far := 1 - math.Pow((1-confidence)/2, 1/float64(len(parts)))
		sameFigures(t, what, got.Interval, interval.Interval{Lower: min(want.Published.Lower, 1-far), Upper: max(want.Published.Upper, far)})
		sameFigures(t, what, got.Effective, want.Effective)
	}
}

func itself(k int) int { return k }

func only(category int) func(int) int {
	return func(k int) int {
		if k == category {
			return 1
		}
		return 0
	}
}

func TestFiguresByDefinition(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawStudy(t, anyShape)
		opt := drawOptions(t)
		a := p.analyse(t, opt)
		appraisers, q := sequence(len(p.trials)), p.categories
		for i := range appraisers {
			count, of := p.shareOfAlike(func(part int) bool { return len(p.callsOn(part, i)) >= 2 }, i)
			checkShare(t, "within", a.Within[i].Share, count, of, opt.Confidence)
			k, ok := p.byGwet(false, q, itself, i)
			checkValue(t, "within", a.Within[i].Kappa, k, ok)
		}
		p.checkBetween(t, a.Between, opt, appraisers)
		if p.reference == nil {
			if a.Against != nil || a.All != nil {
				t.Fatal("against what?")
			}
			return
		}
		for i := range appraisers {
			p.checkAgainst(t, a.Against[i], opt, i)
		}
		p.checkAgainst(t, *a.All, opt, appraisers...)
	})
}

func (p plainStudy) checkBetween(t rapid.TB, b Between, opt Options, appraisers []int) {
	t.Helper()
	q := p.categories
	count, of := p.shareOfAlike(func(part int) bool {
		callers := 0
		for _, i := range appraisers {
			if len(p.callsOn(part, i)) > 0 {
				callers++
			}
		}
		return callers >= 2
	}, appraisers...)
	checkShare(t, "between", b.Share, count, of, opt.Confidence)
	// Where no part has calls by two appraisers, there is no between.
	between := func(v float64, ok bool) (float64, bool) { return v, ok && of > 0 }
	v, ok := between(p.byGwet(false, q, itself, appraisers...))
	checkValue(t, "Fleiss", b.Fleiss, v, ok)
	v, ok = between(p.byGwet(true, q, itself, appraisers...))
	checkValue(t, "AC1", b.AC1, v, ok)
	v, ok = between(p.alphaByCoincidences())
	checkValue(t, "alpha", b.Alpha, v, ok)
	v, ok = between(p.pooled(false))
	checkValue(t, "different appraisers", b.DifferentAppraisers, v, ok)
	v, ok = p.pooled(true)
	checkValue(t, "same appraiser", b.SameAppraiser, v, ok)
	for k, e := range b.Categories {
		v, ok = between(p.byGwet(false, 2, only(k), appraisers...))
		checkValue(t, "category", e, v, ok)
	}
	i := 0
	for x := range appraisers {
		for y := x + 1; y < len(appraisers); y++ {
			pair := b.Pairs[i]
			i++
			if pair.A != x || pair.B != y {
				t.Fatalf("pair %d, %d at %d, %d", pair.A, pair.B, x, y)
			}
			count, of := p.shareOfAlike(func(part int) bool {
				return len(p.callsOn(part, x)) > 0 && len(p.callsOn(part, y)) > 0
			}, x, y)
			checkShare(t, "pair", pair.Share, count, of, opt.Confidence)
			pairs := p.pairsOf(x, y, opt.Pairing)
			p.checkTable(t, pair.Table, pairs)
			p.checkCohen(t, pairs, opt, pair.Kappa, pair.Linear, pair.Quadratic)
		}
	}
	if i != len(b.Pairs) {
		t.Fatalf("%d pairs, want %d", len(b.Pairs), i)
	}
}

func (p plainStudy) checkTable(t rapid.TB, got Table, pairs [][2]int) {
	t.Helper()
	want := newTable(p.categories)
	for _, x := range pairs {
		want[x[0]][x[1]]++
	}
	sameFigures(t, "table", got, want)
}

func (p plainStudy) checkCohen(t rapid.TB, pairs [][2]int, opt Options, nominal Estimate, linear, quadratic *Estimate) {
	t.Helper()
	v, ok := cohen(pairs, 0)
	checkValue(t, "Cohen", nominal, v, ok)
	if wanted := opt.Ordered && p.categories > 2; wanted != (linear != nil) || wanted != (quadratic != nil) {
		t.Fatalf("ordered %v, %d categories: %v, %v", opt.Ordered, p.categories, linear, quadratic)
	} else if wanted {
		v, ok = cohen(pairs, 1)
		checkValue(t, "linear", *linear, v, ok)
		v, ok = cohen(pairs, 2)
		checkValue(t, "quadratic", *quadratic, v, ok)
	}
}

func (p plainStudy) checkAgainst(t rapid.TB, g Against, opt Options, appraisers ...int) {
	t.Helper()
	var right, called int
	var misses, falseAlarms [][]bool
	wrong, mixed := []int{}, []int{}
	var pairs [][2]int
	for part := range p.calls {
		calls := p.callsOn(part, appraisers...)
		if len(calls) == 0 {
			continue
		}
		if slices.Min(calls) != slices.Max(calls) {
			mixed = append(mixed, part)
		}
		ref := p.reference[part]
		if ref == Missing {
			continue
		}
		called++
		hits := 0
		var accepted, rejected []bool
		for _, c := range calls {
			pairs = append(pairs, [2]int{c, int(ref)})
			if c == int(ref) {
				hits++
			}
			if p.accept != nil {
				accepted = append(accepted, p.accept[c])
				rejected = append(rejected, !p.accept[c])
			}
		}
		if p.accept != nil && p.accept[ref] {
			falseAlarms = append(falseAlarms, rejected)
		} else if p.accept != nil {
			misses = append(misses, accepted)
		}
		if hits == len(calls) {
			right++
		}
		if hits == 0 {
			wrong = append(wrong, part)
		}
	}
	checkShare(t, "effectiveness", g.Effectiveness, right, called, opt.Confidence)
	checkRate(t, "miss", g.Miss, misses, opt.Confidence)
	checkRate(t, "false alarm", g.FalseAlarm, falseAlarms, opt.Confidence)
	sameFigures(t, "wrong", g.WrongEveryTime, wrong)
	sameFigures(t, "mixed", g.Mixed, mixed)
	p.checkTable(t, g.Table, pairs)
	// With one reference category kappa would be 0 whatever the calls are.
	if references := categoriesOf(pairs, 1); references != 1 {
		p.checkCohen(t, pairs, opt, g.Kappa, g.Linear, g.Quadratic)
	} else if g.Kappa.Absent == nil || g.Linear != nil && g.Linear.Absent == nil {
		t.Fatalf("one reference category, kappa %v", g.Kappa.Value)
	}
	if p.categories == 2 {
		if g.Categories != nil {
			t.Fatal("kappas of two categories one by one")
		}
		return
	}
	for k, e := range g.Categories {
		var two [][2]int
		for _, x := range pairs {
			two = append(two, [2]int{only(k)(x[0]), only(k)(x[1])})
		}
		v, ok := cohen(two, 0)
		checkValue(t, "category", e, v, ok && categoriesOf(two, 1) != 1)
	}
}

// categoriesOf returns how many categories stand on one side of pairs.
func categoriesOf(pairs [][2]int, side int) int {
	seen := make(map[int]bool)
	for _, x := range pairs {
		seen[x[side]] = true
	}
	return len(seen)
}
