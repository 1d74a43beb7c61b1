package signal

import (
	"fmt"
	"math"
)

// Gauge is how an inspection accepts: a cut and a σ at each limit it has.
type Gauge struct {
	Link                   Link
	LowerCut, UpperCut     float64
	LowerSigma, UpperSigma float64
	HasLower, HasUpper     bool
	Lapse                  float64 // share of calls made at random
}

// Gauge returns the fitted curve as a gauge. It returns an error if the curve
// has no cut at one of its limits.
func (c *Curve) Gauge() (Gauge, error) {
	g := Gauge{Link: c.Options.Link, Lapse: c.epsilon()}
	for k := range 2 {
		l := c.side(k)
		if l == nil {
			continue
		}
		if !l.Known() {
			return Gauge{}, fmt.Errorf("no cut was found at the %s limit: %s", l.Side, l.Why)
		}
	}
	g.HasLower, g.HasUpper = c.known[cutL], c.known[cutU]
	if g.HasLower {
		g.LowerCut, g.LowerSigma = c.sc.out(c.local[cutL]), c.sc.size(math.Exp(c.local[logSigmaL]))
	}
	if g.HasUpper {
		g.UpperCut, g.UpperSigma = c.sc.out(c.local[cutU]), c.sc.size(math.Exp(c.local[logSigmaU]))
	}
	return g, nil
}

func (g Gauge) check() error {
	if g.Link != Probit && g.Link != Logit {
		return fmt.Errorf("link %d: want Probit or Logit", int(g.Link))
	}
	if !g.HasLower && !g.HasUpper {
		return fmt.Errorf("the gauge has no cut")
	}
	if g.HasLower && (!finite(g.LowerCut, g.LowerSigma) || !(g.LowerSigma > 0)) ||
		g.HasUpper && (!finite(g.UpperCut, g.UpperSigma) || !(g.UpperSigma > 0)) {
		return fmt.Errorf("gauge cuts %v and %v, σ %v and %v: want finite numbers, σ above 0", g.LowerCut, g.UpperCut, g.LowerSigma, g.UpperSigma)
	}
	if !(g.Lapse >= 0 && g.Lapse < 1) {
		return fmt.Errorf("lapse rate %v: want a number from 0 up to 1", g.Lapse)
	}
	return nil
}

// Tighten returns the gauge with each cut moved inwards by band.
func (g Gauge) Tighten(band float64) Gauge {
	g.LowerCut += band
	g.UpperCut -= band
	return g
}

// Accept returns the probability that a part of value x is accepted and that
// it is rejected, each precise in its own tail. A σ that is not above 0, such as
// one not filled in, is a step: half of the calls accept at the cut itself, none
// beyond it and all inside. Where x is NaN, so are both.
func (g Gauge) Accept(x float64) (accept, reject float64) {
	accept, reject, _ = g.accept(x)
	return accept, reject
}

// accept is Accept, and by how much acceptance grows with each local parameter,
// cuts in the unit of the values.
func (g Gauge) accept(x float64) (accept, reject float64, slope [locals]float64) {
	has := [2]bool{g.HasLower, g.HasUpper}
	var z [2]float64
	if g.HasLower {
		z[0] = inSigmas(x-g.LowerCut, g.LowerSigma)
	}
	if g.HasUpper {
		z[1] = inSigmas(x-g.UpperCut, g.UpperSigma)
	}
	var t term
	t.at(g.Link, z, has, 0, 0, g.Lapse)
	steady := 1 - g.Lapse
	if g.HasLower {
		d := steady * t.densities[0]
		slope[cutL], slope[logSigmaL] = -d/g.LowerSigma, -d*z[0]
	}
	if g.HasUpper {
		d := steady * t.densities[1]
		slope[cutU], slope[logSigmaU] = d/g.UpperSigma, d*z[1]
	}
	slope[logitE] = t.epsilonGradient * g.Lapse * steady
	return math.Min(1, math.Max(0, t.p)), math.Min(1, math.Max(0, t.q)), slope
}

// inSigmas is a distance in units of σ, for which a step has infinite ones.
func inSigmas(distance, sigma float64) float64 {
	switch {
	case distance == 0:
		return 0
	case sigma > 0:
		return distance / sigma
	}
	return distance * math.Inf(1)
}
