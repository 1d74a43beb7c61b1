package study

import (
	"fmt"
	"io"
	"slices"
	"strconv"
	"strings"

	"github.com/xuri/excelize/v2"
)

// maxUnzipped bounds what a workbook may unpack to, against files made to
// fill the memory. The largest sheet, a million rows of six columns, takes
// some 300 MB.
const maxUnzipped = 1 << 30

// readWorkbook reads a sheet of an .xlsx workbook into a builder. Cells are
// taken as they are stored, not as they are shown: 12.004 shown as 12.00 is
// 12.004.
func readWorkbook(in io.Reader, s Settings) (*table, error) {
	f, err := excelize.OpenReader(in, excelize.Options{RawCellValue: true, UnzipSizeLimit: maxUnzipped})
	if err != nil {
		return nil, &textError{Text: "this is no readable .xlsx workbook (" + err.Error() + "); save it as .xlsx or CSV"}
	}
	defer f.Close()
	sheets := f.GetSheetList()
	if len(sheets) == 0 {
		return nil, &textError{Text: "the workbook has no sheet"}
	}
	sheet := sheets[0]
	if s.Sheet != "" {
		i := slices.IndexFunc(sheets, func(n string) bool { return n == s.Sheet })
		if i < 0 {
			i = slices.IndexFunc(sheets, func(n string) bool { return fold(n) == fold(s.Sheet) })
		}
		if i < 0 {
			var list []string
			for _, n := range sheets {
				list = append(list, quote(n))
			}
			return nil, &textError{Found: "no sheet " + quote(s.Sheet), Expected: "one of the sheets " + listOf(list, "or")}
		}
		sheet = sheets[i]
	}
	t := &table{sheet: sheet}
	if err := t.readSheet(f, s); err != nil {
		return nil, &textError{Text: fmt.Sprintf("the sheet %s cannot be read (%v)", quote(sheet), err)}
	}
	if t.layout == nil && len(t.problems) == 0 {
		t.problems = append(t.problems, Problem{Text: fmt.Sprintf("the sheet %s holds no table: expected a header row and rows", quote(sheet))})
	}
	return t, nil
}

// readSheet reads the header and the rows of t.sheet.
func (t *table) readSheet(f *excelize.File, s Settings) error {
	raw, err := newSheetRows(f, t.sheet, true)
	if err != nil {
		return err
	}
	defer raw.Close()
	// Truth values are stored as 1 and 0, which would be calls. Only the
	// cells as shown tell them from numbers.
	shown, err := newSheetRows(f, t.sheet, false)
	if err != nil {
		return err
	}
	defer shown.Close()
	var b *builder
	var text []byte
	var fields [][]byte
	for line := 1; ; line++ {
		cells, err := raw.next()
		if err == io.EOF {
			return nil
		}
		if err != nil {
			return err
		}
		asShown, err := shown.next()
		if err != nil && err != io.EOF {
			return err
		}
		for i, c := range cells {
			if (c == "1" || c == "0") && i < len(asShown) && (asShown[i] == "TRUE" || asShown[i] == "FALSE") {
				cells[i] = asShown[i]
			} else {
				cells[i] = shortest(c)
			}
		}
		if !slices.ContainsFunc(cells, func(c string) bool { return strings.TrimSpace(c) != "" }) {
			continue
		}
		if b == nil {
			var list []Problem
			t.line = line
			t.layout, list = readHeader(cells, s.Ignore)
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
