package signal

import (
	"math"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/optimize"
)

// solver maximises a model's likelihood over some of its parameters by
// Newton's method, damped where the Hessian is not negative definite or a full
// step does not climb (Levenberg–Marquardt). It keeps its buffers, so that the
// hundreds of constrained fits behind a profile allocate nothing.
//
// Every log σ stays within bounds: beyond the lower one a curve is a step,
// beyond the upper one it is flat, to any precision that calls could tell.
type solver struct {
	m            *model
	low, high    float64 // bounds of log σ
	isLogSigma   []bool
	theta        []float64 // the point reached
	grad, hess   []float64
	trial        []float64
	tgrad, thess []float64
	step         []float64
	free         []int
	a            *mat.SymDense
	g            *mat.VecDense
	s            *mat.VecDense
	chol         mat.Cholesky
	evals        int
}

// outcome says how a maximisation ended.
type outcome struct {
	loglik    float64
	converged bool
	atBound   bool    // a log σ rests on a bound
	decrement float64 // ½ gᵀ(−H)⁻¹g at the last point: the log-likelihood still to be gained, to second order
	kink      int     // the part at which the curve falls to 0 there, or absent
}

const (
	logSigmaLow  = -27 // of the half range of the values: 2e-12
	logSigmaHigh = 16
)

func newSolver(m *model) *solver {
	n := m.n
	s := &solver{
		m: m, low: logSigmaLow, high: logSigmaHigh,
		isLogSigma: make([]bool, n), theta: make([]float64, n), grad: make([]float64, n), hess: make([]float64, n*n),
		trial: make([]float64, n), tgrad: make([]float64, n), thess: make([]float64, n*n), step: make([]float64, n), free: make([]int, 0, n),
	}
	for _, g := range m.groups {
		for k := range 2 {
			if g.cut[k] != absent {
				s.isLogSigma[g.logSigma[k]] = true
			}
		}
	}
	return s
}

// noLapse is the logit of a lapse rate that is none: less than one call in a
// million.
const noLapse = -14

// maximise climbs from s.theta over every parameter but those held. tol is the
// log-likelihood that may remain to be gained.
func (s *solver) maximise(held int, tol float64) outcome {
	n := s.m.n
	s.clamp(s.theta)
	l := s.eval(s.theta, s.grad, s.hess)
	out := outcome{loglik: l, kink: absent}
	if math.IsInf(l, -1) {
		return out
	}
	tau := 0.0
	for range 200 {
		// The free parameters: not held, and not pressed against a bound.
		s.free = s.free[:0]
		out.atBound = false
		for i := range n {
			if i == held {
				continue
			}
			if s.isLogSigma[i] && (s.theta[i] <= s.low && s.grad[i] <= 0 || s.theta[i] >= s.high && s.grad[i] >= 0) {
				out.atBound = true
				continue
			}
			s.free = append(s.free, i)
		}
		if at := s.m.lapse; at != absent && at != held && s.theta[at] < noLapse && s.grad[at] < 0 {
			return out // towards no lapses at all, which has no end on this scale
		}
		if len(s.free) == 0 {
			out.converged, out.decrement = true, 0
			return out
		}
		damped, ok := s.direction(tau)
		for !ok {
			tau = math.Max(1e-3, 4*tau)
			if tau > 1e12 {
				return out
			}
			damped, ok = s.direction(tau)
		}
		if damped == 0 {
			tau = 0
		}
		decrement := 0.0
		for j, i := range s.free {
			decrement += s.step[j] * s.grad[i] / 2
		}
		out.decrement = decrement
		// A damped step is shorter by so much, and so is what it promises.
		small := decrement*(1+damped) <= tol
		s.limit()
		copy(s.trial, s.theta)
		for j, i := range s.free {
			s.trial[i] += s.step[j]
		}
		s.clamp(s.trial)
		tl := s.eval(s.trial, s.tgrad, s.thess)
		// Near the top the gain is below the rounding of the log-likelihood.
		if tl >= l-1e-13*(1+math.Abs(l)) {
			s.theta, s.trial = s.trial, s.theta
			s.grad, s.tgrad = s.tgrad, s.grad
			s.hess, s.thess = s.thess, s.hess
			l = tl
			out.loglik = l
			if tau /= 8; tau < 1e-6 {
				tau = 0
			}
			if small {
				out.converged = true
				return out
			}
			continue
		}
		if small {
			// A step that cannot climb, with nothing left to gain.
			out.converged = true
			return out
		}
		if tau = math.Max(1e-3, 8*tau); tau > 1e12 {
			return out
		}
	}
	return out
}

func (s *solver) eval(theta, grad, hess []float64) float64 {
	s.evals++
	return s.m.eval(theta, grad, hess)
}

// direction solves (−H + τD) step = gradient over the free parameters, with D
// the size of H's diagonal. ok is false unless the matrix is positive definite.
func (s *solver) direction(tau float64) (used float64, ok bool) {
	k, n := len(s.free), s.m.n
	if k == 1 {
		i := s.free[0]
		h := -s.hess[i*n+i] + tau*math.Max(math.Abs(s.hess[i*n+i]), 1e-8)
		if !(h > 0) {
			return tau, false
		}
		s.step[0] = s.grad[i] / h
		return tau, finite(s.step[0])
	}
	if s.a == nil || s.a.SymmetricDim() != k {
		s.a, s.g, s.s = mat.NewSymDense(k, nil), mat.NewVecDense(k, nil), mat.NewVecDense(k, nil)
	}
	for p, i := range s.free {
		for q := p; q < k; q++ {
			s.a.SetSym(p, q, -s.hess[i*n+s.free[q]])
		}
		s.a.SetSym(p, p, s.a.At(p, p)+tau*math.Max(math.Abs(s.hess[i*n+i]), 1e-8))
		s.g.SetVec(p, s.grad[i])
	}
	if !s.chol.Factorize(s.a) {
		return tau, false
	}
	if err := s.chol.SolveVecTo(s.s, s.g); err != nil {
		if _, illConditioned := err.(mat.Condition); !illConditioned || tau == 0 {
			return tau, false
		}
	}
	for p := range k {
		s.step[p] = s.s.AtVec(p)
		if !finite(s.step[p]) {
			return tau, false
		}
	}
	return tau, true
}

// limit shortens a step that would change a σ more than e-fold, or move a cut
// by more than the larger of a few σ and a share of the range.
func (s *solver) limit() {
	shrink := 1.0
	for j, i := range s.free {
		most := 1.0
		if !s.isLogSigma[i] {
			most = s.reach(i)
		}
		if a := math.Abs(s.step[j]); a*shrink > most {
			shrink = most / a
		}
	}
	if shrink < 1 {
		for j := range s.free {
			s.step[j] *= shrink
		}
	}
}

// reach is how far parameter i may move in one step if it is a cut.
func (s *solver) reach(i int) float64 {
	for _, g := range s.m.groups {
		for k := range 2 {
			if g.cut[k] == i {
				return 0.05 + 4*math.Exp(s.theta[g.logSigma[k]])
			}
		}
	}
	return 2 // logit ε
}

func (s *solver) clamp(theta []float64) {
	for i, is := range s.isLogSigma {
		if is {
			theta[i] = math.Min(s.high, math.Max(s.low, theta[i]))
		}
	}
	if at := s.m.lapse; at != absent {
		theta[at] = math.Min(8, math.Max(-30, theta[at]))
	}
}

// definite tells whether −H is positive definite at s.theta over all
// parameters, and returns its inverse. scaleFree tests on H scaled to a unit
// diagonal, so that the answer does not depend on the unit of a parameter.
func (s *solver) definite() (*mat.SymDense, bool) {
	n := s.m.n
	d := make([]float64, n)
	for i := range n {
		h := -s.hess[i*n+i]
		if !(h > 0) {
			return nil, false
		}
		d[i] = math.Sqrt(h)
	}
	a := mat.NewSymDense(n, nil)
	for i := range n {
		for j := i; j < n; j++ {
			a.SetSym(i, j, -s.hess[i*n+j]/d[i]/d[j])
		}
	}
	var chol mat.Cholesky
	if !chol.Factorize(a) || chol.Cond() > 1e12 {
		return nil, false
	}
	var inv mat.SymDense
	if err := chol.InverseTo(&inv); err != nil {
		return nil, false
	}
	for i := range n {
		for j := i; j < n; j++ {
			inv.SetSym(i, j, inv.At(i, j)/d[i]/d[j])
		}
	}
	return &inv, true
}

// fallback climbs by BFGS where Newton's method stalled, and leaves its best
// point in s.theta for Newton's method to finish.
func (s *solver) fallback() {
	n := s.m.n
	grad, hess := make([]float64, n), make([]float64, n*n)
	x := make([]float64, n)
	at := func(theta []float64) float64 {
		copy(x, theta)
		s.clamp(x)
		return s.eval(x, grad, hess)
	}
	problem := optimize.Problem{
		Func: func(theta []float64) float64 { return -at(theta) },
		Grad: func(to, theta []float64) {
			at(theta)
			for i := range to {
				to[i] = -grad[i]
			}
		},
	}
	// An error leaves the best point so far, which is what is wanted of it:
	// convergence is judged by Newton's method afterwards.
	r, err := optimize.Minimize(problem, append([]float64(nil), s.theta...), &optimize.Settings{MajorIterations: 300}, &optimize.BFGS{})
	if r == nil || err != nil && !finite(r.F) {
		return
	}
	if finite(r.X...) {
		copy(s.theta, r.X)
		s.clamp(s.theta)
	}
}
