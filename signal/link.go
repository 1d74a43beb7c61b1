package signal

import (
	"math"
)

// Link is the shape F of the acceptance curve, that of an error with standard
// deviation 1: σ is the standard deviation of the error behind the calls,
// whatever its shape.
type Link int

const (
	// Probit is the normal shape: the call turns on value plus a normal error.
	Probit Link = iota
	// Logit is the logistic shape, with heavier tails.
	Logit
)

func (k Link) String() string {
	if k == Logit {
		return "logit"
	}
	return "probit"
}

// perSD is how many scales of the logistic distribution make one standard
// deviation, π/√3: F(z) = 1/(1 + exp(−perSD z)).
const perSD = math.Pi / 1.732050807568877293527446341505872367

// deep is where the tail of F leaves the range of float64 numbers (or comes
// near it), so that only its logarithm can be used.
const deep = 37

// tails returns F(z), F(−z), the density f(z) and f′(z)/f(z), each to full
// relative precision where |z| < deep.
func (k Link) tails(z float64) (below, above, density, ratio float64) {
	if k == Logit {
		e := math.Exp(-perSD * math.Abs(z))
		small, large := e/(1+e), 1/(1+e)
		density, ratio = perSD*small*large, perSD*(large-small)
		if z < 0 {
			return small, large, density, ratio
		}
		return large, small, density, -ratio
	}
	small := 0.5 * math.Erfc(math.Abs(z)/math.Sqrt2)
	density = invSqrt2Pi * math.Exp(-z*z/2)
	if z < 0 {
		return small, 1 - small, density, -z
	}
	return 1 - small, small, density, -z
}

const invSqrt2Pi = 0.398942280401432677939946059934

// cdf is F(z).
func (k Link) cdf(z float64) float64 {
	below, _, _, _ := k.tails(z)
	return below
}

// quantile is z with F(z) = p.
func (k Link) quantile(p float64) float64 {
	if k == Logit {
		return math.Log(p/(1-p)) / perSD
	}
	return normalQuantile(p)
}

// logCDF is log F(z), without underflow.
func (k Link) logCDF(z float64) float64 {
	if k == Logit {
		if z *= perSD; z < -deep {
			return z
		}
		return -math.Log1p(math.Exp(-z))
	}
	if z > -deep {
		return math.Log(normalCDF(z))
	}
	// Asymptotic expansion of Mills' ratio (Abramowitz & Stegun 26.2.12).
	w := 1 / (z * z)
	return -z*z/2 - math.Log(-z) - logSqrt2Pi + math.Log1p(-w*(1-3*w*(1-5*w*(1-7*w))))
}

const logSqrt2Pi = 0.918938533204672741780329736406

// logDensity is log f(z), without underflow.
func (k Link) logDensity(z float64) float64 {
	if k == Logit {
		a := perSD * math.Abs(z)
		return math.Log(perSD) - a - 2*math.Log1p(math.Exp(-a))
	}
	return -z*z/2 - logSqrt2Pi
}

// greyQuantile is F's 99.5 % point: the grey zone reaches so many σ to either
// side of the cut, 5.15 σ in all for the normal shape and 5.84 σ for the
// logistic one.
func (k Link) greyQuantile() float64 { return k.quantile(0.995) }

// logSum is log(eᵃ + eᵇ).
func logSum(a, b float64) float64 {
	if a < b {
		a, b = b, a
	}
	return a + math.Log1p(math.Exp(b-a))
}

// logDifference is log(eᵃ − eᵇ), minus infinity unless a > b.
func logDifference(a, b float64) float64 {
	if !(a > b) {
		return math.Inf(-1)
	}
	return a + math.Log(-math.Expm1(b-a))
}
