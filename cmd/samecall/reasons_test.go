package main

import (
	"strings"
	"testing"
)

// A study of good parts only, with grades: what it cannot tell is absent with
// its reason in every output, below the table in which the dash stands.
func TestReasonsInEveryOutput(t *testing.T) {
	study := []string{write(t, "calls.csv", "part,reference,a-1,a-2,b-1,b-2\n1,A,A,B,A,A\n2,A,A,A,B,A\n3,B,B,B,B,B\n"), "--order", "A,B,C", "--accept", "A,B"}
	judge := func(args ...string) string {
		return answered(t, append(append([]string{"judge"}, study...), args...)...)
	}
	const why = "–: no bad part was called: the miss rate is unknown."
	for _, c := range []struct {
		name, out, line string
		tables          int // criteria, against the reference, counts; what criteria rest on
	}{
		{"one screen", judge(), "\n" + why + "\n", 1},
		{"--full", judge("--full"), "\n" + why + "\n", 4},
		{"Markdown", judge("--markdown", "-"), "\n\n" + why + "\n\n", 4},
		{"HTML", judge("--html", "-"), "\n<p class=\"note\">" + why + "</p>", 3},
	} {
		if n := strings.Count(c.out, c.line); n != c.tables {
			t.Errorf("%s: says why there is no miss rate %d times, expected below %d tables", c.name, n, c.tables)
		}
	}
	for _, a := range at(t, decoded(t, []byte(judge("--json", "-"))), "against", "appraisers").([]any) {
		a := a.(map[string]any)
		if a["d_prime"] != nil || a["criterion"] != nil || !strings.HasPrefix(a["reason"].(string), "no call on a bad part") {
			t.Errorf("detection indices of good parts only: %v", a)
		}
		if area, _ := a["roc_area"].(map[string]any); area["reason"] == nil || area["estimate"] != nil {
			t.Errorf("ROC area of good parts only: %v", a["roc_area"])
		}
	}
	// The screen tells each reason once, whatever the number of tables.
	const alike = "–: the calls and the reference are of one category only"
	if out := answered(t, "judge", write(t, "one.csv", "part,reference,a-1,a-2,b-1,b-2\n1,ok,ok,ok,ok,ok\n2,ok,ok,ok,ok,ok\n")); strings.Count(out, alike) != 1 {
		t.Errorf("expected %q once:\n%s", alike, out)
	}
}

// One part gives a kappa without an interval, and the answer says why.
func TestReasonOfNoInterval(t *testing.T) {
	calls := write(t, "calls.csv", "part,a-1,a-2,b-1,b-2\n1,ok,nok,ok,ok\n")
	const why = "No interval: only one part counts: an interval wants two or more."
	if out := answered(t, "judge", calls); strings.Count(strings.Join(strings.Fields(out), " "), why) < 2 {
		t.Errorf("expected below the table and behind kappa: %s\n%s", why, out)
	}
}
