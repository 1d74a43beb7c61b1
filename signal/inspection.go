package signal

import "errors"

// Inspection is what decides on the parts of a process: a fitted *Curve, whose
// risks carry its uncertainty, or a Known one.
type Inspection interface {
	// cuts returns how it accepts, and the limits that tell good from bad. A
	// curve without a cut at one of its limits is an error.
	cuts() (Gauge, Limits, error)
	// bound gives the quantities of r, whose values v are found with g, their
	// intervals.
	bound(p Process, g Gauge, r *Risk, v [quantities]float64)
	// mostEscapes returns the upper bound of the escapes with a guard band, or
	// why there is none.
	mostEscapes(p Process, band float64) (float64, error)
}

// Known is an inspection whose cuts and σ are taken as known exactly, a cut for
// each limit; its risks have no intervals.
type Known struct {
	Gauge  Gauge
	Limits Limits
}

// cutsOf is cuts, of nothing too.
func cutsOf(in Inspection) (Gauge, Limits, error) {
	if c, ok := in.(*Curve); in == nil || ok && c == nil {
		return Gauge{}, Limits{}, errors.New("no curve")
	}
	return in.cuts()
}

func (k Known) cuts() (Gauge, Limits, error) { return k.Gauge, k.Limits, nil }

func (k Known) bound(_ Process, _ Gauge, r *Risk, _ [quantities]float64) {
	for _, e := range r.fields() {
		if !e.Absent {
			e.Why = "the gauge is taken as known"
		}
	}
}

func (k Known) mostEscapes(Process, float64) (float64, error) {
	return noUpperBound("the gauge is taken as known")
}

func (c *Curve) cuts() (Gauge, Limits, error) {
	g, err := c.Gauge()
	return g, c.Limits, err
}

func (c *Curve) bound(p Process, g Gauge, r *Risk, v [quantities]float64) {
	fields := r.fields()
	for _, e := range fields {
		if !e.Absent {
			e.Confidence = c.Options.Confidence
		}
	}
	*fields[qBad] = Estimate{Value: v[qBad], Lower: v[qBad], Upper: v[qBad], HasLower: true, HasUpper: true, Confidence: c.Options.Confidence, Method: "the process is taken as given"}
	if c.separatedAnywhere() {
		c.corners(p, g, r, v)
		return
	}
	c.profile(p, r, v)
}

func (c *Curve) mostEscapes(p Process, band float64) (float64, error) {
	if !c.separatedAnywhere() {
		if e, ok := newRiskProfile(c, p, band).limit(qEscape, 1); ok {
			return e, nil
		}
	}
	r, err := Assess(p, c, band) // none or all escape, or a limit is separated
	if err != nil {
		return 0, err
	}
	if !r.Escape.HasUpper {
		return noUpperBound(r.Escape.Why)
	}
	return r.Escape.Upper, nil
}

func noUpperBound(why string) (float64, error) {
	return 0, errors.New("the escapes have no upper bound to hold under a target: " + why)
}
