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

// a9095Confidence is that of the a90/95 bound, one-sided.
const a9095Confidence = 0.95

// FitHitMiss fits the probability that a flaw is found as F((ln a − µ)/σ), the
// hit/miss model of MIL-HDBK-1823A (2009), to flaws of known size a. The bound
// a90/95 is where twice the log-likelihood lost by holding a90 reaches the
// square of the one-sided normal quantile 1.645, widened for lack of fit where
// that is found. Options.Confidence governs the two-sided intervals of A50 and
// A90 alone. Where found and missed sizes do not overlap the curve is
// bias-reduced as in Fit, and there is no bound: how the chance rises is not
// known.
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
	value     float64 // the estimate of a90
	se        float64 // its standard error by the information; 0 without a maximum
	separated *half   // where found and missed sizes do not overlap
	step      float64 // how far the search for a bound begins to go
}

// a90Profile sets the likelihood up so that its cut is the size found nine times
// in ten.
func (d *dataset) a90Profile(c *Curve) *a90Profile {
	shift := d.options.Link.quantile(0.9)
	sigma := math.Exp(c.local[logSigmaL])
	m := d.model(0, len(d.x), d.has)
	m.shift[0] = shift
	p := &a90Profile{value: c.local[cutL] + shift*sigma, step: math.Max(sigma, 1e-6)}
	best := []float64{p.value, c.local[logSigmaL]}
	if !c.hasCov[cutL] {
		// Under separation the supremum is reached with all of the curve's turn
		// between the missed and the found sizes.
		h := d.halves()[0]
		p.separated = &h
		p.profiler = newProfiler(newSolver(m), best, d.supremum(h), nil, 0)
		return p
	}
	// The covariance of (a90, log σ), from that of (cut, log σ).
	a, b, v := c.cov[cutL][cutL], c.cov[cutL][logSigmaL], c.cov[logSigmaL][logSigmaL]
	k := shift * sigma
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
	p.se = math.Sqrt(va)
	p.step = p.se
	p.profiler = newProfiler(newSolver(m), best, c.blockLogLikelihood, covariance, 0)
	return p
}

// bound is where the square root of twice the log-likelihood lost reaches
// target, upwards (way 1) or downwards (−1), and false if it does not.
func (p *a90Profile) bound(target, way float64) (float64, bool) {
	p.restart()
	from := p.value
	if p.separated != nil {
		// The supremum is reached at the end of the gap on either side.
		from = p.separated.accept
		if way < 0 {
			from = p.separated.reject
		}
		if r := p.root(from + way*1e-9); math.IsNaN(r) {
			return 0, false
		} else if r >= target {
			return from, true
		}
		from += way * 1e-9
	}
	return found(crossing(from, way*target*p.step, cutReach, target, p.root))
}

// a90 fills A90 and its bound.
func (h *HitMiss) a90(d *dataset, c *Curve) error {
	out := func(t float64) float64 { return math.Exp(d.sc.out(t)) }
	p := d.a90Profile(c)
	q := Estimate{Value: p.value, Confidence: d.options.Confidence, Method: c.Lower.Cut.Method, SE: p.se * math.Sqrt(c.factor)}
	if d.options.SkipIntervals {
		q.Why, h.Why = whySkipped, whySkipped
	} else {
		target := math.Sqrt(c.crit)
		q.Upper, q.HasUpper = p.bound(target, 1)
		q.Lower, q.HasLower = p.bound(target, -1)
		if q.HasUpper {
			q.Upper = math.Max(q.Upper, q.Value)
		}
		if q.HasLower {
			q.Lower = math.Min(q.Lower, q.Value)
		}
		if !q.HasLower || !q.HasUpper {
			q.Why = whyFlat
		}
	}
	h.A90 = q.map1(out, d.sc.scale*out(p.value))
	if h.A90.HasUpper && !finite(h.A90.Upper) {
		h.A90.Upper, h.A90.HasUpper, h.A90.Why = 0, false, whyFlat
	}
	if !d.options.SkipIntervals {
		h.a9095(c, p, out)
	}
	if !finite(h.A50.Value, h.A50.Lower, h.A50.Upper, h.A50.SE, h.A90.Value, h.A90.Lower, h.A90.Upper, h.A90.SE) {
		return &NotConvergedError{What: "the hit/miss curve", Reason: "a size is not a finite number"}
	}
	return nil
}

// a9095 fills the bound of a90, which is one-sided.
func (h *HitMiss) a9095(c *Curve, p *a90Profile, out func(float64) float64) {
	if c.Lower.Status != Fitted {
		h.Why = "hits and misses do not overlap in size, so the study does not tell how the chance rises"
		return
	}
	target := normalQuantile(a9095Confidence)
	if f := c.LackOfFit; f.Applied {
		target = math.Sqrt(c.factor) * distuv.StudentsT{Sigma: 1, Nu: float64(f.DF)}.Quantile(a9095Confidence)
	}
	at, ok := p.bound(target, 1)
	if a := out(at); ok && finite(a) {
		h.A9095, h.HasA9095 = math.Max(a, h.A90.Value), true
		return
	}
	h.Why = whyFlat
}
