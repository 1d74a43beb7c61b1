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

// greyStudy is a study of one appraiser between the limits 10 and 11 from how
// many of nine calls accepted each value.
func greyStudy(t *testing.T, accepted map[float64]int) (zone, answer string) {
	t.Helper()
	csv := "part,appraiser,trial,call,value\n"
	for x, n := range accepted {
		for trial := range 9 {
			csv += fmt.Sprintf("P%g,a,%d,%d,%g\n", x, trial+1, map[bool]int{true: 1}[trial < n], x)
		}
	}
	lower, upper := 10.0, 11.0
	s, err := study.Read(study.Source{Path: "-", Stdin: strings.NewReader(csv)}, study.Settings{Lower: &lower, Upper: &upper})
	if err != nil {
		t.Fatal(err)
	}
	g, err := judge.NewGrey(s, signal.Options{}, 5.15)
	if err != nil {
		t.Fatal(err)
	}
	r, err := judge.Run(s, agreement.DefaultOptions(), signal.Options{})
	if err != nil {
		t.Fatal(err)
	}
	var full, short bytes.Buffer
	if err := report.Grey(&full, g, report.Terminal{Width: 100}, false); err != nil {
		t.Fatal(err)
	}
	if err := report.Text(&short, &report.Record{Result: r, Verdict: verdict.Decide(r)}, report.Terminal{Width: 100}, false); err != nil {
		t.Fatal(err)
	}
	words := func(b bytes.Buffer) string { return strings.Join(strings.Fields(b.String()), " ") }
	return words(full), words(short)
}

func has(t *testing.T, text string, parts ...string) {
	t.Helper()
	for _, p := range parts {
		if !strings.Contains(text, p) {
			t.Errorf("%q is not in:\n%s", p, text)
		}
	}
}

// Where the calls do not turn at a limit, what is known of the cut is told: it
// lies beyond the outermost part.
func TestOneBoundOfACut(t *testing.T) {
	zone, answer := greyStudy(t, map[float64]int{9.7: 0, 9.9: 1, 10.0: 4, 10.1: 7, 10.3: 9, 10.6: 9, 11.2: 9})
	has(t, zone, "above 11.2", "above +0.2")
	has(t, answer, "above +0.2")
	zone, answer = greyStudy(t, map[float64]int{9.8: 9, 10.3: 9, 10.6: 9, 10.9: 6, 11.0: 4, 11.1: 2, 11.3: 0})
	has(t, zone, "below 9.8", "below −0.2")
	has(t, answer, "below −0.2")
}

// The acceptance at a limit that lies in the gap between neighbouring parts is
// not known.
func TestAtLimitInAGap(t *testing.T) {
	zone, _ := greyStudy(t, map[float64]int{9.7: 0, 9.9: 0, 10.1: 9, 10.5: 9, 10.9: 9, 11.1: 0, 11.3: 0})
	has(t, zone, "accepted at the limit itself not known not known")
}

// A grey zone is graded by the curve where there is no unanimous zone: where it
// is widest.
func TestGradeByTheCurve(t *testing.T) {
	accepted := make(map[float64]int)
	for i := range 30 {
		x := 9.3 + 0.08*float64(i)
		accepted[x] = min(8, max(1, 8-int(8*max(0, 9.9-x, x-11.1)/0.6)))
	}
	zone, answer := greyStudy(t, accepted)
	for _, text := range []string{zone, answer} {
		has(t, text, "By the curve %GRR, 6 σ of the tolerance, is ", " %: not acceptable by common practice (below 10 good, to 30 conditional). There is no unanimous zone at any limit.")
	}
}

// Parts that do not fit the curve are named at its first table, and the fit
// without them is there in full.
func TestOutliersAtTheCurve(t *testing.T) {
	accepted := map[float64]int{10.5: 0}
	for i := range 20 {
		accepted[9.6+0.017*float64(i)], accepted[10.06+0.0371*float64(i)], accepted[11.06+0.017*float64(i)] = 0, 9, 0
	}
	for x, n := range map[float64]int{9.95: 1, 9.97: 2, 10.01: 5, 10.03: 7, 10.05: 8, 10.96: 8, 10.98: 7, 11.01: 4, 11.03: 2} {
		accepted[x] = n
	}
	zone, _ := greyStudy(t, accepted)
	has(t, zone, "The calls on P10.5 do not fit this curve, and may make it flatter: the fit without them stands below.",
		"The fit without P10.5", "limit parts cut − limit σ grey zone of tolerance")
	_, without, _ := strings.Cut(zone, "The fit without P10.5")
	all := strings.SplitN(without, "lower without", 2)
	has(t, all[1][:80], "(", " to ", " %")
}
