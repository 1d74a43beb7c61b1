package study

import (
	"archive/zip"
	"bytes"
	"errors"
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/xuri/excelize/v2"

	"samecall/agreement"
)

// valid fails unless exactly one of study and error is there, an error of the
// data has problems, and a study holds together.
func valid(t *testing.T, s *Study, err error) {
	t.Helper()
	if (s == nil) == (err == nil) {
		t.Fatalf("study %v, error %v", s, err)
	}
	if err != nil {
		var p *Problems
		if !errors.As(err, &p) {
			t.Fatalf("%v is no *Problems", err)
		}
		if n := len(p.List); n == 0 || n > 20 || p.More < 0 || p.More > 0 && n < 20 {
			t.Fatalf("%d problems and %d more", n, p.More)
		}
		for i, q := range p.List {
			if q.String() == "" || i > 0 && q.Line < p.List[i-1].Line {
				t.Fatalf("problem %d: %+v", i, q)
			}
		}
		return
	}
	r := s.Ratings
	if r.Parts() != len(s.Parts) || r.Appraisers() != len(s.Appraisers) || r.Categories() != len(s.Categories) || len(s.TrialNames) != r.Appraisers() || len(s.Inputs) == 0 {
		t.Fatalf("sizes do not fit: %+v", s)
	}
	for _, names := range [][]string{s.Parts, s.Appraisers} {
		for i, n := range names {
			if n == "" || i > 0 && compareNatural(names[i-1], n) >= 0 {
				t.Fatalf("names %q", names)
			}
		}
	}
	for a, trials := range s.TrialNames {
		if len(trials) != r.Trials(a) || !slices.IsSorted(trials) || trials[0] < 1 {
			t.Fatalf("trials %v", trials)
		}
	}
	made, _ := r.Count()
	if made == 0 {
		t.Fatal("no calls")
	}
	for p := range s.Parts {
		for _, c := range append(slices.Clone(r.Row(p)), r.Reference(p)) {
			if int(c) >= len(s.Categories) && c != agreement.Missing {
				t.Fatalf("part %d: category %d of %d", p, c, len(s.Categories))
			}
		}
	}
	if r.HasReference() != (s.Reference != None) || (s.Values == nil) != (s.HasValue == nil) || s.PassFail && (len(s.Categories) != 2 || !r.Accepts(1) || r.Accepts(0)) {
		t.Fatalf("%+v", s)
	}
	for _, x := range s.Values {
		if math.IsNaN(x) || math.IsInf(x, 0) {
			t.Fatal(x)
		}
	}
	sum := s.Summary()
	if sum.Calls != made || sum.Good+sum.Bad+sum.Unreferenced > sum.Parts {
		t.Fatalf("%+v", sum)
	}
	for _, c := range sum.CanShow {
		if math.IsNaN(c.Limit) || c.Text == "" {
			t.Fatalf("%+v", c)
		}
	}
}

var fuzzSettings = []Settings{
	{},
	{Accept: []string{"fine"}},
	{Order: []string{"a", "b", "c"}, Lower: ptr(1)},
	{Lower: ptr(1), Upper: ptr(2), Ignore: []string{"comment"}},
}

func FuzzReadCSV(f *testing.F) {
	for _, s := range []string{
		"part,appraiser,trial,call,reference,value\n1,a,1,go,go,1.5\n2,a,1,nogo,nogo,2.5\n",
		"part;reference;value;a-1;b 2\r\n1;1;1,5;1;0\r\n\r\n# c\r\n2;0;2,5;0;\r\n",
		"part\ta-1\n\"x\ny\"\tgo\n\"q\"\"\"\tno\n",
		"\xff\xfep\x00a\x00r\x00t\x00,\x00a\x00-\x001\x00\n\x001\x00,\x001\x00\n\x00",
		"\xef\xbb\xbfpart,\xc3\xa9-1\r1,go\r", "part,\xe9-1\n1,fine\n2,b\n", "sep=;\npart;a-1\n1;-\n", "PK\x03\x04", "part,a-1\n1,go\n1,go\n", "part,a-1\n2,one\n2,two\n",
	} {
		f.Add([]byte(s), byte(0))
	}
	f.Fuzz(func(t *testing.T, data []byte, which byte) {
		flags := fuzzSettings[int(which)%len(fuzzSettings)]
		s, err := Read(Source{Path: "-", Stdin: bytes.NewReader(data)}, flags)
		valid(t, s, err)
		// What comes out does not depend on how the text is cut.
		again, err2 := Read(Source{Path: "-", Stdin: bytes.NewReader(data), chunk: 16}, flags)
		if d := cmp.Diff(s, again, sameStudy); d != "" {
			t.Fatal(d)
		}
		// Of a text in no one encoding, the first problem met depends on how
		// far it was read.
		mixed := func(err error) bool { return strings.Contains(err.Error(), "found the byte") }
		if err != nil && err.Error() != err2.Error() && !mixed(err) && !mixed(err2) {
			t.Fatalf("%v\nin small chunks: %v", err, err2)
		}
	})
}

func FuzzSettings(f *testing.F) {
	f.Add([]byte(wholeStudyFile))
	f.Add([]byte("[criteria]\nmiss=[1,2]\nlower=3"))
	f.Add([]byte("lower = nan\nupper = -inf\nconfidence = 1e-300\n"))
	f.Add([]byte("criteria = [{miss = 1}]\naccept = [[]]\n"))
	f.Fuzz(func(t *testing.T, data []byte) {
		s, err := parseSettings("study.toml", data)
		if err == nil {
			err = s.Validate()
			if err != nil {
				t.Fatalf("read without an error, but %v", err)
			}
			return
		}
		var p *Problems
		if !errors.As(err, &p) || len(p.List) == 0 {
			t.Fatalf("%v is no *Problems", err)
		}
	})
}

// FuzzXLSX reads bytes as a workbook, and as the sheet of a workbook that is
// otherwise sound.
func FuzzXLSX(f *testing.F) {
	book := excelize.NewFile()
	for i, row := range [][]any{{"part", "reference", "value", "a-1"}, {1, "go", 12.004, "go"}, {"x", nil, 11, true}} {
		cell, _ := excelize.CoordinatesToCellName(1, i+1)
		if err := book.SetSheetRow("Sheet1", cell, &row); err != nil {
			f.Fatal(err)
		}
	}
	var whole bytes.Buffer
	if err := book.Write(&whole); err != nil {
		f.Fatal(err)
	}
	const sheet = "xl/worksheets/sheet1.xml"
	f.Add(whole.Bytes(), false)
	f.Add(unzip(f, whole.Bytes(), sheet), true)
	f.Add([]byte(`<worksheet><sheetData><row r="1"><c r="XFD1" t="inlineStr"><is><t>part</t></is></c></row><row r="1048577"/></sheetData></worksheet>`), true)
	f.Add([]byte(`<worksheet><sheetData><row r="-3"><c r="A-1" t="s"><v>99</v></c></row></sheetData></worksheet>`), true)
	f.Fuzz(func(t *testing.T, data []byte, asSheet bool) {
		if asSheet {
			data = replace(t, whole.Bytes(), sheet, data)
		}
		s, err := Read(Source{Path: "-", Stdin: bytes.NewReader(data)}, Settings{})
		valid(t, s, err)
	})
}

func unzip(tb testing.TB, data []byte, name string) []byte {
	z, err := zip.NewReader(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		tb.Fatal(err)
	}
	f, err := z.Open(name)
	if err != nil {
		tb.Fatal(err)
	}
	defer f.Close()
	var b bytes.Buffer
	if _, err := b.ReadFrom(f); err != nil {
		tb.Fatal(err)
	}
	return b.Bytes()
}

// replace returns a zip file with one of its files replaced.
func replace(tb testing.TB, data []byte, name string, with []byte) []byte {
	z, err := zip.NewReader(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		tb.Fatal(err)
	}
	var b bytes.Buffer
	w := zip.NewWriter(&b)
	for _, f := range z.File {
		content := with
		if f.Name != name {
			content = unzip(tb, data, f.Name)
		}
		to, err := w.Create(f.Name)
		if err != nil {
			tb.Fatal(err)
		}
		if _, err := to.Write(content); err != nil {
			tb.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		tb.Fatal(err)
	}
	return b.Bytes()
}
