package verdict

import (
	"fmt"
	"regexp"
	"slices"
	"strings"
	"testing"
)

// texts are all sentences of a verdict.
func (v *Verdict) texts() []string {
	out := slices.Concat(v.Reasons, v.Carry, v.Next, v.Cautions)
	for _, c := range v.Causes {
		out = append(out, c.Text, c.Do)
	}
	for _, a := range v.Appraisers {
		for _, c := range a.Criteria {
			out = append(out, c.EvidenceText())
		}
	}
	return out
}

// spoilt finds what no sentence may hold.
var spoilt = regexp.MustCompile(`NaN|Inf\b|%!|\.\.|: *\.|, *\.|  |\( | \)|\b1 parts|\bnone\.$|^ | $`)

// faults checks the form of all that a verdict says.
func (v *Verdict) faults() []string {
	var out []string
	add := func(format string, args ...any) { out = append(out, fmt.Sprintf(format, args...)) }
	for _, s := range v.texts() {
		if s == "" {
			continue
		}
		if bad := spoilt.FindString(s); bad != "" {
			add("%q holds %q", s, bad)
		}
		if !strings.HasSuffix(s, ".") {
			add("%q does not end with a full stop", s)
		}
	}
	seen := make(map[string]bool)
	for _, s := range v.Next {
		if seen[s] {
			add("twice in what to do next: %q", s)
		}
		seen[s] = true
	}
	if len(v.Reasons) == 0 || len(v.Next) == 0 || len(v.Cautions) == 0 {
		add("%d reasons, %d next steps, %d cautions", len(v.Reasons), len(v.Next), len(v.Cautions))
	}
	if len(v.Carry) > len(v.Reasons) {
		add("%d sentences on %d reasons", len(v.Carry), len(v.Reasons))
	}
	return out
}

// Names as people give them: verbs of a format, a full stop at the end, marks
// and other scripts.
var odd = []string{"100%d", "Dr. %s No.", "<b>x & y</b>", "=1+1", "ציפורן", "a%v {{.}}", "`g`", "h|i", "j\\k", "[l](m)", "*n*", "_o_"}

func TestSentences(t *testing.T) {
	for _, c := range causeTests {
		for _, names := range [][]string{names, odd} {
			d := c.drawn
			d.names = names
			_, v := decide(t, d.files(1))
			for _, fault := range v.faults() {
				t.Errorf("%s: %s", c.name, fault)
			}
		}
	}
}

// A cause of one appraiser names it in what to do; one of a limit names the
// limit; one of parts names parts.
func TestCausesNameNames(t *testing.T) {
	limit := regexp.MustCompile(`\b(lower|upper|each) limit`)
	part := regexp.MustCompile(`\bP\d\d\b`)
	for _, c := range causeTests {
		_, v := decide(t, c.files(1))
		for _, cause := range v.Causes {
			for _, a := range cause.Appraisers {
				if name := v.Appraisers[a].Name; !strings.Contains(cause.Text, name) || !strings.Contains(cause.Do, name) {
					t.Errorf("%s: %q, %q do not name %s", c.name, cause.Text, cause.Do, name)
				}
			}
			switch cause.Code {
			case codeGauge, codeCut, codeWide, codeNear:
				if !limit.MatchString(cause.Text) || !limit.MatchString(cause.Do) {
					t.Errorf("%s: %q, %q name no limit", c.name, cause.Text, cause.Do)
				}
			case codeInconsistent, codeSteady, codeStandard, codeApart:
				if !part.MatchString(cause.Do) {
					t.Errorf("%s: %q names no part", c.name, cause.Do)
				}
			case codeFar:
				if !part.MatchString(cause.Text) {
					t.Errorf("%s: %q names no part", c.name, cause.Text)
				}
			}
			if !slices.Contains(v.Next, cause.Do) {
				t.Errorf("%s: %q is not among what to do next", c.name, cause.Do)
			}
		}
	}
}

// The sentence tells side, way and size of the shift that the study has.
func TestShiftIsToldRight(t *testing.T) {
	for _, c := range []struct {
		model string
		says  string
	}{
		{"gauge shifted, lower limit outside", "below the lower limit, so that bad parts are accepted"},
		{"gauge shifted, lower limit inside", "above the lower limit, so that good parts are rejected"},
		{"gauge shifted, upper limit outside", "above the upper limit, so that bad parts are accepted"},
		{"gauge shifted, upper limit inside", "below the upper limit, so that good parts are rejected"},
	} {
		_, v := decide(t, causeTest(t, c.model).files(3))
		if len(v.Causes) != 1 || !strings.Contains(v.Causes[0].Text, c.says) {
			t.Errorf("%s: %+v", c.model, v.Causes)
			continue
		}
		var size, low, high float64
		if _, err := fmt.Sscanf(v.Causes[0].Text, "All appraisers cut %f mm (%f to %f)", &size, &low, &high); err != nil {
			t.Errorf("%s: %v in %q", c.model, err, v.Causes[0].Text)
		} else if low > 0.1 || high < 0.1 || low > size || size > high {
			t.Errorf("%s: the shift is 0.1, told as %v (%v to %v)", c.model, size, low, high)
		}
	}
}

func causeTest(t *testing.T, name string) drawn {
	for _, c := range causeTests {
		if c.name == name {
			return c.drawn
		}
	}
	t.Fatalf("no study is named %q", name)
	return drawn{}
}

// Lists are cut, and the figures that read alike are told together.
func TestLists(t *testing.T) {
	names := []string{"a", "b", "c", "d", "e", "f", "g", "h", "i", "j"}
	for _, c := range []struct {
		parts []int
		want  string
	}{
		{nil, "none"},
		{[]int{1}, "b"},
		{[]int{1, 2}, "b and c"},
		{[]int{0, 1, 2}, "a, b and c"},
		{[]int{0, 1, 2, 3, 4, 5, 6, 7, 8, 9}, "a, b, c, d, e, f, g, h and 2 more"},
	} {
		if got := list(names, c.parts); got != c.want {
			t.Errorf("%v: %q, want %q", c.parts, got, c.want)
		}
	}
	if got := some(names); got != "10 appraisers" {
		t.Error(got)
	}
	if stop("at No.") != "at No." || stop("done") != "done." {
		t.Error("one full stop")
	}
}

// With calibrated sizes in the study file, the cause says whether they
// explain the shift. (The model's cut is at 9.9, the drawn one near it.)
func TestCalibratedSizes(t *testing.T) {
	for _, c := range []struct {
		sizes, says string
	}{
		{"lower = {size = 9.9, uncertainty = 0.02, wear_limit = 9.95}", "calibrated at 9.900 mm, explains it; it is worn beyond its limit."},
		{"lower = {size = 10.0, uncertainty = 0.002}", "calibrated at 10.000 mm, does not explain it."},
		{"upper = {size = 11.0, uncertainty = 0.002}", "or a shifted standard."},
	} {
		d := causeTest(t, "gauge shifted, lower limit outside")
		d.settings = "[gauge_sizes]\n" + c.sizes + "\n"
		_, v := decide(t, d.files(1))
		if len(v.Causes) != 1 || !strings.HasSuffix(v.Causes[0].Text, c.says) {
			t.Errorf("%s: %+v", c.sizes, v.Causes)
		}
	}
}

// What few parts cannot show stands beside the first reason that is open, not
// only beside the first: of 16 bad parts A misses 12, which the data show, and B 2.
func TestTooFewIsToldOfTheSecondReason(t *testing.T) {
	var text strings.Builder
	text.WriteString("part,reference,A-1,A-2,B-1,B-2\n")
	for part := range 66 {
		ref, a, b := "ok", "ok", "ok"
		if part < 16 {
			ref, a, b = "nok", "nok", "nok"
		}
		if part < 12 {
			a = "ok"
		}
		if part < 2 {
			b = "ok"
		}
		fmt.Fprintf(&text, "%d,%s,%s,%[3]s,%s,%[4]s\n", part, ref, a, b)
	}
	_, v := decide(t, calls(text.String(), ""))
	if len(v.Carry) != 2 || v.Carry[0] != "The data show it." || !strings.HasSuffix(v.Carry[1], " 16 bad parts cannot show a miss rate below 5 %: at best 17.1 %.") {
		t.Errorf("%q", v.Carry)
	}
}
