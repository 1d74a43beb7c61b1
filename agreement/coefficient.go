package agreement

import "slices"

// A coefficient is an agreement beyond chance,
//
//	1 − observed / expected disagreement,
//
// that depends on the study only through sums over the parts: of a vector
// that each part contributes. That is what resampling whole parts, leaving
// one part out and linearising by part have in common, so that one
// description of a coefficient serves all three.
type coefficient interface {
	// disagreements returns the observed and the expected disagreement.
	// ok is false when there is nothing to compare.
	disagreements(sums []float64) (observed, expected float64, ok bool)
	// gradient writes the derivative of the coefficient by each sum.
	gradient(sums, into []float64)
	// shares returns the share of each category among all calls; nil where
	// categories disagree unequally.
	shares(sums []float64) []float64
	// views returns orders of the sums in which the coefficient is the same.
	views(z contributions) [][]int
}

// evaluate returns the coefficient. It is undefined when nothing can be
// compared, or when no disagreement is to be expected since all calls are alike.
func evaluate(c coefficient, sums []float64) (float64, bool) {
	observed, expected, ok := c.disagreements(sums)
	if !ok || expected <= noDisagreement {
		return 0, false
	}
	return 1 - observed/expected, true
}

// noDisagreement is what rounding may leave of an expected disagreement of 0;
// one pair in ten million calls expects more.
const noDisagreement = 1e-13

// contributions are the vectors of a coefficient: one for each pattern, with
// the number of parts that have it.
type contributions struct {
	size    int
	vectors []float64 // pattern after pattern
	parts   []int
}

func newContributions(size int, parts []int) contributions {
	return contributions{size: size, vectors: make([]float64, size*len(parts)), parts: parts}
}

func (c contributions) of(pattern int) []float64 {
	return c.vectors[pattern*c.size : (pattern+1)*c.size : (pattern+1)*c.size]
}

// contributes reports whether the parts of a pattern bear on the coefficient
// at all: by a comparison, or by a single call that counts for chance.
func (c contributions) contributes(pattern int) bool {
	for _, v := range c.of(pattern) {
		if v != 0 {
			return true
		}
	}
	return false
}

// sums returns the sum over all parts.
func (c contributions) sums() []float64 {
	s := make([]float64, c.size)
	for i, n := range c.parts {
		for j, v := range c.of(i) {
			s[j] += float64(n) * v
		}
	}
	return s
}

// The entries of every vector begin alike: what the observed disagreement is
// a share of, and what disagreed.
const (
	compared = iota
	disagreed
)

// oneMargin is a coefficient whose chance agreement comes from one
// distribution of categories, the same for all who made the calls. Its sums
// are compared, disagreed, the weight of the calls in the distribution, and
// that of the calls in each category.
type oneMargin struct {
	categories int
	chance     chance
}

// A chance gives the disagreement to be expected from S, the sum of the
// squared shares of the categories, and n, the weight of the calls that the
// shares are taken of; with it the derivatives by S and by n.
type chance func(S, n float64) (expected, byS, byN float64)

const inOneMargin = 2 // where the weight stands; the categories follow

func (m oneMargin) size() int { return inOneMargin + 1 + m.categories }

func (m oneMargin) squares(s []float64) float64 {
	n := s[inOneMargin]
	var S float64
	for _, c := range s[inOneMargin+1:] {
		S += c * c
	}
	return S / (n * n)
}

func (m oneMargin) shares(s []float64) []float64 {
	out := slices.Clone(s[inOneMargin+1:])
	for k := range out {
		out[k] /= s[inOneMargin]
	}
	return out
}

func (m oneMargin) disagreements(s []float64) (observed, expected float64, ok bool) {
	if s[compared] <= 0 || s[inOneMargin] <= 0 {
		return 0, 0, false
	}
	expected, _, _ = m.chance(m.squares(s), s[inOneMargin])
	return s[disagreed] / s[compared], expected, true
}

func (m oneMargin) gradient(s, g []float64) {
	n, S := s[inOneMargin], m.squares(s)
	expected, byS, byN := m.chance(S, n)
	observed := s[disagreed] / s[compared]
	g[compared] = observed / (s[compared] * expected)
	g[disagreed] = -1 / (s[compared] * expected)
	f := observed / (expected * expected) // derivative by expected
	g[inOneMargin] = f * (byN - byS*2*S/n)
	for k, c := range s[inOneMargin+1:] {
		g[inOneMargin+1+k] = f * byS * 2 * c / (n * n)
	}
}

// twoMargins is a coefficient of a cross-table, each side with its own
// distribution of categories. Its sums are the compared pairs, their
// disagreement, the row margin and the column margin. weights are the
// disagreements of each pair of categories, row by row; nil when any two
// categories disagree alike.
type twoMargins struct {
	categories int
	weights    []float64
}

func (m twoMargins) size() int { return 2 + 2*m.categories }

func (m twoMargins) margins(s []float64) (rows, columns []float64) {
	return s[2 : 2+m.categories], s[2+m.categories : 2+2*m.categories]
}

func (m twoMargins) shares(s []float64) []float64 {
	if m.weights != nil {
		return nil
	}
	rows, columns := m.margins(s)
	out := make([]float64, m.categories)
	for k := range out {
		out[k] = (rows[k] + columns[k]) / (2 * s[compared])
	}
	return out
}

func (m twoMargins) disagreements(s []float64) (observed, expected float64, ok bool) {
	n := s[compared]
	if n <= 0 {
		return 0, 0, false
	}
	rows, columns := m.margins(s)
	var e float64 // times n²
	if m.weights == nil {
		e = n * n
		for k, r := range rows {
			e -= r * columns[k]
		}
	} else {
		for j, r := range rows {
			for k, c := range columns {
				e += m.weights[j*m.categories+k] * r * c
			}
		}
	}
	return s[disagreed] / n, e / (n * n), true
}

func (m twoMargins) gradient(s, g []float64) {
	n := s[compared]
	observed, expected, _ := m.disagreements(s)
	rows, columns := m.margins(s)
	f := observed / (expected * expected * n * n)
	g[disagreed] = -1 / (n * expected)
	if m.weights == nil {
		// expected = 1 − Σ r c / n²
		g[compared] = observed/(n*expected) + f*2*n*(1-expected)
		for k := range rows {
			g[2+k] = -f * columns[k]
			g[2+m.categories+k] = -f * rows[k]
		}
		return
	}
	g[compared] = observed/(n*expected) - f*2*n*expected
	for j := range rows {
		g[2+j], g[2+m.categories+j] = 0, 0
		for k := range columns {
			g[2+j] += f * m.weights[j*m.categories+k] * columns[k]
			g[2+m.categories+j] += f * m.weights[k*m.categories+j] * rows[k]
		}
	}
}
