package agreement_test

import (
	"errors"
	"fmt"

	"samecall/agreement"
)

const (
	reject agreement.Category = iota
	accept
)

// Two shifts call ten castings twice each; four of the castings are bad.
// The study is invented.
func study() *agreement.Ratings {
	r, err := agreement.New(10, 2, []int{2, 2})
	if err != nil {
		panic(err)
	}
	for part, calls := range []string{
		"--  --", "--  --", "-+  --", "--  --", // bad
		"++  ++", "++  ++", "++  -+", "++  ++", "++  ++", "++  --", // good
	} {
		i := 0
		for _, c := range calls {
			switch c {
			case '+':
				r.Row(part)[i] = accept
				i++
			case '-':
				r.Row(part)[i] = reject
				i++
			}
		}
	}
	reference := []agreement.Category{
		reject, reject, reject, reject,
		accept, accept, accept, accept, accept, accept,
	}
	if err := errors.Join(r.SetReference(reference), r.SetAccept([]bool{reject: false, accept: true})); err != nil {
		panic(err)
	}
	return r
}

// A study from its calls to the three agreements. (The kappas and the limits
// of the miss rate are confirmed by their formulas in R.)
func Example() {
	a, err := agreement.Analyse(study(), agreement.DefaultOptions())
	if err != nil {
		fmt.Println(err)
		return
	}
	for shift, w := range a.Within {
		g := a.Against[shift]
		fmt.Printf("shift %d: repeats itself on %d of %d castings, right on %d of %d, kappa against reference %.2f\n",
			shift+1, w.Share.Count, w.Share.Of, g.Effectiveness.Count, g.Effectiveness.Of, g.Kappa.Value)
	}
	pair := a.Between.Pairs[0]
	fmt.Printf("between: kappa %.2f, calls %v\n", pair.Kappa.Value, pair.Table)
	fmt.Printf("misses: %d of %d calls, %.3f to %.3f\n",
		a.All.Miss.Count, a.All.Miss.Of, a.All.Miss.Interval.Lower, a.All.Miss.Interval.Upper)
	// Output:
	// shift 1: repeats itself on 9 of 10 castings, right on 9 of 10, kappa against reference 0.89
	// shift 2: repeats itself on 9 of 10 castings, right on 8 of 10, kappa against reference 0.71
	// between: kappa 0.61, calls [[7 0] [4 9]]
	// misses: 1 of 16 calls, 0.000 to 0.602
}

// A figure that the study cannot give is absent, with its reason.
func ExampleAnalyse() {
	r, err := agreement.New(3, 2, []int{1})
	if err != nil {
		fmt.Println(err)
		return
	}
	for part, call := range []agreement.Category{accept, reject, accept} {
		r.Row(part)[0] = call
	}
	a, err := agreement.Analyse(r, agreement.DefaultOptions())
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(a.Within[0].Kappa.Absent)
	fmt.Println(a.Between.Fleiss.Absent)
	fmt.Println(a.All == nil)
	// Output:
	// no part has two calls by the appraiser: repeat the trial to see whether the calls repeat
	// no part was called by two appraisers: there is nobody to compare with
	// true
}

// Ten subjects, each put in one of five categories by fourteen raters: the
// much printed worked example, kappa 0.210.
func ExampleCounts_FleissKappa() {
	c := agreement.Counts{
		{0, 0, 0, 0, 14},
		{0, 2, 6, 4, 2},
		{0, 0, 3, 5, 6},
		{0, 3, 9, 2, 0},
		{2, 2, 8, 1, 1},
		{7, 7, 0, 0, 0},
		{3, 2, 6, 3, 0},
		{2, 5, 3, 2, 2},
		{6, 5, 2, 1, 0},
		{0, 2, 2, 3, 7},
	}
	kappa, err := c.FleissKappa()
	fmt.Printf("%.3f %v\n", kappa, err)
	// Output:
	// 0.210 <nil>
}

// The cross-table of appraisers A and B in the Measurement Systems Analysis
// reference manual, 4th ed. (2010), chapter III section C: kappa 0.86.
func ExampleTable_Kappa() {
	t := agreement.Table{
		{44, 6},
		{3, 97},
	}
	kappa, err := t.Kappa(agreement.Nominal)
	fmt.Printf("%.2f %v\n", kappa, err)
	// Output:
	// 0.86 <nil>
}

// Of the calls that differ, 6 are rejects of the first appraiser and 3 of
// the second: no direction is shown.
func ExampleTable_McNemar() {
	t := agreement.Table{
		{44, 6},
		{3, 97},
	}
	test, err := t.McNemar()
	fmt.Printf("p = %.3f %v\n", test.P, err)
	// Output:
	// p = 0.508 <nil>
}
