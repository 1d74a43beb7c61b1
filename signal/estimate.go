package signal

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// Estimate is a number with its interval. A bound that does not exist is
// marked so, with the reason in Why; Lower or Upper is then 0 and means
// nothing.
type Estimate struct {
	Value      float64
	Lower      float64 // meaningful only if HasLower
	Upper      float64 // meaningful only if HasUpper
	HasLower   bool
	HasUpper   bool
	SE         float64 // standard error of Value; 0 if there is none
	Confidence float64 // of the two-sided interval
	Method     string  // how the interval was made
	Why        string  // why a bound or the value is missing; empty if all are there
	Absent     bool    // there is no value either
}

// map1 returns e carried through f, which must be monotone increasing over
// the interval. slope is f's derivative at the value, for the standard error.
func (e Estimate) map1(f func(float64) float64, slope float64) Estimate {
	if e.Absent {
		return e
	}
	e.Value = f(e.Value)
	if e.HasLower {
		e.Lower = f(e.Lower)
	}
	if e.HasUpper {
		e.Upper = f(e.Upper)
	}
	e.SE *= math.Abs(slope)
	return e
}

// interval returns value ± half.
func interval(value, half, confidence float64, method string) Estimate {
	return Estimate{Value: value, Lower: value - half, Upper: value + half, HasLower: true, HasUpper: true, Confidence: confidence, Method: method}
}

// checkConfidence refuses a confidence level that no interval can have.
func checkConfidence(confidence float64) error {
	if !(confidence > 0 && confidence < 1) {
		return fmt.Errorf("confidence %v: want a number between 0 and 1, such as 0.95", confidence)
	}
	return nil
}

// normalQuantile is z with Φ(z) = p.
func normalQuantile(p float64) float64 { return distuv.UnitNormal.Quantile(p) }

// normalCDF is Φ(z), exact in both tails.
func normalCDF(z float64) float64 { return 0.5 * math.Erfc(-z/math.Sqrt2) }

// normalDensity is φ(z).
func normalDensity(z float64) float64 { return math.Exp(-z*z/2) / math.Sqrt(2*math.Pi) }

// twoSided is the standard normal quantile of a two-sided interval.
func twoSided(confidence float64) float64 { return -normalQuantile((1 - confidence) / 2) }

// finite tells whether every number is neither NaN nor infinite.
func finite(xs ...float64) bool {
	for _, x := range xs {
		if math.IsNaN(x) || math.IsInf(x, 0) {
			return false
		}
	}
	return true
}
