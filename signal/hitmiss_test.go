package signal

import (
	"math"
	"strings"
	"testing"
)

// Bliss's beetles (1935) as flaws whose size is the dose: 10 to the power of
// log10_dose. a50 follows from R's 50 % point (expected-r.json, beetles). a90
// and a90/95 are checked against brute force: for a given a90, the best slope
// by golden section on the likelihood as written, and bisection for the bound.
func TestHitMissAgainstBruteForce(t *testing.T) {
	var flaws []Flaw
	rows := table(t, "beetles-1935.csv")
	for _, r := range rows {
		flaws = append(flaws, Flaw{Size: math.Pow(10, r[0]), Looked: int(r[1]), Found: int(r[2])})
	}
	h, err := FitHitMiss(flaws, Options{LackOfFit: WidenNever})
	if err != nil {
		t.Fatal(err)
	}
	var want glm
	reference(t, "beetles.probit", &want)
	nearRel(t, "a50", h.A50.Value, math.Pow(10, want.LD50), 1e-7)
	q := 1.2815515655446004 // Φ⁻¹(0.9)
	nearRel(t, "a90", h.A90.Value, math.Pow(10, want.LD50+q/want.Slope), 1e-7)

	loglik := func(x90, slope float64) float64 { // in log10 size
		var l float64
		for _, r := range rows {
			p := normalCDF(q + slope*(r[0]-x90))
			l += r[2]*math.Log(p) + (r[1]-r[2])*math.Log(normalCDF(-q-slope*(r[0]-x90)))
		}
		return l
	}
	profile := func(x90 float64) float64 {
		b := golden(func(b float64) float64 { return -loglik(x90, b) }, 5, 60)
		return loglik(x90, b)
	}
	x90 := want.LD50 + q/want.Slope
	top := profile(x90)
	z := 1.6448536269514722
	lo, hi := x90, x90+0.1
	for range 100 {
		mid := (lo + hi) / 2
		if 2*(top-profile(mid)) < z*z {
			lo = mid
		} else {
			hi = mid
		}
	}
	if !h.HasA9095 {
		t.Fatal(h.Why)
	}
	nearRel(t, "a90/95", h.A9095, math.Pow(10, lo), 1e-6)
}

func TestHitMissHardCases(t *testing.T) {
	separated := []Flaw{{Size: 1, Looked: 5}, {Size: 2, Looked: 5}, {Size: 3, Looked: 5, Found: 5}, {Size: 4, Looked: 5, Found: 5}}
	h, err := FitHitMiss(separated, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if h.Curve.Lower.Status != Separated || h.HasA9095 || !strings.Contains(h.Why, "do not overlap") {
		t.Errorf("%+v", h)
	}
	// An interval of a90 would tell more than a90/95.
	if e := h.A90; e.HasLower || e.HasUpper || e.Why != h.Why {
		t.Errorf("a90 %+v", e)
	}
	if e := h.A50; !e.HasLower || !e.HasUpper { // calls turn in the gap, whatever the curve
		t.Errorf("a50 %+v", e)
	}
	for name, flaws := range map[string][]Flaw{
		"no flaw":       nil,
		"size 0":        {{Size: 0, Looked: 1}},
		"found > look":  {{Size: 1, Looked: 1, Found: 2}},
		"all found":     {{Size: 1, Looked: 2, Found: 2}, {Size: 2, Looked: 2, Found: 2}},
		"the wrong way": {{Size: 1, Looked: 9, Found: 8}, {Size: 2, Looked: 9, Found: 5}, {Size: 3, Looked: 9, Found: 2}},
	} {
		if _, err := FitHitMiss(flaws, Options{}); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
}

// The chance of being found at the sizes that are found half of the time and nine
// times in ten.
func TestHitMissFound(t *testing.T) {
	flaws := []Flaw{{Size: 1, Looked: 9, Found: 1}, {Size: 2, Looked: 9, Found: 3}, {Size: 3, Looked: 9, Found: 7}, {Size: 4, Looked: 9, Found: 8}}
	h, err := FitHitMiss(flaws, Options{})
	if err != nil {
		t.Fatal(err)
	}
	for size, want := range map[float64]float64{h.A50.Value: 0.5, h.A90.Value: 0.9} {
		e, err := h.Found(size)
		if err != nil || !(e.Lower < e.Value && e.Value < e.Upper) {
			t.Errorf("size %v: %+v, %v", size, e, err)
		}
		near(t, "found", e.Value, want, 1e-9)
	}
	for _, size := range []float64{0, -1, math.NaN(), math.Inf(1)} {
		if _, err := h.Found(size); err == nil {
			t.Errorf("size %v: no error", size)
		}
	}
}

// a90/95 is one-sided at 95 % whatever confidence the intervals have, with lack
// of fit too: there 1.645 becomes √factor·t(0.95, df).
func TestA9095IsOneBound(t *testing.T) {
	var flaws []Flaw
	for i, found := range []int{0, 3, 0, 5, 1, 9, 2, 10, 7, 10, 10, 4, 10, 10} {
		flaws = append(flaws, Flaw{Size: math.Exp(0.2 * float64(i)), Found: found, Looked: 10})
	}
	var bounds []float64
	for _, confidence := range []float64{0.8, 0.95, 0.99} {
		h, err := FitHitMiss(flaws, Options{Confidence: confidence})
		if err != nil {
			t.Fatal(err)
		}
		if !h.Curve.LackOfFit.Applied || !h.HasA9095 {
			t.Fatalf("%+v", h)
		}
		bounds = append(bounds, h.A9095)
	}
	nearRel(t, "at 80 %", bounds[0], bounds[1], 1e-6)
	nearRel(t, "at 99 %", bounds[2], bounds[1], 1e-6)
	plain, err := FitHitMiss(flaws, Options{LackOfFit: WidenNever})
	if err != nil || bounds[1] <= plain.A9095*1.01 {
		t.Errorf("a90/95 %v with lack of fit, %v without: %v", bounds[1], plain.A9095, err)
	}
}
