package signal

import (
	"math"
)

const (
	profileMethod   = "profile likelihood"
	profileWidened  = "profile likelihood, widened for lack of fit"
	deltaMethod     = "normal on the link scale"
	deltaWidened    = "normal on the link scale, widened for lack of fit"
	separatedMethod = "bias-reduced (Firth); interval by profile likelihood"
	whyFlat         = "the likelihood sets no bound on this side"
	whyUnverified   = "no bound on this side could be verified: the likelihood has several maxima there"
	whySkipped      = "intervals were not asked for"
	cutReach        = 1e4 // half ranges
	logSigmaReach   = 14  // a factor of a million; a bound beyond would be rounding
	// A σ of a fiftieth of the estimate cannot be told from none: between
	// neighbouring values the likelihood no longer depends on it.
	logSigmaDown = 4
	negligible   = 1e-6
)

// method names the interval, with widening if there is any.
func (c *Curve) method(plain, widened string) string {
	if c.LackOfFit.Applied {
		return widened
	}
	return plain
}

// describe fills the limits of a maximum-likelihood block.
func (d *dataset) describe(c *Curve, b *block) {
	g := b.m.groups[0]
	if at := b.m.lapse; at != absent {
		e := d.profile(c, b, at, logSigmaReach, logSigmaReach)
		c.Lapse = e.map1(logistic, logistic(e.Value)*(1-logistic(e.Value)))
		if !c.Lapse.HasLower && c.Lapse.Why == whyFlat { // a rate is never below 0
			c.Lapse.Lower, c.Lapse.HasLower = 0, true
			if c.Lapse.HasUpper {
				c.Lapse.Why = ""
			}
		}
	}
	var sigma *Estimate // shared, where both limits have one σ
	for k := range 2 {
		if !b.has[k] {
			continue
		}
		l := c.side(k)
		cut := d.profile(c, b, g.cut[k], cutReach, cutReach)
		l.Cut = cut.map1(d.sc.out, d.sc.scale)
		if sigma == nil || g.logSigma[0] != g.logSigma[1] {
			e := d.profile(c, b, g.logSigma[k], logSigmaDown, logSigmaReach)
			e = e.map1(func(t float64) float64 { return d.sc.size(math.Exp(t)) }, d.sc.size(math.Exp(e.Value)))
			sigma = &e
		}
		l.Sigma = *sigma
		d.derive(c, l)
		if l.HasLimit {
			l.AtLimit, l.HasAtLimit = d.atLimit(c, b, k), true
		}
	}
}

// bounded marks the bounds that there are, with the reason if one is missing.
func (e *Estimate) bounded(below, above ending) {
	e.HasLower, e.HasUpper = below == crossed, above == crossed
	if !e.HasLower {
		e.Lower = 0
	}
	if !e.HasUpper {
		e.Upper = 0
	}
	switch {
	case below > level || above > level:
		e.Why = whyUnverified
	case below == level || above == level:
		e.Why = whyFlat
	}
}

// derive fills what follows from cut and σ.
func (d *dataset) derive(c *Curve, l *LimitFit) {
	link := d.options.Link
	if l.HasLimit {
		l.Offset = l.Cut.map1(func(x float64) float64 { return x - l.Limit }, 1)
	}
	q := link.greyQuantile()
	l.From, l.To = l.Cut.Value-q*l.Sigma.Value, l.Cut.Value+q*l.Sigma.Value
	l.Width = l.Sigma.map1(func(s float64) float64 { return 2 * q * s }, 2*q)
	if tolerance, ok := c.Limits.Tolerance(); ok {
		l.HasShare = true
		l.Share = l.Width.map1(func(w float64) float64 { return w / tolerance }, 1/tolerance)
	}
}

// PercentGRR returns 6 σ at the limit in percent of the tolerance, and whether there is a tolerance and a σ. BandGRR grades it.
func (l *LimitFit) PercentGRR(limits Limits) (Estimate, bool) {
	tolerance, ok := limits.Tolerance()
	if !ok || !l.Known() {
		return Estimate{}, false
	}
	k := 600 / tolerance
	return l.Sigma.map1(func(s float64) float64 { return k * s }, k), true
}

// profile returns a parameter with its profile-likelihood interval.
func (d *dataset) profile(c *Curve, b *block, param int, down, up float64) Estimate {
	se := math.Sqrt(b.cov(param, param))
	e := Estimate{Value: b.theta[param], SE: se * math.Sqrt(c.factor), Confidence: d.options.Confidence, Method: c.method(profileMethod, profileWidened)}
	if d.options.SkipIntervals {
		e.Method, e.Why = "maximum likelihood", whySkipped
		return e
	}
	target := math.Sqrt(c.crit)
	p := newProfiler(b.s, b.theta, b.loglik, b.cov, param)
	p.others = b.others
	var above, below ending
	e.Upper, above = p.bound(target*se, up, target)
	e.Lower, below = p.bound(-target*se, down, target)
	e.bounded(below, above)
	return e
}

// atLimit returns the acceptance probability at the limit itself. Where the
// other limit and lapses have no part in it, its interval is the profile
// likelihood of z = (limit−cut)/σ, found by fitting the curve through the
// limit at a given z; else it is normal on the link scale.
func (d *dataset) atLimit(c *Curve, b *block, k int) Estimate {
	l := c.side(k)
	t := d.sc.in(l.Limit)
	e := c.Band(l.Limit)
	if d.options.SkipIntervals {
		return Estimate{Value: e.Value, SE: e.SE, Confidence: d.options.Confidence, Method: "maximum likelihood", Why: whySkipped}
	}
	if c.known[logitE] {
		return e
	}
	at := c.at()
	if at.has[1-k] {
		below, above, _, _ := d.options.Link.tails(at.z(t)[1-k])
		if other := [2]float64{above, below}[1-k]; other > negligible {
			return e
		}
	}
	g := b.m.groups[0]
	cut, logSigma := g.cut[k], g.logSigma[k]
	inverse := math.Exp(-b.theta[logSigma])
	z := (t - b.theta[cut]) * inverse
	se := math.Sqrt(math.Max(0, inverse*inverse*b.cov(cut, cut)+z*z*b.cov(logSigma, logSigma)+2*inverse*z*b.cov(cut, logSigma)))
	if !(se > 0) {
		return e
	}
	target := math.Sqrt(c.crit)
	last := make([]float64, len(b.theta))
	root := func(shift float64) float64 {
		b.m.shift[k] = shift
		copy(b.s.theta, last)
		b.s.theta[cut] = t
		out := b.s.maximise(cut, profileTolerance)
		if !out.converged {
			copy(b.s.theta, b.theta)
			b.s.theta[cut] = t
			if out = b.s.maximise(cut, profileTolerance); !out.converged {
				return math.NaN()
			}
		}
		copy(last, b.s.theta)
		return math.Sqrt(2 * math.Max(0, b.loglik-out.loglik))
	}
	reach := 30 + 10*math.Abs(z)
	copy(last, b.theta)
	hi, above := crossing(z, target*se, reach, target, root)
	copy(last, b.theta)
	lo, below := crossing(z, -target*se, reach, target, root)
	b.m.shift[k] = 0
	if above > level || below > level {
		return e
	}
	hasHi, hasLo := above == crossed, below == crossed
	f := d.options.Link.cdf
	if k == 1 { // acceptance is F(−z) at an upper limit
		lo, hi, hasLo, hasHi = -hi, -lo, hasHi, hasLo
	}
	e.HasLower, e.HasUpper, e.Lower, e.Upper, e.Why = hasLo, hasHi, 0, 0, ""
	if hasLo {
		e.Lower = math.Min(f(lo), e.Value)
	}
	if hasHi {
		e.Upper = math.Max(f(hi), e.Value)
	}
	if !hasLo || !hasHi {
		e.Why = whyFlat
	}
	e.Method = c.method(profileMethod, profileWidened)
	return e
}

// describeSeparated fills a limit without mixed parts, or with one mixed value.
func (d *dataset) describeSeparated(c *Curve, h half, f *firthFit) {
	l := c.side(h.k)
	cut, logSigma := d.separatedIntervals(h, f)
	l.Cut = cut.map1(d.sc.out, d.sc.scale)
	l.Sigma = logSigma.map1(func(t float64) float64 { return d.sc.size(math.Exp(t)) }, d.sc.size(math.Exp(logSigma.Value)))
	l.Gap = d.gap(h)
	d.derive(c, l)
	if l.HasLimit {
		l.HasAtLimit = true
		l.AtLimit = Estimate{Value: c.Accept(l.Limit), Confidence: d.options.Confidence, Method: "bias-reduced (Firth)",
			Why: "without mixed parts the curve between the neighbouring parts is unknown"}
	}
}

// describeOneSided gives the bound that a limit without a turn still has.
func (d *dataset) describeOneSided(c *Curve, h half) {
	l := c.side(h.k)
	none := Estimate{Confidence: d.options.Confidence, Why: h.why, Absent: true}
	l.Cut, l.Offset, l.Sigma, l.Width, l.AtLimit = none, none, none, none, none
	if h.reversed || !h.hasAccept || h.hasReject {
		return
	}
	// Every part was accepted: the cut lies beyond the outermost of them.
	bound := d.sc.out(h.accept)
	l.Cut.Method = "the outermost part, which was always accepted"
	if h.k == 0 {
		l.Cut.Upper, l.Cut.HasUpper = bound, true
	} else {
		l.Cut.Lower, l.Cut.HasLower = bound, true
	}
	if l.HasLimit {
		l.Offset = l.Cut
		if h.k == 0 {
			l.Offset.Upper -= l.Limit
		} else {
			l.Offset.Lower -= l.Limit
		}
	}
}
