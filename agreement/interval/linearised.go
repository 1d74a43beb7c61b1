package interval

// Linearised returns the interval estimate ± t·se of a smooth coefficient
// whose standard error was linearised over parts (Taylor series; for
// example Särndal, Swensson & Wretman, Model Assisted Survey Sampling, 1992,
// section 5.5), with Student's t on parts−1 degrees of freedom. It wants two
// parts or more; with fewer it returns [estimate, estimate].
func Linearised(estimate, se float64, parts int, confidence float64) Interval {
	if parts < 2 {
		return Interval{estimate, estimate}
	}
	half := -studentQuantile((1-confidence)/2, float64(parts-1)) * se
	return Interval{estimate - half, estimate + half}
}

// Normal returns the asymptotic interval estimate ± z·se.
func Normal(estimate, se, confidence float64) Interval {
	half := normalQuantile(confidence) * se
	return Interval{estimate - half, estimate + half}
}
