package agreement

import (
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"

	"samecall/agreement/interval"
)

// Figures that should be the same may differ by the rounding of sums in
// another order.
const rounding = 1e-12

var byText = cmp.Comparer(func(a, b error) bool {
	if a == nil || b == nil {
		return a == nil && b == nil
	}
	return a.Error() == b.Error()
})

// alike compares analyses, or parts of them, but for rounding. Standard
// errors are compared as variances: the root of a variance that should be 0
// and is 1e-17 by rounding is far from 0.
var alike = cmp.Options{cmpopts.EquateApprox(0, rounding), cmpopts.EquateEmpty(), byText, cmp.Transformer("variances", variances)}

type varianceOf struct {
	Value              float64
	Interval, OneSided interval.Interval
	Method             string
	Absent, Unbounded  error
	Variance           float64
	HasIndependent     bool
	Independent, Half2 float64 // middle and squared half width of Estimate.Independent
}

func variances(e Estimate) varianceOf {
	v := varianceOf{
		Value: e.Value, Interval: e.Interval, OneSided: e.OneSided, Method: e.Method, Absent: e.Absent, Unbounded: e.Unbounded,
		Variance: e.StandardError * e.StandardError,
	}
	if i := e.Independent; i != nil {
		v.HasIndependent = true
		v.Independent, v.Half2 = (i.Lower+i.Upper)/2, i.Width()*i.Width()/4
	}
	return v
}

func sameFigures(t rapid.TB, what string, got, want any) {
	t.Helper()
	if d := cmp.Diff(want, got, alike); d != "" {
		t.Fatalf("%s (-before +after):\n%s", what, d)
	}
}

func TestEveryAnalysisIsSound(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawStudy(t, anyShape)
		opt := drawOptions(t)
		opt.Resamples = rapid.SampledFrom([]int{0, 1, 150}).Draw(t, "resamples")
		opt.Seed = rapid.Uint64().Draw(t, "seed of the resampling")
		sound(t, p.analyse(t, opt))
	})
}

func TestSameInputSameAnalysis(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawStudy(t, anyShape)
		opt := drawOptions(t)
		opt.Resamples = 120
		// Exactly alike: no tolerance.
		if d := cmp.Diff(p.analyse(t, opt), p.analyse(t, opt), byText); d != "" {
			t.Fatal(d)
		}
	})
}

func TestAnalyseLeavesTheStudyAlone(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawStudy(t, anyShape)
		r := p.ratings(t)
		if _, err := Analyse(r, drawOptions(t)); err != nil {
			t.Fatal(err)
		}
		for part, row := range p.calls {
			for a, calls := range row {
				if !slices.Equal(r.Calls(part, a), calls) {
					t.Fatalf("part %d, appraiser %d: %v became %v", part, a, calls, r.Calls(part, a))
				}
			}
		}
	})
}

// Parts, appraisers and trials have no order, resampled limits included.
func TestOrderDoesNotMatter(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawStudy(t, rapid.SampledFrom([]shape{anyShape, largerShape}).Draw(t, "shape"))
		opt := drawOptions(t)
		opt.Resamples = rapid.SampledFrom([]int{0, 120}).Draw(t, "resamples")
		parts := rapid.Permutation(sequence(len(p.calls))).Draw(t, "parts")
		appraisers := rapid.Permutation(sequence(len(p.trials))).Draw(t, "appraisers")
		trials := rapid.Permutation(sequence(slices.Min(p.trials))).Draw(t, "trials")
		before := p.analyse(t, opt)
		after := p.reorder(parts, appraisers, trials).analyse(t, opt)
		back := func(list []int) []int {
			out := []int{}
			for _, i := range list {
				out = append(out, parts[i])
			}
			slices.Sort(out)
			return out
		}
		for i, a := range appraisers {
			got := after.Within[i]
			got.Mixed = back(got.Mixed)
			sameFigures(t, "within", got, before.Within[a])
			if before.Against != nil {
				sameFigures(t, "against", relist(after.Against[i], back), before.Against[a])
			}
		}
		if before.All != nil {
			sameFigures(t, "all against", relist(*after.All, back), *before.All)
		}
		got := after.Between
		got.Pairs = nil
		for _, pair := range after.Between.Pairs {
			pair.A, pair.B = appraisers[pair.A], appraisers[pair.B]
			if pair.A > pair.B {
				pair.A, pair.B, pair.Table = pair.B, pair.A, transposed(pair.Table)
			}
			got.Pairs = append(got.Pairs, pair)
		}
		slices.SortFunc(got.Pairs, func(x, y Pair) int { return (x.A-y.A)*len(appraisers) + x.B - y.B })
		sameFigures(t, "between", got, before.Between)
		// Their texts tell appraisers by number.
		sameFigures(t, "warnings", codes(after.Warnings), codes(before.Warnings))
		sameFigures(t, "kinds of intervals", after.Intervals, before.Intervals)
	})
}

func codes(warnings []Warning) []string {
	var out []string
	for _, w := range warnings {
		out = append(out, w.Code)
	}
	return out
}

// Parts in another order give the same figures to their last digit: whoever
// renames parts gets the same record.
func TestOrderOfPartsChangesNoDigit(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawStudy(t, rapid.SampledFrom([]shape{anyShape, largerShape}).Draw(t, "shape"))
		opt := drawOptions(t)
		opt.Resamples = rapid.SampledFrom([]int{0, 120}).Draw(t, "resamples")
		parts := rapid.Permutation(sequence(len(p.calls))).Draw(t, "parts")
		q := p.reorder(parts, sequence(len(p.trials)), nil)
		before, after := p.analyse(t, opt), q.analyse(t, opt)
		for _, a := range []*Analysis{before, after} { // lists of parts
			a.Patterns.Of = nil
			for i := range a.Within {
				a.Within[i].Mixed = nil
			}
			for i := range a.Against {
				a.Against[i] = relist(a.Against[i], func([]int) []int { return nil })
			}
			if a.All != nil {
				*a.All = relist(*a.All, func([]int) []int { return nil })
			}
		}
		if d := cmp.Diff(before, after, byText); d != "" {
			t.Fatal(d)
		}
	})
}

// The study of the MSA manual, its parts turned about and shuffled.
func TestResampledLimitsOfShuffledParts(t *testing.T) {
	r := msaStudy(t)
	want := analyse(t, r, nil).Between.Fleiss
	if !strings.HasPrefix(want.Method, "BCa") {
		t.Fatal(want.Method)
	}
	rng := rand.New(rand.NewPCG(5, 6))
	for range 5 {
		shuffled := must[*Ratings](t)(New(r.Parts(), 2, []int{3, 3, 3}))
		for to, from := range rng.Perm(r.Parts()) {
			copy(shuffled.Row(to), r.Row(from))
		}
		if got := analyse(t, shuffled, nil).Between.Fleiss; got != want {
			t.Fatalf("%+v, in the manual's order %+v", got, want)
		}
	}
}

// Resampling changes limits, not estimates.
func TestResampledEstimates(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawStudy(t, anyShape)
		opt := drawOptions(t)
		without := p.analyse(t, opt)
		opt.Resamples = 120
		sameFigures(t, "estimates without resampling", estimates(without), estimates(p.analyse(t, opt)))
	})
}

// estimates lists the coefficients of an analysis with their variances.
func estimates(a *Analysis) [][2]float64 {
	var out [][2]float64
	add := func(es ...Estimate) {
		for _, e := range es {
			out = append(out, [2]float64{e.Value, e.StandardError * e.StandardError})
		}
	}
	for _, e := range nominal(a) {
		add(e)
	}
	b := a.Between
	add(b.AC1, b.Alpha)
	for _, p := range b.Pairs {
		if p.Linear != nil {
			add(*p.Linear, *p.Quadratic)
		}
	}
	return out
}

// nominal lists the kappas that know nothing of the order of categories, but
// for those of single categories.
func nominal(a *Analysis) []Estimate {
	var out []Estimate
	for _, w := range a.Within {
		out = append(out, w.Kappa)
	}
	for _, p := range a.Between.Pairs {
		out = append(out, p.Kappa)
	}
	for _, g := range a.Against {
		out = append(out, g.Kappa)
	}
	if a.All != nil {
		out = append(out, a.All.Kappa)
	}
	return append(out, a.Between.Fleiss, a.Between.SameAppraiser, a.Between.DifferentAppraisers)
}

func relist(a Against, list func([]int) []int) Against {
	a.Mixed, a.WrongEveryTime = list(a.Mixed), list(a.WrongEveryTime)
	return a
}

func transposed(t Table) Table {
	out := newTable(len(t))
	for j, row := range t {
		for k, n := range row {
			out[k][j] = n
		}
	}
	return out
}

// What was a miss is a false alarm when accept and reject change places.
func TestAcceptAndRejectMirror(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawStudy(t, rapid.SampledFrom([]shape{anyShape, largerShape}).Draw(t, "shape"))
		p.accept = rapid.SliceOfN(rapid.Bool(), p.categories, p.categories).Draw(t, "split")
		if p.reference == nil {
			p.reference = make([]Category, len(p.calls))
		}
		opt := drawOptions(t)
		opt.Resamples = rapid.SampledFrom([]int{0, 120}).Draw(t, "resamples")
		to := sequence(p.categories)
		slices.Reverse(to)
		mirror := p.recode(to)
		for k := range mirror.accept {
			mirror.accept[k] = !mirror.accept[k]
		}
		before, after := p.analyse(t, opt), mirror.analyse(t, opt)
		sides := append(slices.Clone(before.Against), *before.All)
		for i, got := range append(slices.Clone(after.Against), *after.All) {
			want := sides[i]
			sameFigures(t, "effectiveness", got.Effectiveness, want.Effectiveness)
			mirrored(t, "miss", got.Miss, want.FalseAlarm)
			mirrored(t, "false alarm", got.FalseAlarm, want.Miss)
			sameFigures(t, "wrong", got.WrongEveryTime, want.WrongEveryTime)
			sameFigures(t, "mixed", got.Mixed, want.Mixed)
			// Steps between grades are the same read from either end.
			sameFigures(t, "linear", got.Linear, want.Linear)
			sameFigures(t, "quadratic", got.Quadratic, want.Quadratic)
			sameFigures(t, "McNemar", got.McNemar, want.McNemar)
			sameFigures(t, "Bowker", got.Bowker, want.Bowker)
		}
		sameFigures(t, "kappas", nominal(after), nominal(before))
		sameFigures(t, "AC1", after.Between.AC1, before.Between.AC1)
		sameFigures(t, "alpha", after.Between.Alpha, before.Between.Alpha)
	})
}

// mirrored compares two rates, limits included. Where they are absent the
// reasons differ in good and bad.
func mirrored(t rapid.TB, what string, got, want Share) {
	t.Helper()
	if (got.Absent == nil) != (want.Absent == nil) {
		t.Fatalf("%s: %v against %v", what, got.Absent, want.Absent)
	}
	got.Absent, want.Absent = nil, nil
	sameFigures(t, what, got, want)
}

// Names of categories mean nothing to a nominal kappa.
func TestCategoriesHaveNoOrder(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawStudy(t, rapid.SampledFrom([]shape{anyShape, largerShape}).Draw(t, "shape"))
		opt := drawOptions(t)
		if p.categories == 2 { // for more, see TestCategoriesHaveNoOrderInLimits
			opt.Resamples = rapid.SampledFrom([]int{0, 120}).Draw(t, "resamples")
		}
		to := rapid.Permutation(sequence(p.categories)).Draw(t, "to")
		before, after := p.analyse(t, opt), p.recode(to).analyse(t, opt)
		sameFigures(t, "kappas", nominal(after), nominal(before))
		sameFigures(t, "between", after.Between.Share, before.Between.Share)
		sameFigures(t, "AC1", after.Between.AC1, before.Between.AC1)
		sameFigures(t, "alpha", after.Between.Alpha, before.Between.Alpha)
		for k, e := range before.Between.Categories {
			sameFigures(t, "category", after.Between.Categories[to[k]], e)
		}
		for a, g := range before.Against {
			sameFigures(t, "miss", after.Against[a].Miss, g.Miss)
			sameFigures(t, "false alarm", after.Against[a].FalseAlarm, g.FalseAlarm)
			for k, e := range g.Categories {
				sameFigures(t, "category against", after.Against[a].Categories[to[k]], e)
			}
		}
	})
}

// Nor do they to resampled limits, where no two categories are used alike.
func TestCategoriesHaveNoOrderInLimits(t *testing.T) {
	rng := rand.New(rand.NewPCG(9, 10))
	p := plainStudy{categories: 4, trials: []int{2, 2}}
	for part := range 100 {
		truth := [10]Category{0, 0, 0, 0, 1, 1, 1, 2, 2, 3}[part%10]
		row := [][]Category{{truth, truth}, {truth, truth}}
		if part%3 == 0 {
			row[rng.IntN(2)][rng.IntN(2)] = Category(rng.IntN(4))
		}
		p.calls, p.reference = append(p.calls, row), append(p.reference, truth)
	}
	opt := DefaultOptions()
	before := p.analyse(t, opt)
	if before.Intervals.Linearised > 0 {
		t.Fatalf("%+v", before.Intervals)
	}
	for _, to := range [][]int{{1, 2, 3, 0}, {3, 1, 2, 0}, {2, 3, 0, 1}} {
		after := p.recode(to).analyse(t, opt)
		sameFigures(t, "kappas", nominal(after), nominal(before))
		sameFigures(t, "AC1", after.Between.AC1, before.Between.AC1)
		for k, e := range before.Between.Categories {
			sameFigures(t, "category", after.Between.Categories[to[k]], e)
		}
	}
}

// Twice as many parts that behave alike: the same kappas, and narrower.
// Alpha corrects for the number of calls and moves; with resampling, limits
// carry its noise.
func TestTwiceThePartsNarrow(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		// A coefficient of a single part has no interval to compare with. A
		// rate on a single part has the exact one of one part; on two, the
		// effective number of calls is punished for being estimated from two.
		p := drawStudy(t, shape{3, 12, 1, 4, 3, 4})
		opt := drawOptions(t)
		double := p
		double.calls = append(slices.Clone(p.calls), p.calls...)
		if p.reference != nil {
			double.reference = append(slices.Clone(p.reference), p.reference...)
		}
		before, after := p.analyse(t, opt), double.analyse(t, opt)
		once, twice := nominal(before), nominal(after)
		once = append(append(once, before.Between.Categories...), before.Between.AC1)
		twice = append(append(twice, after.Between.Categories...), after.Between.AC1)
		for i, e := range once {
			if (e.Absent == nil) != (twice[i].Absent == nil) {
				t.Fatalf("kappa %d: %v, then %v", i, e.Absent, twice[i].Absent)
			}
			sameFigures(t, "kappa", twice[i].Value, e.Value)
			if e.Absent != nil || e.Unbounded != nil {
				continue
			}
			within(t, "kappa", twice[i].Interval, e.Interval)
		}
		shares := func(a *Analysis) []Share {
			s := []Share{a.Between.Share}
			for _, w := range a.Within {
				s = append(s, w.Share)
			}
			for _, p := range a.Between.Pairs {
				s = append(s, p.Share)
			}
			for _, g := range a.Against {
				s = append(s, g.Effectiveness, g.Miss, g.FalseAlarm)
			}
			return s
		}
		for i, s := range shares(before) {
			s2 := shares(after)[i]
			if s2.Count != 2*s.Count || s2.Of != 2*s.Of {
				t.Fatalf("share %d: %d of %d, then %d of %d", i, s.Count, s.Of, s2.Count, s2.Of)
			}
			sameFigures(t, "share", s2.Value, s.Value)
			if s.Absent != nil || s.Effective == 1 { // a rate on a single part
				continue
			}
			if s2.Interval.Width() >= s.Interval.Width() {
				t.Fatalf("share %d of %d: %v, then %v", s.Count, s.Of, s.Interval, s2.Interval)
			}
		}
	})
}

// within fails the test unless the interval got lies in want and, where
// want does not end at the ends of the scale, is narrower.
func within(t rapid.TB, what string, got, want interval.Interval) {
	t.Helper()
	if got.Lower < want.Lower-rounding || got.Upper > want.Upper+rounding {
		t.Fatalf("%s: %v is not inside of %v", what, got, want)
	}
	if want.Lower > -1 && got.Width() >= want.Width() {
		t.Fatalf("%s: %v is as wide as %v", what, got, want)
	}
}

// An appraiser and its double, whose trials repeat, agree perfectly.
func TestIdenticalAppraisersAgree(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawStudy(t, shape{2, 12, 1, 1, 1, 5})
		n := rapid.IntRange(1, 3).Draw(t, "repeats")
		p.trials = []int{n, n}
		for part, row := range p.calls {
			calls := slices.Repeat(row[0], n)
			p.calls[part] = [][]Category{calls, slices.Clone(calls)}
		}
		opt := drawOptions(t)
		opt.Resamples = rapid.SampledFrom([]int{0, 120}).Draw(t, "resamples")
		pair := p.analyse(t, opt).Between.Pairs[0]
		if pair.Alike != pair.Pairs || pair.Share.Count != pair.Share.Of {
			t.Fatalf("%+v", pair)
		}
		if pair.Kappa.Absent == nil && pair.Kappa.Value != 1 {
			t.Fatalf("kappa %v", pair.Kappa.Value)
		}
		used := map[Category]bool{}
		for _, row := range p.calls {
			used[row[0][0]] = true
		}
		delete(used, Missing)
		if (len(used) > 1) != (pair.Kappa.Absent == nil) {
			t.Fatalf("%d categories used and kappa is %+v", len(used), pair.Kappa)
		}
	})
}

// Without missing calls no coefficient falls below −1.
func TestCompleteStudiesStayOnTheScale(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawStudy(t, shape{1, 8, 1, 4, 1, 4})
		n := rapid.IntRange(1, 3).Draw(t, "trials of each")
		anyCall := rapid.Uint8Range(0, uint8(p.categories-1))
		for a := range p.trials {
			p.trials[a] = n
		}
		for _, row := range p.calls {
			for a := range row {
				row[a] = rapid.SliceOfN(anyCall, n, n).Draw(t, "calls")
			}
		}
		a := p.analyse(t, drawOptions(t))
		for i, e := range append(nominal(a), a.Between.AC1, a.Between.Alpha) {
			if e.Value < -1-rounding || math.IsNaN(e.Value) {
				t.Fatalf("coefficient %d is %v", i, e.Value)
			}
		}
	})
}
