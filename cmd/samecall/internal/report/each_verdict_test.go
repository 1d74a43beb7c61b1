package report_test

import (
	"bytes"
	"encoding/csv"
	"slices"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"
	"golang.org/x/net/html"

	"samecall/cmd/samecall/internal/report"
	"samecall/cmd/samecall/internal/verdict"
)

// shownWord is how tables say whether the data show a verdict.
func shownWord(a verdict.Appraiser) string {
	switch {
	case a.Verdict == verdict.NotShown:
		return ""
	case a.Shown():
		return "shown"
	}
	return "open"
}

// Every output says of each appraiser which verdict it has and whether the data
// show it, in the table against the reference.
func TestVerdictOnEach(t *testing.T) {
	records := map[string]*report.Record{
		"three":  plan{random: 0.02, parts: 60}.record(t),
		"twelve": plan{appraisers: some(12), random: 0.03}.record(t),
		"grades": plan{categories: []string{"A", "B", "C"}, ordered: true, noValues: true}.record(t),
	}
	seen := make(map[string]bool)
	for name, r := range records {
		rows := map[string][][]string{
			"CSV": csvTable(t, r, "Against the reference"), "xlsx": sheet(t, r, "appraisers"),
			"HTML": pageRows(t, r, "table-appraisers"), "Markdown": barRows(output(t, r, report.Markdown), "Against the reference"),
			"--full": textRows(answer(t, r, true), "Against the reference"),
		}
		for _, a := range r.Verdict.Appraisers {
			seen[a.Verdict.String()+shownWord(a)] = true
			for out, table := range rows {
				i := slices.IndexFunc(table, func(row []string) bool { return len(row) > 2 && row[0] == a.Name })
				if i < 0 {
					t.Errorf("%s: %s has no row of %s: %q", name, out, a.Name, table)
					continue
				}
				row := table[i]
				if got := row[len(row)-2:]; got[0] != a.Verdict.String() || got[1] != shownWord(a) {
					t.Errorf("%s: %s says %q of %s, which is %v, %s", name, out, got, a.Name, a.Verdict, shownWord(a))
				}
			}
		}
		line := "By appraiser: "
		for out, text := range map[string]string{"the answer": answer(t, r, false), "--full": answer(t, r, true),
			"HTML": string(output(t, r, report.HTML)), "Markdown": string(output(t, r, report.Markdown))} {
			if !strings.Contains(text, line) {
				t.Errorf("%s: %s has no line on each appraiser", name, out)
			}
		}
		if !strings.Contains(string(output(t, r, report.CSV)), "\nby appraiser,") {
			t.Errorf("%s: the findings in the CSV have no line on each appraiser", name)
		}
	}
	if len(seen) < 2 {
		t.Errorf("the studies have but these verdicts: %v", seen)
	}
}

// csvTable returns the rows of a table in the CSV, heads first.
func csvTable(t *testing.T, r *report.Record, title string) [][]string {
	t.Helper()
	_, rest, _ := strings.Cut("\n"+string(output(t, r, report.CSV)), "\n"+title+"\n")
	table, _, _ := strings.Cut(rest, "\n\n")
	c := csv.NewReader(strings.NewReader(table))
	c.FieldsPerRecord = -1
	rows, err := c.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return rows
}

// sheet returns the rows of a sheet of the workbook, with empty cells at their
// ends.
func sheet(t *testing.T, r *report.Record, name string) [][]string {
	t.Helper()
	f, err := excelize.OpenReader(bytes.NewReader(output(t, r, report.XLSX)))
	if err != nil {
		t.Fatal(err)
	}
	rows, err := f.GetRows(name)
	if err != nil {
		t.Fatal(err)
	}
	widest := 0
	for _, row := range rows {
		if len(row) > 2 && len(row) > widest {
			widest = len(row)
		}
	}
	for i := range rows {
		for len(rows[i]) > 2 && len(rows[i]) < widest {
			rows[i] = append(rows[i], "")
		}
	}
	return rows
}

// pageRows returns the rows of a table of the page.
func pageRows(t *testing.T, r *report.Record, id string) (rows [][]string) {
	t.Helper()
	root, err := html.Parse(bytes.NewReader(output(t, r, report.HTML)))
	if err != nil {
		t.Fatal(err)
	}
	elements(root, func(n *html.Node) {
		if n.Data != "table" || !slices.ContainsFunc(n.Attr, func(a html.Attribute) bool { return a.Key == "aria-labelledby" && a.Val == id }) {
			return
		}
		elements(n, func(n *html.Node) {
			switch n.Data {
			case "tr":
				rows = append(rows, nil)
			case "th", "td":
				rows[len(rows)-1] = append(rows[len(rows)-1], textOf(n))
			}
		})
	})
	return rows
}

// barRows returns the rows of a table in Markdown.
func barRows(page []byte, title string) (rows [][]string) {
	_, rest, _ := strings.Cut(string(page), "# "+title)
	_, rest, _ = strings.Cut(rest, "\n\n")
	table, _, _ := strings.Cut(rest, "\n\n")
	for line := range strings.Lines(table) {
		line = strings.TrimSuffix(strings.TrimPrefix(strings.TrimSpace(line), "| "), " |")
		rows = append(rows, strings.Split(line, " | "))
	}
	return rows
}

// textRows returns the rows of a table on a screen.
func textRows(text, title string) (rows [][]string) {
	_, rest, _ := strings.Cut(text, "\n"+title+"\n")
	table, _, _ := strings.Cut(rest, "\n\n")
	for line := range strings.Lines(table) {
		var row []string
		for cell := range strings.SplitSeq(strings.TrimSpace(line), "  ") {
			if cell = strings.TrimSpace(cell); cell != "" {
				row = append(row, cell)
			}
		}
		rows = append(rows, row)
	}
	return rows
}
