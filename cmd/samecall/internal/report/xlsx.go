package report

import (
	"fmt"
	"io"
	"slices"

	"github.com/xuri/excelize/v2"

	"samecall/cmd/samecall/internal/format"
)

// XLSX writes a workbook with a sheet for each table, the first one saying
// what was studied and decided.
func XLSX(w io.Writer, r *Record) (err error) {
	f := excelize.NewFile()
	defer func() {
		if c := f.Close(); err == nil {
			err = c
		}
	}()
	look, err := newLook(f)
	if err != nil {
		return err
	}
	for i, t := range numberTables(r) {
		name := sheetName(f, t.Name)
		if i == 0 {
			err = f.SetSheetName("Sheet1", name)
		} else {
			_, err = f.NewSheet(name)
		}
		if err != nil {
			return err
		}
		if err := writeSheet(f, name, t, look); err != nil {
			return err
		}
	}
	// The library stamps the time of writing; a record depends on its input alone.
	if err := f.SetDocProps(&excelize.DocProperties{Creator: "samecall", Created: "2000-01-01T00:00:00Z", Modified: "2000-01-01T00:00:00Z"}); err != nil {
		return err
	}
	return f.Write(w)
}

// sheetName is the table's name, numbered if it is taken.
func sheetName(f *excelize.File, name string) string {
	const most = 31 // that a workbook allows
	if len(name) > most {
		name = name[:most]
	}
	for n := 2; ; n++ {
		if i, err := f.GetSheetIndex(name); err == nil && i < 0 {
			return name
		}
		name = fmt.Sprintf("%.26s %d", name, n)
	}
}

// look are the styles of a workbook.
type look struct{ bold, wrapped, share, figure int }

func newLook(f *excelize.File) (l look, err error) {
	const percent = 10 // the workbook's own format 0.00%
	three := "0.000"
	for _, s := range []struct {
		to    *int
		style excelize.Style
	}{
		{&l.bold, excelize.Style{Font: &excelize.Font{Bold: true}, Alignment: &excelize.Alignment{Vertical: "top"}}},
		{&l.wrapped, excelize.Style{Alignment: &excelize.Alignment{Vertical: "top", WrapText: true}}},
		{&l.share, excelize.Style{NumFmt: percent, Alignment: &excelize.Alignment{Vertical: "top"}}},
		{&l.figure, excelize.Style{CustomNumFmt: &three, Alignment: &excelize.Alignment{Vertical: "top"}}},
	} {
		if *s.to, err = f.NewStyle(&s.style); err != nil {
			return l, err
		}
	}
	return l, nil
}

// asFine are the tables whose values are as fine as the characteristic.
var asFine = []string{"zone", "cuts", "zones", "unanimous", "limits", "curves", "gaps", "curve errors", "standard errors"}

// of returns the style of a cell; 0 is none.
func (l look) of(t Table, c flatCell) int {
	switch c.Value.(type) {
	case float64:
		switch {
		case c.Share:
			return l.share
		case !slices.Contains(asFine, t.Name):
			return l.figure
		}
	case string:
		return l.wrapped
	}
	return 0
}

const (
	headRow   = 3 // below the title and an empty row
	usualCell = 18.0
	longCell  = 90.0 // for sentences
)

func writeSheet(f *excelize.File, sheet string, t Table, l look) error {
	heads, rows := t.flat()
	notes := t.notes()
	if headRow+len(rows)+1+len(notes) > excelize.TotalRows {
		return fmt.Errorf("the table %q has %s rows, and a sheet of a workbook holds %s; write it as --csv or --json", t.Name, format.Count(len(rows)), format.Count(excelize.TotalRows))
	}
	put := func(column, row int, c flatCell, style int) error {
		at, err := excelize.CoordinatesToCellName(column, row)
		if err != nil {
			return err
		}
		switch x := c.Value.(type) {
		case nil:
			return nil
		case string: // as text, never as a formula
			err = f.SetCellStr(sheet, at, format.Plain(x))
		default:
			err = f.SetCellValue(sheet, at, x)
		}
		if err != nil || style == 0 {
			return err
		}
		return f.SetCellStyle(sheet, at, at, style)
	}
	if err := put(1, 1, flatCell{Value: t.Title}, l.bold); err != nil {
		return err
	}
	for i, h := range heads {
		if err := put(i+1, headRow, flatCell{Value: h}, l.bold); err != nil {
			return err
		}
	}
	for i, row := range rows {
		for j, c := range row {
			if err := put(j+1, headRow+1+i, c, l.of(t, c)); err != nil {
				return err
			}
		}
	}
	for i, n := range notes {
		if err := put(1, headRow+len(rows)+2+i, flatCell{Value: n}, 0); err != nil {
			return err
		}
	}
	last, err := excelize.ColumnNumberToName(max(1, len(heads)))
	if err != nil {
		return err
	}
	if err := f.SetColWidth(sheet, "A", last, usualCell); err != nil {
		return err
	}
	if n := len(t.Columns); len(heads) == n && t.Columns[n-1].Long {
		if err := f.SetColWidth(sheet, last, last, longCell); err != nil {
			return err
		}
	}
	return f.SetPanes(sheet, &excelize.Panes{Freeze: true, YSplit: headRow, TopLeftCell: fmt.Sprintf("A%d", headRow+1), ActivePane: "bottomLeft"})
}
