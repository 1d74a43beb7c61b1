package agreement

// AC1 returns Gwet's first-order agreement coefficient (British Journal of
// Mathematical and Statistical Psychology 61 (2008) 29–48), in its form for
// missing calls. Where nearly all calls fall in one category it stays near
// the share of agreement, while kappa falls. Chance depends on the number of
// categories, those that no call fell into included. It returns an error if the
// counts are malformed or no part has two calls.
func (c Counts) AC1() (float64, error) { return c.evaluate(ac1) }

func ac1(counts [][]int, parts []int) (oneMargin, contributions) {
	q := float64(width(counts))
	return byShares(counts, parts, func(S, _ float64) (expected, byS, byN float64) {
		return 1 - (1-S)/(q-1), 1 / (q - 1), 0
	})
}
