package agreement

import (
	"errors"
	"fmt"
)

// Table is a square cross-table of calls: Table[j][k] counts where one side
// said category j and the other, on the same part, said k.
type Table [][]int

var (
	errTooMany     = errors.New("agreement: the table counts more than 2⁵³ pairs of calls")
	errNoPairs     = errors.New("agreement: the table is empty")
	errOneCategory = errors.New("both sides used one category only, the same: kappa has nothing to measure")
)

func newTable(categories int) Table {
	t := make(Table, categories)
	cells := make([]int, categories*categories)
	for j := range t {
		t[j] = cells[j*categories : (j+1)*categories : (j+1)*categories]
	}
	return t
}

// maxPairs bounds what a table counts: all of it can be told apart as a float.
const maxPairs = 1 << 53

// check returns an error unless t is square, not negative, not empty and not
// beyond maxPairs.
func (t Table) check() error {
	n := 0
	for j, row := range t {
		if len(row) != len(t) {
			return fmt.Errorf("agreement: row %d has %d columns, want %d as there are rows", j, len(row), len(t))
		}
		for k, c := range row {
			if c < 0 {
				return fmt.Errorf("agreement: row %d, column %d counts %d", j, k, c)
			}
			if c > maxPairs-n {
				return errTooMany
			}
			n += c
		}
	}
	if n == 0 {
		return errNoPairs
	}
	return nil
}

// Total returns the number of pairs of calls, and how many are alike.
func (t Table) Total() (pairs, alike int) {
	for j, row := range t {
		for k, c := range row {
			pairs += c
			if j == k {
				alike += c
			}
		}
	}
	return pairs, alike
}

// only returns the table of one category against all others together.
func (t Table) only(category int) Table {
	two := newTable(2)
	for j, row := range t {
		for k, c := range row {
			two[is(j, category)][is(k, category)] += c
		}
	}
	return two
}

func is(k, category int) int {
	if k == category {
		return 1
	}
	return 0
}

// oneColumn reports whether all counts stand in one column, and not in its cell
// on the diagonal alone.
func (t Table) oneColumn() bool {
	columns, beside := 0, false
	for k := range t {
		used := false
		for j := range t {
			used = used || t[j][k] > 0
			beside = beside || j != k && t[j][k] > 0
		}
		if used {
			columns++
		}
	}
	return columns == 1 && beside
}
