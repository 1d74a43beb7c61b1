package study

import (
	"bytes"
	"slices"
	"strings"
	"testing"

	"samecall/agreement"
)

// A dash may be typed for a missing call. It is a reject only where it can be
// nothing else: beside plus, alone, or where a setting lists it.
func TestDash(t *testing.T) {
	const beside = ` may be meant as a missing call or as a reject: leave the field empty for a missing call, or `
	const expected = `, expected a call or reference, or an empty field where there is none; `
	for _, c := range []struct {
		name, in string
		settings Settings
		calls    []agreement.Category // of the first part; nil: a problem
		want     string
	}{
		{"plus among the calls", "part,a-1,a-2\n1,-,ok\n2,+,ok\n", Settings{}, []agreement.Category{0, 1}, ""},
		{"plus in the reference", "part,reference,a-1,a-2\n1,+,-,ok\n", Settings{}, []agreement.Category{0, 1}, ""},
		{"nothing else", "part,a-1,a-2\n1,-,\n", Settings{}, []agreement.Category{0}, ""},
		{"listed by reject", "part,a-1,a-2\n1,-,OK\n", Settings{Reject: []string{"-"}}, []agreement.Category{0, 1}, ""},
		{"listed by accept", "part,a-1,a-2\n1,-,dent\n", Settings{Accept: []string{"-"}}, []agreement.Category{1, 0}, ""},
		{"a grade", "part,a-1,a-2\n1,-,A\n", Settings{Order: []string{"A", "-"}}, []agreement.Category{1, 0}, ""},
		{"a kind", "part,a-1,a-2\n1,-,fine\n", Settings{Categories: []string{"fine", "dent", "-"}}, []agreement.Category{2, 0}, ""},
		{"plus beside a list", "part,a-1,a-2\n1,-,fine\n2,+,fine\n", Settings{Accept: []string{"fine"}}, []agreement.Category{0, 1}, ""},
		{"plus alone", "part,a-1,a-2\n1,+,nok\n", Settings{}, []agreement.Category{1, 0}, ""},

		{"wide", "part,a-1,a-2\n1,OK,NOK\n2,OK,-\n3,-,OK\n", Settings{}, nil,
			`c.csv:3:3: found "-" (2 times) in column 3 (a-2)` + expected + "a dash beside NOK and OK" + beside + "list it by reject (--reject -,NOK)"},
		{"long", "call,part,appraiser,trial\nok,1,a,1\n-,1,a,2\n", Settings{}, nil,
			`c.csv:3:1: found "-" in column 1 (call)` + expected + "a dash beside ok" + beside + "list it by reject (--reject -)"},
		{"reference", "part,reference,a-1,a-2\n1,good,go,go\n2,-,not ok,go\n", Settings{Reject: []string{"not ok"}}, nil,
			`c.csv:3:2: found "-" in column 2 (reference)` + expected + "a dash beside go, good and not ok" + beside + `list it by reject (--reject "-,not ok")`},
		{"both lists", "part,a-1,a-2\n1,in,out\n2,-,in\n", Settings{Accept: []string{"in"}, Reject: []string{"out"}}, nil,
			`c.csv:3:2: found "-" in column 2 (a-1)` + expected + "a dash beside in and out" + beside + "list it by reject (--reject -,out)"},
		{"accept alone", "part,a-1,a-2\n1,fine,dent\n2,-,burr\n", Settings{Accept: []string{"fine"}}, nil,
			`c.csv:3:2: found "-" in column 2 (a-1)` + expected + "a dash beside burr, dent and fine" + beside + "list it with all other words by categories"},
		{"grades", "part,a-1,a-2\n1,A,B\n2,-,A\n", Settings{Order: []string{"A", "B", "C"}}, nil,
			`c.csv:3:2: found "-" in column 2 (a-1)` + expected + "a dash beside A and B" + beside + "add it to order"},
		{"kinds", "part,a-1,a-2\n1,A,B\n2,–,A\n", Settings{Categories: []string{"A", "B", "C"}}, nil,
			`c.csv:3:2: found "–" in column 2 (a-1)` + expected + "a dash beside A and B" + beside + "add it to categories"},
		{"other words for nothing", "part,a-1,a-2\n1,fine,dent\n2,NA,NA\n3,fine,n/a\n", Settings{Accept: []string{"fine"}}, nil,
			`c.csv:3:2: found "NA" (2 times) in column 2 (a-1)` + expected + "such a word may be meant as a missing call: leave the field empty for a missing call, or list it by reject (--reject NA,dent)\n" +
				`c.csv:4:3: found "n/a" in column 3 (a-2)` + expected + "such a word may be meant as a missing call: leave the field empty for a missing call, or list it by reject (--reject n/a,dent)"},
	} {
		for _, chunk := range []int{16, 0} {
			s, err := Read(Source{Path: "-", Stdin: strings.NewReader(c.in), chunk: chunk}, c.settings)
			if c.calls == nil {
				if err == nil || strings.ReplaceAll(err.Error(), StdinName, "c.csv") != c.want {
					t.Errorf("%s, chunks of %d: %v\nwant %s", c.name, chunk, err, c.want)
				}
				continue
			}
			if err != nil {
				t.Errorf("%s: %v", c.name, err)
			} else if got := s.Ratings.Calls(0, 0); !slices.Equal(got, c.calls) {
				t.Errorf("%s: calls %v, want %v", c.name, got, c.calls)
			}
		}
	}
	data := workbook(t, map[string]any{"A1": "part", "B1": "a-1", "A2": 1, "B2": "ok", "A3": 2, "B3": "-"})
	_, err := Read(Source{Path: "-", Stdin: bytes.NewReader(data)}, Settings{Sheet: "Calls"})
	if err == nil || !strings.HasPrefix(err.Error(), `standard input:Calls!B3: found "-" in column 2 (a-1), expected a call or reference, or an empty field`) {
		t.Errorf("workbook: %v", err)
	}
}

// A setting is shown as it is typed in a shell.
func TestAsFlag(t *testing.T) {
	for want, words := range map[string][]string{
		"--ignore Remark":         {"Remark"},
		"--reject -,n.i.O.":       {"-", "n.i.O."},
		`--ignore "Shift (day)"`:  {"Shift (day)"},
		"--ignore 'a b,\"c,d\"'":  {"a b", "c,d"},
		"--ignore '$cost'":        {"$cost"},
		`--ignore "Prüfer,o'day"`: {"Prüfer", "o'day"},
	} {
		key := strings.Fields(want)[0][2:]
		if got := asFlag(key, words...); got != want {
			t.Errorf("%q: %s, want %s", words, got, want)
		}
	}
}
