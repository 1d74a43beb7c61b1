package study

import (
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"samecall/agreement"
)

// What the words of a table mean under the settings. Each word is the call on
// one part, in the order given.
func TestWords(t *testing.T) {
	const none = agreement.Missing
	for _, c := range []struct {
		name     string
		settings Settings
		words    string
		names    []string
		accept   []bool
		passFail bool
		calls    []agreement.Category
	}{
		{"usual words", Settings{}, "accept pass go ok good conforming yes 1 + GO reject fail nogo no-go nok ng bad nonconforming no 0 - NoGo",
			[]string{"reject", "accept"}, []bool{false, true}, true, []agreement.Category{1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0}},
		{"usual words, one of them", Settings{}, "go go", []string{"reject", "accept"}, []bool{false, true}, true, []agreement.Category{1, 1}},
		{"accept and reject", Settings{Accept: []string{"Blau", "0"}, Reject: []string{"Rot"}}, "blau rot 0 ROT", []string{"reject", "accept"}, []bool{false, true}, true, []agreement.Category{1, 0, 1, 0}},
		{"reject alone", Settings{Reject: []string{"ok"}}, "ok good", []string{"reject", "accept"}, []bool{false, true}, true, []agreement.Category{0, 1}},
		{"accept alone, one other word", Settings{Accept: []string{"fine"}}, "fine dent Dent", []string{"reject", "accept"}, []bool{false, true}, true, []agreement.Category{1, 0, 0}},
		{"accept alone, no other word", Settings{Accept: []string{"fine"}}, "fine", []string{"reject", "accept"}, []bool{false, true}, true, []agreement.Category{1}},
		{"accept alone, kinds", Settings{Accept: []string{"Fine", "ok"}}, "fine kind10 kind2 dent OK DENT", []string{"DENT", "kind2", "kind10", "Fine"}, []bool{false, false, false, true}, false, []agreement.Category{3, 2, 1, 0, 3, 0}},
		{"grades", Settings{Order: []string{"A", "B", "C"}, Accept: []string{"a", "b"}}, "a c", []string{"A", "B", "C"}, []bool{true, true, false}, false, []agreement.Category{0, 2}},
		{"grades without accept", Settings{Order: []string{"A", "B", "C"}}, "a c", []string{"A", "B", "C"}, nil, false, []agreement.Category{0, 2}},
		{"two grades", Settings{Order: []string{"Good", "Poor"}}, "good poor", []string{"Poor", "Good"}, []bool{false, true}, true, []agreement.Category{1, 0}},
		{"kinds", Settings{Categories: []string{"ok", "dent", "burr"}}, "ok burr", []string{"dent", "burr", "ok"}, []bool{false, false, true}, false, []agreement.Category{2, 1}},
		{"kinds with reject", Settings{Categories: []string{"w", "x", "y"}, Reject: []string{"x"}}, "w x y", []string{"x", "w", "y"}, []bool{false, true, true}, false, []agreement.Category{1, 0, 2}},
		{"one kind", Settings{Categories: []string{"seen"}}, "seen", []string{"seen"}, nil, false, []agreement.Category{0}},
		{"composed", Settings{Accept: []string{"e\u0301gal"}, Reject: []string{"non"}}, "\u00c9gal non", []string{"reject", "accept"}, []bool{false, true}, true, []agreement.Category{1, 0}},
	} {
		t.Run(c.name, func(t *testing.T) {
			words := strings.Fields(c.words)
			header, row := "part", "1"
			for i, w := range words {
				header += ",a-" + string(rune('1'+i%9)) + strings.Repeat("0", i/9)
				row += "," + w
			}
			s, err := Read(Source{Path: "-", Stdin: strings.NewReader(header + "\n" + row + "\n")}, c.settings)
			if err != nil {
				t.Fatal(err)
			}
			if d := cmp.Diff(c.names, s.Categories); d != "" {
				t.Errorf("categories: %s", d)
			}
			var accept []bool
			if s.Ratings.HasAccept() {
				for i := range s.Categories {
					accept = append(accept, s.Ratings.Accepts(agreement.Category(i)))
				}
			}
			if d := cmp.Diff(c.accept, accept); d != "" {
				t.Errorf("accept: %s", d)
			}
			if s.PassFail != c.passFail {
				t.Errorf("pass/fail %v", s.PassFail)
			}
			// The trials stand in the order of their numbers: 1 … 9, 10, 20 …
			if d := cmp.Diff(c.calls, s.Ratings.Row(0)); d != "" {
				t.Errorf("calls: %s", d)
			}
			if s.Ratings.Categories() != len(c.names) || none != 255 {
				t.Errorf("%d categories", s.Ratings.Categories())
			}
		})
	}
}

func TestTooManyCategories(t *testing.T) {
	var b strings.Builder
	b.WriteString("part,a-1\n")
	for i := range 300 {
		b.WriteString(strings.Repeat("x", i/26+1) + string(rune('a'+i%26)) + ",k" + strings.Repeat("y", i) + "\n")
	}
	_, err := Read(Source{Path: "-", Stdin: strings.NewReader(b.String())}, Settings{Accept: []string{"fine"}})
	if err == nil || !strings.Contains(err.Error(), "found 301 different calls") || !strings.Contains(err.Error(), "expected at most 254") {
		t.Errorf("%v", err)
	}
}
