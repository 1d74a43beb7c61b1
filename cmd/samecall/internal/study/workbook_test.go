package study

import (
	"archive/zip"
	"bytes"
	"errors"
	"io"
	"slices"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"
)

// bookOf makes a workbook: the sheets of a list, in its order, filled by fill.
func bookOf(t *testing.T, sheets []string, fill func(f *excelize.File) error) Source {
	t.Helper()
	f := excelize.NewFile()
	defer f.Close()
	err := f.SetSheetName("Sheet1", sheets[0])
	for _, n := range sheets[1:] {
		_, e := f.NewSheet(n)
		err = errors.Join(err, e)
	}
	var b bytes.Buffer
	if err := errors.Join(err, fill(f), f.Write(&b)); err != nil {
		t.Fatal(err)
	}
	return Source{Path: "-", Stdin: &b}
}

func rowsInto(f *excelize.File, sheet string, rows ...[]any) (err error) {
	for i, row := range rows {
		cell, _ := excelize.CoordinatesToCellName(1, i+1)
		err = errors.Join(err, f.SetSheetRow(sheet, cell, &row))
	}
	return err
}

// A hidden sheet is not read unless it is named, and which one was read is told.
func TestHiddenSheet(t *testing.T) {
	fill := func(f *excelize.File) error {
		f.SetActiveSheet(1)
		return errors.Join(
			rowsInto(f, "Old", []any{"part", "a-1"}, []any{1, "nogo"}, []any{2, "nogo"}),
			f.SetSheetVisible("Old", false),
			rowsInto(f, "New", []any{"part", "a-1"}, []any{1, "go"}),
			rowsInto(f, "Notes", []any{}, []any{"seen twice"}))
	}
	sheets := []string{"Old", "New", "Empty", "Notes"}
	s, err := Read(bookOf(t, sheets, fill), Settings{})
	if err != nil {
		t.Fatal(err)
	}
	want := Note{"other_sheets", `The sheet read is "New"; "Old" (hidden) and "Notes" hold something, too. The setting sheet names the one to read.`}
	if len(s.Parts) != 1 || s.Inputs[0].Sheet != "New" || !slices.Equal(s.Notes, []Note{want}) {
		t.Errorf("%d parts, sheet %q, notes %q", len(s.Parts), s.Inputs[0].Sheet, s.Notes)
	}
	s, err = Read(bookOf(t, sheets, fill), Settings{Sheet: "Old"})
	if err != nil || len(s.Parts) != 2 || s.Inputs[0].Sheet != "Old" || len(s.Notes) != 0 {
		t.Errorf("a hidden sheet that is named: %v, %v", s, err)
	}
}

func TestFormulaWithoutResult(t *testing.T) {
	const what = ": found a formula without a result, expected a result or a value; open and save the workbook in the program that made it, or write values"
	sheets := []string{"Calls"}
	table := func(f *excelize.File) error {
		return rowsInto(f, "Calls", []any{"part", "value", "a-1", "remark"}, []any{1, 9.5, "go"}, []any{2, 9.7, "go"}, []any{3, 9.9, "nogo"})
	}
	in := bookOf(t, sheets, func(f *excelize.File) error {
		return errors.Join(table(f), f.SetCellFormula("Calls", "B3", "B2+0.2"), f.SetCellFormula("Calls", "C4", "C3"), f.SetCellFormula("Calls", "D4", "1+1"),
			f.SetCellValue("Calls", "B3", nil), f.SetCellFormula("Calls", "B3", "B2+0.2"), f.SetCellValue("Calls", "C4", nil), f.SetCellFormula("Calls", "C4", "C3"))
	})
	_, err := Read(in, Settings{Ignore: []string{"remark"}})
	if want := "standard input:Calls!B3" + what + "\nstandard input:Calls!C4" + what; err == nil || err.Error() != want {
		t.Errorf("%v", err)
	}

	// In a column that is not read, nothing is wrong with it.
	s, err := Read(bookOf(t, sheets, func(f *excelize.File) error {
		return errors.Join(table(f), f.SetCellFormula("Calls", "D4", "1+1"))
	}), Settings{Ignore: []string{"remark"}})
	if err != nil || len(s.Parts) != 3 {
		t.Errorf("in a column left out: %v", err)
	}

	// So too in a small table.
	values := func(column string) (*Values, error) {
		return ReadValues(bookOf(t, sheets, func(f *excelize.File) error {
			return errors.Join(rowsInto(f, "Calls", []any{"x", "y"}, []any{1.5, 2}), f.SetCellFormula("Calls", "B3", "B2"))
		}), "", column)
	}
	if _, err = values("y"); err == nil || err.Error() != "standard input:Calls!B3"+what {
		t.Errorf("values: %v", err)
	}
	if v, err := values("x"); err != nil || len(v.Values) != 1 || v.Input.Sheet != "Calls" {
		t.Errorf("values of another column: %+v, %v", v, err)
	}
}

// What programs store: spreadsheets a result, which may be an empty text
// (t="str"); some libraries an empty result element, or none.
func TestUnanswered(t *testing.T) {
	const head = `<worksheet><sheetData><row r="1"><c r="A1" t="inlineStr"><is><t>part</t></is></c></row>`
	for cell, want := range map[string]bool{
		`<c r="A2"><f>1+1</f><v>2</v></c>`:               false,
		`<c r="A2" t="str"><f>IF(1,"",2)</f><v></v></c>`: false,
		`<c r="A2"><f>1+1</f><v></v></c>`:                true,
		`<c r="A2"><f>1+1</f><v/></c>`:                   true,
		`<c r="A2"><f t="shared" si="0"/></c>`:           true,
		`<c><f>1+1</f></c>`:                              true,
		`<c r="A2"/>`:                                    false,
		`<c r="A2"><v>2</v></c>`:                         false,
	} {
		var b bytes.Buffer
		z := zip.NewWriter(&b)
		for name, text := range map[string]string{
			"xl/workbook.xml":            `<workbook xmlns:r="x"><sheets><sheet name="Other" sheetId="1" r:id="rId1"/><sheet name="A" sheetId="2" r:id="rId2"/></sheets></workbook>`,
			"xl/_rels/workbook.xml.rels": `<Relationships><Relationship Id="rId2" Target="worksheets/sheet7.xml"/><Relationship Id="rId1" Target="/xl/none.xml"/></Relationships>`,
			"xl/worksheets/sheet7.xml":   head + strings.Repeat(" ", 64<<10-len(head)-9) + `<row r="2">` + cell + `</row></sheetData></worksheet>`, // across two reads
		} {
			w, err := z.Create(name)
			if err != nil {
				t.Fatal(err)
			}
			if _, err := io.WriteString(w, text); err != nil {
				t.Fatal(err)
			}
		}
		if err := z.Close(); err != nil {
			t.Fatal(err)
		}
		list := withoutResult(b.Bytes(), "A", 1, func(field int) bool { return field == 0 })
		if got := len(list) == 1 && list[0].Line == 2 && list[0].Column == 1; got != want || len(list) > 1 {
			t.Errorf("%s: %+v", cell, list)
		}
	}
}

// Of a workbook no message speaks of lines, separators, quotes or comments.
func TestWordsOfWorkbook(t *testing.T) {
	for name, c := range map[string]struct {
		rows [][]any
		want string
	}{
		"header alone": {[][]any{{"part", "a-1"}}, "standard input:Calls!A1: no rows stand below the header"},
		"too long a row": {[][]any{{"part", "a-1"}, {1, "go", "go"}},
			"standard input:Calls!C2: found 3 fields, expected 2, as in the header; name the column in the header, or clear the cells beyond it"},
		"a call twice": {[][]any{{"part", "appraiser", "trial", "call"}, {1, "a", 1, "go"}, {1, "a", 1, "go"}},
			`standard input:Calls!D3: found the call of "a" on part "1" in trial 1 a second time, expected each call once; it stands in row 2 already`},
		"a part twice": {[][]any{{"part", "a-1"}, {1, "go"}, {1, "go"}},
			`standard input:Calls!A3: found the part "1" a second time, expected each part once; it stands in row 2 already`},
		"two references": {[][]any{{"part", "reference", "appraiser", "trial", "call"}, {1, "go", "a", 1, "go"}, {1, "nogo", "a", 2, "go"}},
			`standard input:Calls!B3: found the reference "nogo" of part "1", expected "go", as in row 2; a part has one reference`},
	} {
		_, err := Read(bookOf(t, []string{"Calls"}, func(f *excelize.File) error { return rowsInto(f, "Calls", c.rows...) }), Settings{})
		if err == nil || err.Error() != c.want {
			t.Errorf("%s: %v", name, err)
		}
	}
	_, err := ReadShort(bookOf(t, []string{"Calls"}, func(f *excelize.File) error {
		return rowsInto(f, "Calls", []any{"part", "value", "accepted", "trials"}, []any{"#1", 1, 1, 2, 3}, []any{"#1", 2, 1, 2})
	}), "", nil)
	if err == nil || err.Error() != `standard input:Calls!E2: found "3", expected 4 fields, as the header has; name the column in the header, or clear the cells beyond it` {
		t.Errorf("short: %v", err)
	}
}
