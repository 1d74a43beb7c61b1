package report_test

import (
	"bytes"
	"fmt"
	"os"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"samecall/cmd/samecall/internal/report"
	"samecall/cmd/samecall/internal/study"
)

// --full says first what is decided and what to do, then the tables by groups.
func TestFullInOrder(t *testing.T) {
	text := answer(t, plan{}.record(t), true)
	at := -1
	for _, head := range []string{"Verdict: ", "Cause: ", "What to do next\n", "What was studied\n", "══ Appraisers ═", "Criteria\n", "══ Agreement ═", "Agreement square\n",
		"══ Calls ═", "Parts to look at\n", "══ Grey zone ═", "Unanimous zone, in mm\n", "══ How it was computed ═"} {
		i := strings.Index(text, "\n"+head)
		if i <= at {
			t.Errorf("%q is at %d, what goes before it at %d", head, i, at)
		}
		at = i
	}
}

// What stands in a table of --full, or of the Markdown, does not stand in
// another one, nor in a sentence.
func TestFullSaysItOnce(t *testing.T) {
	r := plan{}.record(t)
	md := string(output(t, r, report.Markdown))
	for name, text := range map[string]string{"--full": answer(t, r, true), "Markdown": strings.ReplaceAll(md, `\`, "")} {
		flat := strings.Join(strings.Fields(text), " ")
		for _, s := range []string{"common practice", r.Verdict.Next[0], r.Verdict.Causes[0].Text, r.Verdict.Cautions[0]} {
			if n := strings.Count(flat, s); n != 1 {
				t.Errorf("%s says %q %d times", name, s, n)
			}
		}
		for _, s := range []string{"Unanimous zone:", "What is not known", "standard errors", "What each criterion rests on", "Each appraiser's own", "Findings", "Fleiss' kappa of accept"} {
			if strings.Contains(flat, s) {
				t.Errorf("%s has %q", name, s)
			}
		}
		if n := strings.Count(flat, "grey zone to"); n != 1 {
			t.Errorf("%s has %d tables of the ends of the grey zone", name, n)
		}
	}
	if !strings.Contains(string(output(t, r, report.CSV)), "\nFindings\n") {
		t.Error("the CSV has no findings")
	}
}

// The unanimous zone has σ and %GRR at each limit, as samecall zone has them.
func TestUnanimousAtEachLimit(t *testing.T) {
	r := fileRecord(t, os.DirFS("../../../../testdata/reference"), "msa-manual-50x3x3.csv", study.Settings{Lower: new45, Upper: new545})
	rows := csvTable(t, r, "Unanimous zone")
	u := r.Zone.Unanimous
	for i, width := range []float64{u.Lower.Width, u.Upper.Width} {
		sigma, err := strconv.ParseFloat(rows[1+i][5], 64)
		if err != nil || abs(sigma-width/5.15) > 1e-12 {
			t.Errorf("σ is %q where the zone is %v wide", rows[1+i][5], width)
		}
		if want := 100 * 6 * width / 5.15 / 0.095; !near(rows[1+i][6], want) {
			t.Errorf("%%GRR is %q; expected %v", rows[1+i][6], want)
		}
	}
}

func abs(x float64) float64 { return max(x, -x) }

func near(text string, want float64) bool {
	x, err := strconv.ParseFloat(text, 64)
	return err == nil && abs(x-want) < 1e-9
}

// What is a number is one in the workbook: how many calls there were, and how
// many parts more would settle a criterion, beside the kind of part.
func TestNumbersOfTheWorkbook(t *testing.T) {
	r := plan{parts: 60, missing: 0.05}.record(t)
	book, err := excelize.OpenReader(bytes.NewReader(output(t, r, report.XLSX)))
	if err != nil {
		t.Fatal(err)
	}
	defer book.Close()
	number := func(sheet string, column, row int) bool {
		at, err := excelize.CoordinatesToCellName(column+1, row+1)
		if err != nil {
			t.Fatal(err)
		}
		kind, err := book.GetCellType(sheet, at)
		return err == nil && (kind == excelize.CellTypeUnset || kind == excelize.CellTypeNumber)
	}
	rows := func(sheet string) [][]string {
		out, err := book.GetRows(sheet, excelize.Options{RawCellValue: true})
		if err != nil {
			t.Fatal(err)
		}
		return out
	}
	found := 0
	for i, row := range rows("study") {
		if len(row) > 1 && (row[0] == "calls" || row[0] == "missing calls" || row[0] == "confidence") {
			if found++; !number("study", 1, i) {
				t.Errorf("%q is a text", row)
			}
		}
	}
	if found != 3 {
		t.Errorf("the sheet of the study has %d of three numbers", found)
	}
	criteria := rows("criteria")
	more := slices.Index(criteria[2], "parts more to settle it")
	settled := 0
	for i, row := range criteria[3:] {
		if len(row) <= more+1 || row[0] == "" {
			continue
		}
		if row[more] != "" {
			settled++
			if !number("criteria", more, 3+i) || !strings.HasSuffix(row[more+1], "part") {
				t.Errorf("%q is no number of a kind of part", row[more:])
			}
		}
	}
	if settled == 0 {
		t.Error("no criterion can be settled")
	}
	if x, err := book.GetCellValue("unanimous", "G4"); err != nil || strings.Contains(x, "%") || x == "" {
		t.Errorf("a percentage that is no fraction is read as %q (%v)", x, err)
	}
	spaced := regexp.MustCompile(`^\d+\s\d+$|^\d+ (good|bad)$`)
	for _, sheet := range book.GetSheetList() {
		for _, row := range rows(sheet) {
			if i := slices.IndexFunc(row, spaced.MatchString); i >= 0 {
				t.Errorf("%s: %q is a number as a text", sheet, row[i])
			}
		}
	}
}

// Each test of direction is told what it asks where it was made, and only there.
func TestDirectionNote(t *testing.T) {
	for name, c := range map[string]struct {
		r              *report.Record
		mcnemar, kinds int
	}{
		"two":   {plan{random: 0.1}.record(t), 1, 0},
		"kinds": {plan{categories: []string{"scratch", "dent", "none"}, random: 0.2, noValues: true}.record(t), 0, 1},
	} {
		text := strings.Join(strings.Fields(answer(t, c.r, true)), " ")
		_, text, _ = strings.Cut(text, "Do the errors lean one way?")
		for s, want := range map[string]int{"McNemar's test: ": c.mcnemar, "Bowker's test asks": c.kinds, "Stuart–Maxwell's whether": c.kinds} {
			if n := strings.Count(text, s); n != want {
				t.Errorf("%s: %q stands there %s times", name, s, fmt.Sprint(n))
			}
		}
	}
}
