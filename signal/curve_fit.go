package signal

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
)

// fit fits the curve. With search, outliers are looked for.
func (d *dataset) fit(search bool) (*Curve, error) {
	c := &Curve{Options: d.options, Limits: d.limits, sc: d.sc, factor: 1}
	hs := d.halves()
	overlap := d.limitsOf(c, hs)
	if !c.Lower.Known() && !c.Upper.Known() {
		return nil, d.noTurn(hs)
	}
	blocks, err := d.maxima(hs, overlap)
	if err != nil {
		return nil, err
	}
	for _, b := range blocks {
		c.take(b)
	}
	separated, err := d.biasReduced(c, &hs)
	if err != nil {
		return nil, err
	}
	if d.options.Lapse {
		d.lapse(c, &blocks, hs)
	}
	c.blocks = blocks
	c.summarise(d, hs)
	c.judgeFit()
	c.params(d)
	for _, b := range blocks {
		d.describe(c, b)
	}
	for k, h := range hs {
		switch {
		case separated[k] != nil:
			d.describeSeparated(c, h, separated[k])
		case d.has[k] && h.status == OneSided:
			d.describeOneSided(c, h)
		}
	}
	if search {
		// The test is of curves without lapses.
		if overlap == 2 && !c.known[logitE] {
			c.SameSigma = d.sameSigma(c)
		}
		if !c.known[logitE] { // random calls have their own place in the curve then
			d.outliers(c, hs)
		}
	}
	c.notes(d)
	if err := c.sound(); err != nil {
		return nil, err
	}
	c.order(d)
	return c, nil
}

// limitsOf gives the curve its limits, and returns at how many of them rejected
// and accepted calls overlap.
func (d *dataset) limitsOf(c *Curve, hs [2]half) (overlap int) {
	for k, h := range hs {
		if !d.has[k] {
			continue
		}
		l := &LimitFit{Side: Side(k), Status: h.status, Why: h.why}
		if k == 0 {
			l.Limit, l.HasLimit = d.limits.Lower, d.limits.HasLower
			c.Lower = l
		} else {
			l.Limit, l.HasLimit = d.limits.Upper, d.limits.HasUpper
			c.Upper = l
		}
		if l.Status == Fitted {
			overlap++
		}
	}
	return overlap
}

// maxima fits the limits at which calls overlap by maximum likelihood: both
// together where both do, else the one by itself.
func (d *dataset) maxima(hs [2]half, overlap int) ([]*block, error) {
	if overlap == 2 {
		b, err := d.maximum(0, len(d.x), d.has, hs)
		if err != nil {
			return nil, err
		}
		return []*block{b}, nil
	}
	for k, h := range hs {
		if !d.has[k] || h.status != Fitted {
			continue
		}
		from, to := h.from, h.to
		if other := hs[1-k]; d.has[1-k] && other.status == OneSided && !other.reversed && !other.hasReject {
			from, to = 0, len(d.x) // nothing was rejected there: all parts tell of this limit
		}
		b, err := d.maximum(from, to, [2]bool{k == 0, k == 1}, hs)
		if err != nil {
			return nil, err
		}
		return []*block{b}, nil
	}
	return nil, nil
}

// biasReduced fits the limits without an overlap. One whose calls are so few
// that even their turn is in doubt is marked as one-sided, in hs too; it is an
// error if there is no other limit.
func (d *dataset) biasReduced(c *Curve, hs *[2]half) (fits [2]*firthFit, err error) {
	turning := 0
	for k, h := range hs {
		if d.has[k] && h.status != OneSided {
			turning++
		}
	}
	for k, h := range hs {
		if !d.has[k] || h.status != Separated && h.status != QuasiSeparated {
			continue
		}
		f, err := d.firth(h)
		if err != nil {
			if turning--; turning == 0 {
				return fits, err
			}
			hs[k].status, hs[k].reversed, hs[k].why = OneSided, true, err.Error()
			l := c.side(k)
			l.Status, l.Why = OneSided, err.Error()
			continue
		}
		fits[k] = f
		c.local[2*k], c.local[2*k+1] = f.cut, f.logSigma
		c.known[2*k], c.known[2*k+1] = true, true
		c.Parameters += 2
	}
	return fits, nil
}

// noTurn says why nothing can be fitted.
func (d *dataset) noTurn(hs [2]half) error {
	for _, h := range hs {
		if d.has[h.k] && h.reversed {
			return fmt.Errorf("%w: %s", ErrNoTurn, h.why)
		}
	}
	for _, h := range hs {
		if d.has[h.k] {
			return fmt.Errorf("%w: %s", ErrNoTurn, h.why)
		}
	}
	return ErrNoTurn
}

// block is one verified maximum of a likelihood.
type block struct {
	m          *model
	s          *solver
	theta      []float64
	loglik     float64
	covariance *mat.SymDense
	has        [2]bool

	blocked      outcome // of the highest point that is no verified maximum
	blockedTheta []float64
	others       [][]float64 // lesser maxima
}

func (b *block) cov(i, j int) float64 { return b.covariance.At(i, j) }

// convergence is the log-likelihood that a fit may leave to be gained.
const convergence = 1e-15

// maximum fits parts from up to to by maximum likelihood and verifies the
// maximum: the gradient, measured by the gain that it still promises, is nil
// and the Hessian is negative definite.
func (d *dataset) maximum(from, to int, has [2]bool, hs [2]half) (*block, error) {
	b := &block{m: d.model(from, to, has), has: has, loglik: math.Inf(-1), blocked: outcome{loglik: math.Inf(-1), kink: absent}}
	b.s = newSolver(b.m)
	what := "the acceptance curve"
	if has != [2]bool{true, true} {
		what = "the acceptance curve at the " + Side(boolInt(has[1])).String() + " limit"
	}
	for try := range 3 {
		d.startAt(b, hs, min(try, 1))
		if try == 2 {
			if b.theta != nil {
				break
			}
			b.s.fallback()
		}
		b.keepIfHigher(b.s.climb(absent, convergence))
		if b.theta != nil && has != [2]bool{true, true} {
			break // the likelihood of one limit has one maximum
		}
	}
	if b.m.kinked() {
		b.unequal()
	}
	// With one σ what lies higher is a flat curve, where there is a maximum too.
	if b.theta == nil || b.m.kinked() && b.blocked.loglik > b.loglik+higher {
		return nil, &NotConvergedError{What: what, Reason: d.hurdle(b, from), TwoSigmas: b.m.kinked()}
	}
	if g := b.m.groups[0]; b.m.kinked() && b.theta[g.cut[0]] >= b.theta[g.cut[1]] {
		return nil, &NotConvergedError{What: what, Reason: "with a σ for each limit, the cuts cross", TwoSigmas: true}
	}
	copy(b.s.theta, b.theta)
	return b, nil
}

// higher is by how much a log-likelihood must be above another to matter.
const higher = 1e-4

// hurdle says what the highest point of the likelihood that was found is, if it
// is no maximum. from is the first of the block's parts.
func (d *dataset) hurdle(b *block, from int) string {
	out := b.blocked
	if out.kink != absent {
		return fmt.Sprintf("with a σ for each limit, the curve falls to 0 at %s, which was only rejected, and fits best where it does", d.named(from+out.kink))
	}
	reason := "the likelihood has no verified maximum"
	switch {
	case math.IsInf(out.loglik, -1):
	case out.atBound && b.most(b.blockedTheta, logSigmaHigh-1):
		reason = "σ grows without limit: acceptance hardly depends on the value"
	case out.atBound:
		reason = "σ shrinks to nothing"
	case !out.converged:
		reason = fmt.Sprintf("the likelihood still climbs after %d evaluations", b.s.evals)
	}
	if !b.m.kinked() {
		return reason
	}
	for k, at := range b.m.groups[0].logSigma {
		switch s := b.blockedTheta; {
		case s[at] >= logSigmaWide:
			return fmt.Sprintf("with a σ for each limit, that of the %s limit grows without limit: acceptance hardly depends on the value there", Side(k))
		case out.atBound && s[at] <= logSigmaLow+1:
			return fmt.Sprintf("with a σ for each limit, that of the %s limit shrinks to nothing", Side(k))
		}
	}
	return reason
}

// logSigmaWide is that of a σ so far above the range of the values, 150 times half
// of it, that the values cannot tell it from one without end.
const logSigmaWide = 5

// most tells whether a log σ reaches a value.
func (b *block) most(theta []float64, logSigma float64) bool {
	for i, is := range b.s.isLogSigma {
		if is && theta[i] >= logSigma {
			return true
		}
	}
	return false
}

// unequal looks for a higher maximum where one σ is far smaller than the other:
// with two σs the likelihood can have several, one nearly a step. Each cut is
// tried about where it was.
func (b *block) unequal() {
	g := b.m.groups[0]
	first := append([]float64(nil), b.theta...)
	if b.theta == nil {
		first = append(first, b.blockedTheta...)
	}
	if len(first) == 0 {
		return
	}
	for k := range 2 {
		narrow, wide := g.logSigma[k], g.logSigma[1-k]
		for _, change := range [...][2]float64{{1, 0.4}, {2.5, 0.1}, {2.5, 0.7}} {
			for _, aside := range [...]float64{-0.9, -0.45, 0, 0.45, 0.9} { // in σ as it was
				copy(b.s.theta, first)
				b.s.theta[narrow] -= change[0]
				b.s.theta[wide] += change[1]
				b.s.theta[g.cut[k]] += aside * math.Exp(first[narrow])
				b.keepIfHigher(b.s.climb(absent, convergence))
			}
		}
	}
	// A wider σ leads to where the curve falls to 0 at a part.
	for _, at := range g.logSigma {
		for _, wider := range [...]float64{0.3, 0.6, 1} {
			copy(b.s.theta, first)
			b.s.theta[at] += wider
			b.s.climb(at, profileTolerance)
			b.keepIfHigher(b.s.climb(absent, convergence))
		}
	}
	if n := len(b.m.x); n <= stepParts && (b.theta == nil || b.m.midway(b.theta) < zonesApart) {
		for _, s := range b.steps(first) {
			copy(b.s.theta, s)
			b.keepIfHigher(b.s.climb(absent, convergence))
		}
	}
}

// stepParts is how many parts there may be for steps to be tried between each
// two of them.
const stepParts = 200

// steps returns the likeliest starts at which one limit is nearly a step between
// two neighbouring parts and the other is as it was or wider.
func (b *block) steps(first []float64) [][]float64 {
	g := b.m.groups[0]
	var c candidates
	theta := append([]float64(nil), first...)
	for k := range 2 {
		for i := 1; i < len(b.m.x); i++ {
			gap := b.m.x[i] - b.m.x[i-1]
			if !(gap > 0) {
				continue
			}
			for _, wider := range [...]float64{0, 0.7} {
				copy(theta, first)
				theta[g.cut[k]], theta[g.logSigma[k]] = b.m.x[i-1]+gap/2, math.Log(gap/4)
				theta[g.logSigma[1-k]] += wider
				c.add(b.s, theta)
			}
		}
	}
	return c.likeliest(branchesTried, 0)
}

// mostOthers is how many lesser maxima are remembered.
const mostOthers = 8

// keepIfHigher takes the solver's point if it is a verified maximum above the
// one there is, and remembers the highest point that is none.
func (b *block) keepIfHigher(out outcome) {
	if out.converged && !out.atBound && out.kink == absent && !(b.m.kinked() && b.most(b.s.theta, logSigmaWide)) {
		if !(out.loglik > b.loglik+1e-9) {
			if out.loglik < b.loglik-1e-6 && len(b.others) < mostOthers {
				b.others = append(b.others, append([]float64(nil), b.s.theta...))
			}
			return
		}
		if cov, ok := b.s.definite(); ok {
			if b.theta != nil && len(b.others) < mostOthers {
				b.others = append(b.others, b.theta)
			}
			b.theta, b.loglik, b.covariance = append([]float64(nil), b.s.theta...), out.loglik, cov
			return
		}
	}
	if out.loglik > b.blocked.loglik {
		b.blocked, b.blockedTheta = out, append(b.blockedTheta[:0], b.s.theta...)
	}
}

func boolInt(b bool) int {
	if b {
		return 1
	}
	return 0
}

// startAt sets the solver to one of the guesses.
func (d *dataset) startAt(b *block, hs [2]half, which int) {
	g := b.m.groups[0]
	var shared []float64
	for k := range 2 {
		if !b.has[k] {
			continue
		}
		cut, logSigma := d.starts(hs[k])
		b.s.theta[g.cut[k]], b.s.theta[g.logSigma[k]] = cut[which], logSigma[which]
		shared = append(shared, logSigma[which])
	}
	if len(shared) == 2 {
		if g.logSigma[0] == g.logSigma[1] {
			b.s.theta[g.logSigma[0]] = (shared[0] + shared[1]) / 2
		}
		// Cuts that cross would make every accepted call impossible.
		if lo, hi := b.s.theta[g.cut[0]], b.s.theta[g.cut[1]]; !(lo < hi) {
			middle, off := lo/2+hi/2, math.Max(1e-3, math.Abs(lo-hi))
			b.s.theta[g.cut[0]], b.s.theta[g.cut[1]] = middle-off, middle+off
		}
		if g.logSigma[0] != g.logSigma[1] {
			// Unequal σs can make P negative in a far tail that was accepted;
			// equal ones cannot.
			if math.IsInf(b.s.eval(b.s.theta, b.s.tgrad, b.s.thess), -1) {
				s := (shared[0] + shared[1]) / 2
				b.s.theta[g.logSigma[0]], b.s.theta[g.logSigma[1]] = s, s
			}
		}
	}
}

// take copies a block's estimates and covariance into the curve.
func (c *Curve) take(b *block) {
	place := b.m.places(0)
	for i, pi := range place {
		if pi == absent {
			continue
		}
		c.local[i], c.known[i], c.hasCov[i] = b.theta[pi], true, true
		for j, pj := range place {
			if pj != absent {
				c.cov[i][j] = b.covariance.At(pi, pj)
			}
		}
	}
	c.blockLogLikelihood = b.loglik
	c.free += b.m.n
	c.Parameters += b.m.n
}

// lapse fits the share of calls made at random besides, where maximum
// likelihood was reached by one block.
func (d *dataset) lapse(c *Curve, blocks *[]*block, hs [2]half) {
	if len(*blocks) != 1 || c.separatedAnywhere() {
		c.warn(WarnNoLapse, "no lapse rate: it cannot be told from the curve where no part at a limit is mixed")
		return
	}
	plain := (*blocks)[0]
	b := &block{m: d.model(0, 0, plain.has), has: plain.has, loglik: math.Inf(-1)}
	b.m.x, b.m.accepted, b.m.rejected, b.m.first = plain.m.x, plain.m.accepted, plain.m.rejected, plain.m.first
	b.m.lapse = b.m.n
	b.m.n++
	b.s = newSolver(b.m)
	highest := plain.loglik
	for _, theta := range d.lapseStarts(b, plain, hs) {
		copy(b.s.theta, theta)
		out := b.s.maximise(absent, convergence)
		b.keepIfHigher(out)
		highest = math.Max(highest, out.loglik)
	}
	c.LapseGain = math.Max(0, math.Max(highest, b.loglik)-plain.loglik)
	// Without the calls at random a limit may be separated: then the likelihood
	// is flat in σ, and no maximum can be verified.
	if highest > math.Max(b.loglik, plain.loglik)+1e-3 {
		c.warn(WarnNoLapse, "no lapse rate: with one, σ is no longer determined; too few mixed parts lie near the limit")
		return
	}
	c.HasLapse = true
	if b.theta == nil || b.loglik <= plain.loglik+1e-9 {
		// The best rate is none; only an upper bound can be told.
		c.Lapse = Estimate{Value: 0, Lower: 0, HasLower: true, Confidence: d.options.Confidence, Method: profileMethod}
		copy(b.s.theta, plain.theta)
		b.s.theta[b.m.lapse] = -12
		start := append([]float64(nil), b.s.theta...)
		p := newProfiler(b.s, start, plain.loglik, nil, b.m.lapse)
		if at, ok := found(crossing(-12, 3, 19, twoSided(d.options.Confidence), p.root)); ok {
			c.Lapse.Upper, c.Lapse.HasUpper = logistic(at), true
		} else {
			c.Lapse.Why = "the likelihood sets no upper bound"
		}
		return
	}
	copy(b.s.theta, b.theta)
	*blocks = []*block{b}
	c.free, c.Parameters = 0, 0
	c.take(b)
}

// lapseStarts returns where to look for a lapse rate from: the curve without
// one, a guess by the halves, and the curve that outliers are looked for with.
// Calls at random make the first one flat, and then no rate is a maximum, too.
func (d *dataset) lapseStarts(b, plain *block, hs [2]half) (starts [][]float64) {
	start := func(logitLapse float64) {
		b.s.theta[b.m.lapse] = logitLapse
		starts = append(starts, slices.Clone(b.s.theta))
	}
	for _, rate := range [...]float64{-4, -1.5} {
		copy(b.s.theta, plain.theta)
		start(rate)
		d.startAt(b, hs, 0)
		start(rate)
	}
	if steep := d.robust(hs); steep != nil {
		for i, pi := range b.m.places(0) {
			if pi != absent && steep.known[i] {
				b.s.theta[pi] = steep.local[i]
			}
		}
		start(logit(robustLapse))
	}
	return starts
}

func (c *Curve) separatedAnywhere() bool {
	found := false
	c.each(func(l *LimitFit) { found = found || l.Status == Separated || l.Status == QuasiSeparated })
	return found
}

// notes adds the warnings that the finished curve calls for.
func (c *Curve) notes(d *dataset) {
	c.each(func(l *LimitFit) {
		if l.Status != Fitted {
			code := WarnSeparated
			if l.Status == OneSided {
				code = WarnOneSided
			}
			c.warn(code, "%s limit: %s", l.Side, l.Why)
		}
	})
	values := 0
	for i, x := range d.x {
		if i == 0 || x != d.x[i-1] {
			values++
		}
	}
	if values < 5 {
		c.warn(WarnFewValues, "only %d distinct values: the shape of the curve cannot be checked", values)
	}
	if c.Lower.Known() && c.Upper.Known() {
		if p, _ := c.probability(c.local[cutL]/2 + c.local[cutU]/2); p < 0.99 {
			c.warn(WarnOverlap, "the grey zones of the two limits overlap: midway between the cuts only %.3g %% of calls accept", 100*p)
		}
	}
}

// sound makes sure that no NaN or infinity leaves.
func (c *Curve) sound() error {
	ok := finite(c.LogLikelihood, c.CallLogLikelihood)
	c.each(func(l *LimitFit) {
		for _, e := range []Estimate{l.Cut, l.Offset, l.Sigma, l.Width, l.Share, l.AtLimit} {
			ok = ok && finite(e.Value, e.Lower, e.Upper, e.SE)
		}
		ok = ok && finite(l.From, l.To)
	})
	if !ok {
		return &NotConvergedError{What: "the acceptance curve", Reason: "the result is not a finite number in the unit of the values"}
	}
	return nil
}
