package agreement

import (
	"errors"
	"fmt"
	"math"
)

// FleissKappa returns Fleiss' kappa (Psychological Bulletin 76 (1971)
// 378–382), in its form for unequal numbers of calls where those differ
// (Gwet, Handbook of Inter-Rater Reliability, 4th ed. 2014). It returns an
// error if the counts are malformed, if no part has two calls, or if all
// calls are alike.
func (c Counts) FleissKappa() (float64, error) { return c.evaluate(fleiss) }

// CategoryKappa returns Fleiss' kappa of one category against all others
// together. It returns an error as FleissKappa does, if there is no such
// category, and if no call or every call is of it.
func (c Counts) CategoryKappa(category int) (float64, error) {
	K, err := c.categories()
	if err != nil {
		return 0, err
	}
	if category < 0 || category >= K {
		return 0, fmt.Errorf("agreement: category %d, want 0 to %d", category, K-1)
	}
	kappa, err := Counts(onlyCategory(c, category)).FleissKappa()
	if errors.Is(err, errAlike) {
		err = errCategoryUnused
	}
	return kappa, err
}

// Fleiss1979 returns the standard errors of Fleiss' kappa and of each
// category's kappa when there is no agreement beyond chance (Fleiss, Nee &
// Landis, Psychological Bulletin 86 (1979) 974–977). They take calls as
// independent and serve checks against published tables, not intervals. The
// number of calls must be the same for all parts, and two or more.
func (c Counts) Fleiss1979() (kappaSE, categorySE float64, err error) {
	K, err := c.categories()
	if err != nil {
		return 0, 0, err
	}
	calls, _ := total(c[0])
	share := make([]float64, K)
	for _, row := range c {
		if n, _ := total(row); n != calls {
			return 0, 0, errors.New("agreement: the standard error of 1979 wants the same number of calls on every part")
		}
		for k, n := range row {
			share[k] += float64(n)
		}
	}
	if calls < 2 {
		return 0, 0, errNoCounts
	}
	pairs := float64(len(c)) * float64(calls) * float64(calls-1)
	var sum, cubes float64
	for k := range share {
		p := share[k] / float64(len(c)*calls)
		q := 1 - p
		sum += p * q
		cubes += p * q * (q - p)
	}
	if sum <= 0 {
		return 0, 0, errAlike
	}
	return math.Sqrt2 / (sum * math.Sqrt(pairs)) * math.Sqrt(sum*sum-cubes), math.Sqrt(2 / pairs), nil
}

func fleiss(counts [][]int, parts []int) (oneMargin, contributions) {
	return byShares(counts, parts, func(S, _ float64) (expected, byS, byN float64) { return 1 - S, -1, 0 })
}

// onlyCategory returns the counts of one category and of all others together.
func onlyCategory(counts [][]int, k int) [][]int {
	two := make([][]int, len(counts))
	for i, row := range counts {
		calls, _ := total(row)
		two[i] = []int{calls - row[k], row[k]}
	}
	return two
}
