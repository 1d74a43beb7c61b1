package main

import (
	"math"
	"math/rand/v2"
	"testing"

	"samecall/agreement"
)

// What the figures are said to estimate is what a very large study comes to.
func TestTruth(t *testing.T) {
	for _, s := range []scenario{
		{appraisers: 2, trials: 2, miss: 0.05, falseAlarm: 0.05},
		{appraisers: 3, trials: 3, miss: 0.15, falseAlarm: 0.15, correlation: 0.3},
		{appraisers: 3, trials: 3, miss: 0.15, falseAlarm: 0.15, correlation: 0.3, share: []float64{1, 0.5, 0.25}},
		{appraisers: 4, trials: 2, miss: 0.15, falseAlarm: 0.05, correlation: 0.3, share: []float64{1, 0.2, 0.7, 0.4}, few: 20_000},
	} {
		s.parts = 200_000
		r, err := s.simulate(rand.New(rand.NewPCG(1, 2)))
		if err != nil {
			t.Fatal(err)
		}
		a, err := agreement.Analyse(r, agreement.DefaultOptions())
		if err != nil {
			t.Fatal(err)
		}
		for _, figures := range groups {
			for _, f := range figures {
				// Several standard errors of any of them.
				if e, truth := f.of(a, s.truth()); math.Abs(e.Value-truth) > 0.01 {
					t.Errorf("%s: %s is %.4f, said to be %.4f", s.cells(), f.name, e.Value, truth)
				}
			}
		}
	}
}

// The probability that calls are alike, of appraisers who are, is the same by
// both ways.
func TestAlikeOfEqualAppraisers(t *testing.T) {
	d := difficulty{0.15, 0.3}
	if got, want := d.alike([]float64{1, 1, 1}, 3), d.none(9)+d.all(9); math.Abs(got-want) > 1e-12 {
		t.Errorf("%v, want %v", got, want)
	}
}
