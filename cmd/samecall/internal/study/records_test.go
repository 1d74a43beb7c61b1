package study

import (
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// The log gives back what it was given, across blocks and beyond the pairs
// that have a code.
func TestRecordLog(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var l recordLog
		var want []record
		part := uint32(0)
		for range rapid.IntRange(1, 40).Draw(t, "runs") {
			step := rapid.SampledFrom([]uint32{0, 1, 1 << 20, ^uint32(0)}).Draw(t, "step")
			columns := rapid.SampledFrom([]uint16{1, 9, 500}).Draw(t, "columns")
			for i := range uint16(rapid.IntRange(1, 200).Draw(t, "length")) {
				part += step
				r := record{part, i % columns * 131, i % 5 * 13107}
				l.add(r)
				want = append(want, r)
			}
		}
		for range 2 {
			var got []record
			l.each(func(r record) { got = append(got, r) })
			if !slices.Equal(got, want) || l.n != len(want) {
				t.Fatalf("%v\nwant %v", got, want)
			}
		}
	})
}
