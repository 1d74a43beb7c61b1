package study

import (
	"fmt"
	"slices"
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
		{"usual words beside both lists", Settings{Accept: []string{"go"}, Reject: []string{"nogo"}}, "go nogo good bad", []string{"reject", "accept"}, []bool{false, true}, true, []agreement.Category{1, 0, 1, 0}},
		{"usual word that the other list claims", Settings{Accept: []string{"fine"}, Reject: []string{"dent", "ok"}}, "fine dent ok good", []string{"reject", "accept"}, []bool{false, true}, true, []agreement.Category{1, 0, 0, 1}},
		{"usual words beside reject alone", Settings{Reject: []string{"scrap"}}, "ok scrap good bad", []string{"reject", "accept"}, []bool{false, true}, true, []agreement.Category{1, 0, 1, 0}},
		{"usual words beside accept alone", Settings{Accept: []string{"ok"}}, "ok nok good bad", []string{"reject", "accept"}, []bool{false, true}, true, []agreement.Category{1, 0, 1, 0}},
		{"accept alone, one kind and usual words", Settings{Accept: []string{"fine"}}, "fine dent good bad", []string{"reject", "accept"}, []bool{false, true}, true, []agreement.Category{1, 0, 1, 0}},
		{"accept alone, kinds and usual words", Settings{Accept: []string{"fine"}}, "fine dent burr good bad nok", []string{"reject", "burr", "dent", "fine"}, []bool{false, false, false, true}, false, []agreement.Category{3, 2, 1, 3, 0, 0}},
		{"accept alone, codes of defects", Settings{Accept: []string{"0"}}, "0 1 2 3", []string{"1", "2", "3", "0"}, []bool{false, false, false, true}, false, []agreement.Category{3, 0, 1, 2}},
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

// What is noted of words that are not as the settings have it.
func TestWordNotes(t *testing.T) {
	for _, c := range []struct {
		name, in string
		settings Settings
		want     []Note
	}{
		{"nothing is rejected", "part,a-1\n1,ok\n", Settings{Reject: []string{"scrap"}},
			[]Note{{"unused_words", `The setting reject lists "scrap", which occurs nowhere; the table has ok.`}}},
		{"reject is misspelt", "part,reference,a-1\n1,ok,ok\n2,nogo,nogo\n", Settings{Accept: []string{"ok"}, Reject: []string{"noggo", "x"}},
			[]Note{{"unused_words", "The setting reject lists one of noggo and x, which occurs nowhere; did you mean nogo? the table has nogo and ok."}}},
		{"nothing is accepted", "part,a-1\n1,dent\n", Settings{Accept: []string{"fine"}, Reject: []string{"dent"}},
			[]Note{{"unused_words", `The setting accept lists "fine", which occurs nowhere; the table has dent.`}}},
		{"some do not occur", "part,a-1,a-2\n1,fine,dent\n", Settings{Accept: []string{"fine", "good"}, Reject: []string{"bad", "dent"}}, nil},
		{"one kind beside plain reject", "part,reference,a-1\n1,good,fine\n2,bad,dent\n", Settings{Accept: []string{"fine"}},
			[]Note{{"mixed_words", `"dent" is taken as reject, as is "bad". Where it is a kind of its own, the setting categories lists the kinds.`}}},
		{"kinds beside plain reject", "part,reference,a-1,a-2\n1,good,fine,burr\n2,bad,dent,nok\n", Settings{Accept: []string{"fine"}},
			[]Note{{"mixed_words", `"burr" and "dent" are kinds of bad parts, and each of "bad" and "nok" is plain reject, a category of its own: a kind does not agree with it. Where they mean the same, list them all by reject.`}}},
	} {
		notes := slices.DeleteFunc(read(t, c.in, c.settings).Notes, func(n Note) bool { return !strings.HasSuffix(n.Code, "_words") })
		if len(notes) == 0 {
			notes = nil
		}
		if d := cmp.Diff(c.want, notes); d != "" {
			t.Errorf("%s: %s", c.name, d)
		}
	}
}

func TestSettingNotes(t *testing.T) {
	const table = "part;value;a-1\n1;10,02;go\n2;10.5;go\n3;1;go\n"
	noted := func(in string, s Settings) (list []Note) {
		study := read(t, in, s)
		inChunks, err := Read(Source{Path: "-", Stdin: strings.NewReader(in), chunk: 16}, s)
		if err != nil || !slices.Equal(study.Notes, inChunks.Notes) {
			t.Errorf("in small chunks: %v %v", err, inChunks)
		}
		for _, n := range study.Notes {
			if n.Code != "no_limits" {
				list = append(list, n)
			}
		}
		return list
	}
	signs := func(comma string, at int, point string, at2 int) Note {
		return Note{"decimal_signs", fmt.Sprintf("The values have both decimal commas (%q on line %d) and points (%q on line %d); each is read as a decimal sign. Is none of them a separator of thousands?", comma, at, point, at2)}
	}
	for _, c := range []struct {
		name, in string
		settings Settings
		want     []Note
	}{
		{"both signs", table, Settings{}, []Note{signs("10,02", 2, "10.5", 3)}},
		{"both signs of one part", "part;value;appraiser;trial;call\n2;;a;1;go\n1;1.5;a;1;go\n1;1,5;a;2;go\n2;1.25;a;2;go\n", Settings{}, []Note{signs("1,5", 4, "1.5", 3)}},
		{"the first of each", "part;value;appraiser;trial;call\n9;;a;1;go\n3;0.5;a;1;go\n9;7.5;a;2;go\n1;1,5;a;1;go\n2;2,5;a;1;go\n", Settings{}, []Note{signs("1,5", 5, "0.5", 3)}},
		{"commas", strings.ReplaceAll(table, ".", ","), Settings{}, nil},
		{"points", strings.ReplaceAll(table, ",", "."), Settings{}, nil},
		{"ignore", "part,x,a-1\n1,2,go\n", Settings{Ignore: []string{"X", "nosuch", "prt"}}, []Note{
			{"unknown_ignore", `The setting ignore names the column "nosuch", which the table does not have.`},
			{"unknown_ignore", `The setting ignore names the column "prt", which the table does not have; did you mean part?`}}},
		{"sheet", "part,a-1\n1,go\n", Settings{Sheet: "x"}, []Note{
			{"no_sheet", `The setting sheet names "x", but the calls are text, not a workbook: it changes nothing.`}}},
	} {
		if d := cmp.Diff(c.want, noted(c.in, c.settings)); d != "" {
			t.Errorf("%s: %s", c.name, d)
		}
	}
}
