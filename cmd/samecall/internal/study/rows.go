package study

import (
	"bytes"
	"encoding/binary"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"math/bits"
	"slices"
	"strings"
	"sync"
)

// workers is how many builders parse at a time. Two saturate the reader, and
// each takes the memory of its own table of parts.
const workers = 2

// readText reads a table of text into builders.
//
// As long as no quote has come by, a line is a row and a separator separates:
// chunks go to the workers in turn, which split them directly. From the first
// chunk with a quote on, the text goes through encoding/csv. So the same text
// is always read in the same way, whichever worker is the quicker one.
func readText(in io.Reader, s Settings, size int) (*table, error) {
	c, err := newChunker(in, size)
	if err != nil {
		return nil, err
	}
	t := &table{}
	k, comma, err := t.header(c, s)
	if err != nil || len(t.problems) > 0 {
		return t, err
	}
	var wg sync.WaitGroup
	var jobs [workers]chan chunk
	for i := range jobs {
		jobs[i] = make(chan chunk, 2)
		b := newBuilder(t.layout, comma != ',', false)
		t.builders = append(t.builders, b)
		wg.Go(func() {
			for k := range jobs[i] {
				b.direct(k, comma)
				c.release(k)
			}
		})
	}
	for turn := 0; err == nil && bytes.IndexByte(k.data, '"') < 0; turn = (turn + 1) % workers {
		jobs[turn] <- k
		k, err = c.next()
	}
	for _, j := range jobs {
		close(j)
	}
	if err == nil {
		b := newBuilder(t.layout, comma != ',', false)
		t.builders = append(t.builders, b)
		err = b.quoted(&chunkReader{c, k, k.data}, k.line, comma)
	}
	wg.Wait()
	if err == io.EOF {
		err = nil
	}
	if p, ok := problemOf(err); ok {
		t.problems, err = append(t.problems, p), nil
	}
	return t, err
}

// table is what was read of a table, before it is a study.
type table struct {
	layout   *layout
	line     int      // of the header
	sheet    string   // of a workbook
	others   []string // its other sheets that hold anything, where none was named
	builders []*builder
	problems []Problem
}

// header reads the header and returns the rest of the chunk in which it
// stands, and the separator.
func (t *table) header(c *chunker, s Settings) (rest chunk, comma byte, err error) {
	for {
		k, err := c.next()
		if err == io.EOF {
			t.problems = append(t.problems, Problem{Text: "the file holds no table: expected a header line and rows"})
			return k, 0, nil
		}
		if err != nil {
			if p, ok := problemOf(err); ok {
				t.problems, err = append(t.problems, p), nil
			}
			return k, 0, err
		}
		for len(k.data) > 0 {
			text, n, open := firstRow(k.data)
			line := k.line
			if open && len(k.data) < maxLine { // a line end in quotes, where the chunk was cut
				if more, err := c.next(); err == nil {
					k.data = append(k.data[:len(k.data):len(k.data)], more.data...)
					c.release(more)
					continue
				} else if p, ok := problemOf(err); ok {
					t.problems = append(t.problems, p)
					return k, 0, nil
				} else if err != io.EOF {
					return k, 0, err
				}
			}
			k.data, k.line = k.data[n:], k.line+bytes.Count(k.data[:n], []byte{'\n'})
			if plain := strings.TrimSpace(text); plain == "" || text[0] == '#' || strings.Trim(plain, ",;\t") == "" {
				continue
			} else if sep, ok := namedSeparator(text); ok {
				comma = sep
				continue
			}
			if comma == 0 {
				comma = separator(text)
			}
			t.line = line
			r := newCSV(strings.NewReader(text), comma)
			fields, err := r.Read()
			if err != nil {
				t.problems = append(t.problems, quoteProblem(err, line))
				return k, comma, nil
			}
			var list []Problem
			t.layout, list = readHeader(fields, s.Ignore, "")
			for _, p := range list {
				p.Line = line
				t.problems = append(t.problems, p)
			}
			return k, comma, nil
		}
		c.release(k)
	}
}

// firstRow returns the first row of the text, which may have a line end
// inside quotes, and its length with the line end. It is open if the text
// ends inside quotes. In a comment a quote is a character like any other.
func firstRow(data []byte) (row string, n int, open bool) {
	inQuotes, comment := false, len(data) > 0 && data[0] == '#'
	for i, ch := range data {
		switch {
		case ch == '"' && !comment:
			inQuotes = !inQuotes
		case ch == '\n' && !inQuotes:
			return strings.TrimSuffix(string(data[:i]), "\r"), i + 1, false
		}
	}
	return string(data), len(data), inQuotes
}

// namedSeparator returns the separator that a line such as sep=; names.
func namedSeparator(row string) (comma byte, ok bool) {
	const key = "sep="
	row = strings.TrimLeft(row, " ")
	if len(row) <= len(key) || !strings.EqualFold(row[:len(key)], key) {
		return 0, false
	}
	sep := strings.TrimRight(row[len(key):], " ")
	if len(sep) != 1 || !strings.Contains(",;\t", sep) {
		return 0, false
	}
	return sep[0], true
}

// separator tells the separator of a table from its header: one that makes
// "part" a column, then the most frequent one.
func separator(header string) byte {
	best, most := byte(','), 0
	for _, c := range []byte(";\t,") {
		var b strings.Builder // the header without what stands in quotes
		inQuotes := false
		for _, r := range header {
			if r == '"' {
				inQuotes = !inQuotes
			} else if !inQuotes {
				b.WriteRune(r)
			}
		}
		score := strings.Count(b.String(), string(c))
		if score == 0 {
			continue
		}
		if fields, err := newCSV(strings.NewReader(header), c).Read(); err == nil &&
			slices.ContainsFunc(fields, func(f string) bool { return fold(f) == "part" }) {
			score += len(header)
		}
		if score > most {
			best, most = c, score
		}
	}
	return best
}

func newCSV(in io.Reader, comma byte) *csv.Reader {
	r := csv.NewReader(in)
	r.Comma = rune(comma)
	r.Comment = '#'
	r.FieldsPerRecord = -1
	r.ReuseRecord = true
	r.TrimLeadingSpace = comma != '\t' // which is itself a space to encoding/csv
	return r
}

// direct takes the rows of a chunk that has no quote. It looks for separators
// and line ends in eight bytes at a time.
func (b *builder) direct(k chunk, comma byte) {
	const ones = 0x0101010101010101
	commas, ends := ones*uint64(comma), ones*uint64('\n')
	fields := make([][]byte, 0, len(b.layout.header)+1)
	data, line, start := k.data, k.line, 0
	b.warmed = line
	i := 0
	for ; i+8 <= len(data); i += 8 {
		w := binary.LittleEndian.Uint64(data[i:])
		for m := zeroBytes(w^commas) | zeroBytes(w^ends); m != 0; m &= m - 1 {
			end := i + bits.TrailingZeros64(m)/8
			fields = append(fields, data[start:end])
			start = end + 1
			if data[end] == '\n' {
				b.directRow(fields, line)
				line++
				fields = fields[:0]
				if b.parts.scattered && b.layout.part == 0 && line >= b.warmed {
					b.parts.warm(data[start:], comma)
					b.warmed = line + warmRows
				}
			}
		}
	}
	for ; i < len(data); i++ {
		if data[i] == comma || data[i] == '\n' {
			fields = append(fields, data[start:i])
			start = i + 1
			if data[i] == '\n' {
				b.directRow(fields, line)
				line++
				fields = fields[:0]
			}
		}
	}
	if start < len(data) || len(fields) > 0 { // the last line has no end
		b.directRow(append(fields, data[start:]), line)
	}
}

// zeroBytes returns 0x80 in each byte of the result that is zero in x, and 0
// in each other.
func zeroBytes(x uint64) uint64 {
	const low = 0x7f7f7f7f7f7f7f7f
	return ^((x&low + low) | x | low)
}

// directRow takes a row unless it is blank or a comment.
func (b *builder) directRow(fields [][]byte, line int) {
	last := len(fields) - 1
	if f := fields[last]; len(f) > 0 && f[len(f)-1] == '\r' {
		fields[last] = f[:len(f)-1]
	}
	if first := fields[0]; len(first) == 0 && last == 0 || len(first) > 0 && first[0] == '#' {
		return
	}
	b.row(fields, line)
}

// quoted takes rows from encoding/csv. line is the number of the first line.
func (b *builder) quoted(in io.Reader, line int, comma byte) error {
	r := newCSV(in, comma)
	var text []byte
	var fields [][]byte
	for {
		record, err := r.Read()
		if err != nil {
			var pe *csv.ParseError
			if errors.As(err, &pe) {
				p := quoteProblem(err, line)
				b.problem(p.Line, -1, p.Found, p.Expected, p.Text)
				return nil
			}
			return err
		}
		text, fields = text[:0], fields[:0]
		for _, f := range record {
			text = append(text, f...)
		}
		at := 0
		for _, f := range record {
			fields = append(fields, text[at:at+len(f):at+len(f)])
			at += len(f)
		}
		first, _ := r.FieldPos(0)
		b.row(fields, line+first-1)
	}
}

// quoteProblem explains an error of encoding/csv, whose lines count from the
// line given.
func quoteProblem(err error, line int) Problem {
	var pe *csv.ParseError
	if !errors.As(err, &pe) {
		return Problem{Line: line, Text: err.Error()}
	}
	p := Problem{Line: line + pe.Line - 1}
	switch {
	case errors.Is(err, csv.ErrBareQuote):
		p.Found = fmt.Sprintf(`a quote (") in byte %d of the line, inside a field that does not begin with one`, pe.Column)
		p.Expected = `the whole field in quotes and each quote in it doubled, as in "12"" pipe"`
	default:
		p.Line = line + pe.StartLine - 1
		p.Found = `a field in quotes (") that does not end, or has a single quote inside`
		p.Expected = "a closing quote before the separator, and each quote inside doubled"
	}
	return p
}
