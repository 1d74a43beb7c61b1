package agreement

import (
	"encoding/json"
	"os"
	"testing"

	"samecall/agreement/interval"
)

// extra reads what testdata/reference-extra/compute.R printed.
func extra(t testing.TB, into any) {
	t.Helper()
	b, err := os.ReadFile("../testdata/reference-extra/expected-r-extra.json")
	if err == nil {
		err = json.Unmarshal(b, into)
	}
	if err != nil {
		t.Fatal(err)
	}
}

// incompleteStudy is Krippendorff's data of 12 units and 4 observers with
// calls missing; unit 12 has a single call.
func incompleteStudy(t testing.TB) *Ratings {
	t.Helper()
	rows := readCSV(t, "incomplete-12x4.csv")
	r, err := New(len(rows), 5, []int{1, 1, 1, 1})
	if err != nil {
		t.Fatal(err)
	}
	for part, row := range rows {
		for a, s := range row[1:] {
			if s != "" {
				r.Row(part)[a] = s[0] - '1'
			}
		}
	}
	return r
}

// Source: R's survey package, delta method on totals by part
// (reference-extra, incomplete).
func TestStandardErrorsWithMissingCallsAgainstSurvey(t *testing.T) {
	type figure struct{ Estimate, SE float64 }
	var want struct {
		Incomplete struct{ Fleiss, AC1, Alpha figure }
	}
	extra(t, &want)
	b := analyse(t, incompleteStudy(t), nil).Between
	for _, c := range []struct {
		name string
		got  Estimate
		want figure
	}{{"Fleiss", b.Fleiss, want.Incomplete.Fleiss}, {"AC1", b.AC1, want.Incomplete.AC1}, {"alpha", b.Alpha, want.Incomplete.Alpha}} {
		near(t, c.name, c.got.Value, c.want.Estimate, closedForm)
		near(t, c.name+" se", c.got.StandardError, c.want.SE, closedForm)
	}
}

// Source: R's boot package, 20,000 resamples of whole parts, jackknife
// acceleration (reference-extra, bca). The acceleration agrees to 1e-9.
// Limits carry the noise of both sides' resampling, and boot counts a
// resampled kappa equal to the estimate as not below it, where BCa counts
// half: 0.012 holds both.
func TestBCaAgainstBoot(t *testing.T) {
	type limits struct {
		Estimate, Acceleration float64
		Lower90                float64 `json:"lower_90"`
		Upper90                float64 `json:"upper_90"`
		Lower95                float64 `json:"lower_95"`
		Upper95                float64 `json:"upper_95"`
	}
	var want struct{ BCa map[string]limits }
	extra(t, &want)
	opt := DefaultOptions()
	opt.Resamples = 20000
	r := msaStudy(t)
	s := &study{Ratings: r, patterns: r.patterns(), opt: opt}
	s.resampler = newResampler(s.patterns, opt, s.coefficients())
	cohen := func(pairs func(row []Category, ref Category, add func(j, k Category))) (coefficient, contributions) {
		m := twoMargins{2, nil}
		z := newContributions(m.size(), s.times)
		for i, row := range s.rows {
			pairs(row, s.ref[i], func(j, k Category) { m.add(z.of(i), int(j), int(k), 1) })
		}
		return m, z
	}
	against := func(a int) (coefficient, contributions) {
		return cohen(func(row []Category, ref Category, add func(j, k Category)) {
			for _, c := range s.of(row, a) {
				add(c, ref)
			}
		})
	}
	for name, of := range map[string]func() (coefficient, contributions){
		"A-reference": func() (coefficient, contributions) { return against(0) },
		"C-reference": func() (coefficient, contributions) { return against(2) },
		"A-C": func() (coefficient, contributions) {
			return cohen(func(row []Category, _ Category, add func(j, k Category)) {
				s.trialPairs(0, 2).each(s.of(row, 0), s.of(row, 2), add)
			})
		},
		"Fleiss": func() (coefficient, contributions) {
			m, z := fleiss(s.counts(func(row []Category) []Category { return row }), s.times)
			return m, z
		},
	} {
		c, z := of()
		w, ok := want.BCa[name]
		if !ok {
			t.Fatalf("%s is not in the file", name)
		}
		sums := z.sums()
		value, ok := evaluate(c, sums)
		if !ok {
			t.Fatalf("%s is undefined", name)
		}
		left := leaveOneOut(c, z, sums)
		near(t, name, value, w.Estimate, closedForm)
		near(t, name+" acceleration", must[float64](t)(interval.Acceleration(left)), w.Acceleration, closedForm)
		resampled := s.resample(c, z.canonical(c))
		for _, l := range []struct{ confidence, lower, upper float64 }{{0.90, w.Lower90, w.Upper90}, {0.95, w.Lower95, w.Upper95}} {
			got := must[interval.Interval](t)(interval.BCa(value, resampled, left, l.confidence))
			t.Logf("%s %g: %.4f %.4f, boot %.4f %.4f", name, l.confidence, got.Lower, got.Upper, l.lower, l.upper)
			near(t, name+" lower", got.Lower, l.lower, 0.012)
			near(t, name+" upper", got.Upper, l.upper, 0.012)
		}
	}
}
