package agreement

import (
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
		"a call or a reference is no": func() error {
			r := ok()
			r.Row(1)[2] = 2
			_, err := Analyse(r, DefaultOptions())
			return err
		},
		"reference is no category": func() error {
			r := ok()
			if err := r.SetReference([]Category{0, 7}); err != nil {
				return err
			}
			_, err := Analyse(r, DefaultOptions())
			return err
		},
	} {
		if err := f(); err == nil || !strings.Contains(err.Error(), words) {
			t.Errorf("%v, want words %q", err, words)
		}
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
