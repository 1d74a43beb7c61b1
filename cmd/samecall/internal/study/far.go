package study

import (
	"fmt"
	"math"
	"slices"

	"samecall/cmd/samecall/internal/format"
)

// A value lies far outside the others when it is more than farTimes as far
// from their median as nearly all of them are, and as the limits are. Where a
// decimal sign is in the wrong place, it is. Parts that were picked on purpose,
// some far out of tolerance, are passed over. Our own choice, no source.
const (
	farTimes  = 10
	farNamed  = 3       // values that are named, the others are counted
	farSample = 1 << 13 // values that are looked at to tell what is far
)

// nearlyAll is how many of n values nearly all of them are: all but a tenth;
// of less than 20 all but two, of less than 12 all but one. Of less than 6
// values nothing is said.
func nearlyAll(n int) int { return n - max(n/10, min(n/6, 2)) }

// farValues notes values that may be mistyped, since they lie far outside the
// others.
func (m *merge) farValues() {
	median, reach := m.spread()
	if reach == 0 {
		return
	}
	var far []uint32
	least, most := math.Inf(1), math.Inf(-1) // of the others
	for p, x := range m.study.Values {
		switch {
		case !m.study.HasValue[p]:
		case math.Abs(x-median)/farTimes > reach:
			far = append(far, uint32(p))
		default:
			least, most = min(least, x), max(most, x)
		}
	}
	if len(far) == 0 {
		return
	}
	named := far[:min(len(far), farNamed)]
	lines := m.valueLines(named)
	var list []string
	for i, p := range named {
		list = append(list, fmt.Sprintf("%s of part %s (%s)", format.Number(m.study.Values[p]), quote(m.study.Parts[p]), m.at(lines[i], m.layout.value)))
	}
	if n := len(far) - len(named); n > 0 {
		list = append(list, fmt.Sprintf("%d more", n))
	}
	are := "The value %s lies"
	if len(far) > 1 {
		are = "The values %s lie"
	}
	m.note("far_value", are+" far outside the others, which go from %s to %s. Is the decimal sign where it belongs? Nothing is left out.",
		listOf(list, "and"), format.Number(least), format.Number(most))
}

// spread returns a median of the values, and how far from it nearly all of
// them and the limits lie; 0 if there are too few to tell.
func (m *merge) spread() (median, reach float64) {
	var x []float64
	for p := 0; p < len(m.study.Values); p += len(m.study.Values)/farSample + 1 {
		if m.study.HasValue[p] {
			x = append(x, m.study.Values[p])
		}
	}
	n := len(x)
	if nearlyAll(n) == n {
		return 0, 0
	}
	slices.Sort(x)
	median = x[(n-1)/2]
	for i := range x {
		x[i] = math.Abs(x[i] - median)
	}
	slices.Sort(x)
	reach = x[nearlyAll(n)-1]
	for _, limit := range []*float64{m.settings.Lower, m.settings.Upper} {
		if limit != nil {
			reach = max(reach, math.Abs(*limit-median))
		}
	}
	return median, reach
}

// valueLines returns the lines on which the values of a few parts stand first.
func (m *merge) valueLines(parts []uint32) []int {
	lines := make([]int, len(parts))
	for i, b := range m.builders {
		for id := range b.parts.n {
			e := b.parts.entry(id)
			j := slices.Index(parts, m.rank[i][id])
			if j < 0 || e.valueLen == 0 {
				continue
			}
			if l := b.line(b.valueRow(id, e)); lines[j] == 0 || l < lines[j] {
				lines[j] = l
			}
		}
	}
	return lines
}

// on says on which line something stands, or in which row of a workbook.
func (m *merge) on(line int) string {
	if m.sheet != "" {
		return fmt.Sprintf("in row %d", line)
	}
	return fmt.Sprintf("on line %d", line)
}

// at says where something stands: on a line, or in a cell of a workbook.
func (m *merge) at(line, field int) string {
	if m.sheet != "" {
		return "cell " + cellName(m.sheet, field+1, line)
	}
	return fmt.Sprintf("line %d", line)
}
