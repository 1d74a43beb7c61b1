package signal

import (
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// Flaw is one flaw of known size and how often it was looked for and found.
type Flaw struct {
	Name   string // rows of one name are one flaw
	Size   float64
	Found  int
	Looked int
}

// HitMiss is the probability of detection against flaw size.
type HitMiss struct {
	A50 Estimate // the size found half of the time
	A90 Estimate // the size found nine times in ten
	// A9095 is the upper 95 % confidence bound of A90, one-sided, by likelihood
	// ratio: a flaw of this size is found at least nine times in ten, with 95 %
	// confidence. Meaningful if HasA9095.
	A9095    float64
	HasA9095 bool
	Why      string // why A9095 is missing

	Curve *Curve // over the natural logarithm of the size, as a lower limit
}

// Found returns the fitted probability that a flaw of this size is found, with a
// pointwise interval as of Curve.Band. It returns an error if the size is not
// above 0.
func (h *HitMiss) Found(size float64) (Estimate, error) {
	if !(size > 0) || !finite(size) {
		return Estimate{}, fmt.Errorf("size %v: want a number above 0", size)
	}
	return h.Curve.Band(math.Log(size)), nil
}

// a9095Confidence is that of the a90/95 bound, one-sided.
const a9095Confidence = 0.95

// FitHitMiss fits the probability that a flaw is found as F((ln a − µ)/σ), the
// hit/miss model of MIL-HDBK-1823A (2009), to flaws of known size a. The bound
// a90/95 is where twice the log-likelihood lost by holding a90 reaches the
// square of the one-sided normal quantile 1.645, widened for lack of fit where
// that is found. Options.Confidence governs the two-sided intervals of A50 and
// A90 alone. Where found and missed sizes do not overlap the curve is
// bias-reduced as in Fit, and there is neither a bound nor an interval of A90:
// how the chance rises is not known.
//
// It returns an error if a size is not above 0, a count cannot be, or larger
// flaws are not found more often.
func FitHitMiss(flaws []Flaw, options Options) (*HitMiss, error) {
	parts := make([]Part, len(flaws))
	for i, f := range flaws {
		if !(f.Size > 0) || !finite(f.Size) {
			return nil, fmt.Errorf("flaw %d: size %v: want a number above 0", i+1, f.Size)
		}
		if f.Looked < 0 || f.Found < 0 || f.Found > f.Looked {
			return nil, fmt.Errorf("flaw %d: found %d times of %d", i+1, f.Found, f.Looked)
		}
		parts[i] = Part{Name: f.Name, Value: math.Log(f.Size), Accepted: f.Found, Calls: f.Looked}
	}
	if options.Lapse {
		return nil, errors.New("a hit/miss curve has no lapse rate")
	}
	d, err := prepare(parts, options)
	if err != nil {
		return nil, err
	}
	d.has = [2]bool{true, false}
	c, err := d.fit(!options.SkipIntervals)
	if err != nil {
		return nil, err
	}
	h := &HitMiss{Curve: c, A50: c.Lower.Cut.map1(math.Exp, math.Exp(c.Lower.Cut.Value))}
	if err := h.a90(d, c); err != nil {
		return nil, err
	}
	return h, nil
}

// a90Profile is the likelihood in terms of a90, on the scale of the fit, and
// log σ.
type a90Profile struct {
	*profiler
	se float64 // of a90 by the information
}

// a90Profile sets the likelihood up so that its cut is the size found nine times
// in ten.
func (d *dataset) a90Profile(c *Curve, value float64) *a90Profile {
	shift := d.options.Link.quantile(0.9)
	m := d.model(0, len(d.x), d.has)
	m.shift[0] = shift
	// The covariance of (a90, log σ), from that of (cut, log σ).
	a, b, v := c.cov[cutL][cutL], c.cov[cutL][logSigmaL], c.cov[logSigmaL][logSigmaL]
	k := shift * math.Exp(c.local[logSigmaL])
	va, vb := a+2*k*b+k*k*v, b+k*v
	covariance := func(i, j int) float64 {
		switch {
		case i == 0 && j == 0:
			return va
		case i == 1 && j == 1:
			return v
		}
		return vb
	}
	best := []float64{value, c.local[logSigmaL]}
	return &a90Profile{newProfiler(newSolver(m), best, c.blockLogLikelihood, covariance, 0), math.Sqrt(va)}
}

// bound is where the square root of twice the log-likelihood lost reaches
// target, upwards (way 1) or downwards (−1).
func (p *a90Profile) bound(target, way float64) (float64, ending) {
	return p.profiler.bound(way*target*p.se, cutReach, target)
}

// a90 fills A90 and its bound.
func (h *HitMiss) a90(d *dataset, c *Curve) error {
	out := func(t float64) float64 { return math.Exp(d.sc.out(t)) }
	value := c.local[cutL] + d.options.Link.quantile(0.9)*math.Exp(c.local[logSigmaL])
	q := Estimate{Value: value, Confidence: d.options.Confidence, Method: c.Lower.Cut.Method}
	switch {
	case c.Lower.Status != Fitted:
		// An interval of a90 would say what a90/95 cannot.
		q.Method, q.Why, h.Why = firthMethod, whyNoRise, whyNoRise
	case d.options.SkipIntervals:
		q.Why, h.Why = whySkipped, whySkipped
	default:
		p := d.a90Profile(c, value)
		q.SE = p.se * math.Sqrt(c.factor)
		target := math.Sqrt(c.crit)
		var below, above ending
		q.Upper, above = p.bound(target, 1)
		q.Lower, below = p.bound(target, -1)
		q.bounded(below, above)
		h.a9095(c, p, out)
	}
	h.A90 = q.map1(out, d.sc.scale*out(value))
	if h.A90.HasUpper && !finite(h.A90.Upper) {
		h.A90.Upper, h.A90.HasUpper, h.A90.Why = 0, false, whyFlat
	}
	if h.HasA9095 {
		h.A9095 = math.Max(h.A9095, h.A90.Value)
	}
	if !finite(h.A50.Value, h.A50.Lower, h.A50.Upper, h.A50.SE, h.A90.Value, h.A90.Lower, h.A90.Upper, h.A90.SE) {
		return &NotConvergedError{What: "the hit/miss curve", Reason: "a size is not a finite number"}
	}
	return nil
}

const (
	firthMethod = "bias-reduced (Firth)"
	whyNoRise   = "hits and misses do not overlap in size, so the study does not tell how the chance rises"
)

// a9095 fills the bound of a90, which is one-sided.
func (h *HitMiss) a9095(c *Curve, p *a90Profile, out func(float64) float64) {
	target := normalQuantile(a9095Confidence)
	if f := c.LackOfFit; f.Applied {
		target = math.Sqrt(c.factor) * distuv.StudentsT{Sigma: 1, Nu: float64(f.DF)}.Quantile(a9095Confidence)
	}
	at, end := p.bound(target, 1)
	if a := out(at); end == crossed && finite(a) {
		h.A9095, h.HasA9095 = a, true
		return
	}
	h.Why = whyFlat
}
