package report

import (
	"fmt"
	"io"

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
	bold, err := f.NewStyle(&excelize.Style{Font: &excelize.Font{Bold: true}})
	if err != nil {
		return err
	}
	for i, t := range allTables(r) {
		name := sheetName(f, t.Name)
		if i == 0 {
			err = f.SetSheetName("Sheet1", name)
		} else {
			_, err = f.NewSheet(name)
		}
		if err != nil {
			return err
		}
		if err := writeSheet(f, name, t, bold); err != nil {
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

func writeSheet(f *excelize.File, sheet string, t Table, bold int) error {
	heads, rows := t.flat()
	row := 1
	put := func(cells []any) error {
		at, err := excelize.CoordinatesToCellName(1, row)
		if err != nil {
			return err
		}
		for i, c := range cells {
			if s, ok := c.(string); ok {
				cells[i] = format.Plain(s) // written as text, never as a formula
			}
		}
		row++
		return f.SetSheetRow(sheet, at, &cells)
	}
	if err := put([]any{t.Title}); err != nil {
		return err
	}
	if err := put(nil); err != nil {
		return err
	}
	head := make([]any, len(heads))
	for i, h := range heads {
		head[i] = h
	}
	if err := put(head); err != nil {
		return err
	}
	for _, r := range rows {
		if err := put(r); err != nil {
			return err
		}
	}
	if t.Note != "" {
		if err := put(nil); err != nil {
			return err
		}
		if err := put([]any{t.Note}); err != nil {
			return err
		}
	}
	if err := f.SetRowStyle(sheet, 3, 3, bold); err != nil {
		return err
	}
	if err := f.SetRowStyle(sheet, 1, 1, bold); err != nil {
		return err
	}
	last, err := excelize.ColumnNumberToName(max(1, len(heads)))
	if err != nil {
		return err
	}
	return f.SetColWidth(sheet, "A", last, 18)
}
