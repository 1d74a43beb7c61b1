package verdict

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"

	"samecall/agreement"
	"samecall/agreement/interval"
)

// manyTimes is how much larger a study may get before more parts are no
// answer any longer.
const manyTimes = 1000

// projection gives the one-sided limits of a figure in a study of so many
// parts in which it came out the same.
type projection func(parts float64) interval.Interval

// settle finds the fewest parts more that would settle an open criterion.
func (c *Criterion) settle(at projection) {
	if c.Evidence != Open || c.Met == NotShown || c.Estimate.Unbounded != nil || c.Parts == 0 {
		return
	}
	settled := func(parts int) bool { return c.settledBy(c.deciding(at(float64(parts)))) }
	low, high := c.Parts, manyTimes*c.Parts
	if settled(low) || !settled(high) {
		return
	}
	for high-low > 1 { // settled(high), not settled(low)
		if mid := low + (high-low)/2; settled(mid) {
			high = mid
		} else {
			low = mid
		}
	}
	c.More = high - c.Parts
}

// shareOfParts projects a share of parts.
func shareOfParts(share, confidence float64) projection {
	return func(parts float64) interval.Interval {
		return interval.Exact(share*parts, parts, interval.EachSide(confidence))
	}
}

// rateOverCalls projects a rate over calls: the limits of
// interval.KornGraubard in a study that holds each part of this one so many
// times, which need not be a whole number.
func rateOverCalls(clusters []interval.Cluster, confidence float64) projection {
	now := interval.KornGraubard(clusters, confidence)
	rate, calls, n := now.Value, float64(now.Calls), float64(now.Parts)
	if now.Events == 0 || now.Events == now.Calls || now.Parts < 2 {
		return shareOfParts(rate, confidence)
	}
	squares := 0.0
	for _, c := range clusters {
		d := float64(c.Events) - rate*float64(c.Calls)
		squares += d * d * float64(c.Parts)
	}
	tail := 1 - (1+interval.EachSide(confidence))/2
	return func(parts float64) interval.Interval {
		callsThen := calls * parts / n
		effective := callsThen
		if variance := squares * n / (parts - 1) / (calls * calls); variance > 0 {
			effective = min(callsThen, rate*(1-rate)/variance)
		}
		if t := student(tail, parts-1); t < 0 {
			ratio := min(1, student(tail, callsThen-1)/t)
			effective *= ratio * ratio
		}
		i := interval.Exact(rate*effective, effective, interval.EachSide(confidence))
		none, all := interval.Exact(0, parts, interval.EachSide(confidence)), interval.Exact(parts, parts, interval.EachSide(confidence))
		return interval.Interval{Lower: min(i.Lower, all.Lower), Upper: max(i.Upper, none.Upper)}
	}
}

// coefficient projects a kappa on so many parts: the distance of its limits
// shrinks with the square root of the number of parts or, where nothing
// disagreed and the limit is that of a share without an event, with the
// number itself.
func coefficient(e agreement.Estimate, n int) projection {
	return func(parts float64) interval.Interval {
		shrink := math.Sqrt(float64(n) / parts)
		if e.Value == 1 {
			shrink *= shrink
		}
		return interval.Interval{
			Lower: e.Value + (e.OneSided.Lower-e.Value)*shrink,
			Upper: e.Value + (e.OneSided.Upper-e.Value)*shrink,
		}
	}
}

// student is the quantile of Student's t. Of very many degrees of freedom it
// is the normal one.
func student(p, df float64) float64 {
	if df < 1e7 {
		if q := (distuv.StudentsT{Mu: 0, Sigma: 1, Nu: df}).Quantile(p); !math.IsNaN(q) {
			return q
		}
	}
	return distuv.UnitNormal.Quantile(p)
}

// withoutError returns how many parts, all called right, show an error rate
// of at most level: the fewest with (1 − level)ⁿ at most 1 − confidence. It
// is 0 where no number does.
func withoutError(level, confidence float64) int {
	if level <= 0 || level >= 1 {
		return 0
	}
	n := max(1, int(math.Log1p(-confidence)/math.Log1p(-level))-1)
	for interval.UpperLimit(0, n, confidence) > level {
		n++
	}
	return n
}
