package main

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"math/rand/v2"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"github.com/xuri/excelize/v2"
)

// wide reads the manual's study, a wide table: the header and the rows.
func wide(t *testing.T) [][]string {
	t.Helper()
	f, err := os.Open(filepath.Join(reference, "msa-manual-50x3x3.csv"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return rows
}

// long turns a wide table of part, reference, value and calls into a long one.
func long(rows [][]string) [][]string {
	out := [][]string{{"part", "appraiser", "trial", "call", "reference", "value"}}
	for _, row := range rows[1:] {
		for i := 3; i < len(row); i++ {
			appraiser, trial, _ := strings.Cut(rows[0][i], "-")
			out = append(out, []string{row[0], appraiser, trial, row[i], row[1], row[2]})
		}
	}
	return out
}

func shuffledRows(rows [][]string, seed uint64) [][]string {
	out := slices.Clone(rows)
	rand.New(rand.NewPCG(seed, 1)).Shuffle(len(out)-1, func(i, j int) { out[i+1], out[j+1] = out[j+1], out[i+1] })
	return out
}

func shuffledColumns(rows [][]string, seed uint64) [][]string {
	order := rand.New(rand.NewPCG(seed, 2)).Perm(len(rows[0]))
	out := make([][]string, len(rows))
	for i, row := range rows {
		for _, j := range order {
			out[i] = append(out[i], row[j])
		}
	}
	return out
}

func text(rows [][]string) string {
	var b bytes.Buffer
	w := csv.NewWriter(&b)
	_ = w.WriteAll(rows)
	return b.String()
}

func write(t *testing.T, name, text string) string {
	t.Helper()
	name = filepath.Join(t.TempDir(), name)
	if err := os.WriteFile(name, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	return name
}

func workbook(t *testing.T, rows [][]string) string {
	t.Helper()
	f := excelize.NewFile()
	defer f.Close()
	name := filepath.Join(t.TempDir(), "calls.xlsx")
	if err := fillSheet(f, "Sheet1", text(rows)); err != nil {
		t.Fatal(err)
	}
	if err := f.SaveAs(name); err != nil {
		t.Fatal(err)
	}
	return name
}

var inputs = regexp.MustCompile(`(?s)"inputs": \[.*?\]`)

// judgedManual is the JSON of the manual's study from a file, without the
// file's name and sum.
func judgedManual(t *testing.T, file string) string {
	t.Helper()
	out := judged(t, file, "--lower", "0.45", "--upper", "0.545")
	if !inputs.Match(out) {
		t.Fatal("the JSON names no inputs")
	}
	return inputs.ReplaceAllString(string(out), `"inputs": []`)
}

// However a study is written down, it is the same study: byte for byte.
func TestSameStudySameBytes(t *testing.T) {
	rows := wide(t)
	want := judgedManual(t, filepath.Join(reference, "msa-manual-50x3x3.csv"))
	for name, file := range map[string]string{
		"long":                    write(t, "calls.csv", text(long(rows))),
		"wide, rows shuffled":     write(t, "calls.csv", text(shuffledRows(rows, 1))),
		"wide, columns shuffled":  write(t, "calls.csv", text(shuffledColumns(rows, 1))),
		"long, rows shuffled":     write(t, "calls.csv", text(shuffledRows(long(rows), 2))),
		"long, columns shuffled":  write(t, "calls.csv", text(shuffledColumns(shuffledRows(long(rows), 3), 3))),
		"semicolon":               write(t, "calls.csv", strings.ReplaceAll(strings.ReplaceAll(text(rows), ",", ";"), "0.", "0,")),
		"tab":                     write(t, "calls.csv", strings.ReplaceAll(text(rows), ",", "\t")),
		"wide in a workbook":      workbook(t, rows),
		"long in a workbook":      workbook(t, long(rows)),
		"long workbook, shuffled": workbook(t, shuffledRows(long(rows), 4)),
	} {
		if got := judgedManual(t, file); got != want {
			t.Errorf("%s: the JSON differs:\n%s", name, cmp.Diff(want, got))
		}
	}
}

// Parts and trials renamed in the same order, and the calls in other words,
// change their names and nothing else.
func TestOtherWordsSameFigures(t *testing.T) {
	rows := wide(t)
	want := judgedManual(t, filepath.Join(reference, "msa-manual-50x3x3.csv"))
	words := map[string]string{"0": "NoGo", "1": "pass"}
	for _, row := range rows[1:] {
		for i := range row {
			if w, ok := words[row[i]]; ok && i != 0 {
				row[i] = w
			}
		}
	}
	if got := judgedManual(t, write(t, "calls.csv", text(rows))); got != want {
		t.Errorf("the JSON differs:\n%s", cmp.Diff(want, got))
	}
}

// Renaming appraisers renames and nothing else: byte for byte where the order
// of the names stays, and otherwise appraiser by appraiser. The names are
// such as occur in no other word, since they stand in sentences too.
func TestRenamedAppraisers(t *testing.T) {
	rows := wide(t)
	first := []string{"anna", "bert", "carl"}
	under := func(names []string) string {
		out := slices.Clone(rows)
		out[0] = slices.Clone(rows[0])
		for i := 3; i < len(out[0]); i++ {
			name, trial, _ := strings.Cut(out[0][i], "-")
			out[0][i] = names[name[0]-'A'] + "-" + trial
		}
		doc := judgedManual(t, write(t, "calls.csv", text(out)))
		for i, name := range names {
			doc = strings.ReplaceAll(doc, name, first[i])
		}
		return doc
	}
	want := under(first)
	if got := under([]string{"dora", "emil xy", "fritz"}); got != want {
		t.Errorf("order kept: the JSON differs:\n%s", cmp.Diff(want, got))
	}
	// A pair the other way round has the same figures up to rounding. The
	// reasons are left out: of two appraisers with the same rate the first by
	// name is told.
	got := under([]string{"zoe", "yuri", "xaver"})
	if diff := cmp.Diff(byName(t, want), byName(t, got), cmpopts.EquateApprox(1e-9, 1e-12)); diff != "" {
		t.Errorf("order turned: the figures differ:\n%s", diff)
	}
}

// byName is a document whose lists by appraiser or pair are objects by name.
func byName(t *testing.T, document string) any {
	t.Helper()
	var doc map[string]any
	if err := json.Unmarshal([]byte(document), &doc); err != nil {
		t.Fatal(err)
	}
	delete(doc["verdict"].(map[string]any), "reasons")
	return turn(doc)
}

func turn(v any) any {
	switch v := v.(type) {
	case map[string]any:
		if pair, ok := v["appraisers"].([]any); ok && v["table"] != nil && pair[0].(string) > pair[1].(string) {
			v["appraisers"] = []any{pair[1], pair[0]}
			v["table"] = transposed(v["table"].([]any))
			r := v["rejects"].(map[string]any)
			r["first"], r["second"] = r["second"], r["first"]
			r["only_first"], r["only_second"] = r["only_second"], r["only_first"]
		}
		for key, member := range v {
			if names, ok := member.([]any); ok && key == "appraisers" && len(names) > 0 {
				if _, isText := names[0].(string); isText {
					slices.SortFunc(names, func(a, b any) int { return strings.Compare(a.(string), b.(string)) })
				}
			}
			v[key] = turn(member)
		}
		return v
	case []any:
		named := make(map[string]any)
		for _, e := range v {
			object, ok := e.(map[string]any)
			if !ok {
				return v
			}
			e = turn(object)
			switch name := object["appraiser"].(type) {
			case string:
				named[name] = e
			default:
				pair, ok := object["appraisers"].([]any)
				if !ok {
					return v
				}
				named[pair[0].(string)+" "+pair[1].(string)] = e
			}
		}
		return named
	}
	return v
}

func transposed(table []any) []any {
	out := make([]any, len(table))
	for i := range table {
		row := make([]any, len(table))
		for j := range table {
			row[j] = table[j].([]any)[i]
		}
		out[i] = row
	}
	return out
}
