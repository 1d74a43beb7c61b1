package signal

import (
	"fmt"
	"math"
)

// Line is one limit's curve as F(Intercept + Slope·x), with F the standard
// normal or the standard logistic distribution (of scale 1), the form in which
// generalised linear models give it, with standard errors by the expected
// information and 0 where there are none.
type Line struct {
	Intercept, Slope     float64
	InterceptSE, SlopeSE float64
}

// Line returns the limit's curve as a line on the link scale.
func (c *Curve) Line(side Side) (Line, error) {
	k := int(side)
	if k != 0 && k != 1 || !c.known[2*k] {
		return Line{}, fmt.Errorf("the curve has no %s limit", side)
	}
	sign := 1.0
	if side == Upper {
		sign = -1
	}
	slope := sign * math.Exp(-c.local[2*k+1]) / c.sc.scale
	if c.Options.Link == Logit {
		slope *= perSD
	}
	cut := c.sc.out(c.local[2*k])
	l := Line{Intercept: -slope * cut, Slope: slope}
	if !c.hasCov[2*k] {
		return l, nil
	}
	e := c.expected
	vCut := e[2*k][2*k] * sq(c.sc.scale)
	vLog := e[2*k+1][2*k+1]
	both := e[2*k][2*k+1] * c.sc.scale
	l.SlopeSE = math.Abs(slope) * math.Sqrt(math.Max(0, vLog))
	l.InterceptSE = math.Abs(slope) * math.Sqrt(math.Max(0, vCut+cut*cut*vLog-2*cut*both))
	return l, nil
}
