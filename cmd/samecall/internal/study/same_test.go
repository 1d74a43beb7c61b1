package study

import (
	"bytes"
	"fmt"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"
	"unicode/utf8"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"github.com/xuri/excelize/v2"
	"golang.org/x/text/encoding"
	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"
	"golang.org/x/text/unicode/norm"
	"pgregory.net/rapid"

	"samecall/agreement"
)

// content is what a table says, before it is written in some form.
type content struct {
	parts      []string
	appraisers []string
	trials     [][]int           // numbers, of each appraiser
	calls      map[[3]int]string // part, appraiser, trial number
	reference  map[int]string    // part
	value      map[int]float64   // part
	bad        map[string]bool   // words of bad parts
	settings   Settings
}

// form is one way to write a table.
type form struct {
	long, workbook bool
	sep            byte
	decimalComma   bool
	encoding       encoding.Encoding // nil: UTF-8
	bom            string
	eol            string
	quoteAll       bool
	clutter        bool   // comments and blank lines between the rows
	join           string // between appraiser and trial
	rows, columns  []int  // ranks that shuffle them
	chunk          int
	sparseRefs     bool // references and values on one row of each part only
}

func (f form) String() string {
	return fmt.Sprintf("long %v workbook %v sep %q encoding %v bom %q eol %q quoteAll %v clutter %v chunk %d", f.long, f.workbook, f.sep, f.encoding, f.bom, f.eol, f.quoteAll, f.clutter, f.chunk)
}

// table returns header and rows.
func (c content) table(f form) [][]string {
	number := func(p int) string {
		x, ok := c.value[p]
		if !ok {
			return ""
		}
		s := strconv.FormatFloat(x, 'f', -1, 64)
		if f.decimalComma {
			s = strings.Replace(s, ".", ",", 1)
		}
		return s
	}
	var rows [][]string
	if f.long {
		rows = append(rows, []string{"part", "Appraiser", " trial", "CALL", "reference", "value"})
		for p, part := range c.parts {
			first := true
			for a, appraiser := range c.appraisers {
				for _, t := range c.trials[a] {
					ref, val := c.reference[p], number(p)
					if f.sparseRefs && !first {
						ref, val = "", ""
					}
					first = false
					rows = append(rows, []string{part, appraiser, strconv.Itoa(t), c.calls[[3]int{p, a, t}], ref, val})
				}
			}
		}
	} else {
		header := []string{"Part", "reference ", "value"}
		for a, appraiser := range c.appraisers {
			for _, t := range c.trials[a] {
				header = append(header, appraiser+f.join+strconv.Itoa(t))
			}
		}
		rows = append(rows, header)
		for p, part := range c.parts {
			row := []string{part, c.reference[p], number(p)}
			for a := range c.appraisers {
				for _, t := range c.trials[a] {
					row = append(row, c.calls[[3]int{p, a, t}])
				}
			}
			rows = append(rows, row)
		}
	}
	shuffle(rows[1:], f.rows)
	for _, r := range rows {
		shuffle(r, f.columns)
	}
	return rows
}

// shuffle reorders a list by ranks, which repeat as needed.
func shuffle[T any](list []T, ranks []int) {
	if len(ranks) == 0 {
		return
	}
	order := make([]int, len(list))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(i, j int) int { return ranks[i%len(ranks)] - ranks[j%len(ranks)] })
	was := slices.Clone(list)
	for i, j := range order {
		list[i] = was[j]
	}
}

// write returns the bytes of the table in one form; ok is false if the form
// cannot hold it.
func (c content) write(t *rapid.T, f form) (data []byte, ok bool) {
	rows := c.table(f)
	if f.workbook {
		x := excelize.NewFile()
		defer x.Close()
		for i, row := range rows {
			for j, cell := range row {
				name, _ := excelize.CoordinatesToCellName(j+1, i+1)
				var v any = cell
				if n, err := strconv.ParseFloat(cell, 64); err == nil && strconv.FormatFloat(n, 'f', -1, 64) == cell {
					v = n
				}
				if cell == "" {
					continue
				}
				if err := x.SetCellValue("Sheet1", name, v); err != nil {
					t.Fatal(err)
				}
			}
		}
		var b bytes.Buffer
		if err := x.Write(&b); err != nil {
			t.Fatal(err)
		}
		return b.Bytes(), true
	}
	var b strings.Builder
	for i, row := range rows {
		if f.clutter && i%3 == 0 {
			b.WriteString("# a comment, with; some\tseparators" + f.eol + f.eol + "  " + f.eol + strings.Repeat(string(f.sep), len(row)-1) + f.eol)
		}
		for j, cell := range row {
			if j > 0 {
				b.WriteByte(f.sep)
			}
			if f.quoteAll || strings.ContainsAny(cell, "\"\n"+string(f.sep)) || strings.HasPrefix(cell, "#") {
				b.WriteString(`"` + strings.ReplaceAll(cell, `"`, `""`) + `"`)
			} else {
				b.WriteString(cell)
			}
		}
		if i < len(rows)-1 || f.clutter {
			b.WriteString(f.eol)
		}
	}
	text := b.String()
	if f.encoding == nil {
		return []byte(f.bom + text), true
	}
	data, err := f.encoding.NewEncoder().Bytes([]byte(text))
	if err != nil {
		return nil, false
	}
	// Bytes of Windows-1252 may look like UTF-8; the reader then takes them so.
	if i := beyondASCII(data); f.encoding == charmap.Windows1252 && i >= 0 && startsUTF8(data[i:]) {
		return nil, false
	}
	return data, true
}

func drawForm(t *rapid.T) form {
	f := form{
		long:       rapid.Bool().Draw(t, "long"),
		workbook:   rapid.IntRange(0, 5).Draw(t, "workbook") == 0,
		sep:        rapid.SampledFrom([]byte(",;\t")).Draw(t, "sep"),
		eol:        rapid.SampledFrom([]string{"\n", "\r\n", "\r"}).Draw(t, "eol"),
		quoteAll:   rapid.Bool().Draw(t, "quoteAll"),
		clutter:    rapid.Bool().Draw(t, "clutter"),
		join:       rapid.SampledFrom([]string{"-", "_", ".", ":", "/", " ", " - "}).Draw(t, "join"),
		rows:       rapid.SliceOfN(rapid.IntRange(0, 9), 0, 7).Draw(t, "rows"),
		columns:    rapid.SliceOfN(rapid.IntRange(0, 9), 0, 7).Draw(t, "columns"),
		chunk:      rapid.SampledFrom([]int{16, 40, 100, chunkSize}).Draw(t, "chunk"),
		sparseRefs: rapid.Bool().Draw(t, "sparseRefs"),
	}
	f.decimalComma = f.sep != ',' && rapid.Bool().Draw(t, "decimalComma")
	switch rapid.IntRange(0, 5).Draw(t, "encoding") {
	case 0:
		f.bom = "\ufeff"
	case 1:
		f.encoding = unicode.UTF16(unicode.LittleEndian, unicode.UseBOM)
	case 2:
		f.encoding = unicode.UTF16(unicode.BigEndian, unicode.UseBOM)
	case 3:
		f.encoding = charmap.Windows1252
	}
	return f
}

func drawContent(t *rapid.T) content {
	letter := rapid.SampledFrom([]rune("aAbB019 -_.:/,;\"'#éÄ🔩=+"))
	name := rapid.Custom(func(t *rapid.T) string {
		s := strings.TrimSpace(norm.NFC.String(string(rapid.SliceOfN(letter, 1, 6).Draw(t, "name"))))
		if s == "" {
			s = "x"
		}
		return s
	})
	c := content{calls: make(map[[3]int]string), reference: make(map[int]string), value: make(map[int]float64)}
	c.parts = rapid.SliceOfNDistinct(name, 1, 8, rapid.ID[string]).Draw(t, "parts")
	c.appraisers = rapid.SliceOfNDistinct(name, 1, 4, func(s string) string {
		// An appraiser's name that ends in a separator is not told from the
		// separator in the header of a wide table.
		return s
	}).Filter(func(list []string) bool {
		return !slices.ContainsFunc(list, func(s string) bool { return strings.ContainsAny(s[len(s)-1:], "-_.:/") })
	}).Draw(t, "appraisers")
	words := []string{"go", "No-Go", "PASS"}
	c.bad = map[string]bool{"No-Go": true}
	if rapid.Bool().Draw(t, "kinds") {
		words = []string{"fine", "Scratch", "dent", "burr"}
		c.bad = map[string]bool{"Scratch": true, "dent": true, "burr": true}
		c.settings.Categories = []string{"burr", "fine", "scratch", "dent"}
		c.settings.Accept = []string{"Fine"}
	}
	word := rapid.SampledFrom(words)
	for a := range c.appraisers {
		trials := rapid.SliceOfNDistinct(rapid.IntRange(1, 12), 1, 3, rapid.ID[int]).Draw(t, "trials")
		c.trials = append(c.trials, trials)
		for _, n := range trials {
			called := false
			for p := range c.parts {
				if last := p == len(c.parts)-1; rapid.IntRange(0, 9).Draw(t, "called") > 1 || last && !called {
					c.calls[[3]int{p, a, n}] = word.Draw(t, "call")
					called = true
				}
			}
		}
	}
	for p := range c.parts {
		if rapid.Bool().Draw(t, "hasReference") {
			c.reference[p] = word.Draw(t, "reference")
		}
		if rapid.Bool().Draw(t, "hasValue") {
			c.value[p] = float64(rapid.IntRange(-2000, 20000).Draw(t, "value")) / 1000
		}
	}
	return c
}

var sameStudy = cmp.Options{
	cmp.AllowUnexported(agreement.Ratings{}),
	cmpopts.IgnoreFields(Study{}, "Inputs"),
	cmpopts.EquateEmpty(),
}

func (c content) read(data []byte, chunk int) (*Study, error) {
	return Read(Source{Path: "-", Stdin: bytes.NewReader(data), chunk: chunk}, c.settings)
}

// placeInNote is the place of something in the file, which each form has
// elsewhere.
var placeInNote = regexp.MustCompile(`\((line \d+|cell Sheet1![A-Z]+\d+)\)`)

var notesWithoutPlace = cmp.Transformer("withoutPlace", func(n Note) [2]string {
	return [2]string{n.Code, placeInNote.ReplaceAllString(n.Text, "()")}
})

// A study is the same whatever its file looks like, and it says what was
// written.
func TestSameInEveryForm(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := drawContent(t)
		plain := form{sep: ';', eol: "\n", join: "-", chunk: chunkSize}
		data, _ := c.write(t, plain)
		want, err := c.read(data, plain.chunk)
		if err != nil {
			t.Fatalf("%v\n%s", err, data)
		}
		c.compare(t, want)
		f := drawForm(t)
		data, ok := c.write(t, f)
		if !ok {
			t.Skip("not in this encoding")
		}
		got, err := c.read(data, f.chunk)
		if err != nil {
			t.Fatalf("%v: %v\n%s", f, err, data)
		}
		if d := cmp.Diff(want, got, sameStudy, notesWithoutPlace); d != "" {
			t.Fatalf("%v:\n%s\n%q", f, d, data)
		}
	})
}

// compare checks a study against what was written.
func (c content) compare(t *rapid.T, s *Study) {
	if len(s.Parts) != len(c.parts) || len(s.Appraisers) != len(c.appraisers) {
		t.Fatalf("parts %q appraisers %q, want %q and %q", s.Parts, s.Appraisers, c.parts, c.appraisers)
	}
	category := func(word string) agreement.Category {
		if word == "" {
			return agreement.Missing
		}
		if c.settings.Categories != nil {
			return agreement.Category(slices.IndexFunc(s.Categories, func(n string) bool { return strings.EqualFold(n, word) }))
		}
		return agreement.Category(1 - btoi(c.bad[word]))
	}
	for p, part := range c.parts {
		i := slices.Index(s.Parts, part)
		if i < 0 {
			t.Fatalf("no part %q in %q", part, s.Parts)
		}
		for a, appraiser := range c.appraisers {
			j := slices.Index(s.Appraisers, appraiser)
			if j < 0 {
				t.Fatalf("no appraiser %q in %q", appraiser, s.Appraisers)
			}
			if !slices.IsSorted(s.TrialNames[j]) || len(s.TrialNames[j]) != len(c.trials[a]) {
				t.Fatalf("trials %v of %v", s.TrialNames[j], c.trials[a])
			}
			for _, n := range c.trials[a] {
				k := slices.Index(s.TrialNames[j], n)
				if got, want := s.Ratings.Calls(i, j)[k], category(c.calls[[3]int{p, a, n}]); got != want {
					t.Fatalf("part %q appraiser %q trial %d: %d, want %d", part, appraiser, n, got, want)
				}
			}
		}
		if got, want := s.Ratings.Reference(i), category(c.reference[p]); got != want {
			t.Fatalf("part %q: reference %d, want %d", part, got, want)
		}
		x, has := c.value[p]
		if s.Values == nil {
			if has {
				t.Fatal("no values")
			}
			continue
		}
		if s.HasValue[i] != has || s.Values[i] != x {
			t.Fatalf("part %q: value %v %v, want %v %v", part, s.Values[i], s.HasValue[i], x, has)
		}
	}
	for c, name := range s.Categories {
		if !utf8.ValidString(name) || s.Ratings.HasAccept() && s.Ratings.Accepts(agreement.Category(c)) != (name == "accept" || name == "fine") {
			t.Fatalf("category %q", name)
		}
	}
}
