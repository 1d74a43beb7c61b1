package interval

import (
	"math"

	"gonum.org/v1/gonum/mathext"
	"gonum.org/v1/gonum/stat/distuv"
)

// ClopperPearson returns the exact two-sided interval of a share, x of n
// independent parts (Clopper & Pearson, Biometrika 26 (1934) 404–413). With
// n = 0 nothing is known and the interval is [0, 1].
func ClopperPearson(x, n int, confidence float64) Interval {
	return Exact(float64(x), float64(n), confidence)
}

// UpperLimit returns the exact one-sided upper limit of a share, x of n
// independent parts: the largest share that x or fewer would not contradict
// at the confidence given.
func UpperLimit(x, n int, confidence float64) float64 {
	return upper(float64(x), float64(n), 1-confidence)
}

// LowerLimit returns the exact one-sided lower limit of a share, x of n
// independent parts.
func LowerLimit(x, n int, confidence float64) float64 {
	return lower(float64(x), float64(n), 1-confidence)
}

// Wilson returns the score interval of a share, x of n independent parts
// (Wilson, Journal of the American Statistical Association 22 (1927)
// 209–212). It is shorter than the exact one, and may cover less often than
// its confidence says.
func Wilson(x, n int, confidence float64) Interval {
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
// whole, as an effective number of calls is not: x events of n.
func Exact(x, n, confidence float64) Interval {
	tail := (1 - confidence) / 2
	return Interval{lower(x, n, tail), upper(x, n, tail)}
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
