package study

import (
	"cmp"
	"encoding/binary"
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"
)

// Natural order: runs of digits compare as numbers, everything else without
// case; what is equal so far compares by its bytes, so that the order is
// total. It is the order of the bytes of naturalKey.

// naturalKey appends a key of name to dst. A run of digits becomes the count
// of its digits without leading zeros and the digits themselves. Counts up to
// 8 stand in the bytes '0' to '8', which no other character uses.
func naturalKey(dst []byte, name string) []byte {
	for i := 0; i < len(name); {
		c := name[i]
		switch {
		case c >= '0' && c <= '9':
			j := i
			for j < len(name) && name[j] >= '0' && name[j] <= '9' {
				j++
			}
			digits := strings.TrimLeft(name[i:j], "0")
			if n := len(digits); n <= 8 {
				dst = append(dst, '0'+byte(n))
			} else {
				dst = append(dst, '9', byte(n>>24), byte(n>>16), byte(n>>8), byte(n))
			}
			dst = append(dst, digits...)
			i = j
		case c < utf8.RuneSelf:
			if c >= 'A' && c <= 'Z' {
				c += 'a' - 'A'
			}
			dst = append(dst, c)
			i++
		default:
			r, n := utf8.DecodeRuneInString(name[i:])
			dst = utf8.AppendRune(dst, unicode.ToLower(r))
			i += n
		}
	}
	return dst
}

// compareNatural compares two names in natural order.
func compareNatural(a, b string) int {
	var x, y [64]byte
	return cmp.Or(slices.Compare(naturalKey(x[:0], a), naturalKey(y[:0], b)), strings.Compare(a, b))
}

// keyed is a name by the first 16 bytes of its key, which mostly decide.
type keyed struct {
	hi, lo uint64
	id     uint32
}

func (a keyed) compare(b keyed) int {
	if a.hi != b.hi {
		return cmp.Compare(a.hi, b.hi)
	}
	return cmp.Compare(a.lo, b.lo)
}

// sortNatural returns the numbers 0 … n−1 of names in natural order.
func sortNatural(n int, name func(uint32) string) []keyed {
	list := make([]keyed, n)
	var buf []byte
	for i := range list {
		buf = naturalKey(buf[:0], name(uint32(i)))
		list[i] = keyed{firstBytes(buf), firstBytes(buf[min(8, len(buf)):]), uint32(i)}
	}
	compare := func(a, b keyed) int {
		if c := a.compare(b); c != 0 {
			return c
		}
		return compareNatural(name(a.id), name(b.id))
	}
	if !slices.IsSortedFunc(list, compare) {
		slices.SortFunc(list, compare)
	}
	return list
}

func firstBytes(b []byte) uint64 {
	if len(b) >= 8 {
		return binary.BigEndian.Uint64(b)
	}
	var k [8]byte
	copy(k[:], b)
	return binary.BigEndian.Uint64(k[:])
}
