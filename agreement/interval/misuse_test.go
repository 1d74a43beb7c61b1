package interval

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func must[T any](v T, err error) T {
	if err != nil {
		panic(err)
	}
	return v
}

// A mistake of the program panics in words of this package that name what was
// given, not those of a library below.
func TestMistakesPanic(t *testing.T) {
	alike := []LeftOut{{0.4, 1}, {0.6, 1}}
	byConfidence := map[string]func(confidence float64){
		"ClopperPearson": func(c float64) { ClopperPearson(1, 3, c) },
		"UpperLimit":     func(c float64) { UpperLimit(1, 3, c) },
		"LowerLimit":     func(c float64) { LowerLimit(1, 3, c) },
		"Wilson":         func(c float64) { Wilson(1, 3, c) },
		"Exact":          func(c float64) { Exact(1, 3, c) },
		"KornGraubard":   func(c float64) { KornGraubard([]Cluster{{1, 3, 4}, {0, 3, 4}}, c) },
		"no call":        func(c float64) { KornGraubard(nil, c) },
		"BCa":            func(c float64) { _, _ = BCa(0.5, []float64{0.4, 0.6}, alike, c) },
		"Linearised":     func(c float64) { _, _ = Linearised(0.5, 0.1, 9, c) },
		"Normal":         func(c float64) { _, _ = Normal(0.5, 0.1, c) },
		"Expanded":       func(c float64) { Expanded(c, 9) },
		"EachSide":       func(c float64) { EachSide(c) },
	}
	for name, f := range byConfidence {
		for _, c := range []float64{95, 1, -0.05, math.NaN(), math.Inf(1)} {
			panics(t, name, fmt.Sprintf("interval: confidence %v", c), func() { f(c) })
		}
	}
	for name, f := range map[string]func(x, n int){
		"ClopperPearson": func(x, n int) { ClopperPearson(x, n, 0.95) },
		"UpperLimit":     func(x, n int) { UpperLimit(x, n, 0.95) },
		"LowerLimit":     func(x, n int) { LowerLimit(x, n, 0.95) },
		"Wilson":         func(x, n int) { Wilson(x, n, 0.95) },
		"Exact":          func(x, n int) { Exact(float64(x), float64(n), 0.95) },
		"KornGraubard":   func(x, n int) { KornGraubard([]Cluster{{x, n, 1}}, 0.95) },
	} {
		for _, c := range [][2]int{{5, 3}, {-1, 3}, {0, -3}, {-4, -3}, {1, 0}} {
			panics(t, name, fmt.Sprintf("%d events", c[0]), func() { f(c[0], c[1]) })
		}
	}
	panics(t, "parts", "-1 parts", func() { KornGraubard([]Cluster{{1, 3, -1}}, 0.95) })
	panics(t, "parts", "-1 parts", func() { _, _ = Acceleration([]LeftOut{{0.5, -1}}) })
	panics(t, "too many calls", "more calls than", func() { KornGraubard([]Cluster{{0, math.MaxInt, 2}}, 0.95) })
	panics(t, "Exact", "NaN events", func() { Exact(math.NaN(), 3, 0.95) })
	panics(t, "Exact", "of +Inf", func() { Exact(3, math.Inf(1), 0.95) })
}

func panics(t *testing.T, name, words string, f func()) {
	t.Helper()
	defer func() {
		t.Helper()
		if got := fmt.Sprint(recover()); !strings.HasPrefix(got, "interval: ") || !strings.Contains(got, words) {
			t.Errorf("%s: panic %q, want words %q", name, got, words)
		}
	}()
	f()
}

// What data can bring about is an error.
func TestDataGivesErrors(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for name, f := range map[string]func() (Interval, error){
		"no resample":          func() (Interval, error) { return BCa(0.5, nil, nil, 0.95) },
		"NaN resampled":        func() (Interval, error) { return BCa(0.5, []float64{0.4, nan, 0.6}, nil, 0.95) },
		"infinite resampled":   func() (Interval, error) { return BCa(0.5, []float64{0.4, inf, 0.6}, nil, 0.95) },
		"NaN left out":         func() (Interval, error) { return BCa(0.5, []float64{0.4, 0.6}, []LeftOut{{nan, 1}}, 0.95) },
		"infinite left out":    func() (Interval, error) { return BCa(0.5, []float64{0.4, 0.6}, []LeftOut{{inf, 1}, {1, 1}}, 0.95) },
		"NaN estimate":         func() (Interval, error) { return BCa(nan, []float64{0.4, 0.6}, nil, 0.95) },
		"one part":             func() (Interval, error) { return Linearised(0.5, 0.1, 1, 0.95) },
		"linearised, SE below": func() (Interval, error) { return Linearised(0.5, -0.1, 9, 0.95) },
		"linearised, SE NaN":   func() (Interval, error) { return Linearised(0.5, nan, 9, 0.95) },
		"linearised, NaN":      func() (Interval, error) { return Linearised(nan, 0.1, 9, 0.95) },
		"normal, SE below":     func() (Interval, error) { return Normal(0.5, -0.1, 0.95) },
		"normal, infinite":     func() (Interval, error) { return Normal(0.5, math.MaxFloat64, 0.95) },
	} {
		i, err := f()
		if err == nil || !strings.HasPrefix(err.Error(), "interval: ") || i != (Interval{}) {
			t.Errorf("%s: %v, error %v", name, i, err)
		}
	}
}

// Nothing that is allowed gives a limit that is not a number, out of range or
// on the wrong side of the estimate.
func TestLimitsAreNumbers(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		confidence := rapid.OneOf(rapid.Float64Range(0, almostOne), rapid.SampledFrom([]float64{0, 1e-300, 0.95, almostOne})).Draw(t, "confidence")
		n := rapid.OneOf(rapid.IntRange(0, 200), rapid.IntRange(0, 1<<40)).Draw(t, "n")
		x := rapid.IntRange(0, n).Draw(t, "x")
		holds := func(what string, i Interval) {
			t.Helper()
			share := 0.5
			if n > 0 {
				share = float64(x) / float64(n)
			}
			const rounding = 1e-9 // at almost no confidence both limits are the median, beside the share
			if !(0 <= i.Lower && i.Upper <= 1 && i.Lower <= i.Upper) || confidence > 0.9 && !(i.Lower <= share+rounding && share <= i.Upper+rounding) {
				t.Fatalf("%s of %d in %d at %v: %v", what, x, n, confidence, i)
			}
		}
		holds("Clopper-Pearson", ClopperPearson(x, n, confidence))
		holds("Wilson", Wilson(x, n, confidence))
		if u, l := UpperLimit(x, n, confidence), LowerLimit(x, n, confidence); !(u >= 0 && u <= 1 && l >= 0 && l <= 1) {
			t.Fatalf("%d of %d at %v: %v, %v", x, n, confidence, l, u)
		}
		r := KornGraubard(drawClusters(t), confidence)
		if !(0 <= r.Lower && r.Lower <= r.Value && r.Value <= r.Upper && r.Upper <= 1) {
			t.Fatalf("rate %+v", r)
		}
		if e := Expanded(confidence, n); !(e >= confidence && e <= almostOne) {
			t.Fatalf("%v of %d parts expanded to %v", confidence, n, e)
		}
		values := rapid.SliceOfN(rapid.Float64Range(-1, 1), 1, 30).Draw(t, "values")
		var leftOut []LeftOut
		for _, v := range values {
			leftOut = append(leftOut, LeftOut{v, 1})
		}
		if i, err := BCa(values[0], values, leftOut, confidence); err != nil || !finite(i.Lower) || !finite(i.Upper) {
			t.Fatalf("BCa of %v at %v: %v, %v", values, confidence, i, err)
		}
	})
}

// Next to no confidence leaves but rounding between the limits, which never
// turns them round.
func TestLimitsInOrder(t *testing.T) {
	for _, n := range []float64{1e5, 1e6, 3e7, 1e9} {
		for k := range 200 {
			x := math.Floor(n * (float64(k) + 0.5) / 200)
			if i := Exact(x, n, 0); i.Lower > i.Upper {
				t.Errorf("%v of %v: %v", x, n, i)
			}
			if i := Exact(x, n, 1e-9); i.Lower > i.Upper {
				t.Errorf("%v of %v: %v", x, n, i)
			}
		}
	}
}
