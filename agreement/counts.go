package agreement

import (
	"errors"
	"fmt"
	"math"
)

// Counts tells, for each part, how many calls fell in each category: a row a
// part, a column a category. The numbers of calls may differ between parts.
// It is what coefficients for any number of appraisers are computed from
// when it does not matter who made which call.
type Counts [][]int

var (
	errNoCounts  = errors.New("agreement: no part has two calls, so that no call can be compared")
	errAlike     = errors.New("all calls are alike, of one category: kappa has nothing to measure")
	errOneChoice = errors.New("one category only: nothing can be told apart")
)

// categories checks c and returns its number of categories.
func (c Counts) categories() (int, error) {
	if len(c) == 0 {
		return 0, errNoCounts
	}
	K := len(c[0])
	for i, row := range c {
		if len(row) != K {
			return 0, fmt.Errorf("agreement: row %d has %d categories, row 0 has %d", i, len(row), K)
		}
		calls := 0
		for k, n := range row {
			if n < 0 {
				return 0, fmt.Errorf("agreement: row %d counts %d calls in category %d", i, n, k)
			}
			if n > math.MaxInt32-calls { // pairs of calls are counted too
				return 0, fmt.Errorf("agreement: row %d counts more than %d calls", i, math.MaxInt32)
			}
			calls += n
		}
	}
	if K < 2 {
		return 0, errOneChoice
	}
	return K, nil
}

func (c Counts) ones() []int {
	parts := make([]int, len(c))
	for i := range parts {
		parts[i] = 1
	}
	return parts
}

// evaluate computes a coefficient of the kind given for the counts.
func (c Counts) evaluate(kind func(counts [][]int, parts []int) (oneMargin, contributions)) (float64, error) {
	if _, err := c.categories(); err != nil {
		return 0, err
	}
	m, z := kind(c, c.ones())
	sums := z.sums()
	if sums[compared] <= 0 {
		return 0, errNoCounts
	}
	k, ok := evaluate(m, sums)
	if !ok {
		return 0, errAlike
	}
	return k, nil
}

// total returns the number of calls in a row of counts, and in how many
// ordered pairs of two different ones the two disagree.
func total(row []int) (calls, disagree int) {
	squares := 0
	for _, n := range row {
		calls += n
		squares += n * n
	}
	return calls, calls*calls - squares
}

// width returns the number of categories in counts; 0 where there are no parts.
func width(counts [][]int) int {
	if len(counts) == 0 {
		return 0
	}
	return len(counts[0])
}

// byShares describes a coefficient in which every part weighs the same: the
// disagreement is the mean over parts with two calls or more of the share of
// pairs of calls that disagree, and the categories' shares are means over
// all parts with a call (Gwet, Handbook of Inter-Rater Reliability, 4th ed.
// 2014, chapter 2: the form for missing calls).
func byShares(counts [][]int, parts []int, ch chance) (oneMargin, contributions) {
	m := oneMargin{width(counts), ch}
	z := newContributions(m.size(), parts)
	for i, row := range counts {
		calls, disagree := total(row)
		if calls == 0 {
			continue
		}
		v := z.of(i)
		if calls >= 2 {
			v[compared] = 1
			v[disagreed] = float64(disagree) / float64(calls*(calls-1))
		}
		v[inOneMargin] = 1
		for k, n := range row {
			v[inOneMargin+1+k] = float64(n) / float64(calls)
		}
	}
	return m, z
}
