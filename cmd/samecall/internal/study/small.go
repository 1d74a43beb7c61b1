package study

import (
	"bytes"
	"crypto/sha256"
	"encoding/csv"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"slices"
	"strings"
)

// maxSmall bounds a small table: people or a measuring machine wrote it.
const maxSmall = 64 << 20

// smallTable is a table of a few columns that is not a table of calls: the
// same dialects of CSV and .xlsx, but held whole, as text.
type smallTable struct {
	input   Input
	sheet   string // of a workbook
	which   string // says which sheet it is, and which others there are
	line    int    // of the header
	header  []string
	rows    []smallRow
	comma   bool // the decimal separator may be a comma
	bare    bool // one column of numbers without a header
	list    []Problem
	columns map[string]int // of the names that were asked for, where they are

	formulas []Problem // of a workbook: formulas without a result
}

type smallRow struct {
	line   int
	fields []string // trimmed
}

// smallColumn is a column that a small table may have.
type smallColumn struct {
	name string
	need bool
}

// readSmall reads a small table without looking into its columns.
func (src Source) readSmall(file, sheet string) (*smallTable, error) {
	name := file
	if file == "-" {
		name = StdinName
	}
	f, err := src.open(file)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	data, err := io.ReadAll(io.LimitReader(f, maxSmall+1))
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	sum := sha256.Sum256(data)
	t := &smallTable{input: Input{File: name, SHA256: hex.EncodeToString(sum[:])}}
	switch {
	case len(data) > maxSmall:
		t.list = append(t.list, Problem{Text: fmt.Sprintf("the file is larger than %d bytes; is it the table that is meant?", maxSmall)})
	case bytes.HasPrefix(data, []byte("PK\x03\x04")):
		err = t.readSheet(data, sheet)
	default:
		err = t.readText(data)
	}
	if p, ok := problemOf(err); ok {
		t.list, err = append(t.list, p), nil
	}
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	return t, t.wrong()
}

// wrong is the error for what is wrong with the table so far, nil if all is well.
func (t *smallTable) wrong() error {
	for i, p := range t.list {
		p.File = t.input.File
		if t.sheet != "" && p.Line > 0 {
			p.Cell = cellName(t.sheet, max(p.Column, 1), p.Line)
		}
		t.list[i] = p
	}
	return problemsOf(t.list, 0)
}

func (t *smallTable) readSheet(data []byte, want string) error {
	f, sheet, err := openSheet(data, want)
	if err != nil {
		return err
	}
	defer f.Close()
	t.sheet, t.input.Sheet, t.comma = sheet, sheet, true
	t.which = whichSheet(f, sheet)
	rows, err := newCellRows(f, sheet)
	if err != nil {
		return sheetError(sheet, err)
	}
	defer rows.close()
	for {
		cells, line, err := rows.next()
		if err == io.EOF {
			break
		}
		if err != nil {
			return sheetError(sheet, err)
		}
		t.add(line, cells)
	}
	if t.header == nil {
		t.list = append(t.list, noTable(t.which))
	}
	t.formulas = withoutResult(data, sheet, t.line, func(int) bool { return true })
	t.unanswered(func(field int) bool { return false })
	return nil
}

// unanswered makes problems of the formulas without a result in the header
// and in the columns that are read.
func (t *smallTable) unanswered(reads func(field int) bool) {
	for _, p := range t.formulas {
		if p.Line <= t.line || reads(p.Column-1) {
			t.list = append(t.list, p)
		}
	}
}

func (t *smallTable) readText(data []byte) error {
	text, err := decoded(data)
	if err != nil {
		return err
	}
	line, separated := 1, byte(0)
	for len(text) > 0 {
		row, n, _ := firstRow(text)
		plain := strings.TrimSpace(row)
		if sep, ok := namedSeparator(row); ok {
			separated = sep
		} else if strings.Trim(plain, ",;\t") != "" && row[0] != '#' {
			break
		}
		line += bytes.Count(text[:n], []byte{'\n'})
		text = text[n:]
	}
	if len(text) == 0 {
		t.list = append(t.list, Problem{Text: "the file holds no table: expected a header line and rows"})
		return nil
	}
	first, _, _ := firstRow(text)
	switch {
	case separated != 0:
	case !strings.ContainsAny(first, ",;\t") || isNumber(first):
		separated = ';' // one column, in which a comma is a decimal one
	default:
		separated = separator(first)
	}
	t.comma = separated != ','
	r := newCSV(bytes.NewReader(text), separated)
	for {
		fields, err := r.Read()
		if err == io.EOF {
			return nil
		}
		var wrong *csv.ParseError
		if errors.As(err, &wrong) {
			t.list = append(t.list, quoteProblem(err, line))
			return nil
		}
		if err != nil {
			return err
		}
		at, _ := r.FieldPos(0)
		t.add(line+at-1, fields)
	}
}

// decoded returns text in UTF-8 with line feeds.
func decoded(data []byte) ([]byte, error) {
	c, err := newChunker(bytes.NewReader(data), chunkSize)
	if err != nil {
		return nil, err
	}
	k, err := c.next()
	if err == io.EOF {
		return nil, nil
	}
	if err != nil {
		return nil, err
	}
	return io.ReadAll(&chunkReader{c, k, k.data})
}

func isNumber(s string) bool {
	_, err := parseNumber([]byte(strings.TrimSpace(s)), true)
	return err == nil
}

// add takes the next row: the header, then rows that are not blank.
func (t *smallTable) add(line int, cells []string) {
	fields := make([]string, len(cells))
	for i, c := range cells {
		fields[i] = strings.TrimSpace(c)
	}
	for len(fields) > 0 && fields[len(fields)-1] == "" {
		fields = fields[:len(fields)-1]
	}
	switch {
	case len(fields) == 0 || t.sheet == "" && strings.HasPrefix(fields[0], "#"):
	case t.header == nil && len(fields) == 1 && isNumber(fields[0]):
		t.bare, t.header, t.line = true, []string{""}, line
		t.rows = append(t.rows, smallRow{line, fields})
	case t.header == nil:
		t.header, t.line = fields, line
	default:
		t.rows = append(t.rows, smallRow{line, fields})
	}
}

// pick finds the columns by their names, in any order and without case. Of
// what else is in the header only the names in ignore may be there.
func (t *smallTable) pick(columns []smallColumn, ignore []string) error {
	var names []string
	for _, c := range columns {
		names = append(names, c.name)
	}
	leave := folded(ignore)
	t.columns = make(map[string]int)
	if t.bare {
		t.list = append(t.list, Problem{Line: t.line, Found: "the number " + shown(t.rows[0].fields[0]), Expected: "a header line with the columns " + listOf(names, "and")})
		return t.wrong()
	}
	if len(t.header) == 1 && len(names) > 1 && !slices.Contains(names, fold(t.header[0])) {
		p := Problem{Line: t.line, Found: "the one column " + quote(t.header[0]), Expected: "a header line with the columns " + listOf(names, "and"),
			Text: "are the columns separated by comma, semicolon or tab?"}
		if t.which != "" {
			p.Text = "the first row that is not blank is the header: take a title above it out; " + t.which
		}
		t.list = append(t.list, p)
		return t.wrong()
	}
	for i, h := range t.header {
		p := Problem{Line: t.line, Column: i + 1}
		name := fold(h)
		first, twice := t.columns[name]
		switch {
		case leave[name]:
			continue
		case h == "":
			p.Text = fmt.Sprintf("column %d has no name; name it, or take it out of the table", i+1)
		case !slices.Contains(names, name):
			p.Found, p.Expected = "the unknown column "+quote(h), listOf(names, "or")
			p.Text = "to leave the column out: " + asFlag("ignore", append(slices.Clone(ignore), h)...)
			if near := nearest(h, names); near != "" {
				p.Text = "did you mean " + near + "? " + p.Text
			}
		case twice:
			p.Found, p.Expected = "the column "+quote(h)+" a second time", "each column once"
			p.Text = fmt.Sprintf("it stands in column %d already", first+1)
		default:
			t.columns[name] = i
			continue
		}
		t.list = append(t.list, p)
	}
	for _, c := range columns {
		if _, ok := t.columns[c.name]; c.need && !ok {
			t.list = append(t.list, Problem{Line: t.line, Found: "no column " + quote(c.name), Expected: "it in the header line"})
		}
	}
	t.unanswered(func(field int) bool {
		for _, i := range t.columns {
			if i == field {
				return true
			}
		}
		return false
	})
	if err := t.wrong(); err != nil {
		return err
	}
	hint := "is a decimal comma taken for a separator?"
	if t.sheet != "" {
		hint = beyondHeader
	}
	for _, r := range t.rows {
		if len(r.fields) > len(t.header) {
			t.at(r, len(t.header), quote(r.fields[len(t.header)]), fmt.Sprintf("%d fields, as the header has", len(t.header)), hint)
		}
	}
	if len(t.rows) == 0 {
		t.list = append(t.list, Problem{Line: t.line, Text: "there is a header and no row below it"})
	}
	return t.wrong()
}

// lines is what the lines of the table are called.
func (t *smallTable) lines() string {
	if t.sheet != "" {
		return "row"
	}
	return "line"
}

// has tells whether a column of this name was found.
func (t *smallTable) has(name string) bool {
	_, ok := t.columns[name]
	return ok
}

// text returns a field; empty if the row has none there.
func (t *smallTable) text(r smallRow, name string) string {
	i, ok := t.columns[name]
	if !ok || i >= len(r.fields) {
		return ""
	}
	return r.fields[i]
}

// at notes a problem with a field of a row, counted from 0; −1 for the row.
func (t *smallTable) at(r smallRow, field int, found, expected, text string) {
	t.list = append(t.list, Problem{Line: r.line, Column: field + 1, Found: found, Expected: expected, Text: text})
}

// number reads a number of a row, and notes what is wrong with it.
func (t *smallTable) number(r smallRow, name string) (float64, bool) {
	s := t.text(r, name)
	if s == "" {
		t.at(r, t.columns[name], "nothing", "a number in column "+name, "")
		return 0, false
	}
	x, err := parseNumber([]byte(s), t.comma)
	if err != nil {
		t.at(r, t.columns[name], quote(s), "a number in column "+name, err.Error())
		return 0, false
	}
	return x, true
}

// count reads a whole number of 0 or more, and notes what is wrong with it.
func (t *smallTable) count(r smallRow, name string) (int, bool) {
	const most = 1_000_000_000
	x, ok := t.number(r, name)
	switch {
	case ok && x > most:
		t.at(r, t.columns[name], shown(t.text(r, name)), fmt.Sprintf("a whole number of at most %d in column %s", most, name), "the number is too large")
		return 0, false
	case ok && !(x >= 0 && x == float64(int(x))):
		t.at(r, t.columns[name], shown(t.text(r, name)), "a whole number of 0 or more in column "+name, "")
		return 0, false
	}
	return int(x), ok
}
