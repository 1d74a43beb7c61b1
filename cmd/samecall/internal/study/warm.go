package study

import "bytes"

// warmRows is how many rows are looked at ahead.
const warmRows = 32

// warm brings the table's memory for the parts of the next rows near, part
// being the first field. Where rows come in random order, as in a blind
// study, each part costs two looks at memory that is far away; many looks at
// a time cost hardly more than one (BenchmarkRead, shuffled).
func (t *partTable) warm(rows []byte, comma byte) {
	mask := uint32(len(t.slots) - 1)
	var found [warmRows]uint64
	n := 0
	for ; n < warmRows; n++ {
		end := bytes.IndexByte(rows, comma)
		if end < 0 {
			break
		}
		found[n] = t.slots[t.tag(trim(rows[:end]))&mask]
		next := bytes.IndexByte(rows[end:], '\n')
		if next < 0 {
			n++
			break
		}
		rows = rows[end+next+1:]
	}
	for _, s := range found[:n] {
		if s != 0 {
			t.touched += t.entry(uint32(s) - 1).key // so that the look is not left out
		}
	}
}
