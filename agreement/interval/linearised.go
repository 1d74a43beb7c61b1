package interval

import "fmt"

// Linearised returns the interval estimate ± t·se of a smooth coefficient
// whose standard error was linearised over parts (Taylor series; for
// example Särndal, Swensson & Wretman, Model Assisted Survey Sampling, 1992,
// section 5.5), with Student's t on parts−1 degrees of freedom. It returns an
// error for fewer than two parts, a standard error below 0 and figures that
// are not finite, and panics if confidence is not a fraction.
func Linearised(estimate, se float64, parts int, confidence float64) (Interval, error) {
	checkConfidence(confidence)
	if parts < 2 {
		return Interval{}, fmt.Errorf("interval: %d parts, a standard error over parts wants two or more", parts)
	}
	if err := checkStandardError(se); err != nil {
		return Interval{}, err
	}
	return around(estimate, -studentQuantile((1-confidence)/2, float64(parts-1))*se)
}

// Normal returns the asymptotic interval estimate ± z·se. Errors and panics
// are those of Linearised.
func Normal(estimate, se, confidence float64) (Interval, error) {
	checkConfidence(confidence)
	if err := checkStandardError(se); err != nil {
		return Interval{}, err
	}
	return around(estimate, normalQuantile(confidence)*se)
}
