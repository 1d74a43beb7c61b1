package figure

import (
	"math"
	"strconv"
	"strings"
)

// axis maps values to pixels, on a straight line.
type axis struct{ low, high, from, to float64 }

func (a axis) at(x float64) float64 {
	return a.from + (x-a.low)/(a.high-a.low)*(a.to-a.from)
}

// clamp is at for values that may lie beyond the axis.
func (a axis) clamp(x float64) float64 { return a.at(min(max(x, a.low), a.high)) }

// ticks returns round values within a range, no more than n of them, and the
// decimals that tell them apart.
func ticks(low, high float64, n int) (at []float64, decimals int) {
	if !(high > low) || math.IsInf(high-low, 0) || n < 2 {
		return nil, 0
	}
	power := math.Pow(10, math.Floor(math.Log10((high-low)/float64(n))))
	for _, m := range []float64{1, 2, 5, 10, 20, 50} {
		step := m * power
		// Where a step is nothing beside the values, they cannot be told apart.
		if step <= 1e-12*max(math.Abs(low), math.Abs(high)) {
			continue
		}
		const slack = 1e-9
		first, last := math.Ceil(low/step-slack), math.Floor(high/step+slack)
		if last-first+1 > float64(n) {
			continue
		}
		for i := first; i <= last; i++ {
			at = append(at, i*step)
		}
		return at, max(0, -int(math.Floor(math.Log10(step)+1e-9)))
	}
	return nil, 0
}

// ticksThatFit are ticks whose labels have room beside each other on a
// horizontal axis.
func (a axis) ticksThatFit(low, high, size float64) (at []float64, labels []string) {
	for n := 8; n >= 2; n-- {
		values, decimals := ticks(low, high, n)
		widest := 0.0
		labels = labels[:0]
		for _, v := range values {
			labels = append(labels, decimal(v, decimals))
			widest = max(widest, textWidth(labels[len(labels)-1], size))
		}
		if len(values) < 2 || widest+10 <= (a.to-a.from)*(values[1]-values[0])/(high-low) {
			return values, labels
		}
	}
	return nil, nil
}

// decimal writes a number with so many decimals and a true minus; one with
// more digits than anybody reads with a power of ten.
func decimal(x float64, decimals int) string {
	if x == 0 {
		x = 0 // not −0
	}
	s := strconv.FormatFloat(x, 'f', decimals, 64)
	const readable = 14
	if len(s) > readable {
		s = strings.Replace(strconv.FormatFloat(x, 'g', 6, 64), "e+", "e", 1)
	}
	return strings.ReplaceAll(s, "-", "−")
}
