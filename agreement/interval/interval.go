package interval

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
