package study

import (
	"fmt"
	"strings"
	"testing"
)

// Names cannot write into an error what is not the program's: control
// characters and marks of direction are shown as such, and no name is endless.
func TestNamesInErrors(t *testing.T) {
	bad := "a\u202eb\x1b[31m"
	long := strings.Repeat("n", 5000)
	for name, in := range map[string]string{
		"a call twice":          "part,appraiser,trial,call\n1," + bad + ",1,go\n1," + bad + ",1,go\n",
		"a call twice, long":    "part,appraiser,trial,call\n1," + long + ",1,go\n1," + long + ",1,go\n",
		"unknown word":          "part," + bad + "-1\n1,maybe\n",
		"unknown word, long":    "part," + long + "-1\n1,maybe\n",
		"unknown column":        "part,appraiser,trial,call," + bad + "\n1,a,1,go,x\n",
		"unknown column, long":  "part,appraiser,trial,call," + long + "\n1,a,1,go,x\n",
		"no trial number":       "part," + bad + "\n1,go\n",
		"no trial number, long": "part," + long + "\n1,go\n",
		"words beside a dash":   "part,a-1,a-2\n1,go," + bad + "\n2,-," + long + "\n",
		"silent":                "part,a-1," + long + "-1\n1,go,\n",
	} {
		_, err := Read(Source{Path: "-", Stdin: strings.NewReader(in)}, Settings{})
		if err == nil {
			t.Errorf("%s: no error", name)
			continue
		}
		for line := range strings.Lines(err.Error()) {
			if strings.ContainsAny(line, "\u202e\x1b") || len(line) > 1000 {
				t.Errorf("%s: %d bytes: %.300q", name, len(line), line)
			}
		}
	}
	for _, c := range []struct {
		in       string
		settings Settings
	}{
		{"part," + bad + "-1," + bad + "-2\n1,go,\n", Settings{}},
		{"part,a-1\n1," + bad + "\n", Settings{Accept: []string{bad}, Reject: []string{"x"}}},
	} {
		s := read(t, c.in, c.settings)
		for _, n := range s.Notes {
			if strings.ContainsAny(n.Text, "\u202e\x1b") {
				t.Errorf("note %q", n.Text)
			}
		}
		if len(s.Notes) == 0 {
			t.Errorf("%q: no note", c.in)
		}
	}
}

// Swapped columns make thousands of appraisers, of whom each pair would be
// compared. As many as there are parts, or some hundreds, are believed.
func TestCrowd(t *testing.T) {
	crowd := func(appraisers, parts int) string {
		var b strings.Builder
		b.WriteString("part,appraiser,trial,call\n")
		for a := range appraisers {
			for p := range parts {
				fmt.Fprintf(&b, "p%d,a%d,1,go\n", p, a)
			}
		}
		return b.String()
	}
	_, err := Read(Source{Path: "-", Stdin: strings.NewReader(crowd(301, 3))}, Settings{})
	if err == nil || err.Error() != "standard input:1: found 301 appraisers on 3 parts, expected no more appraisers than parts, or at most 300; are the columns part and appraiser swapped?" {
		t.Errorf("%v", err)
	}
	for _, c := range [][2]int{{200, 50}, {300, 3}, {301, 301}} {
		if s := read(t, crowd(c[0], c[1]), Settings{}); len(s.Appraisers) != c[0] {
			t.Errorf("%d appraisers of %d", len(s.Appraisers), c[0])
		}
	}
}

// What text a table may be: one encoding throughout, no NUL, a separator that
// is named.
func TestTexts(t *testing.T) {
	many := "part,a-1\n" + numbered(2000, "go")
	lines := strings.Count(many, "\n")
	for name, c := range map[string]struct{ in, want string }{
		"sep=TAB":          {"sep=\t\npart\ta-1\n1\tgo\n", ""},
		"sep=; and spaces": {" SEP=; \npart;a-1\n1;go\n", ""},
		"NUL late": {many + "x\x00,go\n", fmt.Sprintf(
			"standard input:%d: found the byte 0x0, expected text; the file is damaged, or no table of calls; save it again as CSV", lines+1)},
		"UTF-8 behind Latin-1": {"part,a-1\nn\xe4he,go\nn\xc3\xa4he,go\n",
			"standard input:3: found the bytes 0xc3a4, a character in UTF-8, expected Windows-1252, as the text before is; save the file in one encoding, UTF-8 at best"},
		"UTF-8 far behind Latin-1": {"part,a-1\nn\xe4he,go\n" + numbered(2000, "go") + "\xd0\x9f\xd1\x80,go\n",
			"standard input:2003: found the bytes 0xd09f, a character in UTF-8, expected Windows-1252, as the text before is; save the file in one encoding, UTF-8 at best"},
		"Latin-1 that looks like UTF-8": {"part,a-1\n\xabn\xe4he\xbb,go\n\xabCAF\xc9\xbb,go\n", ""},
		"1.0 for 1":                     {"part,a-1,a-2\n1,1.0,1\n2,0.0,0\n", ""},
		"a true minus":                  {"part,value,a-1\n1,−1.5,go\n2,-2e−1,go\n", ""},
	} {
		for _, chunk := range []int{0, 16} {
			s, err := Read(Source{Path: "-", Stdin: strings.NewReader(c.in), chunk: chunk}, Settings{})
			switch {
			case c.want == "" && err != nil, c.want != "" && (err == nil || err.Error() != c.want):
				t.Errorf("%s, chunks of %d: %v", name, chunk, err)
			case name == "a true minus" && (s.Values[0] != -1.5 || s.Values[1] != -0.2):
				t.Errorf("%s: %v", name, s.Values)
			case name == "1.0 for 1" && (s.Ratings.Calls(0, 0)[0] != 1 || s.Ratings.Calls(1, 0)[0] != 0):
				t.Errorf("%s: %v", name, s.Ratings.Row(0))
			}
		}
	}
	if _, err := ReadValues(small("sep=\t\nx\ty\n1\t2\n"), "", "y"); err != nil {
		t.Errorf("small table: %v", err)
	}
	_, err := ReadShort(small("value,accepted,trials\n1,1,1000000000000\n"), "", nil)
	if err == nil || err.Error() != "t.csv:2:3: found 1000000000000, expected a whole number of at most 1000000000 in column trials; the number is too large" {
		t.Errorf("%v", err)
	}
}
