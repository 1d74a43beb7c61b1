package signal

import (
	"errors"
	"math"
	"slices"

	"gonum.org/v1/gonum/integrate/quad"
)

// Risk is what an inspection does to a process, as shares of all parts unless
// said otherwise. One call decides on each part.
type Risk struct {
	Escape            Estimate // bad and accepted
	EscapeLower       Estimate // thereof below the lower limit
	EscapeUpper       Estimate // thereof above the upper limit
	FalseReject       Estimate // good and rejected
	FalseRejectLower  Estimate // thereof nearer the lower limit
	FalseRejectUpper  Estimate // thereof nearer the upper limit
	Bad               Estimate // made bad; depends on the process alone
	Accepted          Estimate
	BadAmongAccepted  Estimate // share of the accepted parts; absent if none is
	GoodAmongRejected Estimate // share of the rejected parts; absent if none is
	GuardBand         float64  // by which each cut was moved inwards
}

// shares holds the parts of a process by region and call.
type shares struct {
	accepted, rejected [regions]float64
	bad                float64
	// slope is by how much accepted grows, and rejected falls, with each local
	// parameter of the curve, cuts in the unit of the values.
	slope [locals][regions]float64
}

// The regions of values: beyond the lower limit, good and nearer the lower
// limit, good and nearer the upper one, beyond the upper limit.
const (
	badLow = iota
	goodLow
	goodHigh
	badHigh
	regions
)

// The quantities of a Risk, in the order of its fields.
const (
	qEscape = iota
	qEscapeLower
	qEscapeUpper
	qFalseReject
	qFalseRejectLower
	qFalseRejectUpper
	qBad
	qAccepted
	qBadAmongAccepted
	qGoodAmongRejected
	quantities
)

func (r *Risk) fields() [quantities]*Estimate {
	return [...]*Estimate{&r.Escape, &r.EscapeLower, &r.EscapeUpper, &r.FalseReject, &r.FalseRejectLower, &r.FalseRejectUpper,
		&r.Bad, &r.Accepted, &r.BadAmongAccepted, &r.GoodAmongRejected}
}

// values returns the quantities; one that does not exist is −1.
func (s *shares) values() (v [quantities]float64) {
	v[qEscapeLower], v[qEscapeUpper] = s.accepted[badLow], s.accepted[badHigh]
	v[qEscape] = v[qEscapeLower] + v[qEscapeUpper]
	v[qFalseRejectLower], v[qFalseRejectUpper] = s.rejected[goodLow], s.rejected[goodHigh]
	v[qFalseReject] = v[qFalseRejectLower] + v[qFalseRejectUpper]
	v[qBad] = s.bad
	v[qAccepted] = v[qEscape] + s.accepted[goodLow] + s.accepted[goodHigh]
	rejected := v[qFalseReject] + s.rejected[badLow] + s.rejected[badHigh]
	v[qBadAmongAccepted], v[qGoodAmongRejected] = -1, -1
	if v[qAccepted] > 0 {
		v[qBadAmongAccepted] = v[qEscape] / v[qAccepted]
	}
	if rejected > 0 {
		v[qGoodAmongRejected] = v[qFalseReject] / rejected
	}
	for i := range v {
		v[i] = math.Min(1, v[i])
	}
	return v
}

func noShare(quantity int) Estimate {
	if quantity == qBadAmongAccepted {
		return Estimate{Absent: true, Why: "no part is accepted"}
	}
	return Estimate{Absent: true, Why: "no part is rejected"}
}

func checkRisk(p Process, g Gauge, limits Limits) error {
	if err := limits.check(); err != nil {
		return err
	}
	if len(p.Values) == 0 {
		if _, err := NormalProcess(p.Mean, p.SD); err != nil {
			return err
		}
	} else if !finite(p.Values...) {
		return errors.New("a value of the process is not a number")
	}
	if g.HasLower != limits.HasLower || g.HasUpper != limits.HasUpper {
		return errors.New("a limit and a cut go together: a cut at each limit that there is, and no other")
	}
	return g.check()
}

// nodes are the points and weights of the 16-point Gauss–Legendre rule on
// (−1, 1).
var nodes = func() (n struct{ x, w [16]float64 }) {
	quad.Legendre{}.FixedLocations(n.x[:], n.w[:], -1, 1)
	return n
}()

// shares gives the shares of a process by region and call.
func (p Process) shares(g Gauge, limits Limits) shares {
	if len(p.Values) > 0 {
		return p.sampledShares(g, limits)
	}
	return p.normalShares(g, limits)
}

// bounds are the lower limit, the middle between the limits and the upper limit,
// infinite where there is none.
func (l Limits) bounds() (lower, middle, upper float64) {
	lower, upper = math.Inf(-1), math.Inf(1)
	if l.HasLower {
		lower = l.Lower
	}
	if l.HasUpper {
		upper = l.Upper
	}
	switch {
	case l.HasLower && l.HasUpper:
		middle = l.Lower/2 + l.Upper/2
	case l.HasUpper:
		middle = math.Inf(-1)
	default:
		middle = math.Inf(1)
	}
	return lower, middle, upper
}

// region tells where a value lies. A value on a limit is good.
func region(x, lower, middle, upper float64) int {
	switch {
	case x < lower:
		return badLow
	case x > upper:
		return badHigh
	case x >= middle:
		return goodHigh
	}
	return goodLow
}

// sampledShares adds up the values.
func (p Process) sampledShares(g Gauge, limits Limits) (s shares) {
	lower, middle, upper := limits.bounds()
	each := 1 / float64(len(p.Values))
	for _, x := range p.Values {
		r := region(x, lower, middle, upper)
		s.add(r, each, g, x)
		if r == badLow || r == badHigh {
			s.bad += each
		}
	}
	return s
}

// normalShares integrates acceptance over a normal process. It works in standard
// deviations from the mean, so that 250 mm ± 0.02 µm keeps its digits; each of
// the pieces takes 16 Gauss–Legendre points, and the integrand is smooth within
// a piece however unequal the two σs are.
func (p Process) normalShares(g Gauge, limits Limits) (s shares) {
	in := func(x float64) float64 { return (x - p.Mean) / p.SD }
	lower, middle, upper := limits.bounds()
	lower, middle, upper = in(lower), in(middle), in(upper)
	s.bad = normalCDF(lower) + normalCDF(-upper)
	g.LowerCut, g.UpperCut, g.LowerSigma, g.UpperSigma = in(g.LowerCut), in(g.UpperCut), g.LowerSigma/p.SD, g.UpperSigma/p.SD
	var room [128]float64
	cuts := g.pieces(room[:0], lower, middle, upper)
	for i := 1; i < len(cuts); i++ {
		a, b := cuts[i-1], cuts[i]
		if !(b > a) {
			continue
		}
		half, centre := (b-a)/2, a+(b-a)/2
		r := region(centre, lower, middle, upper)
		for k, x := range nodes.x {
			t := centre + half*x
			s.add(r, half*nodes.w[k]*normalDensity(t), g, t)
		}
	}
	for r := range regions {
		s.slope[cutL][r] /= p.SD
		s.slope[cutU][r] /= p.SD
	}
	return s
}

// pieces appends the points between which acceptance by a gauge is smooth over a
// standard normal process: its range of ±12, whole standard deviations, the
// limits and their middle, and multiples of each σ about its cut.
func (g Gauge) pieces(cuts []float64, lower, middle, upper float64) []float64 {
	const reach = 12
	for k := -reach; k <= reach; k++ {
		cuts = append(cuts, float64(k))
	}
	add := func(t float64) {
		if t > -reach && t < reach {
			cuts = append(cuts, t)
		}
	}
	add(lower)
	add(middle)
	add(upper)
	around := func(cut, sigma float64) {
		add(cut)
		for _, k := range [...]float64{0.5, 1, 1.5, 2, 3, 4, 5, 6, 7, 8, 10, 12, 16, 20, 28, 36} {
			add(cut - k*sigma)
			add(cut + k*sigma)
		}
	}
	if g.HasLower {
		around(g.LowerCut, g.LowerSigma)
	}
	if g.HasUpper {
		around(g.UpperCut, g.UpperSigma)
	}
	slices.Sort(cuts)
	return cuts
}

// add adds so many parts of value x.
func (s *shares) add(region int, weight float64, g Gauge, x float64) {
	accept, reject, slope := g.accept(x)
	s.accepted[region] += weight * accept
	s.rejected[region] += weight * reject
	for i := range locals {
		s.slope[i][region] += weight * slope[i]
	}
}

// Assess returns the risk of an inspection in a process, each cut moved inwards
// by guard. Of a fitted curve the intervals carry its uncertainty (the process
// is taken as given). They are profile-likelihood: the extremes over all curves
// within the likelihood's cut-off, widened where lack of fit widens the rest.
// Where a limit is separated there is no covariance; the intervals
// then span the risks at the corners of the intervals of cuts and σs, which is
// cautious, and a σ without lower bound counts as a step. A Known inspection
// has no intervals.
//
// It returns an error if the curve has no cut at one of its limits, or process,
// gauge or limits are not usable.
func Assess(p Process, in Inspection, guard float64) (Risk, error) {
	g, limits, err := cutsOf(in)
	if err != nil {
		return Risk{}, err
	}
	if !finite(guard) {
		return Risk{}, errors.New("the guard band is not a number")
	}
	g = g.Tighten(guard)
	if err := checkRisk(p, g, limits); err != nil {
		return Risk{}, err
	}
	s := p.shares(g, limits)
	v := s.values()
	r := Risk{GuardBand: guard}
	for i, e := range r.fields() {
		*e = Estimate{Value: v[i]}
		if v[i] < 0 {
			*e = noShare(i)
		}
	}
	in.bound(p, g, &r, v)
	return r, nil
}

// profile fills intervals by profile likelihood.
func (c *Curve) profile(p Process, r *Risk, v [quantities]float64) {
	method := profileMethod
	if c.LackOfFit.Applied {
		method = profileWidened
	}
	region := newRiskProfile(c, p, r.GuardBand)
	for q, e := range r.fields() {
		if q == qBad || e.Absent {
			continue
		}
		e.Method = method
		if !inUnit(v[q]) { // none or all, to any precision
			e.Lower, e.Upper, e.HasLower, e.HasUpper = v[q], v[q], true, true
			continue
		}
		e.Lower, e.HasLower = region.limit(q, -1)
		e.Upper, e.HasUpper = region.limit(q, 1)
		if !e.HasLower || !e.HasUpper {
			e.Why = whyNoLimit
		}
	}
}

const whyNoLimit = "no verified limit of the likelihood was found"

func inUnit(x float64) bool { return x > 1e-300 && x < 1-1e-15 }

func logit(x float64) float64 { return math.Log(x) - math.Log1p(-x) }

// corners fills intervals by the extremes over the corners of the intervals of
// cuts and σs.
func (c *Curve) corners(p Process, g Gauge, r *Risk, v [quantities]float64) {
	lo, hi := v, v
	const step = 1e-9 // of σ: a curve that is a step
	type choice struct{ cut, sigma [2]float64 }
	var ends [2]choice
	var has [2]bool
	open := false
	for k := range 2 {
		l := c.side(k)
		if l == nil {
			continue
		}
		has[k] = true
		ends[k] = choice{cut: [2]float64{l.Cut.Value, l.Cut.Value}, sigma: [2]float64{l.Sigma.Value * step, l.Sigma.Value}}
		if l.Cut.HasLower {
			ends[k].cut[0] = l.Cut.Lower
		}
		if l.Cut.HasUpper {
			ends[k].cut[1] = l.Cut.Upper
		}
		if l.Sigma.HasLower {
			ends[k].sigma[0] = l.Sigma.Lower
		}
		if l.Sigma.HasUpper {
			ends[k].sigma[1] = l.Sigma.Upper
		}
		open = open || !l.Cut.HasLower || !l.Cut.HasUpper || !l.Sigma.HasUpper
	}
	for corner := range 16 {
		if !has[0] && corner&3 != 0 || !has[1] && corner&12 != 0 {
			continue
		}
		h := g
		if has[0] {
			h.LowerCut, h.LowerSigma = ends[0].cut[corner&1]+r.GuardBand, ends[0].sigma[corner>>1&1]
		}
		if has[1] {
			h.UpperCut, h.UpperSigma = ends[1].cut[corner>>2&1]-r.GuardBand, ends[1].sigma[corner>>3&1]
		}
		s := p.shares(h, c.Limits)
		for q, x := range s.values() {
			if x >= 0 {
				lo[q], hi[q] = math.Min(lo[q], x), math.Max(hi[q], x)
			}
		}
	}
	for q, e := range r.fields() {
		if q == qBad || e.Absent {
			continue
		}
		if open {
			e.Why = "at a limit without mixed parts the calls do not bound cut and σ"
			continue
		}
		e.Lower, e.Upper, e.HasLower, e.HasUpper = lo[q], hi[q], true, true
		e.Method = "extremes over the intervals of cuts and σ"
	}
}
