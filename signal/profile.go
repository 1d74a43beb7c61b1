package signal

import "math"

// ending says how the walk along a profile ended.
type ending int

const (
	crossed ending = iota // the profile reaches the target
	level                 // it does not within reach
	jumps                 // it jumps past the target, where one constrained maximum gives way to another
	failed                // constrained fits did not converge
)

// crossing walks from inside, where root is below target, in steps that start
// at first, until root reaches target, and closes in on the value where it
// does. root is the signed-root deviance, which grows nearly in proportion to
// the distance, so that a secant finds the crossing in a few evaluations. The
// value returned means something where the profile is crossed or jumps. Where a
// constrained fit does not converge, root returns NaN and a shorter step is
// tried, since each fit starts from the one before.
func crossing(inside, first, reach, target float64, root func(float64) float64) (float64, ending) {
	lo, rlo := inside, 0.0
	step := first
	var hi, rhi float64
	for tries := 0; ; tries++ {
		if math.Abs(lo-inside) >= reach || tries > 60 {
			return 0, level
		}
		if hi = lo + step; math.Abs(hi-inside) > reach {
			hi = inside + math.Copysign(reach, step)
		}
		rhi = root(hi)
		if math.IsNaN(rhi) {
			if step /= 3; math.Abs(step) < 1e-4*math.Abs(first) {
				return 0, failed
			}
			continue
		}
		if rhi >= target {
			break
		}
		grow := 2.0
		if rhi > rlo {
			grow = math.Min(3, math.Max(0.1, 1.02*(target-rhi)/(rhi-rlo)))
		}
		lo, rlo = hi, rhi
		step *= grow
	}
	// Illinois: a secant that never leaves the bracket.
	flo, fhi := rlo-target, rhi-target
	side := 0
	for range 60 {
		if fhi == 0 {
			return hi, crossed
		}
		mid := (lo*fhi - hi*flo) / (fhi - flo)
		if !(math.Min(lo, hi) < mid && mid < math.Max(lo, hi)) {
			mid = lo + (hi-lo)/2
		}
		r := root(mid)
		for shorter := 0; math.IsNaN(r); shorter++ {
			if shorter == 10 {
				return 0, failed
			}
			mid = lo + (mid-lo)/2
			r = root(mid)
		}
		f := r - target
		if math.Abs(f) < 1e-8 {
			return mid, crossed
		}
		if f < 0 {
			lo, flo = mid, f
			if side == -1 {
				fhi /= 2
			}
			side = -1
		} else {
			hi, fhi = mid, f
			if side == 1 {
				flo /= 2
			}
			side = 1
		}
		if math.Abs(hi-lo) <= 1e-12*math.Abs(first) {
			break
		}
	}
	// A bracket that has closed holds a crossing only if the profile is near the
	// target there.
	at := lo + (hi-lo)/2
	if r := root(at); math.Abs(r-target) < closeToTarget {
		return at, crossed
	}
	return at, jumps
}

// closeToTarget is how far from its target a profile may be at its bound, as a
// root of twice the log-likelihood: the fits leave that much and less.
const closeToTarget = 1e-3

// found is the value of a walk that ended in a crossing, and whether it did.
func found(at float64, end ending) (float64, bool) {
	if end != crossed {
		return 0, false
	}
	return at, true
}

// profiler finds likelihood-ratio limits of one parameter of a fitted model.
type profiler struct {
	s       *solver
	best    []float64 // maximum likelihood, or the point to start from under separation
	loglik  float64   // its supremum
	slope   []float64 // how the other parameters move with the one held, to first order
	first   []float64 // slope at the maximum
	tangent bool      // slope is known and kept up to date
	param   int
	last    []float64   // previous solution
	held    []float64   // best with the parameter held
	others  [][]float64 // lesser maxima of the likelihood
}

// newProfiler returns a profiler of parameter param. covariance may be nil.
func newProfiler(s *solver, best []float64, loglik float64, covariance func(i, j int) float64, param int) *profiler {
	p := &profiler{s: s, best: best, loglik: loglik, param: param, slope: make([]float64, len(best)), last: append([]float64(nil), best...)}
	if covariance != nil {
		for i := range p.slope {
			p.slope[i] = covariance(i, param) / covariance(param, param)
		}
		p.tangent = true
	}
	p.first = append([]float64(nil), p.slope...)
	return p
}

// root is the square root of twice the log-likelihood lost by holding the
// parameter at value.
func (p *profiler) root(value float64) float64 {
	d := value - p.last[p.param]
	for i := range p.last {
		p.s.theta[i] = p.last[i] + p.slope[i]*d
	}
	p.s.theta[p.param] = value
	out := p.s.climb(p.param, profileTolerance)
	if !out.converged {
		copy(p.s.theta, p.best)
		p.s.theta[p.param] = value
		if out = p.s.climb(p.param, profileTolerance); !out.converged {
			return math.NaN()
		}
	}
	// Coming back from far out, the fit before can lead to a lesser maximum:
	// the point to start from, with the parameter held, must not beat it.
	if p.held == nil {
		p.held = make([]float64, len(p.best))
	}
	copy(p.held, p.best)
	p.held[p.param] = value
	if p.s.eval(p.held, p.s.grad, p.s.hess) > out.loglik+1e-9 {
		copy(p.s.theta, p.held)
		if out = p.s.climb(p.param, profileTolerance); !out.converged {
			return math.NaN()
		}
	}
	if d != 0 && p.tangent {
		for i := range p.slope {
			p.slope[i] = (p.s.theta[i] - p.last[i]) / d
		}
	}
	copy(p.last, p.s.theta)
	return math.Sqrt(2 * math.Max(0, p.loglik-out.loglik))
}

// restart goes back to the first point.
func (p *profiler) restart() {
	copy(p.last, p.best)
	copy(p.slope, p.first)
}

// profileTolerance is the log-likelihood that a constrained fit may leave to be
// gained before its last Newton step, which squares it.
const profileTolerance = 1e-8
