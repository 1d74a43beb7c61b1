package report

import (
	"bytes"
	"strings"
	"testing"

	"github.com/yuin/goldmark"
	"github.com/yuin/goldmark/extension"
	"golang.org/x/net/html"
)

// What is no markup is left as people read it.
func TestMarkdownLeavesNumbersAlone(t *testing.T) {
	for _, s := range []string{"0.88", "6.3 % (1.3–17)", "+0.0036", "−0.0036", "-0.5", "12.5.", "3)x", "1.", "a. b", "=", "P-7 (early)"} {
		if got := inline(s); got != s {
			t.Errorf("in a line %q became %q", s, got)
		}
		if got := md(s); got != s && s != "1." {
			t.Errorf("at the start of a line %q became %q", s, got)
		}
	}
}

// What would begin a list, or draw a line, stays text where it could do so.
func TestMarkdownListSigns(t *testing.T) {
	reader := goldmark.New(goldmark.WithExtensions(extension.GFM))
	for in, want := range map[string]string{
		"1. one": `1\. one`, "12) two": `12\) two`, "1.": `1\.`, "- dash": `\- dash`, "-": `\-`, "+ plus": `\+ plus`, "---": `\---`, "- - -": `\- - -`, "-- -": `\-- -`,
	} {
		if got := md(in); got != want {
			t.Errorf("%q became %q; expected %q", in, got, want)
		}
		for _, before := range []string{"", "- ", "3. ", "text\n\n"} {
			var page bytes.Buffer
			if err := reader.Convert([]byte(before+md(in)+"\n"), &page); err != nil {
				t.Fatal(err)
			}
			lists := strings.Count(page.String(), "<li>")
			if wanted := strings.Count(before, "- ") + strings.Count(before, "3. "); lists != wanted || strings.Contains(page.String(), "<hr") {
				t.Errorf("%q behind %q became %s", in, before, page.String())
			}
		}
	}
}

// A line of code is read back as it is, whatever it holds.
func TestMarkdownCodeBlock(t *testing.T) {
	for _, line := range []string{"samecall judge a.csv", "a ``` b", "```", "````x``` `", `--title="A_1 & B | <b> \ *c*"`, "~~~"} {
		var out strings.Builder
		out.WriteString("text\n\n")
		codeBlock(&out, line)
		out.WriteString("\nmore\n")
		var page bytes.Buffer
		if err := goldmark.New(goldmark.WithExtensions(extension.GFM)).Convert([]byte(out.String()), &page); err != nil {
			t.Fatal(err)
		}
		root, err := html.Parse(&page)
		if err != nil {
			t.Fatal(err)
		}
		var text string
		var walk func(*html.Node)
		walk = func(n *html.Node) {
			if n.Data == "code" && n.Parent.Data == "pre" && n.FirstChild != nil {
				text += n.FirstChild.Data
			}
			for c := n.FirstChild; c != nil; c = c.NextSibling {
				walk(c)
			}
		}
		walk(root)
		if text != line+"\n" {
			t.Errorf("%q is read back as %q", line, text)
		}
	}
}
