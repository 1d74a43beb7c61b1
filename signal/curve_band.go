package signal

import (
	"math"
)

// Band returns the fitted probability that a part of value x is accepted, with
// a pointwise interval for plotting: normal on the link scale (delta method),
// widened where lack of fit widens the rest. The interval is missing where a
// limit that matters at x has no covariance, because its parts are separated. All
// of it is absent where x is NaN.
func (c *Curve) Band(x float64) Estimate {
	if math.IsNaN(x) {
		return Estimate{Absent: true, Confidence: c.Options.Confidence, Why: "the value is no number"}
	}
	t := c.sc.in(x)
	p, q := c.probability(t)
	e := Estimate{Value: p, Confidence: c.Options.Confidence, Method: c.method(deltaMethod, deltaWidened)}
	grad, density, z, ok := c.linkGradient(t, p, q)
	if !ok {
		e.Why = "the limit nearby has no mixed part, or calls do not turn there"
		return e
	}
	var v float64
	for i := range grad {
		for j := range grad {
			v += grad[i] * c.cov[i][j] * grad[j]
		}
	}
	se := math.Sqrt(math.Max(0, v))
	half := math.Sqrt(c.crit) * se
	e.SE = density * se * math.Sqrt(c.factor)
	// p and F(z) may differ by rounding.
	e.Lower, e.Upper, e.HasLower, e.HasUpper = math.Min(p, c.Options.Link.cdf(z-half)), math.Max(p, c.Options.Link.cdf(z+half)), true, true
	if !finite(e.SE, e.Lower, e.Upper) {
		e.SE, e.Lower, e.Upper = 0, p, p
	}
	return e
}

// linkGradient returns the gradient of z = F⁻¹(P) with respect to the local
// parameters, F's density at z, and z.
func (c *Curve) linkGradient(t, p, q float64) (grad [locals]float64, density, z float64, ok bool) {
	link := c.Options.Link
	at := c.at()
	zs := at.z(t)
	// The nearest factor decides where P is too near to 0 or 1 to tell.
	nearest, least := -1, math.Inf(1)
	for k := range 2 {
		if !at.has[k] {
			continue
		}
		inward := zs[k]
		if k == 1 {
			inward = -zs[k]
		}
		if inward < least {
			nearest, least = k, inward
		}
	}
	if nearest < 0 {
		return grad, 0, 0, false
	}
	const edge = 1e-12
	if p < edge || q < edge {
		if !c.hasCov[2*nearest] {
			return grad, 0, 0, false
		}
		sign := 1.0
		if nearest == 1 {
			sign = -1
		}
		z = least
		_, _, density, _ = link.tails(z)
		grad[2*nearest] = -sign * at.inverse[nearest]
		grad[2*nearest+1] = -z
		return grad, density, z, true
	}
	if p < 0.5 {
		z = link.quantile(p)
	} else {
		z = -link.quantile(q)
	}
	_, _, density, _ = link.tails(z)
	g, _ := c.probabilityGradient(t)
	for i := range g {
		if g[i] == 0 {
			continue
		}
		if !c.hasCov[i] {
			if math.Abs(g[i]*scaleOf(i, at)) > 1e-4 {
				return grad, 0, 0, false
			}
			continue
		}
		grad[i] = g[i] / density
	}
	return grad, density, z, true
}

// scaleOf is a typical size of a local parameter's uncertainty: a σ for a cut,
// 1 for the rest.
func scaleOf(i int, at curveAt) float64 {
	if i == cutL || i == cutU {
		return 1 / at.inverse[i/2]
	}
	return 1
}

// probabilityGradient returns ∂P/∂(local parameters) at a scaled value.
func (c *Curve) probabilityGradient(t float64) (grad [locals]float64, plain float64) {
	at := c.at()
	zs := at.z(t)
	eps := c.epsilon()
	var tm term
	tm.at(c.Options.Link, zs, at.has, 0, 0, eps)
	sign := [2]float64{1, -1}
	for k := range 2 {
		if at.has[k] {
			f := (1 - eps) * tm.densities[k] * sign[k]
			grad[2*k] = -f * at.inverse[k]
			grad[2*k+1] = -f * zs[k]
		}
	}
	if c.known[logitE] {
		grad[logitE] = tm.epsilonGradient * eps * (1 - eps)
	}
	return grad, tm.plainP
}
