package interval

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// Cluster is what happened on one part, or on several parts alike: of Calls
// calls on each part, Events were events (misses, say). Parts is how many
// parts were so; 0 counts as one.
type Cluster struct {
	Events, Calls, Parts int
}

func (c Cluster) parts() int { return max(1, c.Parts) }

// check panics unless c is what can have happened on parts, which together
// with calls on others can be counted.
func (c Cluster) check(calls int) {
	if c.Events < 0 || c.Events > c.Calls || c.Parts < 0 {
		panic(fmt.Sprintf("interval: a cluster of %d events in %d calls on each of %d parts, want counts of at least 0 and no more events than calls", c.Events, c.Calls, c.Parts))
	}
	if c.Calls > (math.MaxInt-calls)/c.parts() {
		panic("interval: more calls than an int counts")
	}
}

// Rate is a rate over calls that come several to a part.
type Rate struct {
	// Interval is never surer than the number of parts allows: its upper limit
	// is not below that of no event on so many parts, its lower one not above
	// that of nothing but events.
	Interval
	// Published is the interval as Korn & Graubard published it, for
	// comparison with other programs. The variance between parts of a few
	// events on one or two parts is itself so uncertain that the effective
	// number of calls can come out as the number of calls, and one miss then
	// shows what no miss cannot: of 16 parts called three times, no miss
	// leaves a rate of up to 20.6 % possible at 95 %, one miss 12.1 %.
	Published     Interval
	Value         float64 // events / calls; 0 without any call
	Events, Calls int
	Parts         int     // parts with a call
	Effective     float64 // the number of independent calls that would be worth as much
}

// KornGraubard returns the rate of events over calls and the exact interval
// on the effective number of calls (Korn & Graubard, Survey Methodology 24
// (1998) 193–201), widened where it would be surer than the number of parts
// allows. The variance of the rate is taken between parts, by
// linearising the ratio; the effective number is never above the real one,
// and is reduced for the few parts that the variance is estimated from, by
// (t(calls−1) / t(parts−1))².
//
// With no event, with nothing but events, or with a single part, the
// variance between parts says nothing: the interval is then the exact one on
// the number of parts. Without any call the interval is [0, 1].
//
// A one-sided limit at 95 % is that of KornGraubard(clusters, EachSide(0.95)).
// KornGraubard panics if a count is negative, if there are more events than
// calls, or if confidence is not a fraction.
func KornGraubard(clusters []Cluster, confidence float64) Rate {
	checkConfidence(confidence)
	var r Rate
	for _, c := range clusters {
		c.check(r.Calls)
		if c.Calls > 0 {
			r.Events += c.Events * c.parts()
			r.Calls += c.Calls * c.parts()
			r.Parts += c.parts()
		}
	}
	r.publish(clusters, confidence)
	r.Interval = r.Published
	if r.Parts > 0 {
		none, all := ClopperPearson(0, r.Parts, confidence), ClopperPearson(r.Parts, r.Parts, confidence)
		r.Interval = Interval{Lower: min(r.Lower, all.Lower), Upper: max(r.Upper, none.Upper)}
	}
	return r
}

// publish fills in the value, the effective number of calls and the published
// interval of a rate whose counts are known.
func (r *Rate) publish(clusters []Cluster, confidence float64) {
	if r.Calls == 0 {
		r.Published = Interval{0, 1}
		return
	}
	events, calls, parts := float64(r.Events), float64(r.Calls), float64(r.Parts)
	r.Value = events / calls
	if r.Events == 0 || r.Events == r.Calls || r.Parts == 1 {
		r.Effective = parts
		r.Published = Exact(r.Value*parts, parts, confidence).with(r.Value)
		return
	}
	var variance float64
	for _, c := range clusters {
		d := float64(c.Events) - r.Value*float64(c.Calls)
		variance += d * d * float64(c.parts())
	}
	variance *= parts / (parts - 1) / (calls * calls)
	r.Effective = calls
	if variance > 0 {
		r.Effective = min(calls, r.Value*(1-r.Value)/variance)
	}
	tail := (1 - confidence) / 2
	if t := studentQuantile(tail, parts-1); t < 0 { // with no confidence both are 0, and near it, inexact
		ratio := min(1, studentQuantile(tail, calls-1)/t)
		r.Effective *= ratio * ratio
	}
	r.Published = Exact(r.Value*r.Effective, r.Effective, confidence).with(r.Value)
}

func studentQuantile(p, df float64) float64 {
	if df > 1e7 { // indistinguishable, and the series for t grows slow
		return distuv.UnitNormal.Quantile(p)
	}
	q := distuv.StudentsT{Mu: 0, Sigma: 1, Nu: df}.Quantile(p)
	if math.IsNaN(q) {
		return distuv.UnitNormal.Quantile(p)
	}
	return q
}
