package study

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io/fs"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"testing/fstest"

	"github.com/google/go-cmp/cmp"
	"github.com/xuri/excelize/v2"

	"samecall/agreement"
)

func read(t *testing.T, text string, s Settings) *Study {
	t.Helper()
	got, err := Read(Source{Path: "-", Stdin: strings.NewReader(text)}, s)
	if err != nil {
		t.Fatal(err)
	}
	return got
}

func codes(s *Study) []string {
	var list []string
	for _, n := range s.Notes {
		list = append(list, n.Code)
	}
	return list
}

// The attribute study of the Measurement Systems Analysis reference manual,
// 4th ed. (2010), chapter III section C: 50 parts, of which 16 are bad, three
// appraisers, three trials; limits 0.450 and 0.545. The reference of the
// table is the one that the limits tell.
func TestManual(t *testing.T) {
	const file = "../../../../testdata/reference/msa-manual-50x3x3.csv"
	s, err := Read(Source{Path: file}, Settings{Lower: ptr(0.45), Upper: ptr(0.545)})
	if err != nil {
		t.Fatal(err)
	}
	if s.Reference != Given || !slices.Equal(s.Appraisers, []string{"A", "B", "C"}) || len(s.Parts) != 50 || s.Parts[9] != "10" || !s.PassFail {
		t.Errorf("%+v", s)
	}
	sum := s.Summary()
	if sum.Bad != 16 || sum.Good != 34 || sum.Calls != 450 || sum.Missing != 0 || !sum.Balanced {
		t.Errorf("%+v", sum)
	}
	// Cross-table of A against the reference, printed in the manual: 45, 5, 3, 97.
	var table [2][2]int
	for p := range s.Parts {
		for _, c := range s.Ratings.Calls(p, 0) {
			table[c][s.Ratings.Reference(p)]++
		}
	}
	if table != [2][2]int{{45, 5}, {3, 97}} {
		t.Errorf("table %v", table)
	}
	data, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	if want := fmt.Sprintf("%x", sha256.Sum256(data)); len(s.Inputs) != 1 || s.Inputs[0] != (Input{File: file, SHA256: want}) {
		t.Errorf("inputs %v", s.Inputs)
	}

	// Without the column the same reference follows from the limits.
	derived, err := Read(Source{Path: file}, Settings{Lower: ptr(0.45), Upper: ptr(0.545), Ignore: []string{"Reference"}})
	if err != nil {
		t.Fatal(err)
	}
	if derived.Reference != Derived {
		t.Errorf("reference %v", derived.Reference)
	}
	for p := range s.Parts {
		if derived.Ratings.Reference(p) != s.Ratings.Reference(p) {
			t.Errorf("part %s", s.Parts[p])
		}
	}
}

func TestStudyFile(t *testing.T) {
	dir := t.TempDir()
	const calls = "part,value,a-1,b-1\n1,1.5,go,go\n2,2.5,nogo,go\n"
	const file = "upper = 2\nunit = \"mm\"\ncalls = \"data/calls.csv\"\n"
	for name, text := range map[string]string{"study.toml": file, "data/calls.csv": calls, "empty.toml": "unit = \"mm\"\n"} {
		if err := os.MkdirAll(filepath.Dir(filepath.Join(dir, name)), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	studyFile, callsFile := filepath.Join(dir, "study.toml"), filepath.Join(dir, "data", "calls.csv")
	sum := func(s string) string { h := sha256.Sum256([]byte(s)); return hex.EncodeToString(h[:]) }
	mapped := fstest.MapFS{"x/study.toml": {Data: []byte(file)}, "x/data/calls.csv": {Data: []byte(calls)}}
	for _, c := range []struct {
		name   string
		src    Source
		flags  Settings
		inputs []Input
		upper  float64
	}{
		{"study file", Source{Path: studyFile}, Settings{}, []Input{{File: studyFile, SHA256: sum(file)}, {File: "data/calls.csv", SHA256: sum(calls)}}, 2},
		{"study file by Study", Source{Study: studyFile}, Settings{}, []Input{{File: studyFile, SHA256: sum(file)}, {File: "data/calls.csv", SHA256: sum(calls)}}, 2},
		{"both", Source{Path: callsFile, Study: studyFile}, Settings{}, []Input{{File: studyFile, SHA256: sum(file)}, {File: callsFile, SHA256: sum(calls)}}, 2},
		{"calls by flag", Source{Study: filepath.Join(dir, "empty.toml")}, Settings{Calls: callsFile, Upper: ptr(3)}, []Input{{File: filepath.Join(dir, "empty.toml"), SHA256: sum("unit = \"mm\"\n")}, {File: callsFile, SHA256: sum(calls)}}, 3},
		{"standard input and flag", Source{Path: "-", Study: studyFile, Stdin: strings.NewReader(calls)}, Settings{Upper: ptr(1)}, []Input{{File: studyFile, SHA256: sum(file)}, {File: StdinName, SHA256: sum(calls)}}, 1},
		{"built in", Source{Path: "x/study.toml", FS: mapped}, Settings{}, []Input{{File: "x/study.toml", SHA256: sum(file)}, {File: "data/calls.csv", SHA256: sum(calls)}}, 2},
	} {
		s, err := Read(c.src, c.flags)
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		if d := cmp.Diff(c.inputs, s.Inputs); d != "" {
			t.Errorf("%s: %s", c.name, d)
		}
		if s.Settings.Unit != "mm" || *s.Settings.Upper != c.upper || s.Settings.Confidence != 0.95 || s.Reference != Derived {
			t.Errorf("%s: %+v", c.name, s.Settings)
		}
	}
	_, err := Read(Source{Path: filepath.Join(dir, "empty.toml")}, Settings{})
	var p *Problems
	if !errors.As(err, &p) || !strings.Contains(err.Error(), "names no calls") {
		t.Errorf("no calls: %v", err)
	}
	if _, err := Read(Source{Path: filepath.Join(dir, "none.csv")}, Settings{}); !errors.Is(err, fs.ErrNotExist) || errors.As(err, &p) {
		t.Errorf("no file: %v", err)
	}
	if _, err := Read(Source{Path: dir}, Settings{}); err == nil || !strings.Contains(err.Error(), "is a folder") {
		t.Errorf("folder: %v", err)
	}
	if _, err := Read(Source{}, Settings{}); err == nil {
		t.Error("nothing named: no error")
	}
}

// workbook returns a workbook with an empty first sheet and the sheet Calls,
// whose cells show two decimals.
func workbook(t *testing.T, cells map[string]any) []byte {
	t.Helper()
	f := excelize.NewFile()
	defer f.Close()
	if _, err := f.NewSheet("Calls"); err != nil {
		t.Fatal(err)
	}
	style, err := f.NewStyle(&excelize.Style{NumFmt: 2})
	if err != nil {
		t.Fatal(err)
	}
	for cell, v := range cells {
		if err := errors.Join(f.SetCellValue("Calls", cell, v), f.SetCellStyle("Calls", cell, cell, style)); err != nil {
			t.Fatal(err)
		}
	}
	var b bytes.Buffer
	if err := f.Write(&b); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

func TestWorkbook(t *testing.T) {
	src := func(data []byte) Source { return Source{Path: "-", Stdin: bytes.NewReader(data)} }
	cells := map[string]any{
		"A3": "part", "B3": "value", "C3": "early-1", "D3": "early-2",
		"A5": 7, "B5": 12.0041, "C5": "go", "D5": 1,
		"A6": 1.1, "B6": 12.019, "C6": "nogo",
	}
	data := workbook(t, cells)
	s, err := Read(src(data), Settings{Sheet: "calls", Upper: ptr(12.018)})
	if err != nil {
		t.Fatal(err)
	}
	if !slices.Equal(s.Parts, []string{"1.1", "7"}) || !slices.Equal(s.Values, []float64{12.019, 12.0041}) {
		t.Errorf("parts %q, values %v", s.Parts, s.Values)
	}
	if want := []agreement.Category{0, agreement.Missing, 1, 1}; !slices.Equal(append(slices.Clone(s.Ratings.Row(0)), s.Ratings.Row(1)...), want) {
		t.Errorf("calls %v %v", s.Ratings.Row(0), s.Ratings.Row(1))
	}
	_, err = Read(src(data), Settings{Sheet: "Other"})
	if err == nil || err.Error() != `standard input: found no sheet "Other", expected one of the sheets "Sheet1" or "Calls"` {
		t.Errorf("%v", err)
	}
	_, err = Read(src(data), Settings{})
	if err == nil || !strings.Contains(err.Error(), `the sheet holds no table: expected a header row and rows; the sheet read is "Sheet1"; to read another one: --sheet Calls`) {
		t.Errorf("%v", err)
	}
	const place = `the sheet read is "Calls"; to read another one: --sheet Sheet1`
	for title, want := range map[string]string{
		"A1": `standard input:Calls!A1: found one column, "Study", expected the columns of a header; the first row that is not blank is the header: take a title above it out; ` + place,
		"C1": `standard input:Calls!A1: found no column "part", expected it in the header line; the first row that is not blank is read as the header; ` + place,
	} {
		titled := map[string]any{"A1": "Study", title: "Study", "A2": "part", "B2": "a-1", "A3": 1, "B3": "go"}
		if _, err = Read(src(workbook(t, titled)), Settings{Sheet: "Calls"}); err == nil || !strings.HasPrefix(err.Error(), want) {
			t.Errorf("title in %s: %v", title, err)
		}
	}
	cells["D5"], cells["B6"] = true, "about 12" // a truth value is no 1
	_, err = Read(src(workbook(t, cells)), Settings{Sheet: "Calls"})
	var p *Problems
	if !errors.As(err, &p) || len(p.List) != 2 || p.List[0].Cell != "Calls!D5" || p.List[1].Cell != "Calls!B6" ||
		!strings.HasPrefix(err.Error(), `standard input:Calls!D5: found "TRUE" in column 4 (early-2), expected `) {
		t.Errorf("%v", err)
	}
}

// Doubles written with 17 digits: 1.1 and 2.3 are the nearest to what stands
// there, 0.1 + 0.2 and 12.004 plus one unit in the last place are not.
func TestShortest(t *testing.T) {
	for in, want := range map[string]string{
		"1.1000000000000001": "1.1", "12.004000000000001": "12.004000000000001", "7": "7", "0.30000000000000004": "0.30000000000000004",
		"12345678901234567": "12345678901234567", "2.2999999999999998": "2.3", "version 1.1.1.1.1.1": "version 1.1.1.1.1.1",
	} {
		if got := shortest(in); got != want {
			t.Errorf("%s: %s, want %s", in, got, want)
		}
	}
}

func TestNotes(t *testing.T) {
	for _, c := range []struct {
		name, in string
		settings Settings
		want     []string
	}{
		{"nothing to say", "part,a-1\n1,go\n", Settings{}, nil},
		{"similar appraisers", "part,Ann B-1,ann  b-1\n1,go,go\n", Settings{}, []string{"similar_names"}},
		{"similar parts", "part,a-1\nP1,go\np01,go\n", Settings{}, []string{"similar_names"}},
		{"trial without calls", "part,a-1,a-2\n1,go,\n", Settings{}, []string{"empty_trial"}},
		{"reference of some", "part,reference,a-1\n1,go,go\n2,,go\n", Settings{}, []string{"partial_reference"}},
		{"value of some", "part,value,a-1\n1,2,go\n2,,go\n", Settings{Upper: ptr(3)}, []string{"partial_reference"}},
		{"limits without values", "part,a-1\n1,go\n", Settings{Upper: ptr(3)}, []string{"no_values"}},
		{"values without limits", "part,value,a-1\n1,2,go\n", Settings{}, []string{"no_limits"}},
		{"more than two categories", "part,value,a-1\n1,2,x\n", Settings{Upper: ptr(3), Order: []string{"x", "y", "z"}}, []string{"not_derived"}},
		{"rare word", "part,a-1\n" + numbered(19, "fine") + "x,dent\ny,dnet\nz,dent\n", Settings{Accept: []string{"fine"}}, []string{"rare_word"}},
		{"rare word, pass/fail", "part,a-1\n" + numbered(19, "fine") + "x,fien\n", Settings{Accept: []string{"fine"}}, []string{"rare_word"}},
		{"too few for a rare word", "part,a-1\n" + numbered(18, "fine") + "x,fien\n", Settings{Accept: []string{"fine"}}, nil},
	} {
		s := read(t, c.in, c.settings)
		if got := codes(s); !slices.Equal(got, c.want) {
			t.Errorf("%s: notes %v", c.name, s.Notes)
		}
	}
	s := read(t, "part,a-1\n"+numbered(19, "fine")+"x,Fien\n", Settings{Accept: []string{"fine"}})
	if !strings.Contains(s.Notes[0].Text, `"Fien"`) {
		t.Errorf("%v", s.Notes)
	}
}

func numbered(n int, word string) string {
	var b strings.Builder
	for i := range n {
		fmt.Fprintf(&b, "%d,%s\n", i+1, word)
	}
	return b.String()
}

// A value on a limit is inside; near a limit is a tenth of the tolerance, or
// of the spread of the values where one limit is open.
func TestSummaryLimits(t *testing.T) {
	const table = "part,value,a-1\n1,0.8,no\n2,0.9,no\n3,1,go\n4,1.1,go\n5,1.5,go\n6,1.95,go\n7,2,go\n8,2.05,no\n9,2.2,no\n10,,go\n"
	v := read(t, table, Settings{Lower: ptr(1), Upper: ptr(2)}).Summary().Values
	want := &ValueSummary{Count: 9, Min: 0.8, Max: 2.2, OnLimit: 2,
		Lower: &LimitSummary{Limit: 1, Width: 0.1, OfTolerance: true, NearGood: 2, NearBad: 1, Inside: 7, Outside: 2},
		Upper: &LimitSummary{Limit: 2, Width: 0.1, OfTolerance: true, NearGood: 2, NearBad: 1, Inside: 7, Outside: 2}}
	if d := cmp.Diff(want, v); d != "" {
		t.Error(d)
	}
	v = read(t, table, Settings{Upper: ptr(2)}).Summary().Values
	if v.OnLimit != 1 || v.Lower != nil || v.Upper.OfTolerance || math.Abs(v.Upper.Width-0.14) > 1e-12 || v.Upper.NearGood != 2 || v.Upper.NearBad != 1 {
		t.Errorf("%+v", v.Upper)
	}
}

func TestSummaryCounts(t *testing.T) {
	s := read(t, "part,reference,a-1,a-2,b-1\n1,go,go,,no\n2,no,,,go\n3,,go,go,go\n", Settings{})
	got := s.Summary()
	got.CanShow = nil
	want := Summary{Parts: 3, Good: 1, Bad: 1, Unreferenced: 1, ByCategory: []int{1, 1}, Calls: 6, Missing: 3,
		Without:    []MissingCall{{"1", "a", 2}, {"2", "a", 1}, {"2", "a", 2}},
		Appraisers: []AppraiserSummary{{"a", []int{1, 2}, 3, 3, 2}, {"b", []int{1}, 3, 0, 3}}}
	if d := cmp.Diff(want, got); d != "" {
		t.Error(d)
	}
}

// What a study can show. The limit of a rate of which no event was seen in n
// is 1 − (1 − confidence)^(1/n): Clopper and Pearson, Biometrika 26 (1934),
// in closed form.
func TestCanShow(t *testing.T) {
	find := func(s *Study, code string) (Showing, bool) {
		for _, c := range s.Summary().CanShow {
			if c.Code == code {
				return c, true
			}
		}
		return Showing{}, false
	}
	manual, err := Read(Source{Path: "../../../../testdata/reference/msa-manual-50x3x3.csv"}, Settings{})
	if err != nil {
		t.Fatal(err)
	}
	c, ok := find(manual, "miss_rate")
	if !ok || c.Parts != 16 || math.Abs(c.Limit-(1-math.Pow(0.05, 1.0/16))) > 1e-9 ||
		c.Text != "16 bad parts, none ever missed, would still leave a miss rate of up to 17 % possible (one-sided limit at 95 % confidence)." {
		t.Errorf("%+v", c)
	}
	c, ok = find(manual, "false_alarm_rate")
	if !ok || c.Parts != 34 || math.Abs(c.Limit-(1-math.Pow(0.05, 1.0/34))) > 1e-9 {
		t.Errorf("%+v", c)
	}
	for _, x := range []struct {
		in       string
		settings Settings
		has      []string
	}{
		{"part,reference,a-1\n1,go,go\n", Settings{}, []string{"no_bad_parts", "false_alarm_rate", "one_appraiser", "one_trial", "calls_alike", "no_values"}},
		{"part,reference,a-1,b-1,b-2\n1,no,no,go,go\n", Settings{}, []string{"no_good_parts", "miss_rate", "one_trial_some", "no_values"}},
		{"part,a-1,a-2,b-1,b-2\n1,go,no,go,go\n", Settings{}, []string{"no_reference", "no_values"}},
		{"part,reference,value,a-1,a-2,b-1,b-2\n1,x,1,y,x,z,x\n", Settings{Order: []string{"x", "y", "z"}}, []string{"no_accept", "no_limits"}},
		{"part,value,a-1,a-2,b-1,b-2\n1,1,go,no,go,go\n2,9,no,no,no,no\n", Settings{Upper: ptr(5)}, []string{"miss_rate", "false_alarm_rate", "far_from_upper"}},
	} {
		s := read(t, x.in, x.settings)
		var got []string
		for _, c := range s.Summary().CanShow {
			got = append(got, c.Code)
		}
		slices.Sort(got)
		slices.Sort(x.has)
		if !slices.Equal(got, x.has) {
			t.Errorf("%q: %v, want %v", x.in, got, x.has)
		}
	}
}

// A table that would be nearly empty is refused before it is made.
func TestSparse(t *testing.T) {
	var b strings.Builder
	b.WriteString("part,appraiser,trial,call\n")
	for i := range 10000 {
		fmt.Fprintf(&b, "p%d,a%d,1,go\n", i, i)
	}
	_, err := Read(Source{Path: "-", Stdin: strings.NewReader(b.String())}, Settings{})
	if err == nil || !strings.Contains(err.Error(), "the table would be nearly empty") {
		t.Errorf("%v", err)
	}
}

func TestManyAppraisersAndCategories(t *testing.T) {
	var b strings.Builder
	b.WriteString("part")
	for a := range 200 {
		fmt.Fprintf(&b, ",Line %d-1", a+1)
	}
	b.WriteString("\n")
	var kinds []string
	for k := range 40 {
		kinds = append(kinds, fmt.Sprintf("kind %d", k+1))
	}
	for p := range 40 {
		fmt.Fprintf(&b, "🔩 %d", p+1)
		for a := range 200 {
			b.WriteString("," + kinds[(p+a)%40])
		}
		b.WriteString("\n")
	}
	s := read(t, b.String(), Settings{Categories: kinds, Accept: []string{"kind 40"}})
	if len(s.Appraisers) != 200 || s.Appraisers[199] != "Line 200" || len(s.Categories) != 40 || s.Parts[39] != "🔩 40" {
		t.Errorf("%q %q", s.Appraisers, s.Categories)
	}
	for p := range 40 {
		for a := range 200 {
			if got := s.Ratings.Calls(p, a)[0]; int(got) != (p+a)%40 {
				t.Fatalf("part %d appraiser %d: %d", p, a, got)
			}
		}
	}
}

// A word that occurs once is set beside the one it is near to.
func TestRareWordMeant(t *testing.T) {
	for word, want := range map[string]string{"fien": "is it spelt right, or fine meant?", "dent": "is it spelt right?"} {
		s := read(t, "part,a-1\n"+numbered(19, "fine")+"x,"+word+"\n", Settings{Accept: []string{"fine"}})
		if len(s.Notes) != 1 || !strings.Contains(s.Notes[0].Text, want) {
			t.Errorf("%+v", s.Notes)
		}
	}
}
