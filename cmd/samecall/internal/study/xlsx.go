package study

import (
	"bytes"
	"fmt"
	"io"
	"slices"
	"strconv"
	"strings"

	"github.com/xuri/excelize/v2"

	"samecall/cmd/samecall/internal/shell"
)

// maxUnzipped bounds what a workbook may unpack to, against files made to
// fill the memory. The largest sheet, a million rows of six columns, takes
// some 300 MB.
const maxUnzipped = 1 << 30

// readWorkbook reads a sheet of an .xlsx workbook into a builder. Cells are
// taken as they are stored, not as they are shown: 12.004 shown as 12.00 is
// 12.004.
func readWorkbook(in io.Reader, s Settings) (t *table, err error) {
	defer func() { // a damaged file may be more than the library bears
		if r := recover(); r != nil {
			t, err = nil, &textError{Text: "the workbook is damaged; save it again as .xlsx, or as CSV"}
		}
	}()
	data, err := io.ReadAll(in)
	if err != nil {
		return nil, err
	}
	f, sheet, err := openSheet(data, s.Sheet)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	t = &table{sheet: sheet}
	if s.Sheet == "" {
		t.others = otherSheets(f, sheet)
	}
	if err := t.readSheet(f, s); err != nil {
		return nil, sheetError(sheet, err)
	}
	if t.layout == nil && len(t.problems) == 0 {
		t.problems = append(t.problems, noTable(whichSheet(f, sheet)))
	}
	if list := withoutResult(data, sheet, t.line, t.reads); len(list) > 0 { // what else is wrong may follow from it
		t.problems, t.builders = list, nil
	}
	return t, nil
}

// reads tells whether a field counts: no column is read that ignore names.
func (t *table) reads(field int) bool {
	l := t.layout
	return l == nil || slices.Contains([]int{l.part, l.reference, l.value, l.appraiser, l.trial, l.call}, field) ||
		slices.ContainsFunc(l.cells, func(c wideCell) bool { return c.field == field })
}

// openSheet opens a workbook and returns the name of the sheet that is
// wanted, the first that is not hidden if none is.
func openSheet(data []byte, want string) (*excelize.File, string, error) {
	f, err := excelize.OpenReader(bytes.NewReader(data), excelize.Options{RawCellValue: true, UnzipSizeLimit: maxUnzipped})
	if err != nil {
		return nil, "", &textError{Text: "this is no readable .xlsx workbook (" + err.Error() + "); save it as .xlsx or CSV"}
	}
	sheets := f.GetSheetList()
	if len(sheets) == 0 {
		f.Close()
		return nil, "", &textError{Text: "the workbook has no sheet"}
	}
	if want == "" {
		return f, sheets[max(slices.IndexFunc(sheets, func(n string) bool { return !hidden(f, n) }), 0)], nil
	}
	i := slices.IndexFunc(sheets, func(n string) bool { return n == want })
	if i < 0 {
		i = slices.IndexFunc(sheets, func(n string) bool { return fold(n) == fold(want) })
	}
	if i < 0 {
		f.Close()
		var list []string
		for _, n := range sheets {
			list = append(list, quote(n))
		}
		return nil, "", &textError{Found: "no sheet " + quote(want), Expected: "one of the sheets " + listOf(list, "or")}
	}
	return f, sheets[i], nil
}

func hidden(f *excelize.File, sheet string) bool {
	visible, err := f.GetSheetVisible(sheet)
	return err == nil && !visible
}

// otherSheets names the sheets beside the one that is read that hold anything.
func otherSheets(f *excelize.File, sheet string) (list []string) {
	for _, n := range f.GetSheetList() {
		if n == sheet || !holdsAnything(f, n) {
			continue
		}
		name := quote(n)
		if hidden(f, n) {
			name += " (hidden)"
		}
		list = append(list, name)
	}
	return list
}

func holdsAnything(f *excelize.File, sheet string) bool {
	rows, err := newSheetRows(f, sheet, true)
	if err != nil {
		return false
	}
	defer rows.Close()
	for {
		cells, err := rows.next()
		if err != nil {
			return false
		}
		if slices.ContainsFunc(cells, func(c string) bool { return strings.TrimSpace(c) != "" }) {
			return true
		}
	}
}

func sheetError(sheet string, err error) error {
	return &textError{Text: fmt.Sprintf("the sheet %s cannot be read (%v)", quote(sheet), err)}
}

// noTable is the problem of an empty sheet; which is what whichSheet says.
func noTable(which string) Problem {
	return Problem{Text: "the sheet holds no table: expected a header row and rows; " + which}
}

// whichSheet says which sheet is read, and how to read another one.
func whichSheet(f *excelize.File, sheet string) string {
	var flags []string
	for _, n := range f.GetSheetList() {
		if n != sheet {
			flags = append(flags, "--sheet "+shell.Word(n))
		}
	}
	read := "the sheet read is " + quote(sheet)
	if len(flags) == 0 {
		return read
	}
	return read + "; to read another one: " + listOf(firstFew(flags), "or")
}

// readSheet reads the header and the rows of t.sheet.
func (t *table) readSheet(f *excelize.File, s Settings) error {
	rows, err := newCellRows(f, t.sheet)
	if err != nil {
		return err
	}
	defer rows.close()
	var b *builder
	var text []byte
	var fields [][]byte
	for {
		cells, line, err := rows.next()
		if err == io.EOF {
			return nil
		}
		if err != nil {
			return err
		}
		if b == nil {
			var list []Problem
			t.line = line
			t.layout, list = readHeader(cells, s.Ignore, whichSheet(f, t.sheet))
			for _, p := range list {
				p.Line = line
				t.problems = append(t.problems, p)
			}
			if len(list) > 0 {
				return nil
			}
			b = newBuilder(t.layout, true, true)
			t.builders = append(t.builders, b)
			continue
		}
		text, fields = text[:0], fields[:0]
		for _, c := range cells {
			text = append(text, c...)
		}
		at := 0
		for _, c := range cells {
			fields = append(fields, text[at:at+len(c):at+len(c)])
			at += len(c)
		}
		b.row(fields, line)
	}
}

// cellRows hands out the rows of a sheet that are not blank.
type cellRows struct {
	raw, shown *sheetRows
	line       int
}

func newCellRows(f *excelize.File, sheet string) (*cellRows, error) {
	raw, err := newSheetRows(f, sheet, true)
	if err != nil {
		return nil, err
	}
	// Truth values are stored as 1 and 0, which would be calls. Only the
	// cells as shown tell them from numbers.
	shown, err := newSheetRows(f, sheet, false)
	if err != nil {
		raw.Close()
		return nil, err
	}
	return &cellRows{raw: raw, shown: shown}, nil
}

func (r *cellRows) close() {
	r.raw.Close()
	r.shown.Close()
}

// next returns the next row and its number, and io.EOF after the last one.
func (r *cellRows) next() (cells []string, line int, err error) {
	for {
		r.line++
		cells, err := r.raw.next()
		if err != nil {
			return nil, r.line, err
		}
		asShown, err := r.shown.next()
		if err != nil && err != io.EOF {
			return nil, r.line, err
		}
		for i, c := range cells {
			if (c == "1" || c == "0") && i < len(asShown) && (asShown[i] == "TRUE" || asShown[i] == "FALSE") {
				cells[i] = asShown[i]
			} else {
				cells[i] = shortest(c)
			}
		}
		if slices.ContainsFunc(cells, func(c string) bool { return strings.TrimSpace(c) != "" }) {
			return cells, r.line, nil
		}
	}
}

// sheetRows hands out the rows of a sheet one by one.
type sheetRows struct {
	*excelize.Rows
	raw bool
}

func newSheetRows(f *excelize.File, sheet string, raw bool) (*sheetRows, error) {
	rows, err := f.Rows(sheet)
	return &sheetRows{rows, raw}, err
}

func (r *sheetRows) next() ([]string, error) {
	if !r.Next() {
		if err := r.Error(); err != nil {
			return nil, err
		}
		return nil, io.EOF
	}
	return r.Columns(excelize.Options{RawCellValue: r.raw})
}

// shortest undoes the noise of a number stored with 17 digits: the part
// 1.1000000000000001 is the part 1.1. Text is stored without such noise.
func shortest(c string) string {
	if len(c) < 17 || !strings.ContainsAny(c, ".E") {
		return c
	}
	x, err := strconv.ParseFloat(c, 64)
	if err != nil {
		return c
	}
	if s := strconv.FormatFloat(x, 'f', -1, 64); len(s) < len(c)-2 {
		return s
	}
	return c
}

func cellName(sheet string, column, row int) string {
	cell, err := excelize.CoordinatesToCellName(column, row)
	if err != nil {
		return sheet
	}
	return sheet + "!" + cell
}
