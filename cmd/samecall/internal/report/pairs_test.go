package report_test

import (
	"bytes"
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
