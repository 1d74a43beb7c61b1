package report

import (
	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
)

func shareCell(s agreement.Share) Cell {
	if s.Absent != nil {
		return dashFor(s.Absent)
	}
	return bounded(format.Share(s), s.Estimate)
}

func bounded(text string, e agreement.Estimate) Cell {
	c := Cell{Text: text, Value: e.Value}
	if e.Unbounded == nil {
		c.Bounded, c.Lower, c.Upper = true, e.Interval.Lower, e.Interval.Upper
	} else {
		c.Why = []string{"No interval: " + e.Unbounded.Error()}
	}
	return c
}

// valueCell is a cell with a number behind it.
func valueCell(text string, value any) Cell { return Cell{Text: text, Value: value} }

func kappaCell(e agreement.Estimate) Cell {
	if e.Absent != nil {
		return dashFor(e.Absent)
	}
	return bounded(format.Kappa(e), e)
}

func ofCell(s agreement.Share) Cell {
	if s.Absent != nil {
		return dashFor(s.Absent)
	}
	return countCell(s.Count, s.Of)
}

// countCell is a count of so many.
func countCell(n, of int) Cell {
	return Cell{Text: format.Count(n) + " of " + format.Count(of), Value: n, Of: of}
}

func intCell(n int) Cell { return valueCell(format.Count(n), n) }
