package verdict

import (
	"fmt"
	"strings"
	"testing"
)

// flawless is a study of so many bad and as many good parts, all called right
// by two appraisers in two trials.
func flawless(parts int) string {
	var b strings.Builder
	b.WriteString("part,reference,A-1,A-2,B-1,B-2\n")
	for i := range 2 * parts {
		fmt.Fprintf(&b, "%d,%d,%[2]d,%[2]d,%[2]d,%[2]d\n", i+1, i%2)
	}
	return b.String()
}

// Two bad and two good parts called right show nothing. 149 bad parts without
// a miss show 2 %, 59 show 5 % (TestPartsWithoutError).
func TestUnshown(t *testing.T) {
	const every = "effectiveness of A and B; miss rate of A and B; false-alarm rate of A and B; kappa of A and B; kappa between appraisers"
	for _, c := range []struct {
		parts int
		level Level
		want  string
	}{
		{2, Accept, every},
		{2, Conditional, every},
		{58, Conditional, "miss rate of A and B"},
		{59, Conditional, ""},
		{59, Accept, "miss rate of A and B"},
		{148, Accept, "miss rate of A and B"},
		{149, Accept, ""},
	} {
		_, v := decide(t, calls(flawless(c.parts), ""))
		if v.Overall != Accept {
			t.Fatalf("%d parts of a kind: %v", c.parts, v.Overall)
		}
		if got := v.Unshown(c.level); got != c.want {
			t.Errorf("%d parts of a kind, %v: %q, want %q", c.parts, c.level, got, c.want)
		}
	}
}

// An estimate that meets the accept level may be shown for the conditional
// level only, and is then open of the one and not of the other.
func TestUnshownOfALowerLevel(t *testing.T) {
	v := Verdict{Appraisers: []Appraiser{{Name: "A", Criteria: []Criterion{
		newCriterion(Miss, Default[Miss], one(0.01, 0, 0.04), "bad part", 100, 0.95),
		newCriterion(Effectiveness, Default[Effectiveness], one(0.95, 0.85, 1), "part", 100, 0.95),
	}}}}
	if got := v.Unshown(Accept); got != "miss rate of A; effectiveness of A" {
		t.Errorf("%q", got)
	}
	if got := v.Unshown(Conditional); got != "" {
		t.Errorf("%q", got)
	}
}
