package report_test

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"encoding/xml"
	"errors"
	"io"
	"slices"
	"strconv"
	"strings"
	"testing"
	"unicode"

	"github.com/xuri/excelize/v2"
	"github.com/yuin/goldmark"
	"github.com/yuin/goldmark/extension"
	markup "github.com/yuin/goldmark/renderer/html"
	"golang.org/x/net/html"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/report"
)

// output writes one output of a record.
func output(t *testing.T, r *report.Record, write func(io.Writer, *report.Record) error) []byte {
	t.Helper()
	var out bytes.Buffer
	if err := write(&out, r); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

// names are the appraisers of a record as they are read.
func names(r *report.Record) []string {
	var out []string
	for _, n := range r.Study.Appraisers {
		out = append(out, format.Plain(n))
	}
	return out
}

// steers reports whether a character moves a cursor or turns the direction of
// what follows.
func steers(r rune) bool {
	return r != '\n' && unicode.IsControl(r) || r >= '\u202a' && r <= '\u202e' || r >= '\u2066' && r <= '\u2069' || r == '\u2028' || r == '\u2029'
}

func noSteering(t *testing.T, out string) {
	t.Helper()
	if i := strings.IndexFunc(out, steers); i >= 0 {
		t.Errorf("%q steers what reads it", out[max(0, i-20):min(len(out), i+20)])
	}
}

// inXML is a text as it may stand in XML, which lacks two characters.
func inXML(s string) string {
	return strings.NewReplacer("\ufffe", "\ufffd", "\uffff", "\ufffd").Replace(s)
}

// elements walks all elements of a tree.
func elements(n *html.Node, see func(*html.Node)) {
	if n.Type == html.ElementNode {
		see(n)
	}
	for c := n.FirstChild; c != nil; c = c.NextSibling {
		elements(c, see)
	}
}

func textOf(n *html.Node) string {
	if n.Type == html.TextNode {
		return n.Data
	}
	var s strings.Builder
	for c := n.FirstChild; c != nil; c = c.NextSibling {
		s.WriteString(textOf(c))
	}
	return s.String()
}

func TestHostileTextInHTML(t *testing.T) {
	r := hostilePlan().record(t)
	out := output(t, r, report.HTML)
	root, err := html.Parse(bytes.NewReader(out))
	if err != nil {
		t.Fatal(err)
	}
	// The page has the elements of the page of a harmless study and no others.
	known := make(map[string]bool)
	harmless, err := html.Parse(bytes.NewReader(output(t, plan{}.record(t), report.HTML)))
	if err != nil {
		t.Fatal(err)
	}
	attributes := func(n *html.Node) (keys []string) {
		for _, a := range n.Attr {
			keys = append(keys, a.Key)
		}
		return keys
	}
	elements(harmless, func(n *html.Node) {
		for _, a := range append(attributes(n), "") {
			known[n.Data+" "+a] = true
		}
	})
	var heads []string
	studied := ""
	elements(root, func(n *html.Node) {
		for _, a := range append(attributes(n), "") {
			if !known[n.Data+" "+a] {
				t.Errorf("the page has an element or attribute from elsewhere: %s %s", n.Data, a)
			}
		}
		if n.Data == "th" {
			heads = append(heads, textOf(n))
			if textOf(n) == "appraisers" {
				studied = textOf(n.Parent)
			}
		}
		if n.Data == "title" && n.Parent.Data == "head" {
			if want := format.Plain(r.Study.Settings.Title); !strings.Contains(textOf(n), want) {
				t.Errorf("the page is called %q; expected %q in it", textOf(n), want)
			}
		}
	})
	for _, n := range names(r) {
		if !strings.Contains(studied, n) {
			t.Errorf("%q is not among what was studied", n)
		}
		begin := string([]rune(n)[:min(len([]rune(n)), 40)]) // very long ones are shortened
		if !slices.ContainsFunc(heads, func(h string) bool { return strings.HasPrefix(h, begin) && (len(n) > 90 || h == n) }) {
			t.Errorf("no row is headed by %q", n)
		}
	}
	noSteering(t, string(out))
}

func TestHostileTextInFigures(t *testing.T) {
	r := hostilePlan().record(t)
	for _, f := range report.Figures(r) {
		var out bytes.Buffer
		if err := f.SVG(&out); err != nil {
			t.Fatal(err)
		}
		noSteering(t, out.String())
		d := xml.NewDecoder(&out)
		inside, texts := "", make(map[string]string)
		for {
			token, err := d.Token()
			if errors.Is(err, io.EOF) {
				break
			}
			if err != nil {
				t.Fatalf("%s is no XML: %v", f.Name, err)
			}
			switch x := token.(type) {
			case xml.StartElement:
				inside = x.Name.Local
				if !slices.Contains([]string{"svg", "title", "desc", "style", "rect", "line", "polyline", "polygon", "circle", "text"}, inside) {
					t.Errorf("%s has an element from elsewhere: %s", f.Name, inside)
				}
				for _, a := range x.Attr {
					if strings.HasPrefix(strings.ToLower(a.Name.Local), "on") || a.Name.Local == "href" {
						t.Errorf("%s has an attribute from elsewhere: %s", f.Name, a.Name.Local)
					}
				}
			case xml.CharData:
				texts[inside] += string(x)
			}
		}
		for _, n := range names(r) {
			if f.Name != "curve" && !strings.Contains(texts["desc"], inXML(n)) {
				t.Errorf("the description of %s does not hold %.60q", f.Name, n)
			}
		}
		if err := f.PNG(io.Discard); err != nil {
			t.Errorf("%s as PNG: %v", f.Name, err)
		}
	}
}

// The Markdown is read back by a library for CommonMark with the extensions
// of the usual forges.
func TestHostileTextInMarkdown(t *testing.T) {
	r := hostilePlan().record(t)
	out := output(t, r, report.Markdown)
	noSteering(t, string(out))
	var page bytes.Buffer
	reader := goldmark.New(goldmark.WithExtensions(extension.GFM), goldmark.WithRendererOptions(markup.WithUnsafe()))
	if err := reader.Convert(out, &page); err != nil {
		t.Fatal(err)
	}
	root, err := html.Parse(&page)
	if err != nil {
		t.Fatal(err)
	}
	var cells []string
	strong, commands := 0, 0
	elements(root, func(n *html.Node) {
		switch n.Data {
		case "html", "head", "body", "h1", "h2", "h3", "p", "ul", "ol", "li", "table", "thead", "tbody", "tr":
		case "strong":
			strong++
		case "td", "th":
			cells = append(cells, textOf(n))
		case "pre", "code": // the line that computes the record again, whatever stands in it
			if textOf(n) != r.Command+"\n" {
				t.Errorf("the command %q reads %q", r.Command, textOf(n))
			}
			commands++
		default:
			t.Errorf("a text became %s: %.80q", n.Data, textOf(n))
		}
	})
	if commands != 2 {
		t.Errorf("the command stands in %d elements; expected pre and code", commands)
	}
	if strong != 1 {
		t.Errorf("%d texts are strong; expected the verdict alone", strong)
	}
	for _, n := range names(r) {
		if !slices.Contains(cells, strings.TrimSpace(n)) {
			t.Errorf("no cell reads %q", n)
		}
	}
}

func TestHostileTextInCSV(t *testing.T) {
	r := hostilePlan().record(t)
	out := output(t, r, report.CSV)
	noSteering(t, string(out))
	reader := csv.NewReader(bytes.NewReader(out))
	reader.FieldsPerRecord = -1
	rows, err := reader.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	cells := make(map[string]bool)
	for _, row := range rows {
		for _, c := range row {
			cells[strings.TrimPrefix(c, "'")] = true
			if _, err := strconv.ParseFloat(c, 64); err == nil {
				continue
			}
			// What spreadsheets take for the beginning of a formula (OWASP, CSV
			// Injection), also behind spaces.
			if strings.IndexAny(strings.TrimSpace(c), "=+-@＝＋－＠") == 0 {
				t.Errorf("%.60q would be run", c)
			}
		}
	}
	for _, n := range names(r) {
		if !cells[n] {
			t.Errorf("no cell reads %q", n)
		}
	}
}

func TestHostileTextInWorkbook(t *testing.T) {
	r := hostilePlan().record(t)
	f, err := excelize.OpenReader(bytes.NewReader(output(t, r, report.XLSX)))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	cells := make(map[string]bool)
	for _, sheet := range f.GetSheetList() {
		rows, err := f.GetRows(sheet, excelize.Options{RawCellValue: true})
		if err != nil {
			t.Fatal(err)
		}
		for i, row := range rows {
			for j, text := range row {
				at, err := excelize.CoordinatesToCellName(j+1, i+1)
				if err != nil {
					t.Fatal(err)
				}
				if formula, err := f.GetCellFormula(sheet, at); err != nil || formula != "" {
					t.Errorf("%s!%s holds the formula %q (%v)", sheet, at, formula, err)
				}
				if link, _, err := f.GetCellHyperLink(sheet, at); err != nil || link {
					t.Errorf("%s!%s is a link (%v)", sheet, at, err)
				}
				noSteering(t, text)
				cells[text] = true
			}
		}
	}
	for _, n := range names(r) {
		if !cells[inXML(n)] {
			t.Errorf("no cell reads %q", n)
		}
	}
}

// JSON is for programs: it holds every text as it was.
func TestHostileTextInJSON(t *testing.T) {
	r := hostilePlan().record(t)
	out := output(t, r, report.JSON)
	if i := bytes.IndexFunc(out, func(c rune) bool { return c != '\n' && c < ' ' }); i >= 0 {
		t.Errorf("a control character stands in the JSON: %q", out[max(0, i-20):i+1])
	}
	var d struct {
		Study struct {
			Title      string
			Appraisers []string
			Limits     struct{ Unit string }
			Inputs     []struct{ File string }
		}
	}
	if err := json.Unmarshal(out, &d); err != nil {
		t.Fatal(err)
	}
	if d.Study.Title != r.Study.Settings.Title || !slices.Equal(d.Study.Appraisers, r.Study.Appraisers) || d.Study.Limits.Unit != r.Study.Settings.Unit || d.Study.Inputs[0].File != r.Study.Inputs[0].File {
		t.Errorf("the JSON says %+q; expected the title %q, the appraisers %q, the unit %q, the file %q",
			d, r.Study.Settings.Title, r.Study.Appraisers, r.Study.Settings.Unit, r.Study.Inputs[0].File)
	}
}

func TestHostileTextInTerminal(t *testing.T) {
	r := hostilePlan().record(t)
	for _, full := range []bool{false, true} {
		out := output(t, r, func(w io.Writer, r *report.Record) error {
			return report.Text(w, r, report.Terminal{Width: 100}, full)
		})
		noSteering(t, string(out))
	}
	wide := string(output(t, r, func(w io.Writer, r *report.Record) error {
		return report.Text(w, r, report.Terminal{Width: 9000}, true)
	}))
	for _, n := range names(r) {
		if !strings.Contains(wide, n) {
			t.Errorf("%q is not to be read", n)
		}
	}
}
