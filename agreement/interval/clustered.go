package interval

import (
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

// Rate is a rate over calls that come several to a part.
type Rate struct {
	Interval
	Value         float64 // events / calls
	Events, Calls int
	Parts         int     // parts with a call
	Effective     float64 // the number of independent calls that would be worth as much
}

// KornGraubard returns the rate of events over calls and the exact interval
// on the effective number of calls (Korn & Graubard, Survey Methodology 24
// (1998) 193–201). The variance of the rate is taken between parts, by
// linearising the ratio; the effective number is never above the real one,
// and is reduced for the few parts that the variance is estimated from, by
// (t(calls−1) / t(parts−1))².
//
// With no event, with nothing but events, or with a single part, the
// variance between parts says nothing: the interval is then the exact one on
// the number of parts. Without any call the interval is [0, 1].
func KornGraubard(clusters []Cluster, confidence float64) Rate {
	var r Rate
	for _, c := range clusters {
		if c.Calls > 0 {
			r.Events += c.Events * c.parts()
			r.Calls += c.Calls * c.parts()
			r.Parts += c.parts()
		}
	}
	if r.Calls == 0 {
		r.Interval = Interval{0, 1}
		return r
	}
	events, calls, parts := float64(r.Events), float64(r.Calls), float64(r.Parts)
	r.Value = events / calls
	if r.Events == 0 || r.Events == r.Calls || r.Parts == 1 {
		r.Effective = parts
		r.Interval = Exact(r.Value*parts, parts, confidence).with(r.Value)
		return r
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
	r.Interval = Exact(r.Value*r.Effective, r.Effective, confidence).with(r.Value)
	return r
}

// NoSurerThanParts returns the interval of a rate, widened so that it is never
// surer than the number of its parts allows: the upper limit is not below that
// of no event on so many parts, the lower one not above that of nothing but
// events. The variance between parts of a few events on one or two parts is
// itself so uncertain that the effective number of calls can come out as the
// number of calls, and one miss would then show what no miss cannot.
func (r Rate) NoSurerThanParts(confidence float64) Interval {
	if r.Parts == 0 {
		return r.Interval
	}
	none, all := ClopperPearson(0, r.Parts, confidence), ClopperPearson(r.Parts, r.Parts, confidence)
	return Interval{Lower: min(r.Lower, all.Lower), Upper: max(r.Upper, none.Upper)}
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
