package judge_test

import (
	"math"
	"slices"
	"testing"
	"testing/fstest"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/judge"
	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

func run(t *testing.T, csv, toml string, pairing agreement.Pairing) *judge.Result {
	t.Helper()
	files := fstest.MapFS{"study.toml": {Data: []byte("calls = \"calls.csv\"\n" + toml)}, "calls.csv": {Data: []byte(csv)}}
	s, err := study.Read(study.Source{Path: "study.toml", FS: files}, study.Settings{})
	if err != nil {
		t.Fatal(err)
	}
	opt := agreement.DefaultOptions()
	opt.Pairing = pairing
	r, err := judge.Run(s, opt, signal.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// Counted by hand: in matched pairs A rejects and B accepts in 5 (parts 1, 2
// and 3), the reverse in 1 (part 4); part 6 lacks a call of B. The exact p of 1
// in 6 is 2·(1 + 6)/64 = 0.21875.
func TestLean(t *testing.T) {
	const csv = "part,A-1,A-2,B-1,B-2\n1,0,0,1,1\n2,0,0,1,1\n3,0,0,0,1\n4,1,0,0,0\n5,1,1,1,1\n6,0,0,,0\n"
	r := run(t, csv, "", agreement.Matched)
	l := r.Leans[0]
	byA, byB := l.Rejected()
	if l.Pairs() != 11 || byA != 8 || byB != 4 || l.OnlyA() != 5 || l.OnlyB() != 1 {
		t.Errorf("%d pairs, rejected %d and %d, only %d and %d", l.Pairs(), byA, byB, l.OnlyA(), l.OnlyB())
	}
	if math.Abs(l.Test.P-0.21875) > 1e-12 {
		t.Errorf("p %v", l.Test.P)
	}
	onlyA, onlyB := r.Parted(l)
	if !slices.Equal(onlyA, []int{0, 1, 2}) || !slices.Equal(onlyB, []int{3}) {
		t.Errorf("parts %v and %v", onlyA, onlyB)
	}
	// Every trial with every trial: part 3 in 2 of 4, part 4 in 2.
	l = run(t, csv, "", agreement.All).Leans[0]
	if l.Pairs() != 22 || l.OnlyA() != 10 || l.OnlyB() != 2 {
		t.Errorf("all pairs: %d, only %d and %d", l.Pairs(), l.OnlyA(), l.OnlyB())
	}
}

// Kinds of defect are all rejects; without accepting categories nobody rejects.
func TestLeanOfKinds(t *testing.T) {
	const csv = "part,A-1,B-1\n1,dent,fine\n2,dent,scratch\n3,fine,fine\n4,scratch,fine\n"
	const kinds = "categories = [\"fine\", \"dent\", \"scratch\"]\n"
	l := run(t, csv, kinds+"accept = [\"fine\"]\n", agreement.Matched).Leans[0]
	if byA, byB := l.Rejected(); byA != 3 || byB != 1 || l.OnlyA() != 2 || l.OnlyB() != 0 || l.Test.P != 0.5 {
		t.Errorf("rejected %d and %d: %v, %+v", byA, byB, l.Table, l.Test)
	}
	if got := run(t, csv, kinds, agreement.Matched).Leans; got != nil {
		t.Errorf("without accepting categories: %v", got)
	}
	if l := run(t, "part,A-1,B-1\n1,1,1\n2,0,0\n", "", agreement.Matched).Leans[0]; l.Test != nil {
		t.Errorf("two who never part have a test: %+v", l.Test)
	}
}
