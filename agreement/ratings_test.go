package agreement

import (
	"fmt"
	"math"
	"strings"
	"testing"
)

// What a caller gets wrong comes back as an error that says what.
func TestMisuse(t *testing.T) {
	ok := func() *Ratings { return must[*Ratings](t)(New(2, 2, []int{1, 2})) }
	with := func(change func(*Options)) error {
		opt := DefaultOptions()
		change(&opt)
		_, err := Analyse(ok(), opt)
		return err
	}
	for words, f := range map[string]func() error{
		"-1 parts":                           func() error { _, err := New(-1, 2, nil); return err },
		"0 categories":                       func() error { _, err := New(1, 0, nil); return err },
		"255 categories, want 1 to 254":      func() error { _, err := New(1, 255, nil); return err },
		"appraiser 1 has 0 trials":           func() error { _, err := New(1, 2, []int{1, 0}); return err },
		"cells":                              func() error { _, err := New(1<<20, 2, []int{1 << 20}); return err },
		"appraisers 0 to 1 are more":         func() error { _, err := New(1, 2, []int{math.MaxInt32, math.MaxInt}); return err },
		"appraisers 0 to 0 are more":         func() error { _, err := New(0, 2, []int{math.MaxInt}); return err },
		"3 references for 2 parts":           func() error { return ok().SetReference(make([]Category, 3)) },
		"1 entries for 2 categories":         func() error { return ok().SetAccept(make([]bool, 1)) },
		"confidence 1 is not between":        func() error { return with(func(o *Options) { o.Confidence = 1 }) },
		"confidence 0 is not between":        func() error { return with(func(o *Options) { o.Confidence = 0 }) },
		"confidence NaN is not between":      func() error { return with(func(o *Options) { o.Confidence = math.NaN() }) },
		"-1 resamples":                       func() error { return with(func(o *Options) { o.Resamples = -1 }) },
		"1000001 resamples, want 0 to 10000": func() error { return with(func(o *Options) { o.Resamples = 1_000_001 }) },
		"the call of appraiser 1 in trial 1 on part 1 is 2, no category of the study: want 0 to 1, or Missing": func() error {
			r := ok()
			r.Row(1)[2] = 2
			_, err := Analyse(r, DefaultOptions())
			return err
		},
		"the reference of part 1 is 7, no category": func() error { return ok().SetReference([]Category{0, 7}) },
		"the reference of part 0 is 9, no category": func() error {
			r, reference := ok(), []Category{0, Missing}
			if err := r.SetReference(reference); err != nil {
				return err
			}
			reference[0] = 9 // it is kept
			_, err := Analyse(r, DefaultOptions())
			return err
		},
		"make them with New":       func() error { _, err := Analyse(nil, DefaultOptions()); return err },
		"there are no ratings":     func() error { _, err := Analyse(new(Ratings), DefaultOptions()); return err },
		"1 names for 2":            func() error { return with(func(o *Options) { o.Names = []string{"early"} }) },
		"3 names for 2":            func() error { return with(func(o *Options) { o.Names = make([]string, 3) }) },
		"Pairing(9), want Matched": func() error { return with(func(o *Options) { o.Pairing = 9 }) },
		"weights 7, want Nominal":  func() error { _, err := Table{{1, 2}, {3, 4}}.Kappa(7); return err },
		"weights -1, want Nominal": func() error { _, _, err := Table{{1, 2}, {3, 4}}.Kappa1969(-1); return err },
		"category 2, want 0 to 1":  func() error { _, err := Counts{{1, 2}, {3, 4}}.CategoryKappa(2); return err },
		"category -1, want 0 to 1": func() error { _, err := Counts{{1, 2}, {3, 4}}.CategoryKappa(-1); return err },
		"no call, or every call, is of this category": func() error {
			_, err := Counts{{1, 2, 0}, {3, 4, 0}}.CategoryKappa(2)
			return err
		},
	} {
		if err := f(); err == nil || !strings.Contains(err.Error(), words) {
			t.Errorf("%v, want words %q", err, words)
		}
	}
}

// What Ratings does not hold is never taken from somewhere else.
func TestOutOfRangePanics(t *testing.T) {
	r := must[*Ratings](t)(New(2, 2, []int{2, 1}))
	for what, f := range map[string]func(){
		"agreement: trial 2 of appraiser 0, who has 2":  func() { r.Column(0, 2) },
		"agreement: trial -1 of appraiser 1, who has 1": func() { r.Column(1, -1) },
		"index out of range [3]":                        func() { r.Column(2, 0) },
		"index out of range [-1]":                       func() { r.Calls(0, -1) },
		"slice bounds out of range":                     func() { r.Row(2) },
		"agreement: part 2 of 2":                        func() { r.Reference(2) },
		"agreement: Pairing(9), want Matched or All":    func() { r.TrialPairs(0, 1, 9) },
	} {
		func() {
			defer func() {
				if got := fmt.Sprint(recover()); !strings.Contains(got, what) {
					t.Errorf("panic %q, want %q", got, what)
				}
			}()
			f()
		}()
	}
	if got := fmt.Sprint(Matched, All, Pairing(9)); got != "matched all Pairing(9)" {
		t.Error(got)
	}
}

// Appending to the calls of one appraiser leaves the next one's alone.
func TestCallsEndWithTheAppraiser(t *testing.T) {
	r := must[*Ratings](t)(New(1, 2, []int{1, 1}))
	_ = append(r.Calls(0, 0), 1)
	_ = append(r.CallsIn(r.Row(0), 0), 1)
	if made, _ := r.Count(); made != 0 {
		t.Errorf("row %v", r.Row(0))
	}
}

func TestRatingsHoldCalls(t *testing.T) {
	r := must[*Ratings](t)(New(2, 3, []int{1, 2}))
	if made, missing := r.Count(); made != 0 || missing != 6 {
		t.Errorf("empty: %d calls, %d missing", made, missing)
	}
	r.Row(1)[r.Column(1, 1)] = 2
	r.Calls(0, 1)[0] = 1
	if made, missing := r.Count(); made != 2 || missing != 4 {
		t.Errorf("%d calls, %d missing", made, missing)
	}
	if c := r.Calls(1, 1); len(c) != 2 || c[0] != Missing || c[1] != 2 {
		t.Errorf("calls %v", c)
	}
	if c := r.Row(0); len(c) != 3 || c[1] != 1 || c[0] != Missing {
		t.Errorf("row %v", c)
	}
	if r.HasReference() || r.HasAccept() || r.Reference(0) != Missing || r.Accepts(1) {
		t.Error("nothing was set")
	}
	if err := r.SetReference([]Category{2, Missing}); err != nil {
		t.Fatal(err)
	}
	if err := r.SetAccept([]bool{false, true, true}); err != nil {
		t.Fatal(err)
	}
	if !r.HasReference() || r.Reference(0) != 2 || r.Reference(1) != Missing {
		t.Error("the reference was not kept")
	}
	if !r.HasAccept() || r.Accepts(0) || !r.Accepts(2) || r.Accepts(Missing) {
		t.Error("the split was not kept")
	}
	if r.Parts() != 2 || r.Appraisers() != 2 || r.Categories() != 3 || r.Trials(0) != 1 || r.Trials(1) != 2 {
		t.Error("size")
	}
}

// Appraisers that took part in different trials are matched by the numbers of
// the trials, not by their places.
func TestTrialNumbers(t *testing.T) {
	r, err := New(2, 2, []int{2, 2})
	if err != nil {
		t.Fatal(err)
	}
	if err := r.SetTrialNumbers([][]int{{1, 2}, {2, 3}}); err != nil {
		t.Fatal(err)
	}
	copy(r.Row(0), []Category{0, 1, 1, 0})
	copy(r.Row(1), []Category{1, 0, 1, 1})
	a, err := Analyse(r, DefaultOptions())
	if err != nil {
		t.Fatal(err)
	}
	// Only trial 2: 1 beside 1 on the first part, 0 beside 1 on the second.
	sameTable(t, "matched", a.Between.Pairs[0].Table, Table{{0, 1}, {0, 1}})
	for name, numbers := range map[string][][]int{
		"too few appraisers": {{1, 2}},
		"too few trials":     {{1}, {1, 2}},
		"twice":              {{1, 1}, {1, 2}},
	} {
		if r.SetTrialNumbers(numbers) == nil {
			t.Errorf("%s: no error", name)
		}
	}
}
