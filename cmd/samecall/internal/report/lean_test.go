package report_test

import (
	"encoding/json"
	"fmt"
	"io"
	"strings"
	"testing"

	"samecall/cmd/samecall/internal/report"
)

// answer is the answer as it stands on a screen wide enough that no line of it
// is broken.
func answer(t *testing.T, r *report.Record, full bool) string {
	t.Helper()
	var b strings.Builder
	if err := report.Text(&b, r, report.Terminal{Width: 1000}, full); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// Without a reference the answer tells which of two rejects more, and on which
// parts, with one trial each too; of more, with whoever stands apart; every
// pair in --full. With a reference the rates tell it, and --full has the
// cross-tables.
func TestWhoRejectsMore(t *testing.T) {
	lenient := func(trials, people int) plan {
		return plan{noReference: true, noValues: true, trials: trials, appraisers: some(people), noUpper: true, lenient: true}
	}
	for _, trials := range []int{1, 3} {
		r := lenient(trials, 2).record(t)
		l := r.Leans[0]
		text := answer(t, r, false)
		want := fmt.Sprintf("Early 1 rejects what Early 2 accepts in %d of them (", l.OnlyA())
		if l.OnlyA() == 0 || !strings.Contains(text, want) || !strings.Contains(text, "p: exact test of McNemar") {
			t.Errorf("%d trials: %q is not in\n%s", trials, want, text)
		}
		if got := strings.Contains(text, "it takes calls as independent"); got != (trials > 1) {
			t.Errorf("%d trials: calls are said to be taken as independent: %v", trials, got)
		}
		full := answer(t, r, true)
		for _, want := range []string{"Between appraisers: who rejects more?", "rejects, Early 2 accepts"} {
			if !strings.Contains(full, want) {
				t.Errorf("--full lacks %q", want)
			}
		}
		for name, write := range map[string]func(io.Writer, *report.Record) error{"HTML": report.HTML, "Markdown": report.Markdown, "CSV": report.CSV} {
			if !strings.Contains(string(output(t, r, write)), "who rejects more?") {
				t.Errorf("the %s does not tell who rejects more", name)
			}
		}
	}
	three := answer(t, lenient(3, 3).record(t), false)
	if n := strings.Count(three, " rejects what "); n == 0 || !strings.Contains(three, "Early 2") {
		t.Errorf("the one apart of three is in %d sentences:\n%s", n, three)
	}
	for _, text := range []string{answer(t, plan{}.record(t), false), answer(t, plan{noReference: true, noValues: true, appraisers: some(1)}.record(t), true)} {
		if strings.Contains(text, "rejects") {
			t.Errorf("with a reference, or one appraiser:\n%s", text)
		}
	}
}

// The counts of a pair in the JSON are those of its table.
func TestRejectsInJSON(t *testing.T) {
	r := plan{appraisers: some(2)}.record(t)
	var got struct {
		Between struct {
			Pairs []struct {
				Table   [2][2]int
				Rejects struct {
					Pairs, First, Second int
					OnlyFirst            int `json:"only_first"`
					OnlySecond           int `json:"only_second"`
					McNemar              *struct{ P float64 }
				}
			}
		}
	}
	if err := json.Unmarshal(output(t, r, report.JSON), &got); err != nil {
		t.Fatal(err)
	}
	p := got.Between.Pairs[0]
	x, y := p.Table, p.Rejects
	if y.OnlyFirst != x[0][1] || y.OnlySecond != x[1][0] || y.First != x[0][0]+x[0][1] || y.Second != x[0][0]+x[1][0] || y.Pairs != x[0][0]+x[0][1]+x[1][0]+x[1][1] {
		t.Errorf("%v of %v", y, x)
	}
	if (y.McNemar != nil) != (y.OnlyFirst+y.OnlySecond > 0) {
		t.Errorf("%+v", y)
	}
}

// One word for people wherever it stands: what the data show of a rejection is
// shown. The JSON speaks of the level, which is contradicted.
func TestShownForPeople(t *testing.T) {
	r := plan{random: 1, parts: 200}.record(t)
	for name, text := range map[string]string{
		"--full": answer(t, r, true), "HTML": string(output(t, r, report.HTML)), "CSV": string(output(t, r, report.CSV)), "Markdown": string(output(t, r, report.Markdown)),
	} {
		if !strings.Contains(text, "The data show it.") || !strings.Contains(text, "shown") || strings.Contains(text, "contradicted") {
			t.Errorf("%s speaks in other words", name)
		}
	}
	if !strings.Contains(string(output(t, r, report.JSON)), `"evidence": "contradicted"`) {
		t.Error("the JSON speaks in other words")
	}
}

// That effectiveness asks for the exact category is said once, where there are
// more than two.
func TestEffectivenessOfKinds(t *testing.T) {
	const says = "Effectiveness asks for the exact category"
	for _, full := range []bool{false, true} {
		if n := strings.Count(answer(t, plan{categories: []string{"A", "B", "C"}, ordered: true, noValues: true}.record(t), full), says); n != 1 {
			t.Errorf("full %v: said %d times", full, n)
		}
		if strings.Contains(answer(t, plan{}.record(t), full), says) {
			t.Errorf("full %v: said of pass and fail", full)
		}
	}
}
