package signal

import (
	"math"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/optimize"
)

// riskProfile finds the profile-likelihood limits of the quantities of a risk:
// their extremes over all curves whose likelihood is within the cut-off of the
// highest. The limits keep what is true of every single curve: escapes fall as
// the guard band grows, and are never more than was made bad.
//
// Each step takes the likelihood as quadratic and the quantity as linear about
// the point reached, and goes to the extreme of the one on the other, as
// Venzon & Moolgavkar do for a single parameter (Applied Statistics 37 (1988)
// 87–94).
type riskProfile struct {
	c      *Curve
	p      Process
	band   float64
	blocks []*block
	first  []int // block b has the parameters from first[b] up to first[b+1]
	best   []float64
	// Of a study with very many parts the likelihood is quadratic as far as the
	// limits: that at the maximum is used.
	quadratic bool
	top       float64
	curvature *mat.SymDense // minus the second derivatives at the maximum
}

// quadraticParts is how many parts make a likelihood quadratic: the limits
// then lie within thousandths of a σ.
const quadraticParts = 20000

// riskPoint is the likelihood and the risk at one curve.
type riskPoint struct {
	theta   []float64
	lost    float64       // twice the log-likelihood lost against the maximum
	score   *mat.VecDense // of the log-likelihood
	info    *mat.SymDense // minus its second derivatives
	logit   [quantities]float64
	slope   [quantities][]float64 // of logit by theta
	defined [quantities]bool      // whether it has a logit
}

func newRiskProfile(c *Curve, p Process, band float64) *riskProfile {
	r := &riskProfile{c: c, p: p, band: band, blocks: c.blocks, first: []int{0}, quadratic: len(c.Parts) > quadraticParts}
	for _, b := range c.blocks {
		r.best = append(r.best, b.theta...)
		r.first = append(r.first, len(r.best))
	}
	r.curvature = mat.NewSymDense(len(r.best), nil)
	grad := make([]float64, len(r.best))
	r.top = r.likelihood(r.best, grad, r.curvature)
	return r
}

// likelihood returns the log-likelihood of all blocks, its gradient and minus
// its second derivatives.
func (r *riskProfile) likelihood(theta, grad []float64, info *mat.SymDense) float64 {
	total := 0.0
	for i, b := range r.blocks {
		from, n := r.first[i], b.m.n
		hess := make([]float64, n*n)
		total += b.m.eval(theta[from:from+n], grad[from:from+n], hess)
		for j := range n {
			for k := j; k < n; k++ {
				info.SetSym(from+j, from+k, -hess[j*n+k])
			}
		}
	}
	return total
}

// gauge is the curve at theta, each cut moved inwards by the band.
func (r *riskProfile) gauge(theta []float64) Gauge {
	g := Gauge{Link: r.c.Options.Link}
	r.each(theta, func(local int, x float64) {
		switch local {
		case cutL:
			g.HasLower, g.LowerCut = true, r.c.sc.out(x)
		case logSigmaL:
			g.LowerSigma = r.c.sc.size(math.Exp(x))
		case cutU:
			g.HasUpper, g.UpperCut = true, r.c.sc.out(x)
		case logSigmaU:
			g.UpperSigma = r.c.sc.size(math.Exp(x))
		case logitE:
			g.Lapse = logistic(x)
		}
	})
	return g.Tighten(r.band)
}

// each calls f with each local parameter and its entry of theta; a σ that both
// limits share comes twice.
func (r *riskProfile) each(theta []float64, f func(local int, x float64)) {
	for i, b := range r.blocks {
		for local, at := range b.m.places(0) {
			if at != absent {
				f(local, theta[r.first[i]+at])
			}
		}
	}
}

// at evaluates the point theta; nil where the calls are impossible.
func (r *riskProfile) at(theta []float64) *riskPoint {
	n := len(theta)
	x := &riskPoint{theta: theta, score: mat.NewVecDense(n, nil)}
	if r.quadratic {
		x.info = r.curvature
		d := mat.NewVecDense(n, nil)
		for i := range n {
			d.SetVec(i, r.best[i]-theta[i])
		}
		x.score.MulVec(r.curvature, d)
		x.lost = mat.Dot(d, x.score)
	} else {
		x.info = mat.NewSymDense(n, nil)
		l := r.likelihood(theta, x.score.RawVector().Data, x.info)
		if math.IsInf(l, -1) {
			return nil
		}
		x.lost = 2 * (r.top - l)
	}
	g := r.gauge(theta)
	s := r.p.shares(g, r.c.Limits)
	v := s.values()
	for q := range quantities {
		if x.defined[q] = inUnit(v[q]); !x.defined[q] {
			continue
		}
		x.logit[q] = logit(v[q])
		x.slope[q] = make([]float64, n)
	}
	for i, b := range r.blocks {
		for local, at := range b.m.places(0) {
			if at == absent {
				continue
			}
			unit := 1.0
			if local == cutL || local == cutU {
				unit = r.c.sc.size(1)
			}
			by := s.logitSlopes(local)
			for q := range quantities {
				if x.defined[q] {
					x.slope[q][r.first[i]+at] += by[q] * unit
				}
			}
		}
	}
	return x
}

// limit returns the extreme of a quantity, the largest for sign 1 and the
// smallest for −1, and false if it was not found. With two σs the extreme of
// one way to it need not be the greatest: the way starts from the ends of each σ
// too.
func (r *riskProfile) limit(q int, sign float64) (float64, bool) {
	best := r.at(r.best)
	if best == nil || !best.defined[q] {
		return 0, false
	}
	found, ok := math.Inf(-1), false
	for _, theta := range r.starts() {
		start := r.at(theta)
		if start == nil || !start.defined[q] {
			continue
		}
		if at := r.climb(start, q, sign); at != nil && sign*(at.logit[q]-best.logit[q]) >= 0 {
			found, ok = math.Max(found, sign*at.logit[q]), true
		}
	}
	if !ok {
		return r.search(q, sign)
	}
	return logistic(sign * found), true
}

// starts are the maximum of the likelihood and, with more than one σ, points on
// its cut-off towards either end of each.
func (r *riskProfile) starts() [][]float64 {
	starts := [][]float64{r.best}
	if !r.twoSigmas() {
		return starts
	}
	for i, b := range r.blocks {
		for _, at := range b.m.groups[0].logSigma {
			if at == absent {
				continue
			}
			se := math.Sqrt(b.cov(at, at))
			for _, way := range [...]float64{-1, 1} {
				theta := append([]float64(nil), r.best...)
				for j := range b.m.n {
					theta[r.first[i]+j] += way * math.Sqrt(r.c.crit) * b.cov(j, at) / se
				}
				starts = append(starts, theta)
			}
		}
	}
	return starts
}

func (r *riskProfile) twoSigmas() bool {
	if len(r.blocks) != 1 {
		return len(r.blocks) > 1
	}
	g := r.blocks[0].m.groups[0]
	return g.logSigma[0] != absent && g.logSigma[1] != absent && g.logSigma[0] != g.logSigma[1]
}

// climb goes from a point to the extreme that its steps lead to; nil where they
// do not settle.
func (r *riskProfile) climb(at *riskPoint, q int, sign float64) *riskPoint {
	for range 60 {
		step, ok := r.step(at, q, sign)
		if !ok {
			return nil
		}
		next := r.move(at, step, q)
		if next == nil {
			return nil
		}
		change := math.Abs(next.logit[q] - at.logit[q])
		at = next
		if change <= 1e-7*(1+math.Abs(at.logit[q])) && math.Abs(at.lost-r.c.crit) <= 1e-6*r.c.crit {
			return at
		}
	}
	return nil
}

// search finds the extreme by Nelder and Mead's simplex where the steps do not
// settle: it may lie inside the cut-off, where the quantity is flat.
func (r *riskProfile) search(q int, sign float64) (float64, bool) {
	n := len(r.best)
	var chol mat.Cholesky
	if !chol.Factorize(r.curvature) {
		return 0, false
	}
	var inverse mat.SymDense
	var half mat.TriDense
	if chol.InverseTo(&inverse) != nil || !chol.Factorize(&inverse) {
		return 0, false
	}
	chol.LTo(&half)
	point := func(u []float64) *riskPoint { // u is the way from the maximum in standard errors
		theta := append([]float64(nil), r.best...)
		for i := range n {
			for j := 0; j <= i; j++ {
				theta[i] += half.At(i, j) * u[j]
			}
		}
		return r.at(theta)
	}
	worth := func(u []float64) float64 { // to be least
		x := point(u)
		if x == nil || !x.defined[q] {
			return math.MaxFloat64
		}
		beyond := math.Max(0, x.lost/r.c.crit-1)
		return -sign*x.logit[q] + 1e3*(1+math.Abs(x.logit[q]))*beyond*beyond
	}
	settings := &optimize.Settings{FuncEvaluations: 2000, Converger: &optimize.FunctionConverge{Absolute: 1e-9, Iterations: 60}}
	found, err := optimize.Minimize(optimize.Problem{Func: worth}, make([]float64, n), settings, &optimize.NelderMead{SimplexSize: math.Sqrt(r.c.crit) / 2})
	if err != nil {
		return 0, false
	}
	x := point(found.X)
	if x == nil || !x.defined[q] || x.lost > 1.01*r.c.crit {
		return 0, false
	}
	return logistic(x.logit[q]), true
}

// step is the way from a point to the extreme of the quantity, taken as
// linear, on the likelihood's cut-off, taken as quadratic.
func (r *riskProfile) step(at *riskPoint, q int, sign float64) (*mat.VecDense, bool) {
	n := len(at.theta)
	var chol mat.Cholesky
	for damp := 0.0; !chol.Factorize(damped(at.info, damp)); damp = math.Max(1e-3, 4*damp) {
		if damp > 1e6 {
			return nil, false
		}
	}
	slope := mat.NewVecDense(n, nil)
	for i, x := range at.slope[q] {
		slope.SetVec(i, sign*x)
	}
	var up, along mat.VecDense // J⁻¹ score, J⁻¹ slope
	if chol.SolveVecTo(&up, at.score) != nil || chol.SolveVecTo(&along, slope) != nil {
		return nil, false
	}
	room := r.c.crit - at.lost + mat.Dot(at.score, &up)
	steep := mat.Dot(slope, &along)
	if !(steep > 0) {
		return nil, false
	}
	step := mat.NewVecDense(n, nil)
	step.AddScaledVec(&up, math.Sqrt(math.Max(0, room)/steep), &along)
	return step, finite(step.RawVector().Data...)
}

// damped is a matrix with so much more of its diagonal.
func damped(a *mat.SymDense, by float64) *mat.SymDense {
	if by == 0 {
		return a
	}
	d := mat.NewSymDense(a.SymmetricDim(), nil)
	d.CopySym(a)
	for i := range a.SymmetricDim() {
		d.SetSym(i, i, a.At(i, i)+by*math.Max(math.Abs(a.At(i, i)), 1e-8))
	}
	return d
}

// move goes a step, or as much of it as stays near the cut-off and where the
// quantity is defined.
func (r *riskProfile) move(at *riskPoint, step *mat.VecDense, q int) *riskPoint {
	share := 1.0
	r.eachStep(step, func(local int, by float64) {
		if local == logSigmaL || local == logSigmaU || local == logitE {
			share = math.Min(share, 1/math.Max(1, math.Abs(by)))
		}
	})
	for range 40 {
		theta := make([]float64, len(at.theta))
		for i := range theta {
			theta[i] = at.theta[i] + share*step.AtVec(i)
		}
		if next := r.at(theta); next != nil && next.defined[q] && next.lost < 4*r.c.crit {
			return next
		}
		share /= 2
	}
	return nil
}

func (r *riskProfile) eachStep(step *mat.VecDense, f func(local int, by float64)) {
	r.each(step.RawVector().Data, f)
}

// logitSlopes is by how much the logit of each quantity grows with a local
// parameter; meaningful where the quantity lies between 0 and 1.
func (s *shares) logitSlopes(local int) (by [quantities]float64) {
	d := s.slope[local]
	v := s.values()
	plain := func(q int, slope float64) { by[q] = slope / (v[q] * (1 - v[q])) }
	plain(qEscapeLower, d[badLow])
	plain(qEscapeUpper, d[badHigh])
	plain(qEscape, d[badLow]+d[badHigh])
	plain(qFalseRejectLower, -d[goodLow])
	plain(qFalseRejectUpper, -d[goodHigh])
	plain(qFalseReject, -d[goodLow]-d[goodHigh])
	accepted := d[badLow] + d[badHigh] + d[goodLow] + d[goodHigh]
	plain(qAccepted, accepted)
	// The logit of a/(a+b) is log a − log b.
	by[qBadAmongAccepted] = (d[badLow]+d[badHigh])/v[qEscape] - (d[goodLow]+d[goodHigh])/(s.accepted[goodLow]+s.accepted[goodHigh])
	by[qGoodAmongRejected] = -(d[goodLow]+d[goodHigh])/v[qFalseReject] + (d[badLow]+d[badHigh])/(s.rejected[badLow]+s.rejected[badHigh])
	return by
}
