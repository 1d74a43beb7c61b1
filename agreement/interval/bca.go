package interval

import (
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

func (l LeftOut) parts() float64 { return float64(max(1, l.Parts)) }

// BCa returns the bias-corrected and accelerated interval of a coefficient
// (Efron, Journal of the American Statistical Association 82 (1987)
// 171–185) from its value on the whole study, its values on resampled
// studies, and its values with each part left out. It sorts resampled in
// place. Without a resampled value it returns [estimate, estimate].
//
// Resampled values equal to the estimate count half as below it, since
// coefficients of calls move in steps.
func BCa(estimate float64, resampled []float64, leftOut []LeftOut, confidence float64) Interval {
	if len(resampled) == 0 {
		return Interval{estimate, estimate}
	}
	slices.Sort(resampled)
	step := rounding(estimate)
	below, _ := slices.BinarySearch(resampled, estimate-step)
	notAbove, _ := slices.BinarySearch(resampled, estimate+step)
	B := float64(len(resampled))
	share := (float64(below) + float64(notAbove-below)/2) / B
	// Keep the correction finite where every resample falls on one side.
	share = min(max(share, 0.5/B), 1-0.5/B)
	z0 := distuv.UnitNormal.Quantile(share)
	a := Acceleration(leftOut)
	// The expanded confidence of two parts rounds to 1; 38 standard deviations
	// out, the normal's tail is the smallest that a float holds.
	z := min(normalQuantile(confidence), 38)
	at := func(z float64) float64 {
		d := 1 - a*(z0+z)
		if d <= 0 { // past the pole of the correction: the extreme
			return math.Copysign(math.MaxFloat64, z)
		}
		return z0 + (z0+z)/d
	}
	limit := func(z float64) float64 { return quantile(resampled, distuv.UnitNormal.CDF(at(z))) }
	return Interval{limit(-z), limit(z)}.with(estimate)
}

// Acceleration returns the acceleration constant of the BCa interval: the
// skewness of the n left-out values, turned about, over 6√n (Efron 1987,
// section 6; 0 when they are all alike).
func Acceleration(leftOut []LeftOut) float64 {
	var n, sum float64
	for _, l := range leftOut {
		n += l.parts()
		sum += l.Value * l.parts()
	}
	if n == 0 {
		return 0
	}
	mean := sum / n
	var s2, s3 float64
	for _, l := range leftOut {
		d := mean - l.Value
		s2 += d * d * l.parts()
		s3 += d * d * d * l.parts()
	}
	if r := rounding(mean); s2 <= n*r*r { // alike, but for rounding: no skewness
		return 0
	}
	return s3 / (6 * math.Pow(s2, 1.5))
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
// 371–386, section 3.3: the expanded percentile interval).
func Expanded(confidence float64, parts int) float64 {
	if parts < 2 {
		return confidence
	}
	n := float64(parts)
	t := studentQuantile((1+confidence)/2, n-1) * math.Sqrt(n/(n-1))
	return 1 - 2*distuv.UnitNormal.Survival(t)
}
