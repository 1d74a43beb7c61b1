package agreement

import (
	"encoding/csv"
	"encoding/json"
	"math"
	"os"
	"strconv"
	"testing"
)

const reference = "../testdata/reference/"

// readJSON reads results that other programs computed on published data; see
// testdata/reference/README.md.
func readJSON(t testing.TB, name string, into any) {
	t.Helper()
	b, err := os.ReadFile(reference + name)
	if err == nil {
		err = json.Unmarshal(b, into)
	}
	if err != nil {
		t.Fatal(err)
	}
}

func readCSV(t testing.TB, name string) [][]string {
	t.Helper()
	f, err := os.Open(reference + name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return rows[1:]
}

// readCounts reads a table of counts: a name, then a count for each category.
func readCounts(t testing.TB, name string) Counts {
	t.Helper()
	var c Counts
	for _, row := range readCSV(t, name) {
		counts := make([]int, len(row)-1)
		for k, s := range row[1:] {
			n, err := strconv.Atoi(s)
			if err != nil {
				t.Fatal(err)
			}
			counts[k] = n
		}
		c = append(c, counts)
	}
	return c
}

// countCalls reads a table of calls, the names of categories being 0, 1, …
// from the one given, and counts them by part. An empty call is missing.
func countCalls(t testing.TB, rows [][]string, categories, first int) Counts {
	t.Helper()
	var c Counts
	for _, row := range rows {
		counts := make([]int, categories)
		for _, s := range row {
			if s == "" {
				continue
			}
			k, err := strconv.Atoi(s)
			if err != nil {
				t.Fatal(err)
			}
			counts[k-first]++
		}
		c = append(c, counts)
	}
	return c
}

func near(t testing.TB, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s: %.14g, want %.14g within %g", what, got, want, tolerance)
	}
}

func must[T any](t testing.TB) func(v T, err error) T {
	return func(v T, err error) T {
		t.Helper()
		if err != nil {
			t.Fatal(err)
		}
		return v
	}
}

const closedForm = 1e-9

// Source: statsmodels' fleiss_kappa and the formulas of 1979
// (expected-py.json); the published kappas are 0.430 for Fleiss (1971) and
// 0.210 for the fourteen raters.
func TestFleissOnPublishedCounts(t *testing.T) {
	type result struct {
		Kappa, SE0    float64
		CategoryKappa []float64 `json:"category_kappa"`
		CategorySE0   float64   `json:"category_se0"`
	}
	var want struct {
		Fleiss1971     result `json:"fleiss_1971"`
		FourteenRaters result `json:"fourteen_raters"`
		Carcinoma      result
	}
	readJSON(t, "expected-py.json", &want)
	carcinoma := readCSV(t, "carcinoma-118x7.csv")
	for i := range carcinoma {
		carcinoma[i] = carcinoma[i][1:]
	}
	for _, c := range []struct {
		name   string
		counts Counts
		want   result
	}{
		{"Fleiss 1971", readCounts(t, "fleiss-1971-counts.csv"), want.Fleiss1971},
		{"fourteen raters", readCounts(t, "fourteen-raters-counts.csv"), want.FourteenRaters},
		{"carcinoma", countCalls(t, carcinoma, 2, 0), want.Carcinoma},
	} {
		near(t, c.name, must[float64](t)(c.counts.FleissKappa()), c.want.Kappa, closedForm)
		if K := len(c.counts[0]); len(c.want.CategoryKappa) != K {
			t.Fatalf("%s: %d categories, want %d", c.name, K, len(c.want.CategoryKappa))
		}
		for k, want := range c.want.CategoryKappa {
			near(t, c.name+" category", must[float64](t)(c.counts.CategoryKappa(k)), want, closedForm)
		}
		se, categorySE, err := c.counts.Fleiss1979()
		if err != nil {
			t.Fatal(err)
		}
		near(t, c.name+" se", se, c.want.SE0, closedForm)
		near(t, c.name+" category se", categorySE, c.want.CategorySE0, closedForm)
	}
}

// Source: Krippendorff (2011) prints alpha 0.743, Gwet AC1 0.775 and Fleiss'
// generalised kappa 0.761; the digits are the published formulas computed in
// Python (expected-py.json, incomplete).
func TestIncompleteCalls(t *testing.T) {
	var want struct {
		Incomplete struct {
			Alpha  float64 `json:"alpha_nominal"`
			AC1    float64
			Fleiss float64 `json:"fleiss_generalised"`
		}
	}
	readJSON(t, "expected-py.json", &want)
	rows := readCSV(t, "incomplete-12x4.csv")
	for i := range rows {
		rows[i] = rows[i][1:]
	}
	c := countCalls(t, rows, 5, 1)
	alpha := must[float64](t)(c.Alpha())
	near(t, "alpha", alpha, want.Incomplete.Alpha, closedForm)
	near(t, "alpha as printed", alpha, 0.743, 0.0005)
	ac1 := must[float64](t)(c.AC1())
	near(t, "AC1", ac1, want.Incomplete.AC1, closedForm)
	near(t, "AC1 as printed", ac1, 0.775, 0.0005)
	near(t, "Fleiss", must[float64](t)(c.FleissKappa()), want.Incomplete.Fleiss, closedForm)
}

// Source: R's vcd (Kappa) for the multiple sclerosis patients (Landis & Koch
// 1977) and the vision data (Stuart 1955); psych for the MSA manual's tables.
func TestCohenOnPublishedTables(t *testing.T) {
	type patients struct {
		Table       Table
		Kappa, SE   float64
		Linear      float64 `json:"linear_weighted"`
		LinearSE    float64 `json:"linear_se"`
		Quadratic   float64 `json:"quadratic_weighted"`
		QuadraticSE float64 `json:"quadratic_se"`
	}
	type pair struct {
		Table     Table
		Kappa, SE float64
	}
	var want struct {
		MSPatients map[string]patients `json:"ms_patients"`
		Vision     struct {
			Table Table
			Kappa float64
			SE    float64 `json:"kappa_se"`
		}
		MSA struct {
			Between   map[string]pair `json:"cohen_between_matched"`
			Reference map[string]pair `json:"cohen_vs_reference"`
			All       map[string]pair `json:"cohen_between_all_trial_pairs"`
		} `json:"msa_manual"`
	}
	readJSON(t, "expected-r.json", &want)
	check := func(what string, table Table, w Weights, kappa, se float64) {
		t.Helper()
		near(t, what, must[float64](t)(table.Kappa(w)), kappa, closedForm)
		if se == 0 {
			return
		}
		got, _, err := table.Kappa1969(w)
		if err != nil {
			t.Fatal(err)
		}
		near(t, what+" se", got, se, closedForm)
	}
	if len(want.MSPatients) != 2 || len(want.MSA.Between) != 3 || len(want.MSA.Reference) != 3 || len(want.MSA.All) != 3 {
		t.Fatal("a case is missing")
	}
	for city, p := range want.MSPatients {
		check(city, p.Table, Nominal, p.Kappa, p.SE)
		check(city+" linear", p.Table, Linear, p.Linear, p.LinearSE)
		check(city+" quadratic", p.Table, Quadratic, p.Quadratic, p.QuadraticSE)
	}
	check("vision", want.Vision.Table, Nominal, want.Vision.Kappa, want.Vision.SE)
	for _, group := range []map[string]pair{want.MSA.Between, want.MSA.Reference, want.MSA.All} {
		for name, p := range group {
			check(name, p.Table, Nominal, p.Kappa, p.SE)
		}
	}
}

// Source: R's mcnemar.test, coin (mh_test) and binom.test (expected-r.json).
func TestDirectionOnPublishedTables(t *testing.T) {
	var want struct {
		Vision struct {
			Table  Table
			Bowker struct {
				Statistic float64
				DF        int
				P         float64
			}
			StuartMaxwell struct{ Statistic, P float64 } `json:"stuart_maxwell"`
		}
		McNemar struct {
			Table Table
			P     float64 `json:"exact_p"`
		}
	}
	readJSON(t, "expected-r.json", &want)
	b := must[Test](t)(want.Vision.Table.Bowker())
	near(t, "Bowker", b.Statistic, want.Vision.Bowker.Statistic, closedForm)
	near(t, "Bowker p", b.P, want.Vision.Bowker.P, closedForm)
	if b.DF != want.Vision.Bowker.DF {
		t.Errorf("Bowker: %d degrees of freedom", b.DF)
	}
	s := must[Test](t)(want.Vision.Table.StuartMaxwell())
	near(t, "Stuart-Maxwell", s.Statistic, want.Vision.StuartMaxwell.Statistic, closedForm)
	near(t, "Stuart-Maxwell p", s.P, want.Vision.StuartMaxwell.P, closedForm)
	if s.DF != 3 {
		t.Errorf("Stuart-Maxwell: %d degrees of freedom", s.DF)
	}
	m := must[Test](t)(want.McNemar.Table.McNemar())
	near(t, "McNemar", m.P/want.McNemar.P, 1, closedForm)
}

// A table of two groups that are never confused is tested as two tables.
func TestStuartMaxwellInGroups(t *testing.T) {
	one, two := Table{{10, 7}, {2, 11}}, Table{{5, 1}, {6, 9}}
	both := Table{{10, 7, 0, 0, 0}, {2, 11, 0, 0, 0}, {0, 0, 5, 1, 0}, {0, 0, 6, 9, 0}, {0, 0, 0, 0, 0}}
	a, b := must[Test](t)(one.StuartMaxwell()), must[Test](t)(two.StuartMaxwell())
	got := must[Test](t)(both.StuartMaxwell())
	near(t, "statistic", got.Statistic, a.Statistic+b.Statistic, closedForm)
	if got.DF != 2 {
		t.Errorf("%d degrees of freedom, want 2", got.DF)
	}
}

func TestTablesThatSayNothing(t *testing.T) {
	for name, f := range map[string]func() error{
		"no cells":         func() error { _, err := Table{}.Kappa(Nominal); return err },
		"empty":            func() error { _, err := Table{{0, 0}, {0, 0}}.Kappa(Nominal); return err },
		"one category":     func() error { _, err := Table{{9, 0}, {0, 0}}.Kappa(Nominal); return err },
		"not square":       func() error { _, err := Table{{9, 0}}.Kappa(Nominal); return err },
		"negative":         func() error { _, err := Table{{9, -1}, {0, 1}}.Kappa(Nominal); return err },
		"nothing differs":  func() error { _, err := Table{{9, 0}, {0, 4}}.McNemar(); return err },
		"three categories": func() error { _, err := newTable(3).McNemar(); return err },
		"Bowker":           func() error { _, err := Table{{9, 0}, {0, 4}}.Bowker(); return err },
		"Stuart-Maxwell":   func() error { _, err := Table{{9, 0}, {0, 4}}.StuartMaxwell(); return err },
		"no counts":        func() error { _, err := Counts{}.FleissKappa(); return err },
		"ragged counts":    func() error { _, err := Counts{{1, 2}, {3}}.AC1(); return err },
		"negative counts":  func() error { _, err := Counts{{1, -2}}.Alpha(); return err },
		"single calls":     func() error { _, err := Counts{{1, 0}, {0, 1}}.FleissKappa(); return err },
		"all alike":        func() error { _, err := Counts{{2, 0}, {2, 0}}.FleissKappa(); return err },
		"unequal, 1979":    func() error { _, _, err := Counts{{2, 0}, {1, 2}}.Fleiss1979(); return err },
	} {
		if f() == nil {
			t.Errorf("%s: no error", name)
		}
	}
}

// Where the exact test passes to the normal, at a million disagreements, the
// two agree.
func TestMcNemarOfMillions(t *testing.T) {
	for _, d := range []int{0, 500, 1000, 2000} { // 0 to 4 standard deviations
		exact := must[Test](t)(Table{{0, 500_000 - d}, {500_000 + d, 0}}.McNemar())
		normal := must[Test](t)(Table{{0, 500_001 - d}, {500_001 + d, 0}}.McNemar())
		near(t, "p", normal.P/exact.P, 1, 1e-4)
	}
}
