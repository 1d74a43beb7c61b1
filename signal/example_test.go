package signal_test

import (
	"fmt"

	"samecall/signal"
)

// The figures of these examples come out of a plain search over the likelihood and
// a midpoint sum as well, apart from this package:
// testdata/reference-extra/examples.py.

// Ten shafts of an invented study, each called six times by a ring gauge with
// an upper limit of 20.000 mm.
var shafts = []signal.Part{
	{Name: "S1", Value: 19.990, Accepted: 6, Calls: 6},
	{Name: "S2", Value: 19.994, Accepted: 6, Calls: 6},
	{Name: "S3", Value: 19.996, Accepted: 6, Calls: 6},
	{Name: "S4", Value: 19.998, Accepted: 5, Calls: 6},
	{Name: "S5", Value: 20.000, Accepted: 5, Calls: 6},
	{Name: "S6", Value: 20.001, Accepted: 4, Calls: 6},
	{Name: "S7", Value: 20.003, Accepted: 2, Calls: 6},
	{Name: "S8", Value: 20.005, Accepted: 1, Calls: 6},
	{Name: "S9", Value: 20.008, Accepted: 0, Calls: 6},
	{Name: "S10", Value: 20.012, Accepted: 0, Calls: 6},
}

func ExampleFit() {
	c, err := signal.Fit(shafts, signal.AtMost(20), signal.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	u := c.Upper
	fmt.Printf("cuts at %.4f, %+.4f off the limit (%+.4f to %+.4f)\n", u.Cut.Value, u.Offset.Value, u.Offset.Lower, u.Offset.Upper)
	fmt.Printf("grey zone %.4f to %.4f\n", u.From, u.To)
	// Output:
	// cuts at 20.0020, +0.0020 off the limit (+0.0006 to +0.0036)
	// grey zone 19.9948 to 20.0092
}

func ExampleUnanimous() {
	u, err := signal.Unanimous(shafts, signal.AtMost(20), 0)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("always accepted up to %.3f, always rejected from %.3f: d = %.3f\n", u.Upper.Accept, u.Upper.Reject, u.Upper.Width)
	// Output: always accepted up to 19.996, always rejected from 20.008: d = 0.012
}

func ExampleAssess() {
	c, err := signal.Fit(shafts, signal.AtMost(20), signal.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	process, err := signal.NormalProcess(19.990, 0.004)
	if err != nil {
		fmt.Println(err)
		return
	}
	now, err := signal.Assess(process, c, 0)
	if err != nil {
		fmt.Println(err)
		return
	}
	held, err := signal.GuardForEscapes(process, c, 500e-6, false)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.0f ppm escape; a guard band of %.4f holds %.0f ppm and rejects %.1f %% of good parts\n",
		1e6*now.Escape.Value, held.GuardBand, 1e6*held.Escape.Value, 100*held.FalseReject.Value)
	// Output: 3707 ppm escape; a guard band of 0.0049 holds 500 ppm and rejects 6.7 % of good parts
}

func ExampleDetect() {
	// 45 of 48 calls on bad parts were rejected, and 5 of 102 on good ones.
	d, err := signal.Detect(45, 48, 5, 102, 0.95)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("d′ = %.2f (%.2f to %.2f), criterion %.2f\n", d.DPrime.Value, d.DPrime.Lower, d.DPrime.Upper, d.Criterion.Value)
	// Output: d′ = 3.08 (2.41 to 3.75), criterion 0.07
}
