package verdict

import (
	"fmt"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"
	"testing/fstest"

	"samecall/cmd/samecall/internal/study"
)

// at is the place of the first step that holds a text; −1 if none does.
func at(steps []string, text string) int {
	return slices.IndexFunc(steps, func(s string) bool { return strings.Contains(s, text) })
}

// What to do next on small studies, by hand.
func TestNext(t *testing.T) {
	for _, c := range []struct {
		name, csv, toml string
		first           string // how the first step begins
		says, saysNot   []string
	}{
		{"nobody rejected any", "part,reference,A-1,A-2,B-1,B-2\n1,1,1,1,1,1\n2,0,1,1,1,1\n3,0,1,1,1,1\n4,0,1,1,1,1\n", "",
			"Ask first whether the calls were written down as made.",
			[]string{"Consider parts passed by this inspection"}, []string{"reference of", "No pattern"}},
		{"words swapped", "part,reference,A-1,A-2,B-1,B-2\n1,1,0,0,0,0\n2,0,1,1,1,1\n3,0,1,1,1,1\n4,1,0,0,0,0\n", "",
			"Check first whether the words of the calls (accept, reject) or those of the reference column are swapped.",
			nil, []string{"as suspect", "Every call on", "No pattern"}},
		{"one called no bad part", "part,reference,A-1,A-2,B-1,B-2\n1,1,1,1,1,1\n2,0,0,0,,\n", "",
			"B called no bad part. Add bad parts, some of them hard to call.", nil, []string{"holds no"}},
		{"nobody called the bad part", "part,reference,A-1,A-2\n1,1,1,1\n2,1,1,1\n3,0,,\n", "",
			"Nobody called any bad part. Add bad parts, some of them hard to call.", nil, []string{"holds no"}},
		{"no bad part, with limits", "part,reference,value,A-1,A-2\n1,1,9,1,1\n2,1,8,1,1\n", "upper = 10\n",
			"The study holds no bad part. Add bad parts, some of them close to the limits.", nil, nil},
		{"two decide, by different parts", "part,reference,A-1,A-2,B-1,B-2,C-1,C-2\n1,1,1,1,1,1,1,1\n2,0,1,1,0,0,0,0\n3,1,1,1,0,0,1,1\n4,0,0,0,1,1,0,0\n5,1,1,1,1,1,1,1\n", "",
			"", []string{"Go through the wrong calls with A (bad, but accepted: part 2).", "on which they differ every time: parts 2, 3 and 4."}, []string{"with C "}},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, v := decide(t, calls(c.csv, c.toml))
			if !strings.HasPrefix(v.Next[0], c.first) {
				t.Errorf("first step %q, want %q", v.Next[0], c.first)
			}
			for _, s := range c.says {
				if at(v.Next, s) < 0 {
					t.Errorf("%q lacks %q", v.Next, s)
				}
			}
			for _, s := range c.saysNot {
				if at(v.Next, s) >= 0 {
					t.Errorf("%q holds %q", v.Next, s)
				}
			}
			for _, fault := range v.faults() {
				t.Error(fault)
			}
		})
	}
}

// One appraiser's cause does not hide the wrong calls of another, and more
// than a few are told in one step.
func TestWrongCallsOfOthers(t *testing.T) {
	d := causeTest(t, "one confuses kinds")
	right := d.people[0].mistakes
	d.people = slices.Clone(d.people)
	d.people[0].mistakes = func(r *rand.Rand, ref int) int { // Ash misses scratches
		if ref == 3 && r.Float64() < 0.3 {
			return 0
		}
		return right(r, ref)
	}
	_, v := decide(t, d.files(1))
	if at(v.Next, "Show Birch a boundary sample of run beside one of pinhole") < 0 || slices.ContainsFunc(v.Next, func(s string) bool { return strings.Contains(s, "with Birch") && strings.Contains(s, "wrong category") }) || at(v.Next, "wrong calls with Ash (bad, but accepted: parts P") < 0 {
		t.Errorf("%q", v.Next)
	}
	csv := "part,reference,A-1,B-1,C-1,D-1\n1,1,1,1,1,1\n2,0,1,0,0,0\n3,0,0,1,0,0\n4,0,0,0,1,0\n5,0,0,0,0,1\n6,1,1,1,1,1\n7,1,1,1,1,1\n"
	_, v = decide(t, calls(csv, ""))
	if at(v.Next, "the wrong calls of A, B, C and D, part by part: parts 2, 3, 4 and 5.") < 0 {
		t.Errorf("%q", v.Next)
	}
	// What to do comes first, then that no pattern tells more, once.
	_, v = decide(t, calls("part,reference,A-1,A-2,B-1,B-2\n1,1,1,1,1,0\n2,0,0,0,1,1\n3,0,1,0,0,0\n4,1,1,1,1,1\n", ""))
	if first, second := at(v.Next, "Go through the wrong calls with B (bad, but accepted: part 2; good, but rejected: part 1). No pattern tells what is behind the wrong calls."),
		at(v.Next, "Go through the wrong calls with A (bad, but accepted: part 3)."); first < 0 || second != first+1 || strings.Contains(v.Next[second], "No pattern") {
		t.Errorf("%q", v.Next)
	}
}

// Two trials do not help where nobody called a part twice.
func TestNoPartTwice(t *testing.T) {
	_, v := decide(t, calls("part,reference,A-1,A-2\n1,1,1,\n2,0,0,\n3,1,,1\n4,0,,0\n", ""))
	if at(v.Next, "Have A call the same parts a second and a third time: no part was called twice, and nobody knows") < 0 {
		t.Errorf("%q", v.Next)
	}
}

// Of kinds, those that are let pass are named, with how often.
func TestMissedKinds(t *testing.T) {
	study := func(scratches int) fstest.MapFS {
		var b strings.Builder
		b.WriteString("part,reference,A-1,A-2,B-1,B-2\n")
		for i := range 12 {
			fmt.Fprintf(&b, "g%d,ok,ok,ok,ok,ok\nd%d,dent,dent,dent,dent,dent\n", i, i)
			call := "scratch"
			if i < scratches {
				call = "ok"
			}
			fmt.Fprintf(&b, "s%d,scratch,%s,scratch,scratch,scratch\n", i, call)
		}
		return calls(b.String(), "categories = [\"ok\", \"dent\", \"scratch\"]\naccept = [\"ok\"]\n")
	}
	if _, v := decide(t, study(3)); at(v.Next, "Show A samples of what is accepted though bad, beside good parts: scratch (3 of 24 calls).") < 0 {
		t.Errorf("%q", v.Next)
	}
	if _, v := decide(t, study(2)); at(v.Next, "Show A samples") >= 0 {
		t.Errorf("two misses: %q", v.Next)
	}
}

// Where no cause is found, it is said where the wrong calls lie.
func TestNoPattern(t *testing.T) {
	csv := "part,value,A-1,A-2,B-1,B-2\n"
	for i := range 10 {
		csv += fmt.Sprintf("g%d,9.%d,1,1,1,1\nb%d,10.%d,0,0,0,0\n", i, i, i, i+1)
	}
	_, v := decide(t, calls(csv+"x,10,0,1,1,1\ny,10.05,1,0,0,0\n", "upper = 10\n"))
	if at(v.Next, "No wrong call lies farther than 0.050 from a limit; no pattern tells more. On a limit itself, where a call can go either way: part x.") < 0 {
		t.Errorf("%s: %q", found(v), v.Next)
	}
}

// A reference does not follow from values where there are kinds.
func TestLacksReference(t *testing.T) {
	for settings, want := range map[string]string{
		"upper = 10\naccept = [\"a\"]\n": "Give each part a reference in a column of that name: values and limits tell good from bad only",
		"accept = [\"a\"]\n":             "Give each part a reference: a column reference, or values and limits.",
	} {
		if _, v := decide(t, calls("part,value,A-1,A-2\n1,9,a,a\n2,11,b,b\n3,12,c,c\n", settings)); at(v.Next, want) < 0 {
			t.Errorf("%q", v.Next)
		}
	}
}

// The gauge comes first, by what is known of it, and what it passed before is
// in doubt only where it accepts bad parts.
func TestGaugeFirst(t *testing.T) {
	for _, c := range []struct {
		model, sizes string
		first        string
		suspect      bool
	}{
		{"gauge shifted, lower limit outside", "", "Check the lower limit of the gauge or the standard", true},
		{"gauge shifted, lower limit outside", "lower = {size = 9.9, uncertainty = 0.02, wear_limit = 9.95}", "Take the gauge member at the lower limit out of use: it is worn beyond its limit. With a good one,", true},
		{"gauge shifted, lower limit outside", "lower = {size = 9.9, uncertainty = 0.02}", "Correct or replace the gauge member at the lower limit: its size explains the shift.", true},
		{"gauge shifted, lower limit outside", "lower = {size = 10.0, uncertainty = 0.002}", "Check the setting and the use of the gauge at the lower limit", true},
		{"gauge shifted, lower limit inside", "", "Check the lower limit of the gauge or the standard", false},
	} {
		d := causeTest(t, c.model)
		if c.sizes != "" {
			d.settings = "[gauge_sizes]\n" + c.sizes + "\n"
		}
		_, v := decide(t, d.files(1))
		if !strings.HasPrefix(v.Next[0], c.first) {
			t.Errorf("%s, %q: first %q, want %q", c.model, c.sizes, v.Next[0], c.first)
		}
		if got := at(v.Next, "Consider parts passed with this gauge since its last good check as suspect") == 1; got != c.suspect {
			t.Errorf("%s, %q: %q", c.model, c.sizes, v.Next)
		}
	}
}

// Where the only cause is one person, what to do with that person comes first,
// and the parts in doubt are those that it passed.
func TestPeopleFirst(t *testing.T) {
	csv := "part,reference,A-1,A-2,A-3,B-1,B-2,B-3\n"
	for i := range 40 { // B accepts half of the bad parts, now and then
		ref, calls := 1, "1,1,1"
		if i < 20 {
			ref, calls = 0, []string{"0,1,0", "1,0,1", "1,1,0", "0,0,1"}[i%4]
		}
		csv += fmt.Sprintf("%d,%d,%d,%d,%d,%s\n", i+1, ref, ref, ref, ref, calls)
	}
	_, v := decide(t, calls(csv, ""))
	if got := found(v); got != "inconsistent:B" {
		t.Fatalf("causes %q", got)
	}
	if first, then := at(v.Next, "Go through the mixed parts with B"), at(v.Next, "Consider parts passed by B since the last good check as suspect, by your own rules."); first != 0 || then != 1 {
		t.Errorf("%q", v.Next)
	}
	// A gauge that all use is not one person's.
	_, v = decide(t, causeTest(t, "all inconsistent").files(1))
	for _, s := range v.Next {
		if strings.Contains(s, "parts passed by") && !strings.Contains(s, "by this inspection") {
			t.Errorf("%q", s)
		}
	}
}

// What would settle an open rejection is the parts, not the rate.
func TestOpenRejectionIsSettledByParts(t *testing.T) {
	v := manual(t, study.Settings{})
	if got := v.Next[len(v.Next)-1]; got != "To settle the rejection, which is open, add 6 bad parts like those of the study (miss rate of C)." {
		t.Errorf("%q", v.Next)
	}
}

// Four parts, none of them mixed, tell of no grey zone.
func TestFewPartsTellNoZone(t *testing.T) {
	for _, csv := range []string{
		"part,value,A-1,A-2\n1,8,1,1\n2,9.5,0,0\n3,10.5,1,1\n4,12,0,0\n",
		"part,value,A-1,A-2,B-1,B-2\n1,8,1,1,1,1\n2,9.9,0,0,0,0\n3,10.1,1,1,1,1\n4,12,0,0,0,0\n",
	} {
		_, v := decide(t, calls(csv, "lower = 5\nupper = 10\n"))
		for _, text := range v.texts() {
			if strings.Contains(text, "grey zone") {
				t.Errorf("%q", text)
			}
		}
	}
}

// Three wrong calls one way are too few to say that grades lean, four are not.
func TestFewGradesDoNotLean(t *testing.T) {
	csv := func(wrong int) string {
		out := "part,reference,A-1,A-2\n"
		for i := range 8 {
			call := "a"
			if i < wrong {
				call = "b"
			}
			out += string(rune('p'+i)) + ",a," + call + ",a\n"
		}
		return out
	}
	for wrong, want := range map[int]bool{1: false, 3: false, 4: true} {
		_, v := decide(t, calls(csv(wrong), "order = [\"a\", \"b\", \"c\"]\naccept = [\"a\"]\n"))
		if got := has(v.Causes, 0, codeGrades); got != want {
			t.Errorf("%d wrong: %v", wrong, v.Causes)
		}
	}
}

// A rejection that rests on a handful of bad parts, with nothing found to
// correct, asks for more of them; and what an acceptance lacks most is what the
// step asks for, bad parts before all others.
func TestFewBadParts(t *testing.T) {
	study := func(misses, alarms int) string {
		var b strings.Builder
		b.WriteString("part,reference,A-1,A-2\n")
		for p := range 200 {
			ref := btoi(p >= 6)
			first := ref
			if p < misses || p >= 6 && p < 6+alarms {
				first = 1 - ref
			}
			fmt.Fprintf(&b, "%d,%d,%d,%d\n", p, ref, first, ref)
		}
		return b.String()
	}
	_, v := decide(t, calls(study(1, 0), ""))
	if at(v.Next, "The rejection is open, and rests on 6 bad parts: repeat the study with more. It takes 59 bad parts") < 0 || at(v.Next, "After the correction") >= 0 {
		t.Errorf("%q", v.Next)
	}
	_, v = decide(t, calls(study(0, 1), ""))
	if at(v.Next, "To show that the miss rate of A") < 0 || !slices.ContainsFunc(append(v.Reasons, v.Carry...), func(s string) bool {
		return strings.Contains(s, "Furthest from being shown is that the miss rate of A")
	}) {
		t.Errorf("%q\n%q %q", v.Next, v.Reasons, v.Carry)
	}
}
