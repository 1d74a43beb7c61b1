package verdict

import (
	"fmt"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
)

// Two kinds are confused when so many calls take one for the other, a share
// of the calls on parts of either kind and of all wrong calls. Our own
// choice, no source.
const (
	confusedCalls = 4
	confusedRate  = 0.2
	confusedShare = 0.5
)

// confusedKinds: two kinds without an order are taken for each other. If most
// appraisers confuse the same two, it is their definition.
func confusedKinds(f *finder) []Cause {
	if len(f.Study.Categories) < 3 || f.Options.Ordered || f.patterns == nil {
		return nil
	}
	type kinds struct{ x, y int }
	var out []Cause
	shared := make(map[kinds]int)
	var order []kinds
	for a, g := range f.Agreement.Against {
		wrong := wrongCalls(g.Table)
		for y := range g.Table {
			for x := range y {
				n := g.Table[x][y] + g.Table[y][x]
				if n < confusedCalls || float64(n) < confusedShare*float64(wrong) || float64(n) < confusedRate*float64(callsOn(g.Table, x)+callsOn(g.Table, y)) {
					continue
				}
				k := kinds{x, y}
				if shared[k]++; shared[k] == 1 {
					order = append(order, k)
				}
				nameX, nameY := f.Study.Categories[x], f.Study.Categories[y]
				out = append(out, Cause{
					Code: codeKinds, Appraisers: []int{a},
					Text: fmt.Sprintf("%s confuses %s and %s: %s of %s (%s called %s where it was %s, %s the other way).",
						f.name(a), nameX, nameY, format.Count(n), format.Counted(wrong, "wrong call"), format.Count(g.Table[x][y]), nameX, nameY, format.Count(g.Table[y][x])),
					Do: fmt.Sprintf("Show %s a boundary sample of %s beside one of %s, and what tells them apart.", f.name(a), nameX, nameY),
				})
			}
		}
	}
	for _, k := range order {
		if !f.most(shared[k]) {
			continue
		}
		nameX, nameY := f.Study.Categories[k.x], f.Study.Categories[k.y]
		return []Cause{{
			Code: codeKinds,
			Text: fmt.Sprintf("%d of %d appraisers confuse %s and %s. That points to how the two are defined, not to one person.", shared[k], len(f.Study.Appraisers), nameX, nameY),
			Do:   fmt.Sprintf("Define what tells %s and %s apart, with a boundary sample of each, and show it to all.", nameX, nameY),
		}}
	}
	return out
}

// wrongCalls counts the calls off the diagonal of a table.
func wrongCalls(t agreement.Table) int {
	n := 0
	for call := range t {
		for ref, calls := range t[call] {
			if call != ref {
				n += calls
			}
		}
	}
	return n
}

// callsOn counts the calls on parts of one kind.
func callsOn(t agreement.Table, kind int) int {
	n := 0
	for call := range t {
		n += t[call][kind]
	}
	return n
}
