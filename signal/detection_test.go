package signal

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// The indices by R's qnorm and pnorm: expected-r.json, "detection".
func TestFromRatesAgainstR(t *testing.T) {
	var want []struct {
		Hit        float64 `json:"hit"`
		FalseAlarm float64 `json:"false_alarm"`
		DPrime     float64 `json:"d_prime"`
		Criterion  float64 `json:"criterion"`
		Area       float64 `json:"area"`
	}
	reference(t, "detection", &want)
	if len(want) == 0 {
		t.Fatal("no rows in the reference")
	}
	for _, w := range want {
		d, err := FromRates(w.Hit, w.FalseAlarm)
		if err != nil {
			t.Fatal(err)
		}
		near(t, "d′", d.DPrime.Value, w.DPrime, 1e-9)
		near(t, "criterion", d.Criterion.Value, w.Criterion, 1e-9)
		near(t, "area", d.Area.Value, w.Area, 1e-9)
		if d.DPrime.HasLower || d.DPrime.Why == "" {
			t.Errorf("rates alone gave an interval: %+v", d.DPrime)
		}
	}
}

// Hand calculation: 20 hits of 25 and 5 false alarms of 25, corrected rates
// 20.5/26 and 5.5/26, which are complementary, so c = 0 and d′ = 2 z(20.5/26).
func TestDetectByHand(t *testing.T) {
	d, err := Detect(20, 25, 5, 25, 0.95)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "hit", d.Hit, 20.5/26, 1e-15)
	z := math.Sqrt2 * math.Erfinv(2*20.5/26-1)
	near(t, "d′", d.DPrime.Value, 2*z, 1e-12)
	near(t, "c", d.Criterion.Value, 0, 1e-12)
	phi := math.Exp(-z*z/2) / math.Sqrt(2*math.Pi)
	near(t, "se", d.DPrime.SE, math.Sqrt(2*(20.5/26)*(5.5/26)/25)/phi, 1e-12)
	near(t, "half width", d.DPrime.Upper-d.DPrime.Value, 1.959963984540054*d.DPrime.SE, 1e-9)
	// c is half the sum of the same two quantiles: half the standard error.
	near(t, "half width of c", d.Criterion.Upper-d.Criterion.Value, 1.959963984540054*d.DPrime.SE/2, 1e-9)
}

// The variance of a rate whose parts scatter less than calls by chance would is
// the binomial one: here every part is rejected in one of two calls, so that
// nothing scatters. With no rejection at all the number of parts bounds it.
func TestDetectByPartFloor(t *testing.T) {
	half := []Tally{{Rejected: 1, Calls: 2, Parts: 10}}
	none := []Tally{{Rejected: 0, Calls: 4, Parts: 10}}
	d, err := DetectByPart(half, none, 0.95)
	if err != nil {
		t.Fatal(err)
	}
	hit, alarm := 10.5/21, 0.5/41
	density := func(p float64) float64 {
		z := math.Sqrt2 * math.Erfinv(2*p-1)
		return math.Exp(-z*z/2) / math.Sqrt(2*math.Pi)
	}
	want := math.Sqrt(hit*(1-hit)/20/sq(density(hit)) + alarm*(1-alarm)/10/sq(density(alarm)))
	nearRel(t, "se", d.DPrime.SE, want, 1e-9)
}

func TestDetectRefuses(t *testing.T) {
	for _, c := range [][4]int{{-1, 5, 0, 5}, {6, 5, 0, 5}, {1, 5, 6, 5}, {0, 0, 1, 5}, {1, 5, 0, 0}} {
		if _, err := Detect(c[0], c[1], c[2], c[3], 0.95); err == nil {
			t.Errorf("%v: no error", c)
		}
	}
	for _, conf := range []float64{0, 1, -1, 2, math.NaN()} {
		if _, err := Detect(1, 5, 1, 5, conf); err == nil {
			t.Errorf("confidence %v: no error", conf)
		}
	}
	one := []Tally{{Rejected: 1, Calls: 2}}
	if _, err := DetectByPart(one, []Tally{{Rejected: 1, Calls: 2, Parts: -1}}, 0.95); err == nil || !strings.Contains(err.Error(), "-1 such parts") {
		t.Errorf("−1 parts: %v", err)
	}
	if _, err := FromRates(1, 0.5); err == nil {
		t.Error("hit rate 1: no error")
	}
}

// Calls that all agree within a part carry no more than one call a part: the
// interval must widen towards that of single calls.
func TestDetectByPartWidens(t *testing.T) {
	var bad, good []Tally
	for i := range 20 {
		bad = append(bad, Tally{Rejected: 9 * min(1, i/4), Calls: 9}) // 16 of 20 always rejected
		good = append(good, Tally{Rejected: 9 * max(0, 1-i/4), Calls: 9})
	}
	byPart, err := DetectByPart(bad, good, 0.95)
	if err != nil {
		t.Fatal(err)
	}
	byCall, err := Detect(144, 180, 36, 180, 0.95)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "d′", byPart.DPrime.Value, byCall.DPrime.Value, 1e-12)
	// All calls of a part alike: the variance is that of 20 parts, m/(m−1) from the sample variance.
	if ratio := byPart.DPrime.SE / byCall.DPrime.SE; math.Abs(ratio-3*math.Sqrt(20.0/19)) > 0.02 {
		t.Errorf("standard error grew %v fold, want about 3", ratio)
	}
}

func TestDetectNeverEscapes(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		bad, good := rapid.IntRange(1, 500).Draw(t, "bad"), rapid.IntRange(1, 500).Draw(t, "good")
		d, err := Detect(rapid.IntRange(0, bad).Draw(t, "hits"), bad, rapid.IntRange(0, good).Draw(t, "false alarms"), good, 0.95)
		if err != nil {
			t.Fatal(err)
		}
		for _, e := range []Estimate{d.DPrime, d.Criterion, d.Area} {
			if !finite(e.Value, e.Lower, e.Upper, e.SE) || e.Lower > e.Value || e.Upper < e.Value {
				t.Fatalf("%+v", e)
			}
		}
	})
}

// Parts told together count as if told one by one.
func TestDetectByPartTogether(t *testing.T) {
	one := []Tally{{Rejected: 3, Calls: 3}, {Rejected: 3, Calls: 3}, {Rejected: 1, Calls: 3}, {Rejected: 1, Calls: 3}, {Rejected: 1, Calls: 3}}
	together := []Tally{{Rejected: 3, Calls: 3, Parts: 2}, {Rejected: 1, Calls: 3, Parts: 3}}
	good := []Tally{{Rejected: 1, Calls: 3}, {Calls: 3}, {Calls: 3}}
	a, err := DetectByPart(one, good, 0.95)
	if err != nil {
		t.Fatal(err)
	}
	b, err := DetectByPart(together, good, 0.95)
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(a.DPrime.Value-b.DPrime.Value) > 1e-12 || math.Abs(a.DPrime.SE-b.DPrime.SE) > 1e-12 {
		t.Errorf("told one by one %+v, together %+v", a.DPrime, b.DPrime)
	}
}
