package interval

import (
	"math/rand/v2"
	"testing"
)

// Source: Efron & Tibshirani, An Introduction to the Bootstrap (1993),
// chapter 14: the spatial test data, test A, of 26 children; the variance
// with divisor n is 171.5, its acceleration 0.061, and the BCa 90 % interval
// from 2000 resamples (115.8, 259.6). Data and results are from memory; the
// variance and the acceleration confirm the data.
var spatialA = []float64{48, 36, 20, 29, 42, 42, 20, 42, 22, 41, 45, 14, 6, 0, 33, 28, 34, 4, 32, 24, 47, 41, 24, 26, 30, 41}

func variance(x []float64) float64 {
	var sum, squares float64
	for _, v := range x {
		sum += v
		squares += v * v
	}
	n := float64(len(x))
	return squares/n - sum/n*sum/n
}

func TestBCaOnSpatialTestData(t *testing.T) {
	estimate := variance(spatialA)
	near(t, "variance", estimate, 171.5, 0.05)
	var leftOut []LeftOut
	for i := range spatialA {
		rest := append(append([]float64{}, spatialA[:i]...), spatialA[i+1:]...)
		leftOut = append(leftOut, LeftOut{variance(rest), 1})
	}
	near(t, "acceleration", must(Acceleration(leftOut)), 0.061, 0.0005)
	rng := rand.New(rand.NewPCG(1, 2))
	resampled := make([]float64, 50000)
	sample := make([]float64, len(spatialA))
	for b := range resampled {
		for i := range sample {
			sample[i] = spatialA[rng.IntN(len(spatialA))]
		}
		resampled[b] = variance(sample)
	}
	got := must(BCa(estimate, resampled, leftOut, 0.90))
	// The printed limits carry the noise of 2000 resamples: a few units.
	near(t, "lower", got.Lower, 115.8, 4)
	near(t, "upper", got.Upper, 259.6, 8)
}

func TestBCaHoldsTheEstimate(t *testing.T) {
	for name, resampled := range map[string][]float64{
		"all alike": {0.5, 0.5, 0.5},
		"all above": {0.8, 0.9, 1},
		"all below": {0.1, 0.2, 0.3},
	} {
		got := must(BCa(0.5, resampled, []LeftOut{{0.4, 3}, {0.9, 1}}, 0.95))
		if !got.Contains(0.5) {
			t.Errorf("%s: %v does not hold the estimate", name, got)
		}
	}
}

// The confidence expanded for two parts rounds to 1.
func TestBCaOfTwoParts(t *testing.T) {
	for _, leftOut := range [][]LeftOut{nil, {{0.2, 1}, {0.9, 1}}, {{0.2, 1}, {0.9, 5}}, {{0.2, 5}, {0.9, 1}}} {
		got := must(BCa(0.5, []float64{0.1, 0.4, 0.5, 0.6, 0.9}, leftOut, Expanded(0.95, 2)))
		if want := (Interval{0.1, 0.9}); got != want {
			t.Errorf("%v: %v, want all that was resampled, %v", leftOut, got, want)
		}
	}
}

// Left-out values that are equal but for rounding have no skewness. These are
// −1/47 as five sums of the same parts in different order give it.
func TestAccelerationOfRounding(t *testing.T) {
	leftOut := []LeftOut{{-0.021276595744680771, 4}, {-0.021276595744680549, 1}}
	if a := must(Acceleration(leftOut)); a != 0 {
		t.Errorf("acceleration %v of values that are alike", a)
	}
}
