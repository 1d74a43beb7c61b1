package report_test

import (
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

func recordOf(t *testing.T, csv string) *report.Record {
	t.Helper()
	s, err := study.Read(study.Source{Path: "-", Stdin: strings.NewReader(csv)}, study.Settings{})
	if err != nil {
		t.Fatal(err)
	}
	r, err := judge.Run(s, agreement.DefaultOptions(), signal.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return &report.Record{Result: r, Verdict: verdict.Decide(r)}
}

// A kappa below −1 is explained wherever it is printed: one part called twice
// of nine has a kappa over the trials of −8.53. One of −1 is not.
func TestKappaBelowMinusOne(t *testing.T) {
	const says = "A kappa below −1 tells nothing:"
	csv := "part,reference,A-1,A-2,B-1,B-2\n1,1,0,1,1,1\n"
	for i := range 8 {
		csv += fmt.Sprintf("%d,1,1,,1,1\n", i+2)
	}
	r := recordOf(t, csv)
	if text := answer(t, r, false); !strings.Contains(text, "−8.53") || strings.Count(text, says) != 1 {
		t.Errorf("the answer:\n%s", text)
	}
	if text := answer(t, r, true); !strings.Contains(text, "−8.53") || !strings.Contains(text, says) {
		t.Errorf("--full:\n%s", text)
	}
	// Between appraisers: 10 of 20 parts called by both, on all of which they differ.
	csv = "part,A-1,B-1\n"
	for i := range 20 {
		csv += fmt.Sprintf("%d,%s\n", i, []string{"0,1", "1,"}[i/10])
	}
	for _, full := range []bool{false, true} {
		if text := answer(t, recordOf(t, csv), full); !strings.Contains(text, says) {
			t.Errorf("full %v:\n%s", full, text)
		}
	}
	if text := answer(t, recordOf(t, "part,A-1,B-1\n1,0,1\n2,1,0\n"), true); !strings.Contains(text, "−1.00") || strings.Contains(text, says) {
		t.Errorf("−1:\n%s", text)
	}
}

// What the verdict does not rest on is marked in the table of criteria, and
// for programs.
func TestWhatIsSetAside(t *testing.T) {
	csv := "part,reference,A-1,A-2\n"
	for i := range 204 {
		csv += fmt.Sprintf("%d,%s\n", i, map[bool]string{true: "0,0,0", false: map[bool]string{true: "1,0,0", false: "1,1,1"}[i < 12]}[i < 4])
	}
	r := recordOf(t, csv)
	text := answer(t, r, true)
	for _, want := range []string{"set aside  one category prevails", "Set aside: the verdict does not rest on it, for the reason given.", "Kappa of A 0.48 is below 0.75 and is not counted, since one category prevails."} {
		if !strings.Contains(text, want) {
			t.Errorf("%q is not in\n%s", want, text)
		}
	}
	if out := string(output(t, r, report.JSON)); strings.Count(out, `"not_counted": "one category prevails"`) != 1 {
		t.Errorf("not_counted:\n%s", out)
	}
	if text := answer(t, plan{}.record(t), true); strings.Contains(text, "et aside") {
		t.Errorf("nothing is set aside:\n%s", text)
	}
}
