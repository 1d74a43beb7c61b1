package signal

import "math"

// With a σ for each limit F(z_L) − F(z_U) falls below 0 beyond some value on the
// side of the wider one, and the probability there is 0. A part that was only
// rejected costs nothing there: the likelihood has a kink where the curve falls
// to 0 at such a part, and its highest point may lie on the kink. Newton's
// method cannot end there, and the fit is not one of the model: it would have
// parts of that value never accepted, on the strength of where it crosses 0.
//
// The kink is rounded, less and less, to find the point all the same: the
// probability P of a part that was only rejected is replaced by
// (P + √(P² + 4w²))/2, which is P where P is much above w and 0 much below −w.

// softest and hardest are the first and the last w.
const (
	softest = 1e-3
	hardest = 1e-8
)

// kinked tells whether the likelihood can have a kink.
func (m *model) kinked() bool {
	g := m.groups[0]
	return len(m.groups) == 1 && g.cut[0] != absent && g.cut[1] != absent && g.logSigma[0] != g.logSigma[1] && m.lapse == absent && m.epsilon == 0
}

// soften replaces the log-likelihood of a part with r calls, all rejected, and its
// first derivative by the rounded ones, and returns minus the second derivative
// by P that the rounding adds.
func (t *term) soften(w, r float64) (bend float64) {
	p := t.plainP
	if p > 0.5 {
		return 0
	}
	root := math.Sqrt(p*p + 4*w*w)
	soft, slope := (p+root)/2, (1+p/root)/2
	if p < 0 { // without cancellation
		soft = 2 * w * w / (root - p)
		slope = soft / root
	}
	t.loglik = r * math.Log1p(-soft)
	for k := range 2 {
		t.overQ[k] = t.densities[k] * slope / (1 - soft)
	}
	return r * 2 * w * w / (root * root * root) / (1 - soft)
}

// climb is maximise, and where that does not end at a maximum it looks for one
// on a kink.
func (s *solver) climb(held int, tol float64) outcome {
	out := s.maximise(held, tol)
	if out.converged || math.IsInf(out.loglik, -1) || !s.m.kinked() {
		return out
	}
	for w := softest; w >= hardest; w /= 10 {
		s.m.soft = w
		out = s.maximise(held, math.Max(tol, 1e-10))
	}
	out.kink = s.onKink()
	s.m.soft = 0
	out.loglik = s.eval(s.theta, s.grad, s.hess)
	return out
}

// onKink returns the part whose kink holds the point reached, or absent: the one
// at which the rounded curve is neither on the one side nor on the other.
func (s *solver) onKink() int {
	var c curveAt
	c.set(s.m, s.theta, 0)
	most, at := 1e-3, absent
	var t term
	for i, x := range s.m.x {
		if s.m.accepted[i] > 0 {
			continue
		}
		t.at(s.m.link, c.z(x), c.has, 0, s.m.rejected[i], 0)
		share := (1 + t.plainP/math.Hypot(t.plainP, 2*s.m.soft)) / 2
		if pull := share * (1 - share) * s.m.rejected[i] * (t.densities[0] + t.densities[1]); pull > most {
			most, at = pull, i
		}
	}
	return at
}
