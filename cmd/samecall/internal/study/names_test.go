package study

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"slices"
	"strings"
	"testing"
)

func TestNaturalOrder(t *testing.T) {
	want := []string{"", "-1", "1", "01", "001", "2", "9", "10", "10b", "123456789", "1234567890", "A", "a", "A1", "a1", "a01", "a2", "B", "b10", "part 2 b", "part 10 a", "é", "🔩"}
	got := slices.Clone(want)
	slices.Reverse(got)
	slices.SortFunc(got, compareNatural)
	// Ties of the key are decided by bytes.
	want = []string{"", "-1", "001", "01", "1", "2", "9", "10", "10b", "123456789", "1234567890", "A", "a", "A1", "a01", "a1", "a2", "B", "b10", "part 2 b", "part 10 a", "é", "🔩"}
	if !slices.Equal(got, want) {
		t.Errorf("%q\nwant %q", got, want)
	}
	list := sortNatural(len(want), func(i uint32) string { return want[len(want)-1-int(i)] })
	for i, k := range list {
		if name := want[len(want)-1-int(k.id)]; name != want[i] {
			t.Errorf("place %d: %q, want %q", i, name, want[i])
		}
	}
}

func FuzzNaturalOrder(f *testing.F) {
	f.Add("a1", "a01", "A1")
	f.Add("part 2", "part 10", "part-2")
	f.Add(strings.Repeat("9", 300), strings.Repeat("9", 299)+"8", "\xff0")
	f.Fuzz(func(t *testing.T, a, b, c string) {
		ab, ba := compareNatural(a, b), compareNatural(b, a)
		if ab != -ba || (ab == 0) != (a == b) {
			t.Fatalf("%q %q: %d and %d", a, b, ab, ba)
		}
		if ab < 0 && compareNatural(b, c) < 0 && compareNatural(a, c) >= 0 {
			t.Fatalf("%q < %q < %q, but not %q < %q", a, b, c, a, c)
		}
	})
}

func TestParseNumber(t *testing.T) {
	for _, c := range []struct {
		in    string
		comma bool
		want  float64
		err   error
	}{
		{"12.004", false, 12.004, nil}, {"12,004", true, 12.004, nil}, {"12.004", true, 12.004, nil}, {"-1e-3", false, -0.001, nil},
		{"+5", false, 5, nil}, {".5", false, 0.5, nil}, {"1.1000000000000001", false, 1.1, nil},
		{"12,004", false, 0, errComma}, {"1.234,5", true, 0, errThousands}, {"1,234,567", false, 0, errThousands}, {"1,234.5", true, 0, errThousands},
		{"", false, 0, errNotNumber}, {"1.2.3", false, 0, errNotNumber}, {"Inf", false, 0, errNotNumber}, {"0x1p4", false, 0, errNotNumber},
		{"1_000", false, 0, errNotNumber}, {"5 mm", false, 0, errNotNumber}, {"--1", false, 0, errNotNumber}, {"1e400", false, 0, errTooLarge}, {"e", false, 0, errNotNumber},
	} {
		got, err := parseNumber([]byte(c.in), c.comma)
		if got != c.want || err != c.err {
			t.Errorf("%q: %v, %v; want %v, %v", c.in, got, err, c.want, c.err)
		}
	}
	if x, err := parseNumber([]byte("-0"), false); err != nil || math.Signbit(x) {
		t.Errorf("-0: %v, %v", x, err)
	}
}

func TestWholeNumber(t *testing.T) {
	for _, c := range []struct {
		in   string
		want int
	}{{"1", 1}, {"9", 9}, {"10", 10}, {"007", 7}, {"1.0", 1}, {"3.000", 3}, {"1000000", 1000000},
		{"", 0}, {"0", 0}, {"00", 0}, {"-1", 0}, {"1.", 0}, {"1.5", 0}, {"1000001", 0}, {"99999999999999999999999", 0}, {"1e2", 0}, {"١", 0}} {
		got, ok := wholeNumber([]byte(c.in))
		if ok != (c.want > 0) || ok && got != c.want {
			t.Errorf("%q: %d %v, want %d", c.in, got, ok, c.want)
		}
	}
}

func TestSplitTrial(t *testing.T) {
	for _, c := range []struct {
		in, appraiser string
		trial         int
	}{
		{"early-1", "early", 1}, {"Line 2-1", "Line 2", 1}, {"Line 2", "Line", 2}, {"a_12", "a", 12}, {"a.3", "a", 3}, {"a:3", "a", 3}, {"a/3", "a", 3},
		{"a - 3", "a", 3}, {"a--3", "a-", 3}, {"A-01", "A", 1}, {"1-2", "1", 2}, {"\u00e9-1", "\u00e9", 1}, {"e\u0301-1", "\u00e9", 1}, {"a-0", "a", 0},
		{"a1", "", -1}, {"1", "", -1}, {"-1", "", -1}, {"a-", "", -1}, {"", "", -1}, {" 1", "", -1},
	} {
		appraiser, trial, ok := splitTrial(c.in)
		if ok != (c.trial >= 0) || ok && (appraiser != c.appraiser || trial != c.trial) {
			t.Errorf("%q: %q %d %v", c.in, appraiser, trial, ok)
		}
	}
}

// The direct split and encoding/csv give the same rows.
func TestDirectIsCSV(t *testing.T) {
	for _, text := range []string{"", "\n", "a", "a\n", "a,b\n\n,\n", "#x\na,#b\n", "a\r\nb\r\n", " a ,b\t\n", "a,b,c,d,e,f,g,h,i,j,k\nlonger than eight bytes,\n", "é,🔩\n"} {
		sameRows(t, []byte(text))
	}
}

func FuzzDirectIsCSV(f *testing.F) {
	f.Add([]byte("part,a-1\n1,go\n"))
	f.Add([]byte("#c\r\n\r\n a ;b\n"))
	f.Fuzz(sameRows)
}

// sameRows reads a text as a wide table below its header, both ways.
func sameRows(t *testing.T, text []byte) {
	if bytes.IndexByte(text, '"') >= 0 {
		t.Skip()
	}
	text = bytes.Clone(text)
	endLines(text, true)
	for _, comma := range []byte(",;\t") {
		var dumps [2]string
		for i := range dumps {
			l, problems := readHeader([]string{"part", "a-1", "a-2", "value"}, nil, "")
			if len(problems) > 0 {
				t.Fatal(problems)
			}
			b := newBuilder(l, false, true)
			if i == 0 {
				b.direct(chunk{bytes.Clone(text), 7}, comma)
			} else if err := b.quoted(bytes.NewReader(text), 7, comma); err != io.EOF {
				t.Fatal(err)
			}
			dumps[i] = dump(b)
		}
		if dumps[0] != dumps[1] {
			t.Fatalf("%q by %q: directly\n%s\nby encoding/csv\n%s", text, comma, dumps[0], dumps[1])
		}
	}
}

// dump writes down all that a builder took.
func dump(b *builder) string {
	var s strings.Builder
	for id := range b.parts.n {
		e := b.parts.entry(id)
		fmt.Fprintf(&s, "part %q value %q line %d\n", b.parts.name(e), b.parts.value(e), b.line(e.row))
	}
	b.eachRecord(func(row uint32, r record) {
		word := ""
		if r.word > 0 {
			word = b.words.list[r.word-1]
		}
		fmt.Fprintf(&s, "line %d part %d column %d %q\n", b.line(row), r.part, r.column, word)
	})
	fmt.Fprintln(&s, b.doubled, b.problems, b.more)
	return s.String()
}

// Names that are alike but for leading zeros are noted; a zero behind a decimal
// point is no leading one.
func TestAlikeParts(t *testing.T) {
	for csv, want := range map[string]int{
		"part,a-1\nP7,go\nP07,go\n": 1, "part,a-1\nP10.05,go\nP10.5,go\n": 0, "part,a-1\nP10.5,go\np10.5,go\n": 1,
		"part,a-1\n1.50,go\n1.5,go\n": 0, "part,a-1\nA.05,go\nA.5,go\n": 1, "part,a-1\n01.05,go\n1.05,go\n": 1,
		"part,a-1\n1.2.05,go\n1.2.5,go\n": 0, "part,a-1\n1.2.5x07,go\n1.2.5x7,go\n": 1, "part,a-1\n1.23.4,go\n1.2.34,go\n": 0,
		"part,st 1.05-1,st 1.5-1\n1,go,go\n": 0, "part,st 5-1,st 05-1\n1,go,go\n": 1,
	} {
		s, err := Read(Source{Path: "-", Stdin: strings.NewReader(csv)}, Settings{})
		if err != nil {
			t.Fatal(err)
		}
		if len(s.Notes) != want {
			t.Errorf("%q: %+v", csv, s.Notes)
		}
	}
}
