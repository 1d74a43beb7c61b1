package agreement

import (
	"fmt"
	"slices"
	"strings"
	"testing"
)

// onePassFail is a study of one appraiser: of the good parts so many are called
// bad on one of two trials, every bad one is called right.
func onePassFail(t *testing.T, bad, good, falseAlarms int) *Ratings {
	t.Helper()
	r, err := New(bad+good, 2, []int{2})
	if err != nil {
		t.Fatal(err)
	}
	if err := r.SetAccept([]bool{false, true}); err != nil {
		t.Fatal(err)
	}
	reference := make([]Category, bad+good)
	for p := range reference {
		if p >= bad {
			reference[p] = 1
		}
		copy(r.Row(p), []Category{reference[p], reference[p]})
		if p >= bad && p < bad+falseAlarms {
			r.Row(p)[0] = 0
		}
	}
	if err := r.SetReference(reference); err != nil {
		t.Fatal(err)
	}
	return r
}

func has(a *Analysis, code, text string) bool {
	return slices.ContainsFunc(a.Warnings, func(w Warning) bool { return w.Code == code && strings.Contains(w.Text, text) })
}

// By hand: of 204 parts 4 are bad, and each of 8 good ones is rejected once in
// two trials. Of 408 calls 16 are reject, agreement with the reference is
// 400/408; kappa = (400/408 − pe)/(1 − pe) with pe = (16·8 + 392·400)/408² is
// 0.657, AC1 with 2·p(1 − p), p = 12/408, is 0.979. One category prevails, with a
// single appraiser too.
func TestPrevalenceOfOneAppraiser(t *testing.T) {
	a := analyse(t, onePassFail(t, 4, 200, 8), nil)
	near(t, "kappa", a.Against[0].Kappa.Value, (400.0/408-(16.0*8+392*400)/(408*408))/(1-(16.0*8+392*400)/(408*408)), closedForm)
	for name, e := range map[string]Estimate{"against": a.Against[0].Kappa, "within": a.Within[0].Kappa, "all": a.All.Kappa} {
		if !e.Prevalent {
			t.Errorf("%s: kappa %v is not marked", name, e.Value)
		}
	}
	if !has(a, "prevalence", "One category holds 96 to 97 % of the calls compared and pulls down kappa within appraiser 1 and against the reference of appraiser 1: it understates the agreement. Read it beside the shares of parts.") {
		t.Errorf("%v", a.Warnings)
	}
	even := analyse(t, onePassFail(t, 100, 104, 8), nil)
	if even.Against[0].Kappa.Prevalent || even.Within[0].Kappa.Prevalent || len(even.Warnings) > 0 {
		t.Errorf("no category prevails: %v", even.Warnings)
	}
}

func TestFewResamples(t *testing.T) {
	r := onePassFail(t, 20, 20, 4)
	if a := analyse(t, r, func(o *Options) { o.Confidence = 0.999 }); !has(a, "few_resamples", "2000 resamples are too few for limits of kappas at 99.9 %: fewer than 5 lie beyond each. Ask for 10000 or more.") {
		t.Errorf("%v", a.Warnings)
	}
	if a := analyse(t, r, func(o *Options) { o.Confidence, o.Resamples = 0.999, 10000 }); len(a.Warnings) > 0 {
		t.Errorf("%v", a.Warnings)
	}
	// 5 / 0.00005, though not to the last digit.
	if a := analyse(t, r, func(o *Options) { o.Confidence = 0.9999 }); !has(a, "few_resamples", "Ask for 100000 or more.") {
		t.Errorf("%v", a.Warnings)
	}
	if a := analyse(t, r, func(o *Options) { o.Confidence, o.Resamples = 0.9999, 100000 }); len(a.Warnings) > 0 {
		t.Errorf("%v", a.Warnings)
	}
	if a := analyse(t, r, func(o *Options) { o.Confidence, o.Resamples = 0.9999, 0 }); len(a.Warnings) > 0 {
		t.Errorf("nothing is resampled: %v", a.Warnings)
	}
}

// pairOfAppraisers is a study of two appraisers with as many trials: so many
// parts of each row of calls, 1 to accept.
func pairOfAppraisers(t *testing.T, trials int, rows map[string]int) *Ratings {
	t.Helper()
	var parts []string
	for row, n := range rows {
		for range n {
			parts = append(parts, row)
		}
	}
	r, err := New(len(parts), 2, []int{trials, trials})
	if err != nil {
		t.Fatal(err)
	}
	for p, row := range parts {
		for i := range row {
			r.Row(p)[i] = Category(row[i] - '0')
		}
	}
	return r
}

// The first of the two accepts 96 % of its own calls, the second 40 %: only kappa
// within the first is pulled down, and neither the share of all calls nor their
// AC1 belongs beside it.
func TestPrevalenceTellsWhichKappas(t *testing.T) {
	r := pairOfAppraisers(t, 2, map[string]int{"0000": 2, "0100": 4, "1100": 54, "1111": 40})
	a := analyse(t, r, func(o *Options) { o.Names = []string{"Ada", "Ben"} })
	const want = "One category holds 96 % of the calls compared and pulls down kappa within Ada: it understates the agreement. Read it beside the shares of parts."
	if len(a.Warnings) != 1 || a.Warnings[0].Text != want {
		t.Errorf("%v, want %s", a.Warnings, want)
	}
	if got := a.Within[0].Kappa.Prevailing; got != 0.96 {
		t.Errorf("96 of 100: %v", got)
	}
	if e := a.Within[1].Kappa; e.Prevailing != 0 || e.Prevalent {
		t.Errorf("%+v", e)
	}
}

// Kappa between appraisers is pulled down where Fleiss' over all calls is not:
// each repeats itself throughout.
func TestPrevalenceBetweenAppraisersAlone(t *testing.T) {
	r := pairOfAppraisers(t, 3, map[string]int{"000000": 14, "000111": 4, "111000": 4, "111111": 78})
	a := analyse(t, r, nil)
	if a.Between.Fleiss.Prevalent || !a.Between.DifferentAppraisers.Prevalent {
		t.Fatal("the study does not show what it is to show")
	}
	if !has(a, "prevalence", "One category holds 82 % of the calls compared and pulls down kappa of appraiser 1 with appraiser 2 and of all appraisers together:") || has(a, "prevalence", "AC1") {
		t.Errorf("%v", a.Warnings)
	}
	// With one trial, Fleiss' kappa is as well: all its pairs are of both.
	r = pairOfAppraisers(t, 1, map[string]int{"00": 14, "01": 4, "10": 4, "11": 78})
	if a := analyse(t, r, nil); !has(a, "prevalence", fmt.Sprintf("Read it beside the shares of parts and AC1 (%.2f).", a.Between.AC1.Value)) {
		t.Errorf("%v", a.Warnings)
	}
}

func TestManyAppraisersWithPrevalence(t *testing.T) {
	g := affected{}
	for i, share := range []float64{0.9, 0.9996, 0.85, 0.85, 0.85} {
		g.add(Estimate{Prevalent: true, Prevailing: share}, string(rune('A'+i)))
	}
	if who, extent := g.who("appraisers"), g.extent(); who != "5 appraisers" || extent != "85 to 99.9 %" {
		t.Errorf("%s, %s", who, extent)
	}
}

// patterned is a study of one appraiser in which no two parts are called alike.
func patterned(t *testing.T, parts int) *Ratings {
	t.Helper()
	const trials = 10
	r, err := New(parts, 2, []int{trials})
	if err != nil {
		t.Fatal(err)
	}
	for p := range parts {
		for i := range trials {
			r.Row(p)[i] = Category((p + 1) >> i & 1)
		}
	}
	return r
}

// What an analysis says of its intervals is what was done; where resamples were
// asked for and are too many, it says so. Two coefficients, kappa within the
// appraiser and that of pairs by the same one, of p patterns: 5 p and then
// (5·5 + 2·5) p additions, of which 2·10⁹ are allowed, and 10⁸ places of parts.
func TestIntervalsAreCounted(t *testing.T) {
	for _, c := range []struct {
		parts, resamples int
		want             Intervals
		says             string
	}{
		{90, 2000, Intervals{2, 0}, ""},
		{90, 0, Intervals{0, 2}, ""},
		{1001, 2000, Intervals{0, 2}, ""}, // as the documents say
		{90, 600_000, Intervals{1, 1}, "The intervals of 1 of the 2 kappas and coefficients that were to be resampled are linearised: 600000 resamples of this study would take too much time or memory. Ask for 555555 or fewer."},
		{200, MaxResamples, Intervals{0, 2}, "of 2 of the 2 kappas"},
	} {
		r := patterned(t, c.parts)
		a := analyse(t, r, func(o *Options) { o.Resamples = c.resamples })
		if a.Intervals != c.want {
			t.Errorf("%d parts, %d resamples: %+v, want %+v", c.parts, c.resamples, a.Intervals, c.want)
		}
		if (c.says == "") != (len(a.Warnings) == 0) || c.says != "" && !has(a, "not_resampled", c.says) {
			t.Errorf("%d parts, %d resamples: %v, want %q", c.parts, c.resamples, a.Warnings, c.says)
		}
	}
	// An exact interval is neither.
	if a := analyse(t, onePassFail(t, 20, 20, 0), nil); a.Intervals != (Intervals{}) {
		t.Errorf("nothing disagrees: %+v", a.Intervals)
	}
	// Nor is one of a kappa that is absent since the reference is of one category.
	r := onePassFail(t, 0, 40, 24)
	if a := analyse(t, r, nil); a.Intervals != (Intervals{2, 0}) || a.All.Kappa.Absent == nil {
		t.Errorf("one reference category: %+v", a.Intervals)
	}
}

// Where more resamples are wanted than are done, neither note sends the reader
// to the other.
func TestResamplesInVain(t *testing.T) {
	r := patterned(t, 1000)
	if a := analyse(t, r, func(o *Options) { o.Confidence, o.Resamples = 0.9999, 2000 }); !has(a, "few_resamples", "100000 would be enough, but take too long") {
		t.Errorf("%v", a.Warnings)
	}
	if a := analyse(t, r, func(o *Options) { o.Confidence, o.Resamples = 0.9999, 200_000 }); !has(a, "not_resampled", "memory.") || has(a, "not_resampled", "or fewer") {
		t.Errorf("%v", a.Warnings)
	}
}

// More resamples than can be kept make linearised intervals, in little memory.
func TestResamplesBeyondMemory(t *testing.T) {
	p := patterns{rows: make([][]Category, 500), pattern: make([]int32, 1000)}
	opt := DefaultOptions()
	if s := newResampler(p, opt, 1); s.drawn == nil {
		t.Error("2000 resamples of 1000 parts are linearised")
	}
	opt.Resamples = MaxResamples
	if s := newResampler(p, opt, 1); s.drawn != nil {
		t.Errorf("%d places kept", len(s.drawn))
	}
}
