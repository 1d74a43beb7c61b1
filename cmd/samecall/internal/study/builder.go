package study

import (
	"bytes"
	"fmt"
	"math"
	"slices"
	"sort"
	"unicode"
)

// columnKey is one trial of one appraiser.
type columnKey struct {
	appraiser uint16 // number in the builder's appraisers
	trial     int32
}

// late is a reference or a value that did not come with its part's first row.
type late struct{ refRow, valueRow uint32 }

// again is what one row says of a part that an earlier row of the same builder
// said otherwise. Whether they contradict each other, the merge tells.
type again struct {
	part, row uint32
	word      uint16 // of a second reference
	value     []byte // a second value
}

// builder takes the rows that one worker reads. It keeps what can be told
// apart row by row; what depends on the whole study is the merge's.
type builder struct {
	layout  *layout
	comma   bool // a comma may be a decimal comma
	padded  bool // rows come without their empty fields at the end
	parts   *partTable
	late    map[uint32]late
	columns []columnKey
	called  []bool // columns that have a call
	first   []uint32
	numbers map[columnKey]uint16
	nearby  [][16]uint16 // of each appraiser, columns of trials 0 … 15, plus 1

	appraisers *names
	words      *names

	warmed  int // line up to which the table of parts has looked ahead
	records recordLog
	rows    uint32
	jumps   []jump // where the line number does not follow from the row before

	refs, values, doubled []again

	signs [len(decimalSigns)]signed // the first value with each decimal sign

	problems []Problem
	more     int
}

type jump struct {
	row  uint32
	line int
}

func newBuilder(l *layout, comma, padded bool) *builder {
	b := &builder{
		layout: l, comma: comma, padded: padded,
		parts:      newPartTable(),
		late:       make(map[uint32]late),
		numbers:    make(map[columnKey]uint16),
		appraisers: newNames(func(w []byte) []byte { w, _ = composed(w); return w }),
		words:      newNames(func(w []byte) []byte { return []byte(fold(string(w))) }),
	}
	for _, c := range l.cells { // the columns of a wide table are known
		id, _ := b.appraisers.id([]byte(c.appraiser))
		b.column(id, c.trial)
	}
	return b
}

// problem keeps the first problems and counts the rest. Rows come in the
// order of their lines, so the first are those to show.
func (b *builder) problem(line, field int, found, expected, text string) {
	if len(b.problems) == maxProblems {
		b.more++
		return
	}
	b.problems = append(b.problems, Problem{Line: line, Column: field + 1, Found: found, Expected: expected, Text: text})
}

// row takes the fields of one row, which it does not keep.
func (b *builder) row(fields [][]byte, line int) {
	l := b.layout
	if len(fields) != len(l.header) {
		if fields = b.fit(fields, line); fields == nil {
			return
		}
	}
	part := trim(fields[l.part])
	if len(part) == 0 || len(part) > maxName {
		b.badPart(fields, part, line)
		return
	}
	var word, value []byte
	if l.reference >= 0 {
		word = trim(fields[l.reference])
	}
	if l.value >= 0 {
		if value = trim(fields[l.value]); len(value) > maxNumber {
			b.problem(line, l.value, quote(string(value)), "a number", "")
			return
		}
	}
	if l.long {
		b.longRow(fields, part, word, value, line)
		return
	}
	n := b.parts.n
	id, ok := b.part(part, word, value, line)
	if !ok {
		return
	}
	if b.parts.n == n { // its words still count, as where another builder reads it
		b.doubled = append(b.doubled, again{part: id, row: b.rows})
	}
	for i, c := range l.cells {
		b.call(id, uint16(i), trim(fields[c.field]), line, c.field)
	}
	b.endRow(line)
}

func (b *builder) longRow(fields [][]byte, part, ref, value []byte, line int) {
	l := b.layout
	name := trim(fields[l.appraiser])
	if len(name) == 0 {
		b.problem(line, l.appraiser, "no appraiser", "a name", "")
		return
	}
	trial, ok := wholeNumber(trim(fields[l.trial]))
	if !ok {
		hint := ""
		if bytes.ContainsAny(fields[l.trial], "123456789") && bytes.ContainsFunc(fields[l.trial], unicode.IsLetter) {
			hint = "write the number alone"
		}
		b.problem(line, l.trial, found(fields[l.trial]), fmt.Sprintf("a trial number from 1 to %d", maxTrial), hint)
		return
	}
	appraiser, ok := b.appraisers.id(name)
	if !ok {
		b.problem(line, l.appraiser, fmt.Sprintf("more than %d appraisers", maxNames), "fewer", "is this the column of the appraisers?")
		return
	}
	column, ok := b.column(appraiser, trial)
	if !ok {
		b.problem(line, l.trial, fmt.Sprintf("more than %d trials of all appraisers", maxNames), "fewer", "is this the column of the trials?")
		return
	}
	id, ok := b.part(part, ref, value, line)
	if !ok {
		return
	}
	b.call(id, column, trim(fields[l.call]), line, l.call)
	b.endRow(line)
}

// fit makes a row as long as the header. It returns nil for a row that is to
// be left out: it is blank, or its length is a problem.
func (b *builder) fit(fields [][]byte, line int) [][]byte {
	n := len(b.layout.header)
	if blank(fields) {
		return nil
	}
	if len(fields) > n {
		if blank(fields[n:]) {
			return fields[:n]
		}
		hint := "a separator inside a field needs quotes around the field"
		if b.padded {
			hint = beyondHeader
		} else if v := b.layout.value; !b.comma && v >= 0 && digits(bytes.TrimLeft(trim(fields[v]), "+-")) && digits(trim(fields[v+1])) {
			hint = "a decimal comma needs quotes, or semicolons between fields"
		}
		b.problem(line, n, counted(len(fields), "field", "fields"), fmt.Sprintf("%d, as in the header", n), hint)
		return nil
	}
	if b.padded {
		for len(fields) < n {
			fields = append(fields, nil)
		}
		return fields
	}
	b.problem(line, -1, counted(len(fields), "field", "fields"), fmt.Sprintf("%d, as in the header", n), "a missing call is an empty field")
	return nil
}

// beyondHeader is what to do about a row of a workbook that is too long.
const beyondHeader = "name the column in the header, or clear the cells beyond it"

func digits(field []byte) bool {
	return len(field) > 0 && len(bytes.Trim(field, "0123456789")) == 0
}

func (b *builder) badPart(fields [][]byte, part []byte, line int) {
	switch {
	case len(part) > 0:
		b.problem(line, b.layout.part, fmt.Sprintf("a part's name of %d bytes", len(part)), fmt.Sprintf("at most %d", maxName), "")
	case !blank(fields):
		b.problem(line, b.layout.part, "no part", "a name", "")
	}
}

// part returns the number of a part, entering its reference and value.
func (b *builder) part(name, ref, value []byte, line int) (id uint32, ok bool) {
	id, e, ok := b.parts.find(name)
	if !ok {
		if canon, changed := composed(name); changed {
			name = canon
			id, e, ok = b.parts.find(name)
		}
	}
	if !ok {
		if b.parts.full() || b.rows > math.MaxUint32-1 {
			b.problem(line, b.layout.part, "more names of parts than fit", "a smaller table", "")
			return 0, false
		}
		id, e = b.parts.add(name, value, b.rows)
	} else if len(value) > 0 && !bytes.Equal(b.parts.value(e), value) {
		b.laterValue(id, e, value)
	}
	if len(ref) > 0 {
		word, ok := b.words.id(ref)
		if !ok {
			b.tooManyWords(line, b.layout.reference)
			return 0, false
		}
		if word+1 != e.ref {
			b.laterRef(id, e, word)
		}
	}
	return id, true
}

// laterValue enters a value of a part that had another one, or none.
func (b *builder) laterValue(id uint32, e *partEntry, value []byte) {
	if e.valueLen == 0 {
		b.parts.setValue(e, value)
		at := b.lateOf(id, e)
		at.valueRow = b.rows
		b.late[id] = at
		return
	}
	b.seeSigns(value, b.rows)
	x, err := parseNumber(value, b.comma)
	if y, err2 := parseNumber(b.parts.value(e), b.comma); err != nil || err2 != nil || x != y {
		b.values = append(b.values, again{part: id, row: b.rows, value: bytes.Clone(value)})
	}
}

// decimalSigns are the two, where a comma may be one.
const decimalSigns = ",."

// signed is a value with a decimal sign, as written.
type signed struct {
	text string // empty: there is none
	row  uint32
}

// seeSigns keeps the first value with each decimal sign.
func (b *builder) seeSigns(value []byte, row uint32) {
	for i := range b.signs {
		if s := &b.signs[i]; (s.text == "" || row < s.row) && b.comma && bytes.IndexByte(value, decimalSigns[i]) >= 0 {
			*s = signed{string(value), row}
		}
	}
}

// laterRef enters a reference of a part that had another one, or none.
func (b *builder) laterRef(id uint32, e *partEntry, word uint16) {
	if e.ref != 0 {
		b.refs = append(b.refs, again{part: id, row: b.rows, word: word})
		return
	}
	e.ref = word + 1
	if e.row != b.rows {
		at := b.lateOf(id, e)
		at.refRow = b.rows
		b.late[id] = at
	}
}

func (b *builder) lateOf(id uint32, e *partEntry) late {
	if !e.late {
		e.late = true
		return late{e.row, e.row}
	}
	return b.late[id]
}

func (b *builder) valueRow(id uint32, e *partEntry) uint32 {
	if e.late {
		return b.late[id].valueRow
	}
	return e.row
}

func (b *builder) refRow(id uint32, e *partEntry) uint32 {
	if e.late {
		return b.late[id].refRow
	}
	return e.row
}

// column returns the number of a trial of an appraiser.
func (b *builder) column(appraiser uint16, trial int) (uint16, bool) {
	if int(appraiser) < len(b.nearby) && trial < 16 {
		if c := b.nearby[appraiser][trial]; c != 0 {
			return c - 1, true
		}
	}
	key := columnKey{appraiser, int32(trial)}
	c, ok := b.numbers[key]
	if !ok {
		if len(b.columns) == maxNames {
			return 0, false
		}
		c = uint16(len(b.columns))
		b.columns = append(b.columns, key)
		b.called = append(b.called, false)
		b.first = append(b.first, b.rows)
		b.numbers[key] = c
		for int(appraiser) >= len(b.nearby) {
			b.nearby = append(b.nearby, [16]uint16{})
		}
		if trial < 16 {
			b.nearby[appraiser][trial] = c + 1
		}
	}
	return c, true
}

// call records one call; an empty word is a missing one.
func (b *builder) call(part uint32, column uint16, word []byte, line, field int) {
	r := record{part: part, column: column}
	if len(word) > 0 {
		w, ok := b.words.id(word)
		if !ok {
			b.tooManyWords(line, field)
		}
		r.word = w + 1
		b.called[column] = true
	}
	b.records.add(r)
}

func (b *builder) tooManyWords(line, field int) {
	b.problem(line, field, fmt.Sprintf("more than %d different calls", maxNames), "a few words", "is this the column of the calls?")
}

// endRow counts the row, and keeps its line if it is not one more than the
// row before.
func (b *builder) endRow(line int) {
	if n := len(b.jumps); n == 0 || b.jumps[n-1].line+int(b.rows-b.jumps[n-1].row) != line {
		b.jumps = append(b.jumps, jump{b.rows, line})
	}
	b.rows++
}

// line returns the line of a row.
func (b *builder) line(row uint32) int {
	i := sort.Search(len(b.jumps), func(i int) bool { return b.jumps[i].row > row }) - 1
	if i < 0 {
		return 0
	}
	return b.jumps[i].line + int(row-b.jumps[i].row)
}

// perRow is the number of records that each row has.
func (b *builder) perRow() int {
	if b.layout.long {
		return 1
	}
	return len(b.layout.cells)
}

// field returns the field of a row in which the call of a record stands.
func (b *builder) field(r record) int {
	if b.layout.long {
		return b.layout.call
	}
	return b.layout.cells[r.column].field
}

func found(field []byte) string {
	if f := trim(field); len(f) > 0 {
		return quote(string(f))
	}
	return "nothing"
}

func blank(fields [][]byte) bool {
	return !slices.ContainsFunc(fields, func(f []byte) bool { return len(trim(f)) > 0 })
}

// trim cuts white space off, fast where there is none.
func trim(b []byte) []byte {
	if n := len(b); n == 0 || plain(b[0]) && plain(b[n-1]) {
		return b
	}
	return bytes.TrimSpace(b)
}

func plain(c byte) bool { return c > ' ' && c < 0x80 }
