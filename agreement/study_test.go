package agreement

import (
	"math"
	"testing"

	"samecall/agreement/interval"
)

// msaStudy is the MSA manual's study: categories reject, accept; appraisers
// A, B, C; three trials.
func msaStudy(t testing.TB) *Ratings {
	t.Helper()
	rows := readCSV(t, "msa-manual-50x3x3.csv")
	r, err := New(len(rows), 2, []int{3, 3, 3})
	if err != nil {
		t.Fatal(err)
	}
	ref := make([]Category, len(rows))
	for part, row := range rows {
		ref[part] = row[1][0] - '0'
		for i, c := range row[3:] {
			r.Row(part)[i] = c[0] - '0'
		}
	}
	if err := r.SetReference(ref); err != nil {
		t.Fatal(err)
	}
	if err := r.SetAccept([]bool{false, true}); err != nil {
		t.Fatal(err)
	}
	return r
}

func analyse(t testing.TB, r *Ratings, change func(*Options)) *Analysis {
	t.Helper()
	opt := DefaultOptions()
	if change != nil {
		change(&opt)
	}
	a, err := Analyse(r, opt)
	if err != nil {
		t.Fatal(err)
	}
	return a
}

// Source: statsmodels, scikit-learn and plain formulas (expected-py.json);
// R's psych, binom.test and survey (expected-r.json).
func TestMSAStudy(t *testing.T) {
	type limits struct {
		X, N         int
		Lower, Upper float64
	}
	type pair struct {
		Table     Table
		Kappa, SE float64
	}
	type se struct{ Kappa, SE float64 }
	var r struct {
		MSA struct {
			Matched       map[string]pair `json:"cohen_between_matched"`
			Reference     map[string]pair `json:"cohen_vs_reference"`
			All           map[string]pair `json:"cohen_between_all_trial_pairs"`
			Within        map[string]limits
			Effectiveness map[string]limits
			Miss          map[string]limits `json:"miss_rate_calls"`
			FalseAlarm    map[string]limits `json:"false_alarm_rate_calls"`
			Between       limits            `json:"between_all"`
			AllRight      limits            `json:"all_vs_reference"`
			Clustered     struct {
				Reference map[string]se `json:"kappa_vs_reference"`
				Between   map[string]se `json:"kappa_between"`
			}
		} `json:"msa_manual"`
	}
	readJSON(t, "expected-r.json", &r)
	var py struct {
		MSA struct {
			Within    map[string]float64 `json:"fleiss_within"`
			AllNine   float64            `json:"fleiss_all_nine_calls"`
			ByTrial   []float64          `json:"fleiss_between_by_trial"`
			Alpha     float64            `json:"alpha_nominal_all_nine"`
			AC1       float64            `json:"ac1_all_nine"`
			Agreement float64            `json:"percent_agreement_all_nine"`
			Pairs     struct {
				Same      float64 `json:"within_kappa_pooled_margin"`
				Different float64 `json:"between_kappa_pooled_margin"`
			}
		} `json:"msa_manual"`
	}
	readJSON(t, "expected-py.json", &py)

	study := msaStudy(t)
	names := []string{"A", "B", "C"}
	got := analyse(t, study, nil)
	linear := analyse(t, study, func(o *Options) { o.Resamples = 0; o.Independent = true })
	share := func(what string, s Share, want limits) {
		t.Helper()
		if s.Count != want.X || s.Of != want.N {
			t.Errorf("%s: %d of %d, want %d of %d", what, s.Count, s.Of, want.X, want.N)
		}
		near(t, what+" lower", s.Interval.Lower, want.Lower, closedForm)
		near(t, what+" upper", s.Interval.Upper, want.Upper, closedForm)
	}
	linearised := func(what string, e Estimate, want se) {
		t.Helper()
		near(t, what, e.Value, want.Kappa, closedForm)
		near(t, what+" se", e.StandardError, want.SE, 1e-6)
	}
	independent := func(what string, e Estimate, want pair) {
		t.Helper()
		near(t, what, e.Independent.Upper-e.Value, must[interval.Interval](t)(interval.Normal(0, want.SE, 0.95)).Upper, closedForm)
	}
	for a, name := range names {
		w, g := got.Within[a], got.Against[a]
		near(t, "within "+name, w.Kappa.Value, py.MSA.Within[name], closedForm)
		share("within "+name, w.Share, r.MSA.Within[name])
		share("effectiveness "+name, g.Effectiveness, r.MSA.Effectiveness[name])
		near(t, "kappa "+name, g.Kappa.Value, r.MSA.Reference[name].Kappa, closedForm)
		sameTable(t, name, g.Table, r.MSA.Reference[name].Table)
		linearised("kappa against reference "+name, linear.Against[a].Kappa, r.MSA.Clustered.Reference[name])
		independent("independent "+name, linear.Against[a].Kappa, r.MSA.Reference[name])
		for what, c := range map[string]struct {
			got  Share
			want limits
		}{"miss": {g.Miss, r.MSA.Miss[name]}, "false alarm": {g.FalseAlarm, r.MSA.FalseAlarm[name]}} {
			if c.got.Count != c.want.X || c.got.Of != c.want.N {
				t.Errorf("%s %s: %d of %d, want %d of %d", what, name, c.got.Count, c.got.Of, c.want.X, c.want.N)
			}
		}
	}
	for i, p := range got.Between.Pairs {
		name := names[p.A] + "-" + names[p.B]
		sameTable(t, name, p.Table, r.MSA.Matched[name].Table)
		linearised("kappa "+name, linear.Between.Pairs[i].Kappa, r.MSA.Clustered.Between[name])
		independent("independent "+name, linear.Between.Pairs[i].Kappa, r.MSA.Matched[name])
	}
	for _, p := range analyse(t, study, func(o *Options) { o.Pairing = All }).Between.Pairs {
		name := names[p.A] + "-" + names[p.B]
		sameTable(t, name+" all", p.Table, r.MSA.All[name].Table)
		near(t, name+" all", p.Kappa.Value, r.MSA.All[name].Kappa, closedForm)
	}
	b := got.Between
	share("between", b.Share, r.MSA.Between)
	share("all right", got.All.Effectiveness, r.MSA.AllRight)
	near(t, "Fleiss", b.Fleiss.Value, py.MSA.AllNine, closedForm)
	near(t, "alpha", b.Alpha.Value, py.MSA.Alpha, closedForm)
	near(t, "AC1", b.AC1.Value, py.MSA.AC1, closedForm)
	near(t, "agreement", b.Agreement, py.MSA.Agreement, closedForm)
	near(t, "same appraiser", b.SameAppraiser.Value, py.MSA.Pairs.Same, closedForm)
	near(t, "different appraisers", b.DifferentAppraisers.Value, py.MSA.Pairs.Different, closedForm)
	for trial, want := range py.MSA.ByTrial {
		one, err := New(50, 2, []int{1, 1, 1})
		if err != nil {
			t.Fatal(err)
		}
		for part := range 50 {
			for a := range 3 {
				one.Row(part)[a] = study.Calls(part, a)[trial]
			}
		}
		near(t, "Fleiss by trial", analyse(t, one, nil).Between.Fleiss.Value, want, closedForm)
	}
}

func sameTable(t testing.TB, what string, got, want Table) {
	t.Helper()
	if len(got) != len(want) {
		t.Fatalf("%s: table of %d categories, want %d", what, len(got), len(want))
	}
	for j := range got {
		for k := range got[j] {
			if got[j][k] != want[j][k] {
				t.Errorf("%s: table[%d][%d] = %d, want %d", what, j, k, got[j][k], want[j][k])
			}
		}
	}
}

// The derivative of every coefficient, against central differences.
func TestGradients(t *testing.T) {
	counts := [][]int{{3, 1, 0}, {0, 2, 2}, {1, 1, 1}, {0, 0, 5}, {2, 0, 0}, {0, 1, 0}}
	times := []int{2, 1, 3, 1, 2, 1}
	type pair struct {
		coefficient
		z contributions
	}
	of := func(m oneMargin, z contributions) pair { return pair{m, z} }
	crossed := func(w Weights) pair {
		m := twoMargins{3, w.matrix(3)}
		z := newContributions(m.size(), times)
		for i := range times {
			m.add(z.of(i), i%3, (i*i+1)%3, 2)
			m.add(z.of(i), i%3, i%2, 1)
		}
		return pair{m, z}
	}
	for name, c := range map[string]pair{
		"Fleiss": of(fleiss(counts, times)), "AC1": of(ac1(counts, times)), "alpha": of(alpha(counts, times)),
		"Cohen": crossed(Nominal), "linear": crossed(Linear), "quadratic": crossed(Quadratic),
	} {
		sums := c.z.sums()
		g := make([]float64, len(sums))
		c.gradient(sums, g)
		for j := range sums {
			h := 1e-5 * math.Max(1, sums[j])
			at := func(d float64) float64 {
				s := append([]float64{}, sums...)
				s[j] += d
				k, ok := evaluate(c, s)
				if !ok {
					t.Fatal("undefined")
				}
				return k
			}
			near(t, name, g[j], (at(h)-at(-h))/(2*h), 1e-7)
		}
	}
}

// Each limit for itself is the exact one-sided limit, and lies within the
// two-sided interval. Source of the limits: see interval/binomial_test.go.
func TestOneSidedLimits(t *testing.T) {
	a := analyse(t, msaStudy(t), nil)
	for i, g := range a.Against {
		e := g.Effectiveness
		near(t, "lower", e.OneSided.Lower, interval.LowerLimit(e.Count, e.Of, 0.95), closedForm)
		near(t, "upper", e.OneSided.Upper, interval.UpperLimit(e.Count, e.Of, 0.95), closedForm)
		for _, e := range []Estimate{e.Estimate, g.Miss.Estimate, g.FalseAlarm.Estimate, g.Kappa, a.Within[i].Kappa} {
			if !(e.Interval.Lower <= e.OneSided.Lower && e.OneSided.Upper <= e.Interval.Upper && e.OneSided.Contains(e.Value)) {
				t.Errorf("one-sided %v of %g in two-sided %v", e.OneSided, e.Value, e.Interval)
			}
		}
	}
}
