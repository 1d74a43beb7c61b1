package interval

import (
	"errors"
	"fmt"
	"math"
)

// Interval is a range of values that the data leave open at some confidence.
type Interval struct {
	Lower, Upper float64
}

// Width returns the upper limit minus the lower.
func (i Interval) Width() float64 { return i.Upper - i.Lower }

// Contains reports whether x lies in the interval, its limits included.
func (i Interval) Contains(x float64) bool { return i.Lower <= x && x <= i.Upper }

// with returns the interval, widened where needed to hold the estimate.
func (i Interval) with(estimate float64) Interval {
	return Interval{min(i.Lower, estimate), max(i.Upper, estimate)}
}

// EachSide returns the confidence of the two-sided interval whose limits, each
// for itself, have the confidence given: 0.90 for 0.95. Below one half it is
// 0: there both limits have one half. It panics if confidence is not a fraction.
func EachSide(confidence float64) float64 {
	checkConfidence(confidence)
	return max(0, 2*confidence-1)
}

// almostOne is the largest confidence.
const almostOne = 1 - 0x1p-53

func checkConfidence(c float64) {
	if !(c >= 0 && c <= almostOne) {
		panic(fmt.Sprintf("interval: confidence %v, want a fraction of at least 0 and below 1, such as 0.95", c))
	}
}

func checkCounts(x, n float64) {
	if !(x >= 0 && x <= n && n <= math.MaxFloat64) {
		panic(fmt.Sprintf("interval: %v events of %v, want at least 0 and no more than there are", x, n))
	}
}

var errNotFinite = errors.New("interval: a figure is not a number or not finite")

func finite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }

// around returns estimate ± half.
func around(estimate, half float64) (Interval, error) {
	i := Interval{estimate - half, estimate + half}
	if !finite(i.Lower) || !finite(i.Upper) {
		return Interval{}, errNotFinite
	}
	return i, nil
}

func checkStandardError(se float64) error {
	if se < 0 {
		return fmt.Errorf("interval: a standard error of %v, want 0 or more", se)
	}
	return nil
}
