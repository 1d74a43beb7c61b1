package figure

// span is something of a width that is to stand about a place on a line.
type span struct{ at, width float64 }

// spread finds where spans, in order, begin so that each is as near to its
// place as may be, all lie between from and to, and a gap is between them.
// Where they do not all fit the last ones go beyond.
func spread(spans []span, from, to, gap float64) []float64 {
	starts := make([]float64, len(spans))
	end := to
	for i := len(spans) - 1; i >= 0; i-- {
		starts[i] = min(spans[i].at-spans[i].width/2, end-spans[i].width)
		end = starts[i] - gap
	}
	least := from
	for i := range starts {
		starts[i] = max(starts[i], least)
		least = starts[i] + spans[i].width + gap
	}
	return starts
}
