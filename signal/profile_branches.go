package signal

import (
	"cmp"
	"math"
	"slices"
)

// With two limits whose zones overlap, the likelihood with one parameter held
// can have several maxima: both cuts near each other in a wide band, one limit
// that takes over what the other did, a curve so wide that it is flat. The
// profile is the highest of them, which need not be the one reached from the
// fit by small steps: that one may end, or fall below another.

const (
	zonesApart    = 0.99 // acceptance midway between the cuts, from which on neither limit matters at the other
	branchParts   = 2000 // so many parts leave no other maximum within reach of a cut-off
	branchesTried = 6
	creeping      = 1e-4 // log-likelihood that may remain to be gained along a ridge without end
)

// bound walks from the best value in steps that start at first, and returns
// where the profile reaches target. Where the zones overlap, what was found is
// held against the other maxima; if one is higher, the walk is done anew along
// the highest.
func (p *profiler) bound(first, reach, target float64) (float64, ending) {
	p.restart()
	from := p.best[p.param]
	at, end := crossing(from, first, reach, target, p.root)
	if end == level || !p.manyMaxima() {
		return at, end
	}
	if end == crossed && p.highest(at) > target-closeToTarget {
		return at, end
	}
	p.restart()
	return crossing(from, first, reach, target, p.highest)
}

// manyMaxima tells whether other maxima must be reckoned with.
func (p *profiler) manyMaxima() bool {
	m := p.s.m
	if len(m.groups) != 1 || len(m.x) > branchParts || m.groups[0].cut[0] == absent || m.groups[0].cut[1] == absent {
		return false
	}
	return m.midway(p.best) < zonesApart || m.midway(p.last) < zonesApart
}

// midway is the acceptance in the middle between the cuts.
func (m *model) midway(theta []float64) float64 {
	var c curveAt
	c.set(m, theta, 0)
	var t term
	t.at(m.link, c.z(c.cut[0]/2+c.cut[1]/2), c.has, 0, 0, 0)
	return t.p
}

// highest is root over all maxima that are found, and leaves the highest as the
// one to follow.
func (p *profiler) highest(value float64) float64 {
	least := p.root(value)
	best := append([]float64(nil), p.s.theta...)
	for _, start := range p.elsewhere(value) {
		copy(p.s.theta, start)
		out := p.s.climb(p.param, profileTolerance)
		if r := math.Sqrt(2 * math.Max(0, p.loglik-out.loglik)); out.converged || finite(out.loglik) && out.decrement < creeping {
			if !(r >= least) {
				least = r
				copy(best, p.s.theta)
			}
		}
	}
	if !math.IsNaN(least) {
		copy(p.last, best)
		clear(p.slope)
	}
	return least
}

// elsewhere returns points to start from with the parameter held at value: those
// of the highest likelihood out of a grid over what a curve may be, the lesser
// maxima that the fit met, and the flat curve, where there is one.
func (p *profiler) elsewhere(value float64) [][]float64 {
	var c candidates
	p.grid(value, func(theta []float64) { c.add(p.s, theta) })
	out := c.likeliest(branchesTried, 0.7)
	for _, other := range p.others {
		theta := append([]float64(nil), other...)
		theta[p.param] = value
		out = append(out, theta)
	}
	if flat := p.flat(value); flat != nil {
		out = append(out, flat)
	}
	return out
}

// candidates are points to start from, with their log-likelihood.
type candidates []candidate

type candidate struct {
	theta  []float64
	loglik float64
}

// add adds a point, unless the calls are impossible there.
func (c *candidates) add(s *solver, theta []float64) {
	if l := s.eval(theta, s.tgrad, s.thess); !math.IsInf(l, -1) {
		*c = append(*c, candidate{append([]float64(nil), theta...), l})
	}
}

// likeliest returns the n points of the highest likelihood, none nearer to
// another than apart in every parameter.
func (c candidates) likeliest(n int, apart float64) [][]float64 {
	slices.SortStableFunc(c, func(a, b candidate) int { return cmp.Compare(b.loglik, a.loglik) })
	var out [][]float64
	for _, x := range c {
		if len(out) == n {
			break
		}
		if !slices.ContainsFunc(out, func(o []float64) bool { return farthest(o, x.theta) < apart }) {
			out = append(out, x.theta)
		}
	}
	return out
}

// farthest is the largest difference between two points in a parameter.
func farthest(a, b []float64) float64 {
	most := 0.0
	for i := range a {
		most = math.Max(most, math.Abs(a[i]-b[i]))
	}
	return most
}

// grid calls f with curves of narrow to wide zones and near to far cuts, in
// scaled units, that have the parameter held at value.
func (p *profiler) grid(value float64, f func(theta []float64)) {
	g := p.s.m.groups[0]
	theta := make([]float64, len(p.best))
	logs := []float64{-2.5, -1, 0.5}
	if g.logSigma[0] != g.logSigma[1] {
		logs = append(logs, 2.5, p.s.high)
	}
	set := func(low, high, logL, logU float64) {
		copy(theta, p.best)
		theta[g.cut[0]], theta[g.cut[1]] = low, high
		theta[g.logSigma[0]], theta[g.logSigma[1]] = logL, logU
		theta[p.param] = value
		f(theta)
	}
	// sigmas calls set with each σ there is to try about a pair of cuts.
	sigmas := func(low, high float64) {
		for _, a := range logs {
			if g.logSigma[0] == g.logSigma[1] {
				set(low, high, a, a)
				continue
			}
			for _, b := range logs {
				set(low, high, a, b)
			}
		}
	}
	gaps := [...]float64{0.1, 0.5, 1.5}
	switch p.param {
	case g.cut[0]:
		for _, d := range gaps {
			sigmas(value, value+d)
		}
		sigmas(value, p.best[g.cut[1]])
		sigmas(value, 0)
		sigmas(value, 1)
	case g.cut[1]:
		for _, d := range gaps {
			sigmas(value-d, value)
		}
		sigmas(p.best[g.cut[0]], value)
		sigmas(-1, value)
		sigmas(0, value)
	default:
		for _, middle := range [...]float64{-1, -0.5, 0, 0.5, 1} {
			for _, d := range gaps {
				sigmas(middle-d/2, middle+d/2)
			}
		}
	}
}

// flat returns a curve so wide that acceptance is nearly the same at every
// value, with a cut held at value: that is possible where less than half of
// the calls accept.
func (p *profiler) flat(value float64) []float64 {
	m, g := p.s.m, p.s.m.groups[0]
	if p.param != g.cut[0] && p.param != g.cut[1] {
		return nil
	}
	var accepted, calls float64
	for i := range m.x {
		accepted, calls = accepted+m.accepted[i], calls+m.accepted[i]+m.rejected[i]
	}
	share := accepted / calls
	if !(share > 0 && share < 0.49) {
		return nil
	}
	logSigma := p.s.high
	theta := append([]float64(nil), p.best...)
	apart := -m.link.quantile(0.5-share) * math.Exp(logSigma)
	theta[g.cut[0]], theta[g.cut[1]] = value-apart, value+apart
	theta[g.logSigma[0]], theta[g.logSigma[1]] = logSigma, logSigma
	theta[p.param] = value
	return theta
}
