package main

import (
	"bytes"
	"fmt"
	"math/rand/v2"
)

// newDraw returns a generator of random numbers with a start of its own for
// each example, so that a change of one leaves the others alone.
func newDraw(start uint64) *rand.Rand { return rand.New(rand.NewPCG(start, 2026)) }

// spread returns n values from lo to hi, one at random in each of n equal
// steps: random, but without the gaps of free sampling.
func spread(r *rand.Rand, n int, lo, hi float64) []float64 {
	out := make([]float64, n)
	step := (hi - lo) / float64(n)
	for i := range out {
		out[i] = lo + (float64(i)+r.Float64())*step
	}
	return out
}

// shuffle puts values in random order, as parts come to be numbered.
func shuffle[T any](r *rand.Rand, values []T) []T {
	r.Shuffle(len(values), func(i, j int) { values[i], values[j] = values[j], values[i] })
	return values
}

// long is a calls file with one call a row, in the order in which the calls
// were made: trial by trial, each appraiser in a random order of the parts.
type long struct {
	sep        string
	head       string // comment lines
	prefix     string // of the parts' names
	reference  []string
	appraisers []string
	trials     int
}

func (l long) write(r *rand.Rand, call func(part, appraiser int) string) []byte {
	var b bytes.Buffer
	row := func(fields ...any) {
		for i, f := range fields {
			if i > 0 {
				b.WriteString(l.sep)
			}
			fmt.Fprint(&b, f)
		}
		b.WriteByte('\n')
	}
	b.WriteString(l.head)
	row("part", "appraiser", "trial", "call", "reference")
	for trial := range l.trials {
		for a, name := range l.appraisers {
			for _, p := range r.Perm(len(l.reference)) {
				row(fmt.Sprintf("%s%02d", l.prefix, p+1), name, trial+1, call(p, a), l.reference[p])
			}
		}
	}
	return b.Bytes()
}
