package interval

import (
	"math"

	"gonum.org/v1/gonum/mathext"
	"gonum.org/v1/gonum/stat/distuv"
)

// ClopperPearson returns the exact two-sided interval of a share, x of n
// independent parts (Clopper & Pearson, Biometrika 26 (1934) 404–413). With
// n = 0 nothing is known and the interval is [0, 1]. It panics if x is not
// between 0 and n or confidence is not a fraction.
func ClopperPearson(x, n int, confidence float64) Interval {
	return Exact(float64(x), float64(n), confidence)
}

// UpperLimit returns the exact one-sided upper limit of a share, x of n
// independent parts: the largest share that x or fewer would not contradict
// at the confidence given. It panics as ClopperPearson does.
func UpperLimit(x, n int, confidence float64) float64 {
	checkConfidence(confidence)
	checkCounts(float64(x), float64(n))
	return upper(float64(x), float64(n), 1-confidence)
}

// LowerLimit returns the exact one-sided lower limit of a share, x of n
// independent parts: the smallest share that x or more would not contradict.
// It panics as ClopperPearson does.
func LowerLimit(x, n int, confidence float64) float64 {
	checkConfidence(confidence)
	checkCounts(float64(x), float64(n))
	return lower(float64(x), float64(n), 1-confidence)
}

// Wilson returns the score interval of a share, x of n independent parts
// (Wilson, Journal of the American Statistical Association 22 (1927)
// 209–212). It is shorter than the exact one, and may cover less often than
// its confidence says. It panics as ClopperPearson does.
func Wilson(x, n int, confidence float64) Interval {
	checkConfidence(confidence)
	checkCounts(float64(x), float64(n))
	if n == 0 {
		return Interval{0, 1}
	}
	z := normalQuantile(confidence)
	N := float64(n)
	p := float64(x) / N
	centre := (p + z*z/(2*N)) / (1 + z*z/N)
	half := z / (1 + z*z/N) * math.Sqrt(p*(1-p)/N+z*z/(4*N*N))
	return Interval{max(0, centre-half), min(1, centre+half)}.with(p)
}

// Exact returns the Clopper–Pearson interval for counts that need not be
// whole, as an effective number of calls is not: x events of n. It panics as
// ClopperPearson does, and if x or n is not finite.
func Exact(x, n, confidence float64) Interval {
	checkConfidence(confidence)
	checkCounts(x, n)
	tail := (1 - confidence) / 2
	l := lower(x, n, tail)
	return Interval{l, max(l, upper(x, n, tail))} // next to no confidence and millions of parts leave but rounding between them
}

func upper(x, n, tail float64) float64 {
	switch {
	case n <= 0 || x >= n:
		return 1
	case x <= 0: // no event: closed form
		return -math.Expm1(math.Log(tail) / n)
	}
	return mathext.InvRegIncBeta(x+1, n-x, 1-tail)
}

func lower(x, n, tail float64) float64 {
	switch {
	case n <= 0 || x <= 0:
		return 0
	case x >= n: // nothing but events: closed form
		return math.Exp(math.Log(tail) / n)
	}
	return mathext.InvRegIncBeta(x, n-x+1, tail)
}

// normalQuantile returns z such that a standard normal lies within ±z with
// the confidence given.
func normalQuantile(confidence float64) float64 {
	return -distuv.UnitNormal.Quantile((1 - confidence) / 2) // from the tail, where floats are dense
}
