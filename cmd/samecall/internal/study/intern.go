package study

import (
	"bytes"
	"encoding/binary"
	"hash/maphash"

	"golang.org/x/text/unicode/norm"
)

// The names of a million parts stand in ten million rows. partTable turns
// them into numbers without an allocation a name: names lie end to end in
// blocks of bytes, found by an open-addressed table of hashes. Against
// map[string]uint32 it takes half of the memory, and where rows come in order
// half of the time or less; shuffled rows take the same (BenchmarkNames).

const (
	blockBits = 20 // names: blocks of 1 MB
	entryBits = 12 // entries: blocks of 4,096
	maxName   = 1<<16 - 1
)

// partEntry is one part as one builder knows it. The text of its value
// follows its name in the block, where one look at memory finds both.
type partEntry struct {
	key      uint64 // of the name: the whole of a short one
	at       uint32 // of the name: block and place in it
	row      uint32 // the builder's row in which the part first stands
	nameLen  uint16
	valueLen uint16 // 0: no value yet
	ref      uint16 // word of the reference plus 1; 0: no reference yet
	late     bool   // reference or value came in a later row; builder.late tells which
}

type partTable struct {
	seed    maphash.Seed
	slots   []uint64 // upper half: hash; lower half: number of the entry plus 1; 0: free
	entries [][]partEntry
	n       uint32
	blocks  [][]byte

	last      uint32 // the part of the row before, its entry and its name
	lastEntry *partEntry
	lastName  []byte
	inOrder   bool // the part of the row before came after the one before it
	scattered bool // it was known and came from anywhere
	touched   uint64
}

func newPartTable() *partTable {
	return &partTable{seed: maphash.MakeSeed(), slots: make([]uint64, 1<<10)}
}

func (t *partTable) entry(id uint32) *partEntry {
	return &t.entries[id>>entryBits][id&(1<<entryBits-1)]
}

func (t *partTable) name(e *partEntry) []byte {
	return t.blocks[e.at>>blockBits][e.at&(1<<blockBits-1):][:e.nameLen]
}

func (t *partTable) value(e *partEntry) []byte {
	return t.blocks[e.at>>blockBits][e.at&(1<<blockBits-1)+uint32(e.nameLen):][:e.valueLen]
}

// shortName is how long a name may be to be its own key.
const shortName = 8

// nameKey packs a name of at most shortName bytes into a number, one to one
// among names of the same length; of a longer one, its last bytes. Most names
// are short, and then no look at the name itself is needed.
func nameKey(name []byte) uint64 {
	switch n := len(name); {
	case n >= 8:
		return binary.LittleEndian.Uint64(name[n-8:])
	case n >= 4:
		return uint64(binary.LittleEndian.Uint32(name)) | uint64(binary.LittleEndian.Uint32(name[n-4:]))<<32
	case n > 0:
		return uint64(name[0]) | uint64(name[n/2])<<8 | uint64(name[n-1])<<16
	}
	return 0
}

// is reports whether an entry has the name, given with its key.
func (t *partTable) is(e *partEntry, name []byte, key uint64) bool {
	return e.key == key && int(e.nameLen) == len(name) && (len(name) <= shortName || bytes.Equal(t.name(e), name))
}

// find returns the number and the entry of a name; ok is false if the name is
// new.
//
// Rows mostly come part by part, or in the same order of parts trial by
// trial: the part of the row before is tried first, then, as long as parts
// come in order, the one that once came after it.
func (t *partTable) find(name []byte) (id uint32, e *partEntry, ok bool) {
	if bytes.Equal(t.lastName, name) {
		return t.last, t.lastEntry, true
	}
	key := nameKey(name)
	if next := t.last + 1; t.inOrder && next < t.n {
		e = t.entry(next)
		if t.is(e, name, key) {
			t.setLast(next, e, name)
			return next, e, true
		}
	}
	tag := t.tag(name)
	mask := uint32(len(t.slots) - 1)
	for i := tag & mask; ; i = (i + 1) & mask {
		s := t.slots[i]
		if s == 0 {
			return 0, nil, false
		}
		if uint32(s>>32) == tag {
			id = uint32(s) - 1
			e = t.entry(id)
			if t.is(e, name, key) {
				t.inOrder = id == t.last+1
				t.scattered = !t.inOrder
				t.setLast(id, e, name)
				return id, e, true
			}
		}
	}
}

// setLast keeps the part of this row for the next. The name is copied: the
// one in the table may be far away in memory.
func (t *partTable) setLast(id uint32, e *partEntry, name []byte) {
	t.last, t.lastEntry, t.lastName = id, e, append(t.lastName[:0], name...)
}

func (t *partTable) tag(name []byte) uint32 { return uint32(maphash.Bytes(t.seed, name)) }

func (t *partTable) insert(tag, id uint32) {
	mask := uint32(len(t.slots) - 1)
	i := tag & mask
	for t.slots[i] != 0 {
		i = (i + 1) & mask
	}
	t.slots[i] = uint64(tag)<<32 | uint64(id+1)
}

// add enters a new name with the text of its value, which may be empty.
func (t *partTable) add(name, value []byte, row uint32) (uint32, *partEntry) {
	if 4*uint64(t.n+1) > 3*uint64(len(t.slots)) {
		t.grow()
	}
	id := t.n
	t.scattered = false
	t.insert(t.tag(name), id)
	if id&(1<<entryBits-1) == 0 {
		t.entries = append(t.entries, make([]partEntry, 0, 1<<entryBits))
	}
	b := &t.entries[id>>entryBits]
	*b = append(*b, partEntry{key: nameKey(name), at: t.store(name, value), row: row, nameLen: uint16(len(name)), valueLen: uint16(len(value))})
	t.n++
	e := &(*b)[id&(1<<entryBits-1)]
	t.setLast(id, e, name)
	return id, e
}

// setValue gives an entry a value that was not there when it was added.
func (t *partTable) setValue(e *partEntry, value []byte) {
	e.at, e.valueLen = t.store(t.name(e), value), uint16(len(value))
}

func (t *partTable) store(name, value []byte) uint32 {
	n := len(t.blocks)
	if n == 0 || len(t.blocks[n-1])+len(name)+len(value) > 1<<blockBits {
		size := 1 << blockBits
		if n == 0 { // most studies are small
			size = 1 << 12
		}
		t.blocks = append(t.blocks, make([]byte, 0, size))
		n++
	}
	b := &t.blocks[n-1]
	at := uint32(n-1)<<blockBits | uint32(len(*b))
	*b = append(append(*b, name...), value...)
	return at
}

func (t *partTable) full() bool { return len(t.blocks) == 1<<(32-blockBits) }

// grow doubles the table. A hash has 32 bits, as many as a table can use.
func (t *partTable) grow() {
	old := t.slots
	t.slots = make([]uint64, 2*len(old))
	for _, s := range old {
		if s != 0 {
			t.insert(uint32(s>>32), uint32(s)-1)
		}
	}
}

// composed returns a name in composed Unicode (NFC), which leaves ASCII as it
// is, and whether that changed it.
func composed(name []byte) ([]byte, bool) {
	if beyondASCII(name) < 0 || norm.NFC.IsNormal(name) {
		return name, false
	}
	return norm.NFC.Bytes(name), true
}

// names turns a small set of words into numbers: appraisers, spellings of
// calls. Spellings with the same canonical form share a number. A cache in
// front of the map finds the few that come again and again.
type names struct {
	canon     func([]byte) []byte
	list      []string // canonical form, by number
	ids       map[string]uint16
	spellings []spelling
	known     map[string]uint16 // spelling to its place in spellings
	cache     [256]uint16       // place in spellings plus 1
	single    [256]uint16       // number plus 1 of a spelling of one byte
}

type spelling struct {
	text []byte
	id   uint16
}

const maxNames = 1<<16 - 2

func newNames(canon func([]byte) []byte) *names {
	return &names{canon: canon, ids: make(map[string]uint16), known: make(map[string]uint16)}
}

func cacheSlot(w []byte) int {
	return (len(w)*0x1f ^ int(w[0])*0x0b ^ int(w[len(w)-1])*0x35) & 0xff
}

// id returns the number of a word that is not empty. ok is false if there are
// more than maxNames.
func (n *names) id(w []byte) (id uint16, ok bool) {
	if len(w) == 1 {
		if c := n.single[w[0]]; c != 0 {
			return c - 1, true
		}
	}
	slot := &n.cache[cacheSlot(w)]
	if c := int(*slot) - 1; c >= 0 {
		if s := &n.spellings[c]; bytes.Equal(s.text, w) {
			return s.id, true
		}
	}
	c, ok := n.known[string(w)]
	if !ok {
		if len(n.spellings) == maxNames {
			return 0, false
		}
		canon := string(n.canon(w))
		id, ok := n.ids[canon]
		if !ok {
			id = uint16(len(n.list))
			n.list = append(n.list, canon)
			n.ids[canon] = id
		}
		c = uint16(len(n.spellings))
		text := bytes.Clone(w)
		n.spellings = append(n.spellings, spelling{text, id})
		n.known[string(w)] = c
	}
	*slot = c + 1
	id = n.spellings[c].id
	if len(w) == 1 {
		n.single[w[0]] = id + 1
	}
	return id, true
}
