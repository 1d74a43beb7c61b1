package verdict

import (
	"strings"
	"testing"
	"testing/fstest"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/study"
)

// calls is a study in a file, and what stands in its study file.
func calls(csv, toml string) fstest.MapFS {
	return fstest.MapFS{"study.toml": {Data: []byte("calls = \"calls.csv\"\n" + toml)}, "calls.csv": {Data: []byte(csv)}}
}

// What a study lacks is not shown, and said in words.
func TestWhatIsAbsent(t *testing.T) {
	for _, c := range []struct {
		name      string
		csv, toml string
		overall   Level
		reason    string
		next      string
	}{
		{"no bad parts", "part,reference,A-1,A-2\n1,1,1,1\n2,1,1,1\n3,1,1,1\n", "", NotShown,
			"no bad part was called", "The study holds no bad part. Add bad parts, some of them hard to call. Then the miss rate is known. 149 bad parts without an error show a miss rate of at most 2 %."},
		{"no good parts", "part,reference,A-1,A-2\n1,0,0,0\n2,0,0,0\n", "", NotShown,
			"no good part was called", "The study holds no good part. Add good parts, some of them hard to call. Then the false-alarm rate is known. 59 good parts without an error show a false-alarm rate of at most 5 %."},
		{"no reference", "part,A-1,A-2,B-1,B-2\n1,1,1,1,1\n2,0,0,0,0\n", "", NotShown,
			"No part has a reference", "Give each part a reference"},
		{"one trial", "part,reference,A-1,B-1\n1,1,1,1\n2,0,0,0\n3,1,1,1\n", "", Accept,
			"Every figure meets its accept level", "Have A and B call the parts a second and a third time"},
		{"kinds without accept", "part,reference,A-1,A-2\n1,dent,dent,dent\n2,scratch,scratch,scratch\n3,fine,fine,fine\n", "categories = [\"fine\", \"dent\", \"scratch\"]\n", NotShown,
			"no category is set as acceptable", "Say which categories a part may have to be used (accept)"},
		{"absent does not hide a reject", "part,reference,A-1,A-2,A-3\n1,1,0,0,0\n2,1,1,1,1\n3,1,0,0,1\n", "", Reject,
			"A: ", "Add bad parts"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, v := decide(t, calls(c.csv, c.toml))
			if v.Overall != c.overall {
				t.Errorf("overall %v, want %v", v.Overall, c.overall)
			}
			if got := strings.Join(v.Reasons, "\n"); !strings.Contains(got, c.reason) {
				t.Errorf("reasons %q lack %q", got, c.reason)
			}
			if got := strings.Join(v.Next, "\n"); !strings.Contains(got, c.next) {
				t.Errorf("next %q lacks %q", got, c.next)
			}
			for _, fault := range v.faults() {
				t.Error(fault)
			}
		})
	}
}

// One appraiser has nobody to compare with; two that agree have no fault.
func TestBetween(t *testing.T) {
	_, v := decide(t, calls("part,reference,A-1,A-2\n1,1,1,1\n2,0,0,0\n", ""))
	if v.Between != nil {
		t.Errorf("one appraiser is compared: %+v", v.Between)
	}
	_, v = decide(t, calls("part,reference,A-1,B-1\n1,1,1,1\n2,0,0,0\n", ""))
	if v.Between == nil || v.Between.Met != Accept {
		t.Errorf("two that agree: %+v", v.Between)
	}
	// All calls alike: no kappa, and no fault of theirs.
	_, v = decide(t, calls("part,A-1,B-1\n1,1,1\n2,1,1\n", ""))
	if v.Between == nil || v.Between.Met != NotShown {
		t.Errorf("calls all alike: %+v", v.Between)
	}
	// Appraisers that do not agree fail together, each right or not.
	_, v = decide(t, calls("part,A-1,B-1\n1,1,0\n2,0,1\n3,1,0\n4,0,1\n", ""))
	if v.Overall != Reject || !strings.HasPrefix(v.Reasons[0], "Kappa between appraisers −1.00") {
		t.Errorf("calls all different: %v, %q", v.Overall, v.Reasons)
	}
}

// Between appraisers counts what different ones say of a part: not that each
// repeats itself, as Fleiss' kappa of all calls does. Verdict and cause name
// one figure.
func TestBetweenCountsDifferentAppraisers(t *testing.T) {
	r, v := decide(t, causeTest(t, "one apart").files(1))
	b := r.Agreement.Between
	if v.Between.Estimate.Value != b.DifferentAppraisers.Value || b.Fleiss.Value-b.DifferentAppraisers.Value < 0.02 {
		t.Errorf("judged by %v; different appraisers %v, all calls %v", v.Between.Estimate.Value, b.DifferentAppraisers.Value, b.Fleiss.Value)
	}
	if want := "kappa between appraisers " + format.Kappa(b.DifferentAppraisers); len(v.Causes) != 1 || !strings.Contains(v.Causes[0].Text, want) {
		t.Errorf("%+v lacks %q", v.Causes, want)
	}
	// Told as a reason, it names nobody.
	_, v = decide(t, calls("part,reference,A-1,A-2,B-1,B-2\n1,1,1,1,0,0\n2,0,0,0,0,0\n3,1,1,1,0,0\n4,0,0,0,1,1\n5,1,1,1,1,1\n", ""))
	for _, s := range v.texts() {
		if strings.Contains(s, "of between") || strings.Contains(s, "of kappa") || strings.Contains(s, "appraisers of") {
			t.Errorf("%q", s)
		}
	}
	if got := strings.Join(v.Reasons, " "); !strings.Contains(strings.ToLower(got), "kappa between appraisers") {
		t.Errorf("%q", v.Reasons)
	}
}

// The levels of a whole study are those of its worst figure, as
// docs/verdict.md says.
func TestOrderOfLevels(t *testing.T) {
	if !(Accept < Conditional && Conditional < NotShown && NotShown < Reject) {
		t.Error("the levels are out of order")
	}
	if (Verdict{}).Overall != Accept || study.DefaultConfidence != 0.95 {
		t.Error("the defaults have moved")
	}
}
