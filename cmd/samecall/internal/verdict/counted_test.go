package verdict

import (
	"fmt"
	"strings"
	"testing"
)

// repeated writes a study of parts in groups, each with the calls of a part in
// the order of the columns: "1,1,1" so many times.
func repeated(header string, groups ...any) string {
	var b strings.Builder
	b.WriteString("part," + header + "\n")
	part := 0
	for i := 0; i < len(groups); i += 2 {
		for range groups[i].(int) {
			part++
			fmt.Fprintf(&b, "%d,%s\n", part, groups[i+1])
		}
	}
	return b.String()
}

// Of 204 parts 4 are bad, none of them missed, and 8 good ones are rejected:
// kappa is 0.48, since nearly all calls are accept, and does not decide.
func TestPrevalentKappaAgainstTheReference(t *testing.T) {
	_, v := decide(t, calls(repeated("reference,A-1,A-2", 4, "0,0,0", 8, "1,0,0", 192, "1,1,1"), ""))
	kappa := v.Appraisers[0].criterion(Kappa)
	if kappa.Met != Conditional || kappa.Aside != prevails || kappa.Shows() != "set aside" || kappa.ToSettle() != prevails {
		t.Fatalf("%+v", kappa)
	}
	if v.Overall != Accept || v.Appraisers[0].Verdict != Accept {
		t.Errorf("%v, %v", v.Overall, v.Appraisers[0].Verdict)
	}
	if len(v.Reasons) != 2 || v.Reasons[0] != "Every figure that counts meets its accept level." ||
		v.Reasons[1] != "Kappa of A 0.48 is below 0.75 and is not counted, since one category prevails." {
		t.Errorf("%q", v.Reasons)
	}
	if len(v.Carry) != 1 || !strings.HasPrefix(v.Carry[0], "The data show 1 of the 3; 2 are open.") {
		t.Errorf("%q", v.Carry)
	}
	if got := v.Unshown(Accept); strings.Contains(got, "kappa") {
		t.Errorf("unshown %q", got)
	}
	if at(v.Next, "kappa") >= 0 {
		t.Errorf("%q", v.Next)
	}
	// Such a figure is not told among those that decide, whatever they say.
	_, v = decide(t, calls(repeated("reference,A-1,A-2", 4, "0,0,0", 15, "1,0,0", 185, "1,1,1"), ""))
	if v.Overall != Conditional || v.Appraisers[0].criterion(Kappa).Met != Reject {
		t.Fatalf("%v, %+v: the study does not show what it is to show", v.Overall, v.Appraisers[0].criterion(Kappa))
	}
	if len(v.Reasons) != 2 || strings.Contains(v.Reasons[0], "kappa") || v.Reasons[1] != "Kappa of A 0.33 is below 0.40 and is not counted, since one category prevails." {
		t.Errorf("%q", v.Reasons)
	}
	for _, fault := range v.faults() {
		t.Error(fault)
	}
}

// What is set aside is named together, and with its reason.
func TestWhatIsSetAsideIsNamed(t *testing.T) {
	_, v := decide(t, calls(repeated("reference,A-1,A-2,B-1,B-2", 4, "0,0,0,0,0", 3, "1,0,0,1,1", 3, "1,1,1,0,0", 194, "1,1,1,1,1"), ""))
	if v.Overall != Accept || v.Reasons[1] != "Kappa of A 0.72, kappa of B 0.72 and kappa between appraisers 0.56 are below 0.75 and are not counted, since one category prevails." {
		t.Errorf("%v, %q", v.Overall, v.Reasons)
	}
	// Nothing is said of one that is as good as what decides.
	_, v = decide(t, calls(repeated("reference,A-1,A-2", 4, "0,0,0", 200, "1,1,1"), ""))
	if len(v.Reasons) != 1 || v.Reasons[0] != "Every figure meets its accept level." {
		t.Errorf("%q", v.Reasons)
	}
}

// Where a category prevails, on either side of the share of 0.8 and the gap
// of 0.1 from which agreement calls it so: without a reference the verdict is
// not shown, or reject by the kappa between appraisers if that counts.
func TestWhereACategoryPrevails(t *testing.T) {
	strict := "[criteria]\nkappa = [0.95, 0.90]\n"
	for _, c := range []struct {
		csv, toml string
		aside     bool
	}{
		// 40 and 41 of 200 calls reject: 80 % and 79.5 % accept.
		{repeated("A-1,B-1", 5, "0,0", 30, "0,1", 65, "1,1"), "", true},
		{repeated("A-1,B-1", 5, "0,0", 31, "0,1", 64, "1,1"), "", false},
		// About 90 % accept, 5 and 4 of 200 parts differ: AC1 lies 0.105 and
		// 0.087 above kappa.
		{repeated("A-1,B-1", 18, "0,0", 5, "0,1", 177, "1,1"), strict, true},
		{repeated("A-1,B-1", 18, "0,0", 4, "0,1", 178, "1,1"), strict, false},
	} {
		_, v := decide(t, calls(c.csv, c.toml))
		want := Reject
		if c.aside {
			want = NotShown
		}
		if v.Between.Met != Reject || v.Overall != want {
			t.Errorf("kappa %v, %v, %v; want %v", v.Between.Estimate.Value, v.Between.Met, v.Overall, want)
		}
	}
}

// Calls that are not repeated are a cause where the data show it, by kappa or,
// where a category prevails, by the share of parts called alike.
func TestUnrepeatedIsShown(t *testing.T) {
	for _, c := range []struct {
		name, csv, want, says string
	}{
		{"2 of 204 parts mixed", repeated("A-1,A-2", 2, "0,1", 202, "1,1"), "", ""},
		{"1 of 1 part mixed", repeated("A-1,A-2", 1, "0,1"), "", ""},
		// P(X ≤ 84) of 100 at 0.9 is 0.040, P(X ≤ 85) is 0.073.
		{"15 of 100 parts, one category prevails", repeated("A-1,A-2", 15, "0,1", 85, "1,1"), "", ""},
		{"16 of 100 parts, one category prevails", repeated("A-1,A-2", 16, "0,1", 84, "1,1"), "inconsistent:A",
			"A does not repeat the same calls: 16 of 100 parts are mixed; 84 % (75–91) of the parts are called alike, less than 90 %."},
		// Kappa 0.6 in each, of 20 and of 200 parts.
		{"kappa below its level, open", repeated("A-1,A-2", 4, "0,1", 8, "0,0", 8, "1,1"), "", ""},
		{"kappa below its level, shown", repeated("A-1,A-2", 40, "0,1", 80, "0,0", 80, "1,1"), "inconsistent:A", "kappa over the trials is 0.60 (0.4"},
		// Agreement from 3 of 40 parts, or from 8.
		{"few parts called twice", repeated("A-1,A-2", 3, "0,1", 19, "0,", 18, "1,"), "", ""},
		{"a fifth called twice", repeated("A-1,A-2", 8, "0,1", 16, "0,", 16, "1,"), "inconsistent:A", "8 of 8 parts are mixed"},
		{"below −1", repeated("A-1,A-2", 10, "0,1", 10, "1,"), "", ""},
	} {
		r, v := decide(t, calls(c.csv, ""))
		if k := r.Agreement.Within[0].Kappa; k.Value >= Default[Kappa][0] && !k.Prevalent {
			t.Fatalf("%s: kappa %v: the study does not show what it is to show", c.name, k.Value)
		}
		if got := found(v); got != c.want || c.want != "" && !strings.Contains(v.Causes[0].Text, c.says) {
			t.Errorf("%s: %q, want %q: %+v", c.name, got, c.want, v.Causes)
		}
		for _, fault := range v.faults() {
			t.Errorf("%s: %s", c.name, fault)
		}
	}
	if r, _ := decide(t, calls(repeated("A-1,A-2", 10, "0,1", 10, "1,"), "")); r.Agreement.Within[0].Kappa.Value >= -1 {
		t.Errorf("kappa %v is not below −1", r.Agreement.Within[0].Kappa.Value)
	}
}

// Most of several appraisers, one of them told by the share of parts.
func TestUnrepeatedByMost(t *testing.T) {
	_, v := decide(t, calls(repeated("A-1,A-2,B-1,B-2", 30, "0,1,1,0", 70, "1,1,1,1"), ""))
	if got := found(v); got != "inconsistent:everyone" || !strings.Contains(v.Causes[0].Text, "(kappa over their trials is less than 0.75, or less than 90 % of the parts are called alike)") {
		t.Errorf("%q: %+v", got, v.Causes)
	}
}

// Leaning grades, of which one prevails, and not repeated either.
func TestLeaningGradesNotRepeatedWhereOnePrevails(t *testing.T) {
	_, v := decide(t, calls(repeated("reference,A-1,A-2", 20, "a,b,a", 20, "a,a,b", 80, "a,a,a", 1, "c,c,c"), "order = [\"a\", \"b\", \"c\"]\naccept = [\"a\"]\n"))
	if got := found(v); got != "grades_lean:A" || !strings.HasSuffix(v.Causes[0].Text, " Nor does A repeat the same calls.") {
		t.Errorf("%q: %+v", got, v.Causes)
	}
}

// Appraisers who differ, where a category prevails: 18 of 100 parts show it, 6
// do not. And not where their kappas rest on few parts.
func TestApartWhereACategoryPrevails(t *testing.T) {
	for _, c := range []struct {
		csv, want string
	}{
		{repeated("A-1,A-2,B-1,B-2", 9, "0,0,1,1", 9, "1,1,0,0", 82, "1,1,1,1"), "consistent_different:everyone"},
		{repeated("A-1,A-2,B-1,B-2", 3, "0,0,1,1", 3, "1,1,0,0", 94, "1,1,1,1"), ""},
		{repeated("A-1,A-2,B-1,B-2", 8, "0,0,1,1", 16, "0,0,,", 16, "1,1,,"), "consistent_different:everyone"},
		{repeated("A-1,A-2,B-1,B-2", 7, "0,0,1,1", 17, "0,0,,", 16, "1,1,,"), ""},
		{repeated("A-1,A-2,B-1,B-2", 8, "0,0,1,", 8, "0,,1,", 16, "0,,0,", 16, "1,,0,"), ""},
	} {
		_, v := decide(t, calls(c.csv, ""))
		if got := found(v); got != c.want {
			t.Errorf("%q, want %q: %+v", got, c.want, v.Causes)
		}
	}
}

// The kappa between appraisers counts where a fifth of the parts called were
// called by both.
func TestKappaOnFewParts(t *testing.T) {
	_, v := decide(t, calls(repeated("A-1,B-1", 7, "0,1", 17, "0,", 16, "1,"), ""))
	if v.Overall != NotShown || v.Between.Aside != "it rests on 7 of 40 parts" {
		t.Errorf("%v, %+v", v.Overall, v.Between)
	}
	if got := v.Reasons[len(v.Reasons)-1]; !strings.HasPrefix(got, "Kappa between appraisers −") || !strings.HasSuffix(got, " is below 0.40 and is not counted, since it rests on 7 of 40 parts.") {
		t.Errorf("%q", v.Reasons)
	}
	_, v = decide(t, calls(repeated("A-1,B-1", 8, "0,1", 16, "0,", 16, "1,"), ""))
	if v.Overall != Reject || v.Between.Aside != "" {
		t.Errorf("%v, %+v", v.Overall, v.Between)
	}
	_, v = decide(t, calls(repeated("A-1,B-1", 10, "0,1", 10, "1,"), ""))
	if v.Between.Estimate.Value >= -1 || v.Between.Aside != below1 || v.Overall != NotShown {
		t.Errorf("%v, %+v", v.Overall, v.Between)
	}
}

// Nobody changes the sentences of the next verdict.
func TestCautionsAreOnesOwn(t *testing.T) {
	_, v := decide(t, calls(flawless(2), ""))
	was := v.Cautions[0]
	v.Cautions[0] = "changed"
	if _, v := decide(t, calls(flawless(2), "")); v.Cautions[0] != was {
		t.Errorf("%q", v.Cautions)
	}
}

func TestWordsOfLevels(t *testing.T) {
	for _, c := range []struct {
		value fmt.Stringer
		want  string
	}{
		{Accept, "accept"}, {Reject, "reject"}, {Level(4), "Level(4)"}, {Level(-1), "Level(-1)"},
		{Open, "open"}, {Contradicted, "contradicted"}, {Evidence(3), "Evidence(3)"}, {Evidence(-1), "Evidence(-1)"},
	} {
		if got := c.value.String(); got != c.want {
			t.Errorf("%q, want %q", got, c.want)
		}
	}
}
