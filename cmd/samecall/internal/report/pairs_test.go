package report_test

import (
	"bytes"
	"fmt"
	"slices"
	"testing"

	"golang.org/x/net/html"

	"samecall/cmd/samecall/internal/report"
)

// Of many pairs the record holds those that agree least, and says so; the
// other outputs hold all.
func TestManyPairs(t *testing.T) {
	r := plan{appraisers: some(30), parts: 20, trials: 2}.record(t)
	const pairs = 30 * 29 / 2
	root, err := html.Parse(bytes.NewReader(output(t, r, report.HTML)))
	if err != nil {
		t.Fatal(err)
	}
	rows, said := 0, false
	elements(root, func(n *html.Node) {
		for _, a := range n.Attr {
			if n.Data == "table" && a.Key == "aria-labelledby" && a.Val == "table-pairs" {
				elements(n, func(n *html.Node) {
					if n.Data == "tr" {
						rows++
					}
				})
			}
			if a.Key == "class" && a.Val == "note" {
				said = said || bytes.HasPrefix([]byte(textOf(n)), []byte("The 120 pairs that agree least, of 435;"))
			}
		}
	})
	if rows != 1+120 || !said {
		t.Errorf("the record has %d rows of pairs, and says so: %v", rows-1, said)
	}
	if got := bytes.Count(output(t, r, report.CSV), []byte("\n")); got < pairs {
		t.Errorf("the CSV has %d lines; expected one for each of %d pairs", got, pairs)
	}
}

// Likewise of the pairs that lean, without a reference.
func TestManyLeaningPairs(t *testing.T) {
	page := output(t, plan{appraisers: some(30), parts: 20, trials: 2, noReference: true, noValues: true, lenient: true}.record(t), report.HTML)
	for _, says := range []string{"The 120 pairs that agree least, of 435;", "The 120 pairs that lean most, of 435;"} {
		if !bytes.Contains(page, []byte(says)) {
			t.Errorf("the record does not say %q", says)
		}
	}
}

// The cross-table of each pair stands in every output with tables, its counts
// those of the JSON: four in a row of a study of good and bad, else a row for
// each category.
func TestPairTables(t *testing.T) {
	for name, c := range map[string]struct {
		plan
		title, id string
		of        int // rows of a pair
	}{
		"good and bad":         {plan{random: 0.1}, "Between appraisers: who rejects more?", "table-lean", 1},
		"good and bad, no ref": {plan{random: 0.1, noReference: true, noValues: true}, "Between appraisers: who rejects more?", "table-lean", 1},
		"kinds":                {plan{categories: []string{"dent", "stain", "none"}, noValues: true}, "Between appraisers: the calls of each two side by side", "table-pair-tables", 3},
	} {
		r := c.record(t)
		outs := map[string][][]string{
			"CSV": csvTable(t, r, c.title), "HTML": pageRows(t, r, c.id), "Markdown": barRows(output(t, r, report.Markdown), c.title),
			"--full": textRows(answer(t, r, true), c.title),
		}
		for i, p := range r.Agreement.Between.Pairs {
			for out, rows := range outs {
				from := slices.IndexFunc(rows, func(row []string) bool {
					return len(row) > 1 && row[0] == r.Study.Appraisers[0] && row[1] == r.Study.Appraisers[1]
				})
				if from < 0 {
					t.Fatalf("%s: %s has no table %q: %q", name, out, c.title, rows)
				}
				var want, got []string
				for k, counts := range p.Table {
					for j, n := range counts {
						if c.of > 1 {
							got = append(got, rows[from+i*c.of+k][3+j])
						}
						want = append(want, fmt.Sprint(n))
					}
				}
				if c.of == 1 {
					heads := rows[slices.IndexFunc(rows, func(row []string) bool { return slices.Contains(row, "both reject") })]
					for _, h := range []string{"both reject", "only the first", "only the second", "both accept"} {
						got = append(got, rows[from+i][slices.Index(heads, h)])
					}
				}
				if !slices.Equal(got, want) {
					t.Errorf("%s: %s has %v of pair %d; want %v", name, out, got, i, want)
				}
			}
		}
	}
}

// Of many pairs the page has the cross-tables of those that agree least, and
// says where the others are.
func TestManyPairTables(t *testing.T) {
	r := plan{appraisers: some(12), categories: []string{"A", "B", "C", "D"}, noValues: true}.record(t)
	if rows := pageRows(t, r, "table-pair-tables"); len(rows) != 1+120 {
		t.Errorf("the page has %d rows; want 120", len(rows)-1)
	}
	if says := "The 30 pairs that agree least, of 66; the JSON, the CSV and the workbook have them all."; !bytes.Contains(output(t, r, report.HTML), []byte(says)) {
		t.Errorf("the page does not say %q", says)
	}
	if rows := csvTable(t, r, "Between appraisers: the calls of each two side by side"); len(rows) != 1+66*4 {
		t.Errorf("the CSV has %d rows; want %d", len(rows)-1, 66*4)
	}
	if rows := pageRows(t, plan{appraisers: some(12)}.record(t), "table-lean"); len(rows) != 1+66 {
		t.Errorf("the page has %d pairs of 66", len(rows)-1)
	}
}
