package verdict

import (
	"fmt"
	"strings"
	"testing"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/judge"
	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

// One false alarm in 240 calls on good parts makes kappa between appraisers
// about 0, since nearly all calls are of one category: that must not reject
// what 239 right calls say.
func TestPrevalentCategoryDoesNotReject(t *testing.T) {
	var text strings.Builder
	text.WriteString("part,reference,a-1,a-2,b-1,b-2\n")
	for part := range 60 {
		first := "ok"
		if part == 7 {
			first = "nok"
		}
		fmt.Fprintf(&text, "%d,good,%s,ok,ok,ok\n", part, first)
	}
	s, err := study.Read(study.Source{Path: "-", Stdin: strings.NewReader(text.String())}, study.Settings{})
	if err != nil {
		t.Fatal(err)
	}
	r, err := judge.Run(s, agreement.DefaultOptions(), signal.Options{})
	if err != nil {
		t.Fatal(err)
	}
	v := Decide(r)
	if v.Between == nil || v.Between.Met != Reject {
		t.Fatalf("kappa between appraisers %+v: the study does not show what it is to show", v.Between)
	}
	for _, g := range v.grounds() {
		if g.c.between {
			t.Errorf("what does not count is told as a ground: %q", g.text())
		}
	}
	if v.Overall != NotShown { // there is no bad part
		t.Errorf("verdict %v, want not shown; reasons %q", v.Overall, v.Reasons)
	}
}

// A category that prevails in the calls of one appraiser is no excuse for
// appraisers who differ: A accepts nearly all, B half of it.
func TestPrevalenceOfOneAppraiserCounts(t *testing.T) {
	var text strings.Builder
	text.WriteString("part,a-1,a-2,b-1,b-2\n")
	for part := range 60 {
		first, other := "ok", "ok"
		if part == 7 {
			first = "nok"
		}
		if part%2 == 0 {
			other = "nok"
		}
		fmt.Fprintf(&text, "%d,%s,ok,%s,%[3]s\n", part, first, other)
	}
	r, v := decide(t, calls(text.String(), ""))
	if !r.Agreement.Within[0].Kappa.Prevalent {
		t.Fatal("no category prevails in the calls of a: the study does not show what it is to show")
	}
	if v.Overall != Reject || !strings.HasPrefix(v.Reasons[0], "Kappa between appraisers") {
		t.Errorf("%v, %q", v.Overall, v.Reasons)
	}
}
