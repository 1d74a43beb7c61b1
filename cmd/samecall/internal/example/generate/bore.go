package main

import (
	"bytes"
	"fmt"
	"math"
)

// bore draws 60 bores checked with a plug gauge by three shifts, three trials
// each. The go member is worn by 0.003 mm, so all shifts pass bores that are
// too small by less than that. Early and late have a steady hand; the night
// shift forces the gauge now and then: its σ is three times theirs.
func bore() []byte {
	const (
		lower, upper = 10.000, 10.036
		lowerCut     = lower - 0.003
		upperCut     = upper
	)
	shifts := []struct {
		name  string
		sigma float64 // mm
	}{{"early", 0.0008}, {"late", 0.0009}, {"night", 0.0026}}

	r := newDraw(6) // one of six tried: here no shift is without a mixed part at a limit
	var values []float64
	for _, s := range []struct {
		n      int
		lo, hi float64
	}{
		{3, 9.9890, 9.9940},    // too small
		{9, 9.9940, 9.9998},    // too small, near the limit
		{8, 10.0002, 10.0050},  // good, near the lower limit
		{22, 10.0050, 10.0310}, // good
		{9, 10.0310, 10.0359},  // good, near the upper limit
		{6, 10.0362, 10.0400},  // too large, near the limit
		{3, 10.0400, 10.0450},  // too large
	} {
		values = append(values, spread(r, s.n, s.lo, s.hi)...)
	}
	var b bytes.Buffer
	b.WriteString("# Invented data: bores in mm, one line a part, a column for each shift and trial.\npart,value")
	for _, s := range shifts {
		for trial := range 3 {
			fmt.Fprintf(&b, ",%s-%d", s.name, trial+1)
		}
	}
	b.WriteByte('\n')
	for i, x := range shuffle(r, values) {
		x = math.Round(x*1e4) / 1e4
		fmt.Fprintf(&b, "H%02d,%.4f", i+1, x)
		for _, s := range shifts {
			for range 3 {
				felt := x + s.sigma*r.NormFloat64()
				call := "fail"
				if lowerCut <= felt && felt <= upperCut {
					call = "pass"
				}
				b.WriteString("," + call)
			}
		}
		b.WriteByte('\n')
	}
	return b.Bytes()
}
