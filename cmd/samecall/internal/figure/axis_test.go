package figure

import (
	"math"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

func TestTicks(t *testing.T) {
	for _, c := range []struct {
		low, high float64
		n         int
		want      []float64
		decimals  int
	}{
		{0, 100, 8, []float64{0, 20, 40, 60, 80, 100}, 0},
		{0, 15, 8, []float64{0, 2, 4, 6, 8, 10, 12, 14}, 0},
		{0, 1, 3, []float64{0, 0.5, 1}, 1},
		{11.990, 12.028, 8, []float64{11.990, 11.995, 12, 12.005, 12.010, 12.015, 12.020, 12.025}, 3},
		{-1, 1, 5, []float64{-1, -0.5, 0, 0.5, 1}, 1},
		{5, 5, 8, nil, 0},
		{6, 5, 8, nil, 0},
		{0, 1, 1, nil, 0},
		{math.NaN(), 1, 8, nil, 0},
		{0, math.Inf(1), 8, nil, 0},
	} {
		got, decimals := ticks(c.low, c.high, c.n)
		near := cmp.Comparer(func(a, b float64) bool { return math.Abs(a-b) < 1e-9 })
		if d := cmp.Diff(c.want, got, near); d != "" || decimals != c.decimals {
			t.Errorf("ticks(%v, %v, %d), decimals %d (want %d): %s", c.low, c.high, c.n, decimals, c.decimals, d)
		}
	}
}

func TestTicksAlways(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		low := rapid.Float64Range(-1e6, 1e6).Draw(t, "low")
		high := low + math.Pow(10, rapid.Float64Range(-6, 9).Draw(t, "log width"))
		n := rapid.IntRange(2, 12).Draw(t, "n")
		at, decimals := ticks(low, high, n)
		if len(at) == 0 || len(at) > n {
			t.Fatalf("%d ticks; at most %d", len(at), n)
		}
		slack := 1e-6 * (high - low)
		seen := make(map[string]bool)
		for _, v := range at {
			if v < low-slack || v > high+slack {
				t.Fatalf("%v is beyond %v to %v", v, low, high)
			}
			label := decimal(v, decimals)
			if seen[label] {
				t.Fatalf("two ticks read %s", label)
			}
			seen[label] = true
		}
	})
}

// Labels of an axis must not run into each other, however long they are.
func TestTicksThatFit(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		low := rapid.Float64Range(-1e9, 1e9).Draw(t, "low")
		high := low + math.Pow(10, rapid.Float64Range(-3, 9).Draw(t, "log width"))
		a := axis{low, high, 58, 740}
		at, labels := a.ticksThatFit(low, high, 12)
		for i := 1; i < len(at); i++ {
			left := a.at(at[i-1]) + textWidth(labels[i-1], 12)/2
			right := a.at(at[i]) - textWidth(labels[i], 12)/2
			if left > right {
				t.Fatalf("%s and %s lie over each other", labels[i-1], labels[i])
			}
		}
	})
}

func TestDecimal(t *testing.T) {
	for _, c := range []struct {
		x        float64
		decimals int
		want     string
	}{
		{0, 0, "0"}, {math.Copysign(0, -1), 1, "0.0"}, {-1.5, 1, "−1.5"}, {12.005, 3, "12.005"}, {1e20, 0, "1e20"}, {-1e20, 0, "−1e20"},
	} {
		if got := decimal(c.x, c.decimals); got != c.want {
			t.Errorf("decimal(%v, %d) is %q; want %q", c.x, c.decimals, got, c.want)
		}
	}
}
