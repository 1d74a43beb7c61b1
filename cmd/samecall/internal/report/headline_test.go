package report_test

import (
	"strings"
	"testing"

	"samecall/cmd/samecall/internal/report"
	"samecall/cmd/samecall/internal/verdict"
)

// Where the verdict stands, there stands whether the data show it.
func TestHeadline(t *testing.T) {
	for name, c := range map[string]struct {
		r              *report.Record
		level          verdict.Level
		carried, short string
	}{
		"ten parts": {plan{parts: 10, sharp: true}.record(t), verdict.Accept, "(open: the data do not show it)", "open"},
		"many":      {plan{parts: 60, random: 0.4}.record(t), verdict.Reject, "(the data show it)", "shown"},
	} {
		if c.r.Verdict.Overall != c.level {
			t.Fatalf("%s: %v", name, c.r.Verdict.Overall)
		}
		big := strings.ToUpper(c.level.String())
		for out, want := range map[string]struct{ text, line string }{
			"the answer": {answer(t, c.r, false), "\nVerdict: " + big + " " + c.carried + "\n"},
			"--full":     {answer(t, c.r, true), "\nVerdict: " + big + " " + c.carried + "\n"},
			"the table":  {answer(t, c.r, true), c.level.String() + " " + c.carried + "\n"},
			"HTML":       {string(output(t, c.r, report.HTML)), "<strong>" + big + "</strong> " + c.carried + "</p>"},
			"Markdown":   {string(output(t, c.r, report.Markdown)), "**Verdict: " + big + " " + c.carried + "**"},
			"CSV":        {string(output(t, c.r, report.CSV)), "\nverdict," + c.level.String() + " " + c.carried + "\n"},
			"JSON":       {string(output(t, c.r, report.JSON)), `"evidence": "` + c.short + `"`},
		} {
			if !strings.Contains(want.text, want.line) {
				t.Errorf("%s: %s does not say %q", name, out, want.line)
			}
		}
	}
}
