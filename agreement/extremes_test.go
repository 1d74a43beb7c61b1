package agreement

import (
	"math/rand/v2"
	"strings"
	"testing"
)

// filled is a study in which every call and every reference is of the
// categories that the functions name; a nil reference sets none.
func filled(t testing.TB, parts, categories int, trials []int, reference func(part int) Category, call func(part, column int) Category) *Ratings {
	t.Helper()
	r, err := New(parts, categories, trials)
	if err != nil {
		t.Fatal(err)
	}
	for part := range parts {
		row := r.Row(part)
		for i := range row {
			row[i] = call(part, i)
		}
	}
	if reference != nil {
		refs := make([]Category, parts)
		for part := range refs {
			refs[part] = reference(part)
		}
		if err := r.SetReference(refs); err != nil {
			t.Fatal(err)
		}
	}
	accept := make([]bool, categories)
	for k := range accept {
		accept[k] = k >= categories/2
	}
	if categories == 1 {
		accept[0] = true
	}
	if err := r.SetAccept(accept); err != nil {
		t.Fatal(err)
	}
	return r
}

func TestExtremes(t *testing.T) {
	half := func(part int) Category { return Category(part % 2) }
	always := func(c Category) func(int, int) Category { return func(int, int) Category { return c } }
	asHalf := func(part, _ int) Category { return half(part) }
	notHalf := func(part, _ int) Category { return 1 - half(part) }
	bad := func(int) Category { return 0 }
	good := func(int) Category { return 1 }
	wobble := func(part, column int) Category { return Category((part + part*column/3) % 2) }
	three := []int{3, 3, 3}
	for _, c := range []struct {
		name  string
		study *Ratings
		// absent are words of the reason for each figure that is absent.
		absent map[string]string
		// shares are counts of shares that are not absent.
		shares map[string][2]int
		kappas map[string]float64
	}{
		{
			name:  "one appraiser",
			study: filled(t, 10, 2, []int{2}, half, wobble),
			absent: map[string]string{
				"between": "two appraisers", "fleiss": "two appraisers", "different": "two appraisers", "ac1": "two appraisers",
				"alpha": "two appraisers", "category": "two appraisers",
			},
		}, {
			name:   "one trial",
			study:  filled(t, 10, 2, []int{1, 1}, half, wobble),
			absent: map[string]string{"within": "repeat the trial", "within kappa": "repeat the trial", "same": "same appraiser"},
		}, {
			name:   "one part",
			study:  filled(t, 1, 2, three, half, func(_, i int) Category { return Category(i % 2) }),
			absent: map[string]string{"false alarm": "no good part"},
			shares: map[string][2]int{"within": {0, 1}, "between": {0, 1}, "effectiveness": {0, 1}, "miss": {1, 3}},
		}, {
			name:   "no bad parts",
			study:  filled(t, 10, 2, three, good, asHalf),
			absent: map[string]string{"miss": "no bad part", "against kappa": "one reference category"},
			shares: map[string][2]int{"false alarm": {15, 30}, "effectiveness": {5, 10}},
		}, {
			name:   "no good parts",
			study:  filled(t, 10, 2, three, bad, asHalf),
			absent: map[string]string{"false alarm": "no good part", "against kappa": "one reference category"},
			shares: map[string][2]int{"miss": {15, 30}, "effectiveness": {5, 10}},
		}, {
			name:   "always right",
			study:  filled(t, 10, 2, three, half, asHalf),
			shares: map[string][2]int{"within": {10, 10}, "between": {10, 10}, "effectiveness": {10, 10}, "miss": {0, 15}, "false alarm": {0, 15}},
			kappas: map[string]float64{"within": 1, "pair": 1, "fleiss": 1, "same": 1, "different": 1, "ac1": 1, "alpha": 1, "against": 1, "category": 1},
		}, {
			name:   "always wrong",
			study:  filled(t, 10, 2, three, half, notHalf),
			shares: map[string][2]int{"within": {10, 10}, "between": {10, 10}, "effectiveness": {0, 10}, "miss": {15, 15}, "false alarm": {15, 15}},
			kappas: map[string]float64{"within": 1, "fleiss": 1, "against": -1},
		}, {
			name:  "all calls alike",
			study: filled(t, 10, 2, three, half, always(1)),
			absent: map[string]string{
				"within kappa": "called every part alike", "fleiss": "alike", "pair": "the same", "alpha": "alike", "same": "alike", "different": "alike",
				"category": "of this category",
			},
			shares: map[string][2]int{"within": {10, 10}, "between": {10, 10}, "miss": {15, 15}, "false alarm": {0, 15}},
			kappas: map[string]float64{"against": 0, "ac1": 1},
		}, {
			name:  "all calls and the reference alike",
			study: filled(t, 10, 2, three, good, always(1)),
			absent: map[string]string{
				"against": "one category only", "miss": "no bad part", "fleiss": "alike",
			},
			shares: map[string][2]int{"effectiveness": {10, 10}},
		}, {
			name:  "a single category",
			study: filled(t, 10, 1, three, func(int) Category { return 0 }, always(0)),
			absent: map[string]string{
				"within kappa": "alike", "fleiss": "alike", "ac1": "one category", "alpha": "one category", "against": "one category",
				"miss": "no bad part", "pair": "one category",
			},
			shares: map[string][2]int{"effectiveness": {10, 10}, "between": {10, 10}, "false alarm": {0, 30}},
		}, {
			name:  "no parts",
			study: filled(t, 0, 2, three, half, asHalf),
			absent: map[string]string{
				"within": "repeat the trial", "within kappa": "repeat the trial", "between": "two appraisers", "fleiss": "two appraisers",
				"pair": "no part in common", "same": "same appraiser",
			},
		}, {
			name:  "no appraisers",
			study: filled(t, 5, 2, nil, half, asHalf),
			absent: map[string]string{
				"between": "two appraisers", "fleiss": "two appraisers", "all effectiveness": "was called", "all miss": "was called",
			},
		}, {
			name:  "no calls",
			study: filled(t, 10, 2, three, half, always(Missing)),
			absent: map[string]string{
				"within": "repeat the trial", "between": "two appraisers", "pair": "no part in common", "effectiveness": "was called",
				"miss": "was called", "false alarm": "was called", "against": "was called",
			},
		}, {
			name:  "no reference of any part",
			study: filled(t, 10, 2, three, func(int) Category { return Missing }, asHalf),
			absent: map[string]string{
				"effectiveness": "reference", "miss": "reference", "against": "reference",
			},
		}, {
			name:  "two parts",
			study: filled(t, 2, 2, three, half, wobble),
		},
	} {
		for _, opt := range []func(*Options){
			nil,
			func(o *Options) { o.Resamples = 0; o.Independent = true },
			func(o *Options) { o.Resamples = 1 },
			func(o *Options) { o.Pairing = All; o.Ordered = true; o.Confidence = 1 - 1e-15 },
			func(o *Options) { o.Confidence = 1e-9 },
		} {
			a := analyse(t, c.study, opt)
			sound(t, a)
			estimates, shares := figuresByName(a)
			for name, s := range shares {
				estimates[name] = s.Estimate
			}
			for name, words := range c.absent {
				if e, ok := estimates[name]; !ok || e.Absent == nil || !strings.Contains(e.Absent.Error(), words) {
					t.Errorf("%s: %s (there: %v) is absent because %v, want words %q", c.name, name, ok, e.Absent, words)
				}
			}
			for name, want := range c.shares {
				if s := shares[name]; s.Count != want[0] || s.Of != want[1] {
					t.Errorf("%s: %s is %d of %d (%v), want %v", c.name, name, s.Count, s.Of, s.Absent, want)
				}
			}
			for name, want := range c.kappas {
				if name == "within" || name == "against" || name == "pair" {
					name += " kappa"
				}
				if e, ok := estimates[name]; !ok || e.Absent != nil || e.Value != want {
					t.Errorf("%s: %s is %v (%v), want %v", c.name, name, e.Value, e.Absent, want)
				}
			}
		}
	}
}

// figuresByName names the figures of the first appraiser, pair and category,
// and of all together.
func figuresByName(a *Analysis) (map[string]Estimate, map[string]Share) {
	b := a.Between
	e := map[string]Estimate{
		"fleiss": b.Fleiss, "same": b.SameAppraiser, "different": b.DifferentAppraisers, "ac1": b.AC1, "alpha": b.Alpha,
		"category": b.Categories[0],
	}
	s := map[string]Share{"between": b.Share}
	if len(a.Within) > 0 {
		e["within kappa"] = a.Within[0].Kappa
		s["within"] = a.Within[0].Share
	}
	if len(b.Pairs) > 0 {
		e["pair"], e["pair kappa"] = b.Pairs[0].Kappa, b.Pairs[0].Kappa
	}
	if len(a.Against) > 0 {
		g := a.Against[0]
		e["against"], e["against kappa"] = g.Kappa, g.Kappa
		s["effectiveness"], s["miss"], s["false alarm"] = g.Effectiveness, g.Miss, g.FalseAlarm
	}
	if a.All != nil {
		s["all effectiveness"], s["all miss"] = a.All.Effectiveness, a.All.Miss
	}
	return e, s
}

// Large in one way or another. How long each takes is for the benchmark.
func TestLargeStudies(t *testing.T) {
	for name, r := range largeStudies(t) {
		done, of := 0, 0
		a := analyse(t, r, func(o *Options) {
			o.Ordered = r.Categories() > 2
			if r.Categories() > 2 {
				o.Resamples = 100
			}
			o.Progress = func(d, n int) { done, of = d, n }
		})
		sound(t, a)
		if a.Between.Fleiss.Absent != nil || a.All.Kappa.Absent != nil {
			t.Errorf("%s: no kappa: %v, %v", name, a.Between.Fleiss.Absent, a.All.Kappa.Absent)
		}
		if done != of || of == 0 {
			t.Errorf("%s: progress ends at %d of %d", name, done, of)
		}
		// Pairs are too many to resample: then all of them are linearised, and
		// the kappas over all calls are not.
		if r.Appraisers() == 200 {
			if !strings.HasPrefix(a.Between.Fleiss.Method, "BCa") {
				t.Errorf("%s: Fleiss' kappa: %s", name, a.Between.Fleiss.Method)
			}
			for _, p := range a.Between.Pairs {
				if !strings.HasPrefix(p.Kappa.Method, "linearised") {
					t.Fatalf("%s: appraisers %d and %d: %s", name, p.A, p.B, p.Kappa.Method)
				}
			}
		}
	}
}

func BenchmarkLargeStudies(b *testing.B) {
	for name, r := range largeStudies(b) {
		b.Run(name, func(b *testing.B) {
			for b.Loop() {
				analyse(b, r, func(o *Options) { o.Ordered = r.Categories() > 2 })
			}
		})
	}
}

func largeStudies(t testing.TB) map[string]*Ratings {
	many := func(n, trials int) []int {
		out := make([]int, n)
		for i := range out {
			out[i] = trials
		}
		return out
	}
	noisy := func(parts, categories int, trials []int) *Ratings {
		rng := rand.New(rand.NewPCG(7, 8))
		ref := func(part int) Category { return Category(part * 31 % categories) }
		return filled(t, parts, categories, trials, ref, func(part, _ int) Category {
			if rng.IntN(8) == 0 {
				return Category(rng.IntN(categories))
			}
			return ref(part)
		})
	}
	return map[string]*Ratings{
		"200 appraisers":     noisy(50, 2, many(200, 3)),
		"40 categories":      noisy(100, 40, []int{3, 3, 3}),
		"254 categories":     noisy(300, MaxCategories, []int{2, 2}),
		"20 × 40 categories": noisy(50, 40, many(20, 2)),
	}
}
