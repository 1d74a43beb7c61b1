package agreement

import "slices"

// Resampled studies are drawn by the place of a part, so that limits would hang
// on the order in which parts stand in a table. For each coefficient the parts
// are therefore put into an order that follows from what they contribute to it
// alone: whatever does not change the contributions, as another order of parts,
// of trials or of appraisers, then changes no limit.

// canonical returns the contributions with the patterns that contribute alike
// put together, in an order that is the same for every way of writing down the
// same study: of the views between which the coefficient does not tell, the one
// in which they are least.
func (c contributions) canonical(of coefficient) contributions {
	asTheyAre := make([]int, c.size)
	for i := range asTheyAre {
		asTheyAre[i] = i
	}
	few := c.arranged(asTheyAre)
	var least contributions
	for i, view := range of.views(few) {
		if other := few.arranged(view); i == 0 || other.before(least) {
			least = other
		}
	}
	return least
}

// arranged returns the contributions with the entries of each vector in the
// order given, sorted, and equal ones put together.
func (c contributions) arranged(entries []int) contributions {
	vectors := make([]float64, len(c.vectors))
	for i := range c.parts {
		to, from := vectors[i*c.size:(i+1)*c.size], c.of(i)
		for j, entry := range entries {
			to[j] = from[entry]
		}
	}
	moved := contributions{c.size, vectors, c.parts}
	order := make([]int, len(c.parts))
	for i := range order {
		order[i] = i
	}
	slices.SortFunc(order, func(i, k int) int { return slices.Compare(moved.of(i), moved.of(k)) })
	out := contributions{size: c.size, vectors: make([]float64, 0, len(vectors)), parts: make([]int, 0, len(c.parts))}
	for _, i := range order {
		if last := len(out.parts) - 1; last >= 0 && slices.Equal(out.of(last), moved.of(i)) {
			out.parts[last] += c.parts[i]
			continue
		}
		out.vectors = append(out.vectors, moved.of(i)...)
		out.parts = append(out.parts, c.parts[i])
	}
	return out
}

// before reports whether arranged contributions come before others.
func (c contributions) before(d contributions) bool {
	if v := slices.Compare(c.vectors, d.vectors); v != 0 {
		return v < 0
	}
	return slices.Compare(c.parts, d.parts) < 0
}

// orders returns the orders of K categories between which a coefficient does
// not tell. Ordered ones can be read from either end, as can two. More of them,
// without order, are ranked by what the parts contribute to each, as of returns
// it for a pattern; among those that rank alike, from either end. (In three or
// more that rank alike and are not alike all the same, renaming them may still
// move a resampled limit by as little as another seed would.)
func (c contributions) orders(K int, ordered bool, of func(vector []float64, category int) float64) [2][]int {
	var up, down []int
	for k := range K {
		up, down = append(up, k), append(down, K-1-k)
	}
	if K > 2 && !ordered {
		contributed := make([][]float64, K)
		for k := range K {
			for i, parts := range c.parts {
				if x := of(c.of(i), k); x != 0 {
					contributed[k] = append(contributed[k], slices.Repeat([]float64{x}, parts)...)
				}
			}
			slices.Sort(contributed[k])
		}
		for _, order := range [][]int{up, down} {
			slices.SortStableFunc(order, func(j, k int) int { return slices.Compare(contributed[j], contributed[k]) })
		}
	}
	return [2][]int{up, down}
}

func (m oneMargin) views(z contributions) [][]int {
	var views [][]int
	const first = inOneMargin + 1
	for _, order := range z.orders(m.categories, false, func(v []float64, k int) float64 { return v[first+k] }) {
		view := []int{compared, disagreed, inOneMargin}
		for _, k := range order {
			view = append(view, first+k)
		}
		views = append(views, view)
	}
	return views
}

// views of a cross-table: it may be turned about, too.
func (m twoMargins) views(z contributions) [][]int {
	var views [][]int
	K := m.categories
	for _, order := range z.orders(K, m.weights != nil, func(v []float64, k int) float64 { return v[2+k] + v[2+K+k] }) {
		for _, sides := range [][2]int{{2, 2 + K}, {2 + K, 2}} {
			view := []int{compared, disagreed}
			for _, side := range sides {
				for _, k := range order {
					view = append(view, side+k)
				}
			}
			views = append(views, view)
		}
	}
	return views
}
