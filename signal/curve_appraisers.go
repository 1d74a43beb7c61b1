package signal

import (
	"errors"
	"fmt"
	"math"
)

// Appraisers holds the curve of all calls together, each appraiser's own, and
// the tests of whether they are one.
type Appraisers struct {
	Pooled *Curve
	Each   []*Curve // nil where the appraiser's calls give no curve
	Errors []error  // why, in the same place; nil otherwise

	SameCut   Test  // the appraisers have the same cuts, each its own σ
	SameSigma Test  // the same σ, each its own cuts
	SameCurve Test  // the same cuts and the same σ
	Compared  []int // the appraisers that the tests compare

	Warnings []error
}

// FitAppraisers fits the pooled curve and each appraiser's own, and tests by
// likelihood ratio whether they differ. byAppraiser holds one slice for each
// appraiser. Where all have the same parts in the same places (a part that an
// appraiser did not see has 0 calls), calls are added by place for the pooled
// fit; otherwise by name.
//
// An appraiser whose calls turn at only some of the limits is left out of the
// tests; Compared lists the rest. Where an appraiser is separated, the test
// uses the supremum of the likelihood. It returns an error if the pooled calls
// give no curve.
func FitAppraisers(byAppraiser [][]Part, limits Limits, options Options) (*Appraisers, error) {
	if len(byAppraiser) == 0 {
		return nil, errors.New("no appraiser")
	}
	if err := limits.check(); err != nil {
		return nil, err
	}
	calls := 0
	for a, parts := range byAppraiser {
		var err error
		if calls, err = countCalls(parts, calls); err != nil {
			return nil, fmt.Errorf("appraiser %d: %w", a+1, err)
		}
	}
	pooled, err := pool(byAppraiser)
	if err != nil {
		return nil, err
	}
	r := &Appraisers{Each: make([]*Curve, len(byAppraiser)), Errors: make([]error, len(byAppraiser))}
	if r.Pooled, err = Fit(pooled, limits, options); err != nil {
		return nil, err
	}
	for a, parts := range byAppraiser {
		r.Each[a], r.Errors[a] = Fit(parts, limits, options)
	}
	r.compare(byAppraiser, limits)
	return r, nil
}

// pool adds the appraisers' calls part by part.
func pool(byAppraiser [][]Part) ([]Part, error) {
	first := byAppraiser[0]
	aligned := true
	for _, parts := range byAppraiser[1:] {
		if len(parts) != len(first) {
			aligned = false
			break
		}
		for i, p := range parts {
			if p.Value != first[i].Value || p.Name != first[i].Name {
				aligned = false
				break
			}
		}
	}
	var out []Part
	if !aligned {
		for _, parts := range byAppraiser {
			out = append(out, parts...)
		}
		return out, nil
	}
	out = append(out, first...)
	for _, parts := range byAppraiser[1:] {
		for i, p := range parts {
			out[i].Calls += p.Calls
			out[i].Accepted += p.Accepted
		}
	}
	return out, nil
}

// compare runs the likelihood-ratio tests across appraisers.
func (r *Appraisers) compare(byAppraiser [][]Part, limits Limits) {
	none := func(why string) {
		r.SameCut, r.SameSigma, r.SameCurve = Test{Why: why}, Test{Why: why}, Test{Why: why}
	}
	has := [2]bool{r.Pooled.Lower.Known(), r.Pooled.Upper.Known()}
	// One dataset of all compared appraisers, one group each, in one scaling.
	g := &model{link: r.Pooled.Options.Link, first: []int{0}, lapse: absent}
	if r.Pooled.known[logitE] {
		g.epsilon = r.Pooled.epsilon()
	}
	separated := false
	for a, c := range r.Each {
		if c == nil {
			r.warn(WarnNotCompared, "appraiser %d is not compared: %v", a+1, r.Errors[a])
			continue
		}
		skip := false
		for k := range 2 {
			if l := c.side(k); has[k] && !l.Known() {
				r.warn(WarnNotCompared, "appraiser %d is not compared: %s", a+1, l.Why)
				skip = true
			} else if has[k] && l.Status != Fitted {
				separated = true
			}
		}
		if skip {
			continue
		}
		r.Compared = append(r.Compared, a)
		for _, p := range byAppraiser[a] {
			if p.Calls > 0 {
				g.x = append(g.x, r.Pooled.sc.in(p.Value))
				g.accepted, g.rejected = append(g.accepted, float64(p.Accepted)), append(g.rejected, float64(p.Calls-p.Accepted))
			}
		}
		g.first = append(g.first, len(g.x))
	}
	if len(r.Compared) < 2 {
		none("fewer than two appraisers have a curve at every limit")
		return
	}
	if separated {
		r.warn(WarnRoughTest, "an appraiser has no mixed part at a limit, or only one: the tests between appraisers are rough there")
	}
	full, nFull := r.joint(g, has, false, false)
	cut, nCut := r.joint(g, has, true, false)
	sigma, nSigma := r.joint(g, has, false, true)
	curve, nCurve := r.joint(g, has, true, true)
	fit := r.Pooled.LackOfFit
	r.SameCut = likelihoodRatio(full, cut, nFull-nCut, fit)
	r.SameSigma = likelihoodRatio(full, sigma, nFull-nSigma, fit)
	r.SameCurve = likelihoodRatio(full, curve, nFull-nCurve, fit)
}

// joint returns the supremum of the likelihood over all compared appraisers
// with cuts, σs or both shared, and the number of parameters; NaN if a fit did
// not converge.
func (r *Appraisers) joint(g *model, has [2]bool, shareCut, shareSigma bool) (loglik float64, params int) {
	two := r.Pooled.Options.TwoSigmas
	m := *g
	m.groups = make([]indices, len(r.Compared))
	next := func() int { m.n++; return m.n - 1 }
	for i := range m.groups {
		in := indices{cut: [2]int{absent, absent}, logSigma: [2]int{absent, absent}}
		for k := range 2 {
			if !has[k] {
				continue
			}
			if in.cut[k] = absent; shareCut && i > 0 {
				in.cut[k] = m.groups[0].cut[k]
			} else {
				in.cut[k] = next()
			}
			switch {
			case k == 1 && has[0] && !two:
				in.logSigma[1] = in.logSigma[0]
			case shareSigma && i > 0:
				in.logSigma[k] = m.groups[0].logSigma[k]
			default:
				in.logSigma[k] = next()
			}
		}
		m.groups[i] = in
	}
	s := newSolver(&m)
	best := math.NaN()
	for try := range 2 {
		for i, in := range m.groups {
			for k := range 2 {
				if !has[k] {
					continue
				}
				from := r.Pooled
				if try == 1 {
					from = r.Each[r.Compared[i]]
				}
				s.theta[in.cut[k]] = r.Pooled.sc.in(from.sc.out(from.local[2*k]))
				s.theta[in.logSigma[k]] = from.local[2*k+1] + math.Log(from.sc.scale/r.Pooled.sc.scale)
			}
		}
		if out := s.maximise(absent, 1e-11); out.converged && !(out.loglik <= best) {
			best = out.loglik
		}
	}
	return best, m.n
}

func (r *Appraisers) warn(code WarningCode, format string, args ...any) {
	r.Warnings = append(r.Warnings, Warning{code, fmt.Sprintf(format, args...)})
}
