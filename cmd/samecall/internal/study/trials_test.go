package study

import (
	"os"
	"strings"
	"testing"
)

// renumbered is the study of the manual with other names in its header.
func renumbered(t *testing.T, columns string) *Study {
	t.Helper()
	b, err := os.ReadFile("../../../../testdata/reference/msa-manual-50x3x3.csv")
	if err != nil {
		t.Fatal(err)
	}
	const was = "A-1,A-2,A-3,B-1,B-2,B-3,C-1,C-2,C-3"
	if !strings.Contains(string(b), was) {
		t.Fatal("the columns of the study are not as expected")
	}
	return read(t, strings.Replace(string(b), was, columns, 1), Settings{})
}

// Trials of two appraisers are matched by number: where appraisers number them
// differently, a study is not balanced, and what is lost is said.
func TestUnmatchedTrials(t *testing.T) {
	const way = " pairs of calls are lost to the kappas of each two. Number the trials of every appraiser alike, or compare each trial with each: judge --pairing all."
	for _, c := range []struct {
		columns, want string
		balanced      bool
	}{
		{"A-1,A-2,A-3,B-1,B-2,B-3,C-1,C-2,C-3", "", true},
		{"A-4,A-5,A-9,B-4,B-5,B-9,C-9,C-5,C-4", "", true},
		{"A-1,A-2,A-3,B-4,B-5,B-6,C-7,C-8,C-9", "A 1–3; B 4–6; C 7–9. The trials of two are matched by number, and so 450 of 450" + way, false},
		{"A-1,A-2,A-4,B-1,B-2,B-3,C-1,C-2,C-3", "A 1, 2, 4; B and C 1–3. The trials of two are matched by number, and so 100 of 450" + way, false},
		// Fewer trials with numbers that the others have: nothing is lost.
		{"A-1,A-3,B-1,B-2,B-3,B-4,C-1,C-3,C-4", "", false},
		{"A-1,B-2,C-1,C-2,C-3,C-4,C-5,C-6,C-7", "A 1; B 2; C 1–7. The trials of two are matched by number, and so 50 of 150" + way, false},
	} {
		s := renumbered(t, c.columns)
		if got := s.Summary().Balanced; got != c.balanced {
			t.Errorf("%s: balanced %v", c.columns, got)
		}
		if c.want != "" {
			c.want = "Appraisers number their trials differently: " + c.want
		}
		n, ok := s.UnmatchedTrials()
		if n.Text != c.want || ok != (c.want != "") || ok && n.Code != "unmatched_trials" {
			t.Errorf("%s:\n%q\nwant\n%q", c.columns, n.Text, c.want)
		}
	}
}

// Calls that are missing make no pair either way.
func TestUnmatchedTrialsOfMissingCalls(t *testing.T) {
	s := read(t, "part,a-1,a-2,b-2,b-3\n1,go,go,,go\n2,go,,go,go\n3,no,no,no,no\n", Settings{})
	// In place 1 and 3, a-1 with b-2 makes two pairs, and a-2 with b-3 two; by
	// number, a-2 with b-2 makes one.
	if n, _ := s.UnmatchedTrials(); !strings.Contains(n.Text, "so 3 of 4 pairs") {
		t.Error(n.Text)
	}
	s = read(t, "part,a-1,a-2,b-2,b-3\n1,,go,go,\n2,no,,,go\n3,,go,go,\n", Settings{})
	if n, ok := s.UnmatchedTrials(); ok {
		t.Error(n.Text)
	}
}
