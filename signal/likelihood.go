package signal

import (
	"math"
)

// absent marks a parameter that a model does not have.
const absent = -1

// indices says which entries of the parameter vector θ belong to one group of
// parts: the cuts, and the logarithms of the σs. Where both limits share a σ,
// logSigma holds the same index twice.
type indices struct {
	cut, logSigma [2]int
}

// model is the likelihood of acceptance curves over parts in one or several
// groups (appraisers):
//
//	P(accept | x) = ε/2 + (1−ε) (F(z_L) − F(z_U)),  z = (x−cut)/σ + shift
//
// Values are scaled. A shift of F⁻¹(p) makes "cut" the value at which the
// limit's own factor is p rather than one half.
type model struct {
	link     Link
	x        []float64 // scaled value
	accepted []float64
	rejected []float64
	first    []int     // group g is parts first[g] up to first[g+1]
	groups   []indices // one for each group
	n        int       // parameters
	lapse    int       // index of logit ε, or absent
	epsilon  float64   // ε where it is fixed
	shift    [2]float64
	soft     float64 // how much the kink is rounded where the curve falls to 0 (kink.go)
}

// term holds the pieces of one part's log-likelihood at (z_L, z_U): each
// density over P and over Q = 1 − P, and f′/f. A limit that the model does not
// have, and a kind of call that the part does not have, leave zeros.
type term struct {
	loglik          float64
	p, q            float64 // P and Q
	overP, overQ    [2]float64
	ratio           [2]float64
	possible        bool    // false where the part's calls have probability 0
	plainP          float64 // F(z_L) − F(z_U), without lapses
	densities       [2]float64
	epsilonGradient float64 // ½ − plainP
}

// at fills t for a part with so many accepted and rejected calls.
func (t *term) at(link Link, z [2]float64, has [2]bool, accepted, rejected, epsilon float64) {
	*t = term{possible: true}
	below, above := [2]float64{1, 0}, [2]float64{0, 1}
	if has[0] && has[1] {
		has = relevant(link, z)
	}
	for i := range 2 {
		if has[i] {
			below[i], above[i], t.densities[i], t.ratio[i] = link.tails(z[i])
		}
	}
	// Q is a sum of tails and never cancels; P is taken from whichever of its
	// three equal forms cancels least.
	q := above[0] + below[1]
	var p float64
	switch {
	case q < 0.5:
		p = 1 - q
	case !has[1]:
		p = below[0]
	case !has[0]:
		p = above[1]
	case z[0]+z[1] < 0:
		p = below[0] - below[1]
	default:
		p = above[1] - above[0]
	}
	t.plainP = p
	if epsilon > 0 {
		if p <= 0 {
			t.densities = [2]float64{} // clipped at 0, see below
		}
		p, q = math.Max(p, 0), math.Min(q, 1)
		t.epsilonGradient = 0.5 - p
		p, q = epsilon/2+(1-epsilon)*p, epsilon/2+(1-epsilon)*q
	}
	t.p, t.q = p, q
	const tiny = 1e-280
	if epsilon == 0 && (accepted > 0 && p < tiny || rejected > 0 && q < tiny) {
		t.logarithmic(link, z, has, accepted, rejected)
		return
	}
	if p <= 0 || q > 1 {
		// Where the σs differ, the difference of the two factors can fall
		// below 0 in a far tail; the probability there is 0.
		t.p, t.q = 0, 1
		t.possible = accepted == 0
		return
	}
	if accepted > 0 {
		if q < 0.5 {
			t.loglik += accepted * math.Log1p(-q)
		} else {
			t.loglik += accepted * math.Log(p)
		}
		t.overP[0], t.overP[1] = (1-epsilon)*t.densities[0]/p, (1-epsilon)*t.densities[1]/p
	}
	if rejected > 0 {
		if p < 0.5 {
			t.loglik += rejected * math.Log1p(-p)
		} else {
			t.loglik += rejected * math.Log(q)
		}
		t.overQ[0], t.overQ[1] = (1-epsilon)*t.densities[0]/q, (1-epsilon)*t.densities[1]/q
	}
}

// relevant tells which of two limits matters to a part: one so far away, and so
// much farther than the other, that its tail is lost in rounding does not.
func relevant(link Link, z [2]float64) [2]bool {
	far, farther := 10.0, 5.0
	if link == Logit {
		far, farther = 28, 21
	}
	return [2]bool{
		!(z[0] > far && z[0]-math.Abs(z[1]) > farther),
		!(z[1] < -far && -z[1]-math.Abs(z[0]) > farther),
	}
}

// logarithmic fills t where a probability that matters is too small for a
// float64 number.
func (t *term) logarithmic(link Link, z [2]float64, has [2]bool, accepted, rejected float64) {
	below, above := [2]float64{0, math.Inf(-1)}, [2]float64{math.Inf(-1), 0}
	density := [2]float64{math.Inf(-1), math.Inf(-1)}
	for i := range 2 {
		if has[i] {
			below[i], above[i], density[i] = link.logCDF(z[i]), link.logCDF(-z[i]), link.logDensity(z[i])
		}
	}
	if accepted > 0 {
		logP := 0.0
		switch {
		case !has[1]:
			logP = below[0]
		case !has[0]:
			logP = above[1]
		case z[0]+z[1] < 0:
			logP = logDifference(below[0], below[1])
		default:
			logP = logDifference(above[1], above[0])
		}
		if math.IsInf(logP, -1) {
			t.possible = false
			return
		}
		t.loglik += accepted * logP
		t.overP[0], t.overP[1] = math.Exp(density[0]-logP), math.Exp(density[1]-logP)
	}
	if rejected > 0 {
		logQ := logSum(above[0], below[1])
		t.loglik += rejected * logQ
		t.overQ[0], t.overQ[1] = math.Exp(density[0]-logQ), math.Exp(density[1]-logQ)
	}
}

// local numbers the five parameters of a group: cut and log σ of each limit,
// and logit ε.
const (
	cutL = iota
	logSigmaL
	cutU
	logSigmaU
	logitE
	locals
)

// places returns where the local parameters of group g stand in θ.
func (m *model) places(g int) [locals]int {
	i := m.groups[g]
	return [locals]int{i.cut[0], i.logSigma[0], i.cut[1], i.logSigma[1], m.lapse}
}

// eval returns the log-likelihood at θ, without binomial coefficients, and
// writes its gradient to grad (length n) and its Hessian to hess (n×n, row by
// row). It returns −Inf where the calls are impossible. It allocates nothing.
func (m *model) eval(theta, grad, hess []float64) float64 {
	clear(grad)
	clear(hess)
	epsilon := m.rate(theta)
	var total float64
	var t term
	for g := range m.groups {
		place := m.places(g)
		var c curveAt
		c.set(m, theta, g)
		var lg [locals]float64
		var lh [locals][locals]float64
		for i := m.first[g]; i < m.first[g+1]; i++ {
			a, r := m.accepted[i], m.rejected[i]
			z := c.z(m.x[i])
			if m.soft == 0 && c.silent(m.link, z, a, r, epsilon) {
				continue
			}
			t.at(m.link, z, c.has, a, r, epsilon)
			if !t.possible {
				return math.Inf(-1)
			}
			bend := 0.0
			if m.soft > 0 && a == 0 {
				bend = t.soften(m.soft, r)
			}
			total += t.loglik
			u := [2]float64{a*t.overP[0] - r*t.overQ[0], r*t.overQ[1] - a*t.overP[1]}
			for k := range 2 {
				if !c.has[k] {
					continue
				}
				hzz := t.ratio[k]*u[k] - a*t.overP[k]*t.overP[k] - r*t.overQ[k]*t.overQ[k] - bend*t.densities[k]*t.densities[k]
				s, w := c.inverse[k], z[k]-m.shift[k]
				lg[2*k] -= u[k] * s
				lg[2*k+1] -= u[k] * w
				lh[2*k][2*k] += hzz * s * s
				lh[2*k][2*k+1] += (hzz*w + u[k]) * s
				lh[2*k+1][2*k+1] += (hzz*w + u[k]) * w
			}
			if c.has[0] && c.has[1] {
				if cross := a*t.overP[0]*t.overP[1] + r*t.overQ[0]*t.overQ[1] + bend*t.densities[0]*t.densities[1]; cross != 0 {
					w0, w1 := z[0]-m.shift[0], z[1]-m.shift[1]
					lh[cutL][cutU] += cross * c.inverse[0] * c.inverse[1]
					lh[cutL][logSigmaU] += cross * c.inverse[0] * w1
					lh[logSigmaL][cutU] += cross * w0 * c.inverse[1]
					lh[logSigmaL][logSigmaU] += cross * w0 * w1
				}
			}
			if m.lapse != absent {
				m.lapseTerms(&t, &c, z, u, a, r, epsilon, &lg, &lh)
			}
		}
		for i, pi := range place {
			if pi == absent {
				continue
			}
			grad[pi] += lg[i]
			for j := i; j < locals; j++ {
				pj := place[j]
				if pj == absent {
					continue
				}
				hess[pi*m.n+pj] += lh[i][j]
				if i != j {
					hess[pj*m.n+pi] += lh[i][j]
				}
			}
		}
	}
	if math.IsNaN(total) {
		return math.Inf(-1)
	}
	return total
}

// lapseTerms adds the derivatives with respect to logit ε.
func (m *model) lapseTerms(t *term, c *curveAt, z, u [2]float64, a, r, epsilon float64, lg *[locals]float64, lh *[locals][locals]float64) {
	d := t.epsilonGradient
	de := epsilon * (1 - epsilon)
	ue := a*d/t.p - r*d/t.q
	hee := -a*sq(d/t.p) - r*sq(d/t.q)
	lg[logitE] += ue * de
	lh[logitE][logitE] += hee*de*de + ue*de*(1-2*epsilon)
	sign := [2]float64{-1, 1}
	for k := range 2 {
		if !c.has[k] {
			continue
		}
		hek := -u[k]/(1-epsilon) + sign[k]*d*(a*t.overP[k]/t.p+r*t.overQ[k]/t.q)
		s, w := c.inverse[k], z[k]-m.shift[k]
		lh[2*k][logitE] -= hek * s * de
		lh[2*k+1][logitE] -= hek * w * de
	}
}

// rate is the share of calls made at random, ε.
func (m *model) rate(theta []float64) float64 {
	if m.lapse == absent {
		return m.epsilon
	}
	return logistic(theta[m.lapse])
}

// curveAt is one group's curve at a given θ.
type curveAt struct {
	has     [2]bool
	cut     [2]float64
	inverse [2]float64 // 1/σ
	shift   [2]float64
}

func (c *curveAt) set(m *model, theta []float64, g int) {
	for k := range 2 {
		if at := m.groups[g].cut[k]; at != absent {
			c.has[k], c.cut[k], c.inverse[k] = true, theta[at], math.Exp(-theta[m.groups[g].logSigma[k]])
		}
	}
	c.shift = m.shift
}

func (c *curveAt) z(x float64) [2]float64 {
	return [2]float64{(x-c.cut[0])*c.inverse[0] + c.shift[0], (x-c.cut[1])*c.inverse[1] + c.shift[1]}
}

// silent tells whether a part lies so far from the limits, on the side that
// its calls say, that what it adds is lost in rounding: 8e-24 a call.
func (c *curveAt) silent(link Link, z [2]float64, accepted, rejected, epsilon float64) bool {
	if epsilon > 0 {
		return false
	}
	far := 10.0
	if link == Logit {
		far = 53 / perSD
	}
	if rejected == 0 {
		return (!c.has[0] || z[0] > far) && (!c.has[1] || z[1] < -far)
	}
	if accepted == 0 {
		return c.has[0] && z[0] < -far && (!c.has[1] || z[1] < -far) || c.has[1] && z[1] > far && (!c.has[0] || z[0] > far)
	}
	return false
}
