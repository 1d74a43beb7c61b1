package report

import (
	"fmt"
	"io"
	"strings"

	"samecall/cmd/samecall/internal/format"
)

// Markdown writes the record for systems that take Markdown.
func Markdown(w io.Writer, r *Record) error {
	var s strings.Builder
	v := r.Verdict
	fmt.Fprintf(&s, "# %s\n\n%s\n\n", md(title(r)), md(facts(r)))
	fmt.Fprintf(&s, "**Verdict: %s**\n\n", strings.ToUpper(v.Overall.String()))
	bullets := func(lines []string) {
		for _, l := range lines {
			fmt.Fprintf(&s, "- %s\n", md(l))
		}
		if len(lines) > 0 {
			s.WriteByte('\n')
		}
	}
	bullets(reasonLines(r))
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
	for _, t := range allTables(r) {
		fmt.Fprintf(&s, "## %s\n\n", md(t.Title))
		t.markdown(&s)
		s.WriteByte('\n')
		if t.Note != "" {
			fmt.Fprintf(&s, "%s\n\n", md(t.Note))
		}
	}
	if notes := allNotes(r); len(notes) > 0 {
		s.WriteString("## Notes\n\n")
		bullets(notes)
	}
	fmt.Fprintf(&s, "%s\n", md(strings.Join(v.Cautions, " ")))
	_, err := io.WriteString(w, s.String())
	return err
}

func (t Table) markdown(s *strings.Builder) {
	line := func(cells []string) { s.WriteString("| " + strings.Join(cells, " | ") + " |\n") }
	var heads, rules []string
	for _, c := range t.Columns {
		heads = append(heads, md(c.Name))
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
			cells = append(cells, md(c.Text))
		}
		line(cells)
	}
}

// md keeps a text from being read as markup: everything that CommonMark, or
// the extensions of the usual forges, would take for a sign is escaped.
func md(s string) string {
	s = strings.TrimSpace(format.Plain(s))
	var out strings.Builder
	number := true // so far there are but digits, as before an entry of a list
	for i, r := range s {
		switch {
		case strings.ContainsRune("\\`*_[]<>|#~$&@", r),
			i == 0 && strings.ContainsRune("-+=", r),
			number && i > 0 && (r == '.' || r == ')'),
			r == ':' && strings.HasPrefix(s[i:], "://"),                     // would become a link
			r == '.' && strings.EqualFold(s[max(0, i-len("www")):i], "www"): // likewise
			out.WriteByte('\\')
		}
		number = number && r >= '0' && r <= '9'
		out.WriteRune(r)
	}
	return out.String()
}
