package agreement

import (
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
	if !has(a, "prevalence", "Read it beside the shares of parts") {
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
}

// More resamples than can be kept make linearised intervals, in little memory.
func TestResamplesBeyondMemory(t *testing.T) {
	p := patterns{rows: make([][]Category, 500), pattern: make([]int32, 1000)}
	opt := DefaultOptions()
	if s := newResampler(p, opt, 1); s.weights == nil {
		t.Error("2000 resamples of 500 patterns are linearised")
	}
	opt.Resamples = MaxResamples
	if s := newResampler(p, opt, 1); s.weights != nil {
		t.Errorf("%d weights kept", len(s.weights))
	}
}
