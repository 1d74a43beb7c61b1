package study

import "encoding/binary"

// record is one call.
type record struct {
	part   uint32 // number in the builder's partTable
	column uint16 // number in the builder's columns
	word   uint16 // number in the builder's words plus 1; 0: missing call
}

// recordLog keeps records in the order of the rows, packed: ten million of
// them take 10 MB where rows come part by part or trial by trial, and at most
// 90 MB otherwise. They are read again once, or to find the line of a problem.
//
// A record is a byte: its lower six bits tell column and word, by a table of
// the pairs that came first; its upper two bits tell the part. What a byte
// cannot say follows it.
type recordLog struct {
	blocks [][]byte
	block  []byte // being filled
	n      int
	part   uint32 // of the record before
	pairs  []uint32
	codes  [][]uint8 // by column and word, the place in pairs plus 1
}

const (
	minBlock = 1 << 10 // blocks double in size: most studies are small
	maxBlock = 1 << 18
	longest  = 1 + 4 + 4 // bytes of a record

	otherPair = 1<<6 - 1 // column and word follow

	samePart  = 0 << 6
	nextPart  = 1 << 6
	otherPart = 2 << 6 // the part follows
)

func (l *recordLog) add(r record) {
	if len(l.block)+longest > cap(l.block) {
		size := min(max(2*cap(l.block), minBlock), maxBlock)
		l.flush()
		l.block = make([]byte, 0, size)
		l.part = 0 // each block begins anew
	}
	code := byte(otherPair)
	if int(r.column) < len(l.codes) && int(r.word) < len(l.codes[r.column]) && l.codes[r.column][r.word] > 0 {
		code = l.codes[r.column][r.word] - 1
	} else if len(l.pairs) < otherPair {
		code = l.enter(r.column, r.word)
	}
	b := l.block
	switch {
	case r.part == l.part:
		b = append(b, code|samePart)
	case r.part == l.part+1:
		b = append(b, code|nextPart)
	default:
		b = binary.LittleEndian.AppendUint32(append(b, code|otherPart), r.part)
	}
	if code == otherPair {
		b = binary.LittleEndian.AppendUint32(b, pair(r.column, r.word))
	}
	l.block, l.part = b, r.part
	l.n++
}

func pair(column, word uint16) uint32 { return uint32(column)<<16 | uint32(word) }

// enter gives a pair of column and word a code of its own.
func (l *recordLog) enter(column, word uint16) byte {
	for int(column) >= len(l.codes) {
		l.codes = append(l.codes, nil)
	}
	for int(word) >= len(l.codes[column]) {
		l.codes[column] = append(l.codes[column], 0)
	}
	l.pairs = append(l.pairs, pair(column, word))
	l.codes[column][word] = uint8(len(l.pairs))
	return byte(len(l.pairs) - 1)
}

// flush ends the block that is being filled.
func (l *recordLog) flush() {
	if len(l.block) > 0 {
		l.blocks = append(l.blocks, l.block)
		l.block = nil
	}
}

// each hands out the records in their order.
func (l *recordLog) each(do func(record)) {
	l.flush()
	for _, b := range l.blocks {
		part := uint32(0)
		for len(b) > 0 {
			head := b[0]
			b = b[1:]
			switch head &^ otherPair {
			case nextPart:
				part++
			case otherPart:
				part, b = binary.LittleEndian.Uint32(b), b[4:]
			}
			var p uint32
			if code := head & otherPair; code != otherPair {
				p = l.pairs[code]
			} else {
				p, b = binary.LittleEndian.Uint32(b), b[4:]
			}
			do(record{part, uint16(p >> 16), uint16(p)})
		}
	}
}
