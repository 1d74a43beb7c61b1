package interval_test

import (
	"fmt"
	"math/rand/v2"

	"samecall/agreement/interval"
)

// Forty-two parts of fifty were called alike on every trial.
func ExampleClopperPearson() {
	i := interval.ClopperPearson(42, 50, 0.95)
	fmt.Printf("%.3f to %.3f\n", i.Lower, i.Upper)
	// Output:
	// 0.709 to 0.928
}

// How many bad parts without a miss show a miss rate below 5 %, at 95 %?
func ExampleUpperLimit() {
	for _, n := range []int{16, 58, 59} {
		fmt.Printf("%d parts: below %.4f\n", n, interval.UpperLimit(0, n, 0.95))
	}
	// Output:
	// 16 parts: below 0.1707
	// 58 parts: below 0.0503
	// 59 parts: below 0.0495
}

// Sixteen bad parts, three calls each: 48 calls are not 48 parts. Here the
// six misses fall on four of them. (Appraiser C of the Measurement Systems
// Analysis reference manual's study; R's survey package gives the same.)
func ExampleKornGraubard() {
	r := interval.KornGraubard([]interval.Cluster{
		{Events: 0, Calls: 3, Parts: 12},
		{Events: 1, Calls: 3, Parts: 2},
		{Events: 2, Calls: 3, Parts: 2},
	}, 0.95)
	shown := interval.KornGraubard([]interval.Cluster{
		{Events: 0, Calls: 3, Parts: 12},
		{Events: 1, Calls: 3, Parts: 2},
		{Events: 2, Calls: 3, Parts: 2},
	}, interval.EachSide(0.95)).Upper
	calls := interval.ClopperPearson(6, 48, 0.95)
	fmt.Printf("%d of %d: %.3f to %.3f, worth %.1f calls\n", r.Events, r.Calls, r.Lower, r.Upper, r.Effective)
	fmt.Printf("one-sided: not above %.3f\n", shown)
	fmt.Printf("were the calls independent: %.3f to %.3f\n", calls.Lower, calls.Upper)
	// Output:
	// 6 of 48: 0.030 to 0.308, worth 27.2 calls
	// one-sided: not above 0.276
	// were the calls independent: 0.047 to 0.252
}

// The BCa interval of a mean, from resampled means.
func ExampleBCa() {
	sample := []float64{0.2, 0.9, 0.4, 0.8, 0.5, 0.7, 0.6, 0.3}
	mean := func(x []float64) float64 {
		var sum float64
		for _, v := range x {
			sum += v
		}
		return sum / float64(len(x))
	}
	rng := rand.New(rand.NewPCG(1, 0))
	resampled := make([]float64, 2000)
	draw := make([]float64, len(sample))
	for b := range resampled {
		for i := range draw {
			draw[i] = sample[rng.IntN(len(sample))]
		}
		resampled[b] = mean(draw)
	}
	var leftOut []interval.LeftOut
	for i := range sample {
		rest := append(append([]float64{}, sample[:i]...), sample[i+1:]...)
		leftOut = append(leftOut, interval.LeftOut{Value: mean(rest), Parts: 1})
	}
	i, err := interval.BCa(mean(sample), resampled, leftOut, 0.95)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.2f: %.1f to %.1f\n", mean(sample), i.Lower, i.Upper)
	// Output:
	// 0.55: 0.4 to 0.7
}
