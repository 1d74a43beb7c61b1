package report_test

import (
	"bytes"
	"fmt"
	"strings"
	"testing"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/judge"
	"samecall/cmd/samecall/internal/report"
	"samecall/cmd/samecall/internal/study"
	"samecall/cmd/samecall/internal/verdict"
	"samecall/signal"
)

// The record names the method that was used: the intervals of up to 1000 parts
// are resampled, those of more are linearised, and of too many resamples some.
func TestRecordNamesIntervalsOfKappas(t *testing.T) {
	for _, c := range []struct {
		parts, resamples int
		row, sentence    string
	}{
		{60, 2000, "2000, seed 1", "Intervals of kappas: 2000 resamples of whole parts, bias-corrected and accelerated (Efron, 1987), at a confidence expanded for few parts (Hesterberg, 2015), never narrower than"},
		{60, 0, "none (linearised)", "Intervals of kappas: standard errors linearised over parts, never narrower than"},
		{1200, 2000, "none of the 2000 asked for (linearised)", "Intervals of kappas: standard errors linearised over parts, never narrower than"},
		{90, 600_000, "600000, seed 1, for 1 of 2 kappas and coefficients; none for the others (linearised)", "Intervals of kappas: 600000 resamples of whole parts, bias-corrected and accelerated (Efron, 1987), at a confidence expanded for few parts (Hesterberg, 2015), for 1 of 2 kappas and coefficients; for the others standard errors linearised over parts; never narrower than"},
		{0, 2000, "none of the 2000 asked for (no interval rests on them)", "Intervals of kappas: from the exact limits of the share of parts that disagree."},
	} {
		r := countedRecord(t, c.parts, c.resamples)
		var page bytes.Buffer
		if err := report.HTML(&page, r); err != nil {
			t.Fatal(err)
		}
		if !strings.Contains(page.String(), ">"+c.row+"</td>") {
			t.Errorf("%d parts, %d resamples: no row says %q", c.parts, c.resamples, c.row)
		}
		if !strings.Contains(page.String(), c.sentence) {
			t.Errorf("%d parts, %d resamples: no sentence says %q", c.parts, c.resamples, c.sentence)
		}
	}
}

// countedRecord is of one appraiser with ten trials in which so many parts are
// each called in their own way, or, of none, two parts right every time.
func countedRecord(t *testing.T, parts, resamples int) *report.Record {
	t.Helper()
	var text strings.Builder
	text.WriteString("part,a-1,a-2,a-3,a-4,a-5,a-6,a-7,a-8,a-9,a-10\n")
	for p := range parts {
		fmt.Fprint(&text, p)
		for i := range 10 {
			fmt.Fprintf(&text, ",%d", (p+1)>>i&1)
		}
		text.WriteString("\n")
	}
	if parts == 0 {
		text.WriteString("x" + strings.Repeat(",1", 10) + "\ny" + strings.Repeat(",0", 10) + "\n")
	}
	s, err := study.Read(study.Source{Path: "-", Stdin: strings.NewReader(text.String())}, study.Settings{})
	if err != nil {
		t.Fatal(err)
	}
	opt := agreement.DefaultOptions()
	opt.Resamples = resamples
	r, err := judge.Run(s, opt, signal.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return &report.Record{Result: r, Verdict: verdict.Decide(r)}
}
