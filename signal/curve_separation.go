package signal

import (
	"math"
)

// firthFit is the bias-reduced curve of one separated limit, in scaled units.
type firthFit struct {
	cut, logSigma float64
	supremum      float64 // of the plain log-likelihood, as σ → 0
}

// firth fits a separated half by mean-bias reduction of intercept α and slope
// β of F(α + βx): the adjusted score equations of Firth (Biometrika 80 (1993)
// 27–38) in the form of Kosmidis & Firth (Biometrika 96 (2009) 793–804) for
// generalised linear models,
//
//	Σ [ d (a − nP)/(PQ) + ½ h f′/f ] (1, x) = 0,
//
// with d = f(η), and h the part's leverage. Fisher scoring from a flat curve.
func (d *dataset) firth(h half) (*firthFit, error) {
	sign := 1.0
	if h.k == 1 {
		sign = -1
	}
	m0, unit := d.turn(h)
	link := d.options.Link
	n := h.to - h.from
	w, e, u := make([]float64, n), make([]float64, n), make([]float64, n)
	// score returns the adjusted score at (α, β), and the Fisher step from it.
	score := func(alpha, beta float64) (s0, s1, step0, step1 float64, ok bool) {
		var i00, i01, i11 float64
		for i := range n {
			j := h.from + i
			u[i] = sign * (d.x[j] - m0) / unit
			eta := alpha + beta*u[i]
			below, above, f, _ := link.tails(eta)
			calls := d.accepted[j] + d.rejected[j]
			if math.Abs(eta) > deep-1 {
				w[i], e[i] = 0, 0
				if (d.accepted[j] > 0 && eta < 0) || (d.rejected[j] > 0 && eta > 0) {
					return 0, 0, 0, 0, false
				}
				continue
			}
			w[i] = calls * f * f / (below * above)
			// a − nP without cancellation: aQ − rP.
			e[i] = f * (d.accepted[j]*above - d.rejected[j]*below) / (below * above)
			i00, i01, i11 = i00+w[i], i01+w[i]*u[i], i11+w[i]*u[i]*u[i]
		}
		det := i00*i11 - i01*i01
		if !(det > 1e-14*i00*i11) {
			return 0, 0, 0, 0, false
		}
		for i := range n {
			hat := w[i] * (i11 - 2*u[i]*i01 + u[i]*u[i]*i00) / det
			_, _, _, ratio := link.tails(alpha + beta*u[i])
			a := e[i] + 0.5*hat*ratio
			s0, s1 = s0+a, s1+a*u[i]
		}
		return s0, s1, (i11*s0 - i01*s1) / det, (i00*s1 - i01*s0) / det, true
	}
	alpha, beta := 0.0, 0.1
	gain, lastA, lastB := 1.0, 0.0, 0.0
	for range 2000 {
		_, _, da, db, ok := score(alpha, beta)
		if !ok {
			alpha, beta = alpha/2, beta/2
			continue
		}
		// Fisher scoring from a flat curve can overshoot where weights vanish.
		most := math.Max(math.Abs(db)/(0.5*math.Abs(beta)+0.05), math.Abs(da)/(0.5*math.Abs(alpha)+0.5))
		if most > 1 {
			da, db = da/most, db/most
		}
		// Expected information is not the slope of the adjusted score: with few
		// calls full steps can overshoot for ever. Steps that turn back are
		// shortened.
		if da*lastA+db*lastB < 0 {
			gain = math.Max(gain/2, 0.02)
		} else {
			gain = math.Min(1, 1.1*gain)
		}
		lastA, lastB = da, db
		alpha, beta = alpha+gain*da, beta+gain*db
		if most < 1 && math.Abs(da) < 1e-12*(1+math.Abs(alpha)) && math.Abs(db) < 1e-12*(1+math.Abs(beta)) {
			if !(beta > 0) {
				break
			}
			cut := m0 - sign*unit*alpha/beta
			return &firthFit{cut: cut, logSigma: math.Log(unit / beta), supremum: d.supremum(h)}, nil
		}
	}
	return nil, &NotConvergedError{What: "the bias-reduced curve at the " + Side(h.k).String() + " limit", Reason: "its score equations have no verified solution with acceptance rising inwards"}
}

// turn returns the middle of the gap in which calls turn and a length to
// measure by: the distance to the nearest part of another value.
func (d *dataset) turn(h half) (middle, unit float64) {
	middle = h.reject/2 + h.accept/2
	unit = math.Inf(1)
	for _, x := range d.x[h.from:h.to] {
		if a := math.Abs(x - middle); a > 0 && a < unit {
			unit = a
		}
	}
	if math.IsInf(unit, 1) {
		unit = 1
	}
	return middle, unit
}

// supremum is the log-likelihood that a separated half approaches as σ → 0:
// that of the mixed value by its own share, 0 without one.
func (d *dataset) supremum(h half) float64 {
	if h.status != QuasiSeparated {
		return 0
	}
	var a, r float64
	for i := h.from; i < h.to; i++ {
		if d.x[i] == h.reject {
			a, r = a+d.accepted[i], r+d.rejected[i]
		}
	}
	return saturated(a, r)
}

// separatedIntervals returns cut and log σ of a separated limit with intervals
// by the plain profile likelihood, measured from its supremum. Within the gap
// the supremum is reached for every cut as σ → 0, so the interval of the cut is
// the gap itself, or more where the neighbouring parts had few calls; σ has an
// upper bound only. The cut-off is chi-square's with two degrees of freedom:
// cut and σ are not determined apart here, and with one the simulated coverage
// falls short (docs/coverage-signal.md).
func (d *dataset) separatedIntervals(h half, f *firthFit) (cut, logSigma Estimate) {
	cut = Estimate{Value: f.cut, Confidence: d.options.Confidence, Method: separatedMethod}
	logSigma = Estimate{Value: f.logSigma, Confidence: d.options.Confidence, Method: separatedMethod}
	if d.options.SkipIntervals {
		cut.Why, logSigma.Why = whySkipped, whySkipped
		return cut, logSigma
	}
	m := d.model(h.from, h.to, [2]bool{h.k == 0, h.k == 1})
	s := newSolver(m)
	best := []float64{f.cut, f.logSigma}
	target := math.Sqrt(-2 * math.Log(1-d.options.Confidence)) // chi-square quantile, two degrees of freedom
	lo, hi := math.Min(h.reject, h.accept), math.Max(h.reject, h.accept)
	_, unit := d.turn(h)
	bound := func(edge, dir float64) (float64, bool) {
		p := newProfiler(s, best, f.supremum, nil, 0)
		// Just beyond the edge the profile may jump: the edge is the bound then.
		nudge := dir * 1e-7 * unit
		r := p.root(edge + nudge)
		if math.IsNaN(r) {
			return 0, false
		}
		if r >= target {
			return edge, true
		}
		return found(crossing(edge+nudge, dir*unit/4, cutReach, target, p.root))
	}
	cut.Upper, cut.HasUpper = bound(hi, 1)
	cut.Lower, cut.HasLower = bound(lo, -1)
	if !cut.HasLower || !cut.HasUpper {
		cut.Why = whyFlat
	}
	// The bias-reduced cut lies in the gap in all but odd cases; the interval
	// holds it always.
	if cut.HasUpper {
		cut.Upper = math.Max(cut.Upper, cut.Value)
	}
	if cut.HasLower {
		cut.Lower = math.Min(cut.Lower, cut.Value)
	}
	p := newProfiler(s, []float64{h.reject/2 + h.accept/2, math.Log(unit) - 6}, f.supremum, nil, 1)
	logSigma.Upper, logSigma.HasUpper = found(crossing(math.Log(unit)-6, 3, logSigmaReach, target, p.root))
	logSigma.Why = "without two mixed values the calls may turn at a point: σ has no lower bound"
	if !logSigma.HasUpper {
		logSigma.Why += ", and the likelihood sets no upper one"
	} else {
		logSigma.Upper = math.Max(logSigma.Upper, logSigma.Value)
	}
	return cut, logSigma
}

// gap returns the neighbouring values between which calls turn, in the unit of
// the values.
func (d *dataset) gap(h half) *Gap {
	g := &Gap{}
	if h.status == Separated {
		for i := h.from; i < h.to; i++ {
			if d.x[i] == h.reject {
				g.Reject, g.HasReject = d.parts[i].Value, true
			}
			if d.x[i] == h.accept {
				g.Accept, g.HasAccept = d.parts[i].Value, true
			}
		}
		return g
	}
	g.HasMixed = true
	for i := h.from; i < h.to; i++ {
		x, v := d.x[i], d.parts[i].Value
		outside := x < h.reject
		if h.k == 1 {
			outside = x > h.reject
		}
		switch {
		case x == h.reject:
			g.Mixed = v
		case outside:
			if !g.HasReject || h.k == 0 && v > g.Reject || h.k == 1 && v < g.Reject {
				g.Reject, g.HasReject = v, true
			}
		default:
			if !g.HasAccept || h.k == 0 && v < g.Accept || h.k == 1 && v > g.Accept {
				g.Accept, g.HasAccept = v, true
			}
		}
	}
	return g
}
