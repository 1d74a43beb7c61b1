package interval

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/stat/distuv"
)

// LeftOut is the value of a coefficient when one part is left out. Parts is
// how many parts give this value, each left out alone; 0 counts as one.
type LeftOut struct {
	Value float64
	Parts int
}

func (l LeftOut) parts() float64 {
	if l.Parts < 0 {
		panic(fmt.Sprintf("interval: a coefficient with one of %d parts left out", l.Parts))
	}
	return float64(max(1, l.Parts))
}

// errNoResample says why there is nothing to take limits from.
var errNoResample = errors.New("interval: no resampled value to take limits from")

// BCa returns the bias-corrected and accelerated interval of a coefficient
// (Efron, Journal of the American Statistical Association 82 (1987)
// 171–185) from its value on the whole study, its values on resampled
// studies, and its values with each part left out. It sorts resampled in
// place.
//
// Resampled values equal to the estimate count half as below it, since
// coefficients of calls move in steps.
//
// It returns an error without a resampled value and for values that are not
// finite: leave out the studies in which the coefficient is not defined. It
// panics if confidence is not a fraction or a number of parts negative.
func BCa(estimate float64, resampled []float64, leftOut []LeftOut, confidence float64) (Interval, error) {
	checkConfidence(confidence)
	if len(resampled) == 0 {
		return Interval{}, errNoResample
	}
	a, err := Acceleration(leftOut)
	if err != nil {
		return Interval{}, err
	}
	slices.Sort(resampled) // NaN before all others
	if !finite(estimate) || !finite(resampled[0]) || !finite(resampled[len(resampled)-1]) {
		return Interval{}, errNotFinite
	}
	step := rounding(estimate)
	below, _ := slices.BinarySearch(resampled, estimate-step)
	notAbove, _ := slices.BinarySearch(resampled, estimate+step)
	B := float64(len(resampled))
	share := (float64(below) + float64(notAbove-below)/2) / B
	// Keep the correction finite where every resample falls on one side.
	share = min(max(share, 0.5/B), 1-0.5/B)
	z0 := distuv.UnitNormal.Quantile(share)
	z := normalQuantile(confidence)
	if confidence == almostOne {
		// Expanded for two parts, it was nearer to 1 than a float can be; 38
		// standard deviations out, the normal's tail is the smallest that one holds.
		z = 38
	}
	at := func(z float64) float64 {
		d := 1 - a*(z0+z)
		if d <= 0 { // past the pole of the correction: the extreme
			return math.Copysign(math.MaxFloat64, z)
		}
		return z0 + (z0+z)/d
	}
	limit := func(z float64) float64 { return quantile(resampled, distuv.UnitNormal.CDF(at(z))) }
	return Interval{limit(-z), limit(z)}.with(estimate), nil
}

// Acceleration returns the acceleration constant of the BCa interval: the
// skewness of the n left-out values, turned about, over 6√n (Efron 1987,
// section 6; 0 when they are all alike). It returns an error for values that
// are not finite, and panics on a negative number of parts.
func Acceleration(leftOut []LeftOut) (float64, error) {
	var n, sum float64
	for _, l := range leftOut {
		n += l.parts()
		sum += l.Value * l.parts()
	}
	if n == 0 {
		return 0, nil
	}
	mean := sum / n
	var s2, s3 float64
	for _, l := range leftOut {
		d := mean - l.Value
		s2 += d * d * l.parts()
		s3 += d * d * d * l.parts()
	}
	if r := rounding(mean); s2 <= n*r*r { // alike, but for rounding: no skewness
		return 0, nil
	}
	a := s3 / (6 * math.Pow(s2, 1.5))
	if !finite(a) {
		return 0, errNotFinite
	}
	return a, nil
}

// rounding is by how much coefficients about x may differ that would be equal
// if they were computed exactly.
func rounding(x float64) float64 { return 1e-12 * max(1, math.Abs(x)) }

// quantile returns the p-quantile of sorted values, the (B+1)p-th, between
// two neighbours on a straight line.
func quantile(sorted []float64, p float64) float64 {
	h := p*float64(len(sorted)+1) - 1
	switch {
	case h <= 0:
		return sorted[0]
	case h >= float64(len(sorted)-1):
		return sorted[len(sorted)-1]
	}
	i := int(h)
	return sorted[i] + (h-float64(i))*(sorted[i+1]-sorted[i])
}

// Expanded returns the confidence to ask of a bootstrap interval so that it
// covers with the confidence given in a study of few parts: resampling n
// parts shows the spread with divisor n and the normal's tails where n−1 and
// Student's t are due (Hesterberg, The American Statistician 69 (2015)
// 371–386, section 3.3: the expanded percentile interval). It is never below
// the confidence given, stays below 1, and panics if confidence is not a
// fraction.
func Expanded(confidence float64, parts int) float64 {
	checkConfidence(confidence)
	if parts < 2 {
		return confidence
	}
	n := float64(parts)
	t := studentQuantile((1+confidence)/2, n-1) * math.Sqrt(n/(n-1))
	return min(almostOne, max(confidence, 1-2*distuv.UnitNormal.Survival(t)))
}
