package report_test

import (
	"bytes"
	"io"
	"strconv"
	"strings"
	"testing"

	pretty "github.com/jedib0t/go-pretty/v6/text"

	"samecall/cmd/samecall/internal/report"
	"samecall/cmd/samecall/internal/study"
)

// Every table of every kind of study fits, whatever the names are.
func TestWidthOfStudies(t *testing.T) {
	for _, p := range append(plans(), hostilePlan()) {
		r := p.record(t)
		for _, width := range []int{60, 80, 100} {
			for _, full := range []bool{false, true} {
				var out bytes.Buffer
				if err := report.Text(&out, r, report.Terminal{Width: width}, full); err != nil {
					t.Fatal(err)
				}
				for line := range strings.Lines(out.String()) {
					if w := pretty.StringWidthWithoutEscSequences(strings.TrimSuffix(line, "\n")); w > width {
						t.Errorf("%s: %d columns in %d: %q", p.name, w, width, line)
						break
					}
				}
			}
		}
	}
}

// The line that computes a record again is to be copied: it stands as it is
// typed, on one line, however narrow the terminal is and whatever it holds.
func TestCommandStandsWhole(t *testing.T) {
	r := plan{}.record(t)
	r.Command = `samecall judge calls.csv --title='A_1 & B  | *c* \ ` + "``` `d`" + ` <e> $f' --characteristic="` + strings.Repeat("word ", 30) + `"`
	r.RunIn = "the folder of calls.csv"
	const above = "Computed by this line, run in the folder of calls.csv:\n"
	for _, width := range []int{60, 100} {
		full := output(t, r, func(w io.Writer, r *report.Record) error {
			return report.Text(w, r, report.Terminal{Width: width}, true)
		})
		if !bytes.Contains(full, []byte(above+r.Command+"\n")) {
			t.Errorf("--full in %d columns breaks the command, or says not where to run it", width)
		}
	}
	if md := output(t, r, report.Markdown); !bytes.Contains(md, []byte(above+"\n````\n"+r.Command+"\n````\n")) {
		t.Error("the Markdown has no block with the command as it is typed")
	}
	for _, name := range []string{"HTML", "CSV"} {
		write := map[string]func(io.Writer, *report.Record) error{"HTML": report.HTML, "CSV": report.CSV}[name]
		if out := output(t, r, write); !bytes.Contains(out, []byte("the folder of calls.csv")) {
			t.Errorf("the %s says not where to run the command", name)
		}
	}
}

// No line ends at a space that holds a number together.
func TestLinesKeepNumbersWhole(t *testing.T) {
	text := "false rejects 127\u00a0000 (115\u202f000 to 141\u00a0000) ppm, 5 % of σ at cut − limit"
	for width := 20; width < 80; width++ {
		lines := strings.Split(report.Lines(text, width, ""), "\n")
		if strings.Join(lines, " ") != text {
			t.Fatalf("the text changed in %d columns: %q", width, lines)
		}
		for _, l := range lines {
			if strings.HasPrefix(l, "%") || strings.HasPrefix(l, "−") || strings.HasSuffix(l, "−") || strings.HasPrefix(l, "000") || strings.HasSuffix(l, "(115") {
				t.Errorf("broken in %d columns: %q", width, lines)
			}
		}
	}
}

// What a record prints for people has every table that the program promises
// with --full; two figures of one cell are two numbers for programs.
func TestFullHasEveryTable(t *testing.T) {
	r := plan{}.record(t)
	var full, sheet bytes.Buffer
	if err := report.Text(&full, r, report.Terminal{Width: 100}, true); err != nil {
		t.Fatal(err)
	}
	if err := report.CSV(&sheet, r); err != nil {
		t.Fatal(err)
	}
	for _, title := range []string{"What was studied", "Every call", "How wide each appraiser's grey zone is, in mm"} {
		if !strings.Contains(full.String(), "\n"+title+"\n") {
			t.Errorf("--full has no table %q", title)
		}
	}
	_, kappas, found := strings.Cut(sheet.String(), "\nAgreement square: kappa\n")
	if !found {
		t.Fatal("the CSV has no kappas of the agreement square")
	}
	kappa := strconv.FormatFloat(r.Agreement.Against[0].Kappa.Value, 'g', -1, 64)
	if row := strings.Split(kappas, "\n")[1]; !strings.Contains(row, ","+kappa+",") || strings.Contains(row, "·") {
		t.Errorf("the kappas of the first appraiser are %q; expected %s among them", row, kappa)
	}
}

// The note below the square speaks of nothing that a square may lack.
func TestSquareNote(t *testing.T) {
	r := plan{noReference: true, noValues: true}.record(t)
	for _, out := range [][]byte{
		output(t, r, report.Markdown),
		output(t, r, func(w io.Writer, r *report.Record) error { return report.Text(w, r, report.Terminal{Width: 200}, true) }),
	} {
		if !bytes.Contains(out, []byte("in brackets, each appraiser with itself.")) || bytes.Contains(out, []byte("last column")) {
			t.Error("the note below a square without a reference is wrong")
		}
	}
}

// A grey zone that the calls do not bound is not printed as a number.
func TestZonesOfSeparatedCalls(t *testing.T) {
	r := plan{sharp: true}.record(t)
	var out bytes.Buffer
	if err := report.Text(&out, r, report.Terminal{Width: 100}, true); err != nil {
		t.Fatal(err)
	}
	_, zones, found := strings.Cut(out.String(), "\nHow wide each appraiser's grey zone is, in mm\n")
	if !found {
		t.Fatal("no table of the appraisers' grey zones")
	}
	for _, row := range strings.Split(zones, "\n")[2:8] {
		if !strings.Contains(row, "not known  not known  not known  under 0.") {
			t.Errorf("nothing bounds σ from below, and the row reads %q", row)
		}
	}
	if grey := strings.SplitAfter(answer(t, r, false), "\nGrey zone:")[1]; !strings.Contains(strings.Split(grey, "\n")[3], "not known  under 0.") {
		t.Errorf("the row of all appraisers reads %q", strings.Split(grey, "\n")[3])
	}
}

func TestWhereLevelsComeFrom(t *testing.T) {
	miss, kappa := [2]float64{0.3, 0.4}, [2]float64{0.7, 0.5}
	r := plan{change: func(s *study.Settings) { s.Criteria.Miss, s.Criteria.Kappa = &miss, &kappa }}.record(t)
	r.FlagLevels = map[string]bool{"miss": true}
	for _, out := range [][]byte{output(t, r, report.HTML), output(t, r, report.Markdown)} {
		if want := "evels: miss rate from the command line; kappa from the study file; effectiveness, false-alarm rate from the Measurement Systems Analysis"; !bytes.Contains(out, []byte(want)) {
			t.Errorf("the record does not say that the l%s", want)
		}
	}
}
