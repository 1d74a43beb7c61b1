package agreement

import (
	"bytes"
	"cmp"
	"slices"
)

// patterns holds the different rows of a study, each with its reference, and
// how many parts have it. Every figure but the lists of parts depends on the
// study only through them, and a million parts with ten calls each have but
// a few hundred: this is what makes large studies fast.
type patterns struct {
	rows    [][]Category
	ref     []Category
	times   []int   // how many parts have this row
	pattern []int32 // of each part
}

func (r *Ratings) patterns() patterns {
	var p patterns
	p.pattern = make([]int32, r.parts)
	seen := make(map[string]int32)
	key := make([]byte, r.columns()+1)
	for part := range r.parts {
		row := r.Row(part)
		copy(key, row)
		key[len(row)] = r.Reference(part)
		i, ok := seen[string(key)]
		if !ok {
			i = int32(len(p.rows))
			seen[string(key)] = i
			p.rows = append(p.rows, row)
			p.ref = append(p.ref, key[len(row)])
			p.times = append(p.times, 0)
		}
		p.times[i]++
		p.pattern[part] = i
	}
	p.sort()
	return p
}

// sort puts the patterns into the order of their rows, so that every sum over
// them is the same, to its last digit, in whatever order the parts stand.
func (p *patterns) sort() {
	order := make([]int32, len(p.rows))
	for i := range order {
		order[i] = int32(i)
	}
	slices.SortFunc(order, func(i, k int32) int {
		return cmp.Or(bytes.Compare(p.rows[i], p.rows[k]), cmp.Compare(p.ref[i], p.ref[k]))
	})
	sorted := patterns{pattern: p.pattern}
	place := make([]int32, len(order))
	for to, from := range order {
		place[from] = int32(to)
		sorted.rows = append(sorted.rows, p.rows[from])
		sorted.ref = append(sorted.ref, p.ref[from])
		sorted.times = append(sorted.times, p.times[from])
	}
	for part, i := range p.pattern {
		p.pattern[part] = place[i]
	}
	*p = sorted
}

// where returns, in order, the parts whose pattern is chosen.
func (p patterns) where(chosen func(pattern int) bool) []int {
	return where(p.pattern, len(p.rows), chosen)
}

func where(of []int32, patterns int, chosen func(pattern int) bool) []int {
	parts := []int{}
	yes, some := make([]bool, patterns), false
	for i := range yes {
		yes[i] = chosen(i)
		some = some || yes[i]
	}
	if !some {
		return parts
	}
	for part, i := range of {
		if yes[i] {
			parts = append(parts, part)
		}
	}
	return parts
}

// Pattern is a row of calls and its reference, as some parts have it.
type Pattern struct {
	Row       []Category // as Ratings.Row
	Reference Category   // or Missing
	Parts     int        // how many parts have it
}

// Patterns are the different rows of a study: what can be said of a part
// without its name is said of its pattern, for all parts alike at once.
type Patterns struct {
	List []Pattern
	Of   []int32 // of each part, its place in List
}

func (p patterns) public() Patterns {
	out := Patterns{Of: p.pattern}
	for i, row := range p.rows {
		out.List = append(out.List, Pattern{row, p.ref[i], p.times[i]})
	}
	return out
}

// Where returns, in order, the parts whose pattern is chosen.
func (p Patterns) Where(chosen func(Pattern) bool) []int {
	return where(p.Of, len(p.List), func(i int) bool { return chosen(p.List[i]) })
}
