package report_test

import (
	"bytes"
	"encoding/csv"
	"regexp"
	"slices"
	"strconv"
	"testing"

	"github.com/xuri/excelize/v2"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/report"
)

// A count and what it is counted of are two numbers for programs, each below
// its head.
func TestCountsAreNumbers(t *testing.T) {
	r := plan{missing: 0.1}.record(t)
	against, within, pair := r.Agreement.Against[0], r.Agreement.Within[0], r.Agreement.Between.Pairs[0]
	reader := csv.NewReader(bytes.NewReader(output(t, r, report.CSV)))
	reader.FieldsPerRecord = -1
	lines, err := reader.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	book, err := excelize.OpenReader(bytes.NewReader(output(t, r, report.XLSX)))
	if err != nil {
		t.Fatal(err)
	}
	defer book.Close()
	for _, c := range []struct {
		sheet, title string
		count, of    string // heads
		want         [2]int
	}{
		{"errors", "Counts behind the rates", "parts right", "parts called", counts(against.Effectiveness)},
		{"errors", "Counts behind the rates", "misses", "calls on bad parts", counts(against.Miss)},
		{"errors", "Counts behind the rates", "false alarms", "calls on good parts", counts(against.FalseAlarm)},
		{"within", "Within appraiser: does each repeat its own call?", "parts alike", "parts with two calls or more", counts(within.Share)},
		{"pairs", "Between appraisers: each two", "parts alike", "parts both called", counts(pair.Share)},
		{"pairs", "Between appraisers: each two", "calls alike", "pairs of calls", [2]int{pair.Alike, pair.Pairs}},
		{"direction", "Do the errors lean one way?", "statistic", "wrong calls", [2]int{int(against.McNemar.Statistic), against.Table[0][1] + against.Table[1][0]}},
	} {
		want := []string{strconv.Itoa(c.want[0]), strconv.Itoa(c.want[1])}
		at := slices.IndexFunc(lines, func(line []string) bool { return len(line) == 1 && line[0] == c.title })
		if at < 0 {
			t.Fatalf("the CSV has no table %q", c.title)
		}
		column := slices.Index(lines[at+1], c.count)
		if column < 0 || lines[at+1][column+1] != c.of {
			t.Errorf("the CSV has no columns %q and %q side by side: %q", c.count, c.of, lines[at+1])
			continue
		}
		if got := lines[at+2][column : column+2]; !slices.Equal(got, want) {
			t.Errorf("in the CSV the first row of %q reads %q; expected %q", c.count, got, want)
		}
		for i, w := range want {
			cell, err := excelize.CoordinatesToCellName(column+1+i, 4)
			if err != nil {
				t.Fatal(err)
			}
			kind, err := book.GetCellType(c.sheet, cell)
			if err != nil {
				t.Fatal(err)
			}
			if got, err := book.GetCellValue(c.sheet, cell, excelize.Options{RawCellValue: true}); err != nil || got != w || kind != excelize.CellTypeUnset && kind != excelize.CellTypeNumber {
				t.Errorf("in the workbook %s!%s holds %q, type %v (%v); expected the number %s", c.sheet, cell, got, kind, err, w)
			}
		}
	}
}

func counts(s agreement.Share) [2]int { return [2]int{s.Count, s.Of} }

// No table of any study has a count as a text.
func TestNoCountIsText(t *testing.T) {
	count := regexp.MustCompile(`^[0-9\x{202f}\x{a0}]+ of [0-9\x{202f}\x{a0}]+$`)
	for _, p := range plans() {
		reader := csv.NewReader(bytes.NewReader(output(t, p.record(t), report.CSV)))
		reader.FieldsPerRecord = -1
		lines, err := reader.ReadAll()
		if err != nil {
			t.Fatal(err)
		}
		for _, line := range lines {
			if slices.ContainsFunc(line, count.MatchString) {
				t.Errorf("%s: %q", p.name, line)
			}
		}
	}
}
