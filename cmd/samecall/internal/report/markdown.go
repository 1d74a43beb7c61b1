package report

import (
	"fmt"
	"io"
	"regexp"
	"strings"

	"samecall/cmd/samecall/internal/format"
)

// Markdown writes the record for systems that take Markdown.
func Markdown(w io.Writer, r *Record) error {
	var s strings.Builder
	v := r.Verdict
	fmt.Fprintf(&s, "# %s\n\n%s\n\n", inline(title(r)), md(facts(r)))
	fmt.Fprintf(&s, "**%s**\n\n", headline(v))
	bullets := func(lines []string) {
		for _, l := range lines {
			fmt.Fprintf(&s, "- %s\n", md(l))
		}
		if len(lines) > 0 {
			s.WriteByte('\n')
		}
	}
	bullets(verdictLines(r))
	if len(v.Causes) > 0 {
		s.WriteString("## Causes\n\n")
		var causes []string
		for _, c := range v.Causes {
			causes = append(causes, c.Text)
		}
		bullets(causes)
	}
	s.WriteString("## What to do next\n\n")
	for i, n := range v.Next {
		fmt.Fprintf(&s, "%d. %s\n", i+1, md(n))
	}
	s.WriteByte('\n')
	fmt.Fprintf(&s, "%s\n\n", md(strings.Join(v.Cautions, " ")))
	if len(r.Warnings) > 0 {
		s.WriteString("## Notes\n\n")
		var notes []string
		for _, n := range r.Warnings {
			notes = append(notes, n.Text)
		}
		bullets(notes)
	}
	write := func(t Table, mark string) {
		fmt.Fprintf(&s, "%s %s\n\n", mark, inline(t.Title))
		t.markdown(&s)
		s.WriteByte('\n')
		for _, n := range t.notes() {
			fmt.Fprintf(&s, "%s\n\n", md(n))
		}
	}
	write(studyTable(r), "##")
	fmt.Fprintf(&s, "%s\n\n", md(aboveCommand(r)))
	codeBlock(&s, format.Plain(r.Command))
	for _, g := range fullSections(r) {
		fmt.Fprintf(&s, "\n## %s\n\n", inline(g.Title))
		for _, n := range g.Notes {
			fmt.Fprintf(&s, "%s\n\n", md(n))
		}
		for _, t := range g.Tables {
			write(t, "###")
		}
	}
	_, err := io.WriteString(w, s.String())
	return err
}

func (t Table) markdown(s *strings.Builder) {
	line := func(cells []string) { s.WriteString("| " + strings.Join(cells, " | ") + " |\n") }
	var heads, rules []string
	for _, c := range t.Columns {
		heads = append(heads, inline(c.Name))
		if c.Numbers {
			rules = append(rules, "---:")
		} else {
			rules = append(rules, "---")
		}
	}
	line(heads)
	line(rules)
	for _, row := range t.Rows {
		var cells []string
		for _, c := range row {
			cells = append(cells, inline(c.Text))
		}
		line(cells)
	}
}

// md keeps a text that begins a line, or stands behind the sign of a list,
// from being read as markup.
func md(s string) string {
	s = inline(s)
	if sign := listSign.FindString(s); sign != "" {
		at := strings.IndexAny(sign, "-+.)")
		s = s[:at] + `\` + s[at:]
	}
	return s
}

// listSign is what begins an entry of a list, or a line across the page: only
// with a space behind it, or nothing (CommonMark 0.31, 5.2), or again a dash
// (4.1). A number such as 0.88 is none.
var listSign = regexp.MustCompile(`^(?:[-+]|[0-9]+[.)])(?: |$)|^--`)

// inline keeps a text from being read as markup within a line, as in a cell or
// a heading: every sign of CommonMark, or of the extensions of the usual
// forges, is escaped.
func inline(s string) string {
	s = strings.TrimSpace(format.Plain(s))
	var out strings.Builder
	for i, r := range s {
		switch {
		case strings.ContainsRune("\\`*_[]<>|#~$&@", r),
			r == ':' && strings.HasPrefix(s[i:], "://"),                     // would become a link
			r == '.' && strings.EqualFold(s[max(0, i-len("www")):i], "www"): // likewise
			out.WriteByte('\\')
		}
		out.WriteRune(r)
	}
	return out.String()
}

// codeBlock sets a line as it is, between fences that no run of backticks in it
// closes.
func codeBlock(s *strings.Builder, line string) {
	fence := "```"
	for strings.Contains(line, fence) {
		fence += "`"
	}
	fmt.Fprintf(s, "%s\n%s\n%s\n", fence, line, fence)
}
