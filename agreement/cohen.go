package agreement

import (
	"fmt"
	"math"
)

// Weights says how much two different categories disagree.
type Weights int

const (
	// Nominal: any two categories disagree alike.
	Nominal Weights = iota
	// Linear: in proportion to the steps between them (Cicchetti & Allison,
	// American Journal of EEG Technology 11 (1971) 101–109).
	Linear
	// Quadratic: in proportion to the square of the steps (Fleiss & Cohen,
	// Educational and Psychological Measurement 33 (1973) 613–619).
	Quadratic
)

// matrix returns the disagreement of each two of K ordered categories, row
// by row, 1 for the two that are furthest apart; nil for Nominal.
func (w Weights) matrix(K int) []float64 {
	if w == Nominal || K < 2 {
		return nil
	}
	m := make([]float64, K*K)
	for j := range K {
		for k := range K {
			d := math.Abs(float64(j-k)) / float64(K-1)
			if w == Quadratic {
				d *= d
			}
			m[j*K+k] = d
		}
	}
	return m
}

// Kappa returns Cohen's kappa (Educational and Psychological Measurement 20
// (1960) 37–46), weighted for ordered categories if so asked (Cohen,
// Psychological Bulletin 70 (1968) 213–220). It returns an error if the
// table is malformed or empty, if both sides used one and the same category
// only, or if there are no such weights.
func (t Table) Kappa(w Weights) (float64, error) {
	if w < Nominal || w > Quadratic {
		return 0, fmt.Errorf("agreement: weights %d, want Nominal, Linear or Quadratic", int(w))
	}
	if err := t.check(); err != nil {
		return 0, err
	}
	m := twoMargins{len(t), w.matrix(len(t))}
	sums := make([]float64, m.size())
	m.addTable(sums, t)
	k, ok := evaluate(m, sums)
	if !ok {
		return 0, errOneCategory
	}
	return k, nil
}

// whole takes off what rounding adds to a sum of weights, for it to be the same
// in whatever order they were added.
func (m twoMargins) whole(sum float64) float64 {
	if m.weights == nil {
		return sum
	}
	steps := float64((m.categories - 1) * (m.categories - 1)) // of which each weight is a whole number
	return math.Round(sum*steps) / steps
}

// addTable adds a cross-table to sums.
func (m twoMargins) addTable(sums []float64, t Table) {
	for j, row := range t {
		for k, c := range row {
			if c != 0 {
				m.add(sums, j, k, float64(c))
			}
		}
	}
}

// add adds n pairs of calls, j by the one side and k by the other.
func (m twoMargins) add(sums []float64, j, k int, n float64) {
	sums[compared] += n
	switch {
	case m.weights != nil:
		sums[disagreed] += n * m.weights[j*m.categories+k]
	case j != k:
		sums[disagreed] += n
	}
	sums[2+j] += n
	sums[2+m.categories+k] += n
}

// Kappa1969 returns two standard errors of kappa that take pairs of calls as
// independent: at the kappa found, and when there is no agreement beyond
// chance (Fleiss, Cohen & Everitt, Psychological Bulletin 72 (1969)
// 323–327). They serve checks against published tables; with several calls
// on a part they are not right. Errors are those of Kappa.
func (t Table) Kappa1969(w Weights) (se, seNone float64, err error) {
	kappa, err := t.Kappa(w)
	if err != nil {
		return 0, 0, err
	}
	K := len(t)
	weight := w.matrix(K)
	agree := func(j, k int) float64 {
		if weight != nil {
			return 1 - weight[j*K+k]
		}
		return float64(is(j, k))
	}
	pairs, _ := t.Total()
	n := float64(pairs)
	row, column := make([]float64, K), make([]float64, K)
	for j := range t {
		for k, c := range t[j] {
			row[j] += float64(c) / n
			column[k] += float64(c) / n
		}
	}
	// Mean weight of each row and column under chance.
	rowMean, columnMean := make([]float64, K), make([]float64, K)
	var chance float64
	for j := range K {
		for k := range K {
			rowMean[j] += agree(j, k) * column[k]
			columnMean[k] += agree(j, k) * row[j]
			chance += agree(j, k) * row[j] * column[k]
		}
	}
	var found, none float64
	for j := range K {
		for k := range K {
			m := rowMean[j] + columnMean[k]
			d := agree(j, k) - m*(1-kappa)
			found += float64(t[j][k]) / n * d * d
			d = agree(j, k) - m
			none += row[j] * column[k] * d * d
		}
	}
	d := kappa - chance*(1-kappa)
	scale := (1 - chance) * math.Sqrt(n)
	return math.Sqrt(max(0, found-d*d)) / scale, math.Sqrt(max(0, none-chance*chance)) / scale, nil
}
