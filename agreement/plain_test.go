package agreement

import (
	"slices"

	"pgregory.net/rapid"
)

// plainStudy is a study in nested slices, easy to turn about: the properties
// change it and compare the analyses.
type plainStudy struct {
	categories int
	trials     []int          // of each appraiser
	calls      [][][]Category // part, appraiser, trial
	reference  []Category     // nil: none
	accept     []bool         // nil: none
}

func (p plainStudy) ratings(t rapid.TB) *Ratings {
	t.Helper()
	r, err := New(len(p.calls), p.categories, p.trials)
	if err != nil {
		t.Fatal(err)
	}
	for part, row := range p.calls {
		for a, calls := range row {
			copy(r.Calls(part, a), calls)
		}
	}
	if p.reference != nil {
		if err := r.SetReference(p.reference); err != nil {
			t.Fatal(err)
		}
	}
	if p.accept != nil {
		if err := r.SetAccept(p.accept); err != nil {
			t.Fatal(err)
		}
	}
	return r
}

// shape bounds the studies that are drawn.
type shape struct {
	minParts, maxParts           int
	minAppraisers, maxAppraisers int
	maxTrials, maxCategories     int
}

var anyShape = shape{1, 12, 1, 5, 4, 5}

// largerShape holds studies whose coefficients are resampled: of few parts
// outside the commonest category they are linearised.
var largerShape = shape{25, 40, 1, 4, 3, 4}

// drawStudy draws a study in which most calls are right, some wrong and some
// missing: one where coefficients exist and differ.
func drawStudy(t *rapid.T, s shape) plainStudy {
	p := plainStudy{categories: rapid.IntRange(2, s.maxCategories).Draw(t, "categories")}
	p.trials = rapid.SliceOfN(rapid.IntRange(1, s.maxTrials), s.minAppraisers, s.maxAppraisers).Draw(t, "trials")
	parts := rapid.IntRange(s.minParts, s.maxParts).Draw(t, "parts")
	category := rapid.Uint8Range(0, uint8(p.categories-1))
	// Of ten calls so many are wrong, and so many missing.
	wrong := rapid.IntRange(0, 6).Draw(t, "wrong")
	missing := rapid.SampledFrom([]int{0, 0, 1, 4}).Draw(t, "missing")
	truth := rapid.SliceOfN(category, parts, parts).Draw(t, "truth")
	fate := rapid.IntRange(0, 9)
	for _, ref := range truth {
		var row [][]Category
		for _, n := range p.trials {
			calls := make([]Category, n)
			for i := range calls {
				switch f := fate.Draw(t, "fate"); {
				case f < missing:
					calls[i] = Missing
				case f < missing+wrong:
					calls[i] = category.Draw(t, "call")
				default:
					calls[i] = ref
				}
			}
			row = append(row, calls)
		}
		p.calls = append(p.calls, row)
	}
	if rapid.Bool().Draw(t, "with reference") {
		p.reference = slices.Clone(truth)
		if rapid.Bool().Draw(t, "some unknown") {
			p.reference[rapid.IntRange(0, parts-1).Draw(t, "unknown")] = Missing
		}
	}
	if rapid.Bool().Draw(t, "with accept") {
		p.accept = rapid.SliceOfN(rapid.Bool(), p.categories, p.categories).Draw(t, "accept")
	}
	return p
}

// drawOptions draws options without resampling: every interval is then exact
// or linearised, and does not depend on the order of the parts.
func drawOptions(t *rapid.T) Options {
	opt := DefaultOptions()
	opt.Resamples = 0
	opt.Pairing = rapid.SampledFrom([]Pairing{Matched, All}).Draw(t, "pairing")
	opt.Ordered = rapid.Bool().Draw(t, "ordered")
	opt.Independent = rapid.Bool().Draw(t, "independent")
	opt.Confidence = rapid.SampledFrom([]float64{0.95, 0.8, 0.99}).Draw(t, "confidence")
	return opt
}

func (p plainStudy) analyse(t rapid.TB, opt Options) *Analysis {
	t.Helper()
	a, err := Analyse(p.ratings(t), opt)
	if err != nil {
		t.Fatal(err)
	}
	return a
}

// reorder returns the study with its parts, appraisers and trials in another
// order. Trial t of every appraiser moves alike; those beyond the shortest
// appraiser's stay where they are.
func (p plainStudy) reorder(parts, appraisers, trials []int) plainStudy {
	out := plainStudy{categories: p.categories, accept: p.accept}
	for _, a := range appraisers {
		out.trials = append(out.trials, p.trials[a])
	}
	for _, part := range parts {
		var row [][]Category
		for _, a := range appraisers {
			calls := slices.Clone(p.calls[part][a])
			for to, from := range trials {
				calls[to] = p.calls[part][a][from]
			}
			row = append(row, calls)
		}
		out.calls = append(out.calls, row)
		if p.reference != nil {
			out.reference = append(out.reference, p.reference[part])
		}
	}
	return out
}

// recode returns the study with category k renamed to[k].
func (p plainStudy) recode(to []int) plainStudy {
	out := plainStudy{categories: p.categories, trials: p.trials}
	rename := func(c Category) Category {
		if c == Missing {
			return Missing
		}
		return Category(to[c])
	}
	for _, row := range p.calls {
		var renamed [][]Category
		for _, calls := range row {
			one := make([]Category, len(calls))
			for i, c := range calls {
				one[i] = rename(c)
			}
			renamed = append(renamed, one)
		}
		out.calls = append(out.calls, renamed)
	}
	for _, c := range p.reference {
		out.reference = append(out.reference, rename(c))
	}
	if p.accept != nil {
		out.accept = make([]bool, p.categories)
		for k, ok := range p.accept {
			out.accept[to[k]] = ok
		}
	}
	return out
}

func sequence(n int) []int {
	s := make([]int, n)
	for i := range s {
		s[i] = i
	}
	return s
}
