package agreement

// Alpha returns Krippendorff's alpha for nominal categories (Krippendorff,
// Content Analysis, and: Computing Krippendorff's Alpha-Reliability, 2011).
// Parts with fewer than two calls do not count; others count in proportion
// to their calls. It returns an error as FleissKappa does.
func (c Counts) Alpha() (float64, error) { return c.evaluate(alpha) }

func alpha(counts [][]int, parts []int) (oneMargin, contributions) {
	m := oneMargin{width(counts), func(S, n float64) (expected, byS, byN float64) {
		return (1 - S) * n / (n - 1), -n / (n - 1), -(1 - S) / ((n - 1) * (n - 1))
	}}
	z := newContributions(m.size(), parts)
	for i, row := range counts {
		calls, disagree := total(row)
		if calls < 2 {
			continue
		}
		v := z.of(i)
		v[compared] = float64(calls)
		v[disagreed] = float64(disagree) / float64(calls-1)
		v[inOneMargin] = float64(calls)
		for k, n := range row {
			v[inOneMargin+1+k] = float64(n)
		}
	}
	return m, z
}
