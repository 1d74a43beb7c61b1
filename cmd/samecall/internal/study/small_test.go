package study

import (
	"bytes"
	"errors"
	"math"
	"strings"
	"testing"
	"testing/fstest"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"github.com/xuri/excelize/v2"
	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"
)

// small gives a table to read as a file.
func small(data string) Source {
	return Source{Path: "t.csv", FS: fstest.MapFS{"t.csv": {Data: []byte(data)}}}
}

func sheetOf(t testing.TB, rows ...[]any) string {
	t.Helper()
	f := excelize.NewFile()
	for i, row := range rows {
		cell, _ := excelize.CoordinatesToCellName(1, i+1)
		if err := f.SetSheetRow("Sheet1", cell, &row); err != nil {
			t.Fatal(err)
		}
	}
	var b bytes.Buffer
	if err := f.Write(&b); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// The same short study in every dialect that a calls file may have.
func TestReadShortDialects(t *testing.T) {
	plain := "part,value,accepted,trials\nü1,-0.016,0,20\nü2,-0.015,1,20\n"
	semicolon := "Value;Accepted;TRIALS;part\n-0,016;0;20;ü1\n-0,015;1;20;ü2\n"
	utf16, err := unicode.UTF16(unicode.LittleEndian, unicode.UseBOM).NewEncoder().String(plain)
	if err != nil {
		t.Fatal(err)
	}
	latin, err := charmap.ISO8859_1.NewEncoder().String(semicolon)
	if err != nil {
		t.Fatal(err)
	}
	want := []Tally{{Name: "ü1", Value: -0.016, Count: 0, Of: 20}, {Name: "ü2", Value: -0.015, Count: 1, Of: 20}}
	for name, data := range map[string]string{
		"plain":      plain,
		"semicolon":  semicolon,
		"tab":        strings.ReplaceAll(plain, ",", "\t"),
		"bom":        "\ufeff" + plain,
		"crlf":       strings.ReplaceAll(plain, "\n", "\r\n"),
		"cr":         strings.ReplaceAll(plain, "\n", "\r"),
		"utf-16":     utf16,
		"latin-1":    latin,
		"quoted":     "\"part\",\"value\",\"accepted\",\"trials\"\n\"ü1\",\"-0.016\",0,20\nü2,-0.015,\"1\",20.0\n",
		"cluttered":  "# a remark\n\n,,,\n" + plain + "\n# another\n,,,\n",
		"sep line":   "sep=,\n" + plain,
		"no line at": strings.TrimSuffix(plain, "\n"),
		"sheet":      sheetOf(t, []any{}, []any{"part", "value", "accepted", "trials"}, []any{"ü1", -0.016, 0, 20}, []any{"ü2", -0.015, 1, 20}),
	} {
		t.Run(name, func(t *testing.T) {
			got, err := ReadShort(small(data), "", nil)
			if err != nil {
				t.Fatal(err)
			}
			if diff := cmp.Diff(want, got.Rows, cmpopts.IgnoreUnexported(Tally{})); diff != "" {
				t.Error(diff)
			}
			if got.Input.File != "t.csv" || len(got.Input.SHA256) != 64 {
				t.Errorf("input %v", got.Input)
			}
		})
	}
}

func TestReadFlaws(t *testing.T) {
	for name, c := range map[string]struct {
		data string
		want []Tally
	}{
		"counts": {"flaw,size,found,looks\nF1,0.4,1,3\nF2,0.9,3,3\n", []Tally{{Name: "F1", Value: 0.4, Count: 1, Of: 3}, {Name: "F2", Value: 0.9, Count: 3, Of: 3}}},
		"signs":  {"size;hit\n0,4;-\n0,4;+\n0,9;1\n", []Tally{{Value: 0.4, Of: 1}, {Value: 0.4, Count: 1, Of: 1}, {Value: 0.9, Count: 1, Of: 1}}},
		"hits":   {"size;hit\n0,4;0\n0,4;Found\n0,9;+\n1;missed\n", []Tally{{Value: 0.4, Of: 1}, {Value: 0.4, Count: 1, Of: 1}, {Value: 0.9, Count: 1, Of: 1}, {Value: 1, Of: 1}}},
	} {
		got, err := ReadFlaws(small(c.data), "", nil)
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if diff := cmp.Diff(c.want, got.Rows, cmpopts.IgnoreUnexported(Tally{})); diff != "" {
			t.Errorf("%s: %s", name, diff)
		}
	}
}

func TestReadValues(t *testing.T) {
	for name, c := range map[string]struct {
		data, column string
		want         []float64
		empty        int
	}{
		"no header":          {"10.01\n10.02\n", "", []float64{10.01, 10.02}, 0},
		"no header, comma":   {"10,01\n10,02\n", "", []float64{10.01, 10.02}, 0},
		"only column":        {"bore\n10.01\n10.02\n", "", []float64{10.01, 10.02}, 0},
		"only column, comma": {"bore\n10,01\n10,02\n", "", []float64{10.01, 10.02}, 0},
		"value among others": {"time,value,who\n8:00,10.01,a\n8:05,,b\n8:10,10.02,\n", "", []float64{10.01, 10.02}, 1},
		"named":              {"time;Bore 1;Bore 2\n8:00;1,5;2,5\n8:05;3;\n8:10;4;5\n", "bore 2", []float64{2.5, 5}, 1},
		"sheet":              {sheetOf(t, []any{"value", "x"}, []any{0.1 + 0.2, "a"}, []any{"1,5", "b"}), "", []float64{0.1 + 0.2, 1.5}, 0},
	} {
		got, err := ReadValues(small(c.data), "", c.column)
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if diff := cmp.Diff(c.want, got.Values, cmpopts.EquateApprox(1e-15, 0)); diff != "" || got.Empty != c.empty {
			t.Errorf("%s: %d empty, values %s", name, got.Empty, diff)
		}
	}
}

// What is wrong is told with file, line and column, all of it at once.
func TestSmallTablesWrong(t *testing.T) {
	short := func(s Source) error { _, err := ReadShort(s, "", nil); return err }
	flaws := func(s Source) error { _, err := ReadFlaws(s, "", nil); return err }
	values := func(s Source) error { _, err := ReadValues(s, "", ""); return err }
	for name, c := range map[string]struct {
		read func(Source) error
		data string
		want []string
	}{
		"empty":          {short, "", []string{"t.csv: the file holds no table"}},
		"only remarks":   {short, "# a\n\n", []string{"t.csv: the file holds no table"}},
		"no rows":        {short, "value,accepted,trials\n", []string{"t.csv:1: there is a header and no row below it"}},
		"not text":       {short, "a\x00\x01\x02b\n", []string{"t.csv: this is no text file"}},
		"no header":      {short, "0.1\n", []string{`t.csv:1: found the number 0.1, expected a header line with the columns part, value, accepted and trials`}},
		"missing column": {short, "value,accepted\n1,2\n", []string{`t.csv:1: found no column "trials", expected it in the header line`}},
		"one field":      {short, "value accepted trials\n1 2 3\n", []string{`t.csv:1: found the one column "value accepted trials", expected a header line with the columns part, value, accepted and trials; are the columns separated by comma, semicolon or tab?`}},
		"near":           {short, "value,acepted,trials\n1,2,3\n", []string{`t.csv:1:2: found the unknown column "acepted", expected part, value, accepted or trials; did you mean accepted?`}},
		"twice":          {short, "value,value,accepted,trials\n1,1,2,3\n", []string{"t.csv:1:2: found the column \"value\" a second time"}},
		"all at once": {short, "value,accepted,trials\nx,2,3\n1,4,3\n1,1.5,3\n1,-1,3\n1,1\n1,0,0\n1,1,2,3\n", []string{
			"t.csv:8:4: found \"3\", expected 3 fields, as the header has"}},
		"cells": {short, "value,accepted,trials\nx,2,3\n1,4,3\n1,1.5,3\n1,-1,3\n1,1\n1,0,0\n", []string{
			`t.csv:2:1: found "x", expected a number in column value`,
			"t.csv:3:2: found 4 in column accepted, expected no more than trials, which is 3",
			"t.csv:4:2: found 1.5, expected a whole number of 0 or more in column accepted",
			"t.csv:5:2: found -1, expected a whole number",
			"t.csv:6:3: found nothing, expected a number in column trials",
			"t.csv:7:3: found 0, expected 1 or more in column trials; leave the row out if nobody tried"}},
		"decimal comma": {short, "value,accepted,trials\n\"1,5\",1,2\n", []string{"t.csv:2:1", "the decimal separator is a point"}},
		"name twice":    {short, "part,value,accepted,trials\nA,1,1,2\nA,2,1,2\n", []string{`t.csv:3:2: found the value 2 of "A", expected 1, as in line 2; one name is one part`}},
		"quotes":        {short, "value,accepted,trials\n\"1,2,3\n", []string{"t.csv:2: found a field in quotes"}},
		"size":          {flaws, "size,found,looks\n0,1,2\n-1,1,2\n", []string{"t.csv:2:1: found 0, expected a size above 0", "t.csv:3:1: found -1"}},
		"both":          {flaws, "size,found,looks,hit\n1,1,2,1\n", []string{"expected size with found and looks (counts), or size with hit"}},
		"neither":       {flaws, "size,found\n1,1\n", []string{"t.csv:1: found the columns found and size, expected size with found and looks"}},
		"word":          {flaws, "size,hit\n1,maybe\n2,\n", []string{`t.csv:2:2: found "maybe", expected 1, hit, found or yes`, "t.csv:3:2: found nothing"}},
		"dash":          {flaws, "size,hit\n1,1\n2,-\n", []string{`t.csv:3:2: found "-", expected 1 (found) or 0 (missed) in column hit; a dash without + in the column may be meant as no look`}},
		"which column":  {values, "a,b\n1,2\n", []string{`t.csv:1: found no column "value", expected it in the header line; name the column that holds the values; there are "a" and "b"`}},
		"unit":          {values, "value\n10.01 mm\n", []string{`t.csv:2:1: found "10.01 mm", expected a number in column value; write the number alone, without unit`}},
		"no value":      {values, "value,b\n,1\n", []string{"t.csv:1: there is no value below the header"}},
	} {
		t.Run(name, func(t *testing.T) {
			err := c.read(small(c.data))
			var p *Problems
			if !errors.As(err, &p) {
				t.Fatalf("error %v", err)
			}
			for _, w := range c.want {
				if !strings.Contains(err.Error(), w) {
					t.Errorf("not told: %s\nbut: %s", w, err)
				}
			}
		})
	}
}

func TestSmallTableCell(t *testing.T) {
	data := sheetOf(t, []any{"value", "accepted", "trials"}, []any{"x", 1, 2})
	_, err := ReadShort(small(data), "", nil)
	if err == nil || !strings.HasPrefix(err.Error(), `t.csv:Sheet1!A2: found "x"`) {
		t.Errorf("error %v", err)
	}
	if _, err = ReadShort(small(data), "May", nil); err == nil || !strings.Contains(err.Error(), `found no sheet "May", expected one of the sheets "Sheet1"`) {
		t.Errorf("error %v", err)
	}
}

func TestSmallTableTitle(t *testing.T) {
	data := sheetOf(t, []any{"Gauge 7"}, []any{"value", "accepted", "trials"}, []any{1, 1, 2})
	_, err := ReadShort(small(data), "", nil)
	if err == nil || !strings.Contains(err.Error(), `found the one column "Gauge 7", expected a header line with the columns part, value, accepted and trials; the first row that is not blank is the header: take a title above it out; the sheet read is "Sheet1"`) {
		t.Errorf("error %v", err)
	}
}

func TestSmallTableIgnored(t *testing.T) {
	got, err := ReadShort(small("value,accepted,trials,Remark\n1,1,2,dented\n"), "", []string{"remark"})
	if err != nil || len(got.Rows) != 1 {
		t.Errorf("rows %v, error %v", got, err)
	}
}

// Whatever the bytes, a reader returns numbers or words, and nothing that
// cannot be counted.
func FuzzSmallTables(f *testing.F) {
	for _, s := range []string{
		"value,accepted,trials\n-0.016,0,20\n", "size;hit\n0,4;1\n", "size,found,looks\n1,1,2\n", "10,01\n10,02\n",
		"\xff\xfev\x00a\x00l\x00u\x00e\x00\n\x001\x00", "\xef\xbb\xbfvalue\r1\r2", "sep=;\nvalue;x\n1;\"a\nb\"\n", "value\n1e400\n", "#\n,,\n\"", "\xff,\xfe\n1,2",
	} {
		f.Add([]byte(s))
	}
	f.Add([]byte(sheetOf(f, []any{"value", "accepted", "trials"}, []any{1.5, 1, 2})))
	f.Fuzz(func(t *testing.T, data []byte) {
		src := small(string(data))
		told := func(err error) {
			if err != nil && err.Error() == "" {
				t.Error("an error without words")
			}
		}
		for _, read := range []func(Source, string, []string) (*Tallies, error){ReadShort, ReadFlaws} {
			got, err := read(src, "", nil)
			if told(err); err != nil {
				continue
			}
			if len(got.Rows) == 0 {
				t.Error("no rows and no error")
			}
			for _, r := range got.Rows {
				if r.Count < 0 || r.Count > r.Of || r.Of < 1 || math.IsNaN(r.Value) || math.IsInf(r.Value, 0) {
					t.Errorf("row %+v", r)
				}
			}
		}
		got, err := ReadValues(src, "", "")
		if told(err); err != nil {
			return
		}
		if len(got.Values) == 0 {
			t.Error("no values and no error")
		}
		for _, v := range got.Values {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				t.Errorf("value %v", v)
			}
		}
	})
}
