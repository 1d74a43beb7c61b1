package study

import (
	"cmp"
	"fmt"
	"slices"
	"strings"
)

// maxProblems is how many problems are listed; the rest is counted.
const maxProblems = 20

// Problem is one thing that is wrong with the data, and where it stands.
type Problem struct {
	File   string // as the user named it; empty for a setting given by flag
	Line   int    // from 1; 0: the problem has no line
	Column int    // field of the row, from 1; 0: the problem concerns the whole row
	Cell   string // of a workbook, such as "Calls!C7", in place of line and column

	Found    string // what stands there; may be empty
	Expected string // what should stand there
	Text     string // what is wrong, or a hint on what to do
}

// String returns the problem as one line: where, what was found, what was
// expected, what to do.
func (p Problem) String() string {
	var b strings.Builder
	if p.File != "" {
		b.WriteString(p.File)
		b.WriteByte(':')
		switch {
		case p.Cell != "":
			b.WriteString(p.Cell + ":")
		case p.Line > 0:
			fmt.Fprintf(&b, "%d:", p.Line)
			if p.Column > 0 {
				fmt.Fprintf(&b, "%d:", p.Column)
			}
		}
		b.WriteByte(' ')
	}
	switch {
	case p.Found != "" && p.Expected != "":
		b.WriteString("found " + p.Found + ", expected " + p.Expected)
	case p.Found != "":
		b.WriteString("found " + p.Found)
	case p.Expected != "":
		b.WriteString("expected " + p.Expected)
	default:
		b.WriteString(p.Text)
		return b.String()
	}
	if p.Text != "" {
		b.WriteString("; " + p.Text)
	}
	return b.String()
}

// Problems is the error for data that is wrong: up to 20 problems in the
// order of their lines, and how many more there are at least.
type Problems struct {
	List []Problem
	More int
}

// Error prints one line a problem.
func (p *Problems) Error() string { return strings.Join(p.Lines(), "\n") }

// Lines returns the lines of the error. Names in them stand as they are in
// the data.
func (p *Problems) Lines() []string {
	var lines []string
	for _, q := range p.List {
		lines = append(lines, q.String())
	}
	if p.More > 0 {
		lines = append(lines, fmt.Sprintf("and at least %d more", p.More))
	}
	return lines
}

// problemsOf returns the error for a list of problems and a number of
// further ones, nil if there is none.
func problemsOf(list []Problem, more int) error {
	if len(list) == 0 {
		return nil
	}
	slices.SortStableFunc(list, Problem.compare)
	if len(list) > maxProblems {
		more += len(list) - maxProblems
		list = list[:maxProblems]
	}
	return &Problems{List: slices.Clone(list), More: more}
}

// compare puts problems in the order of where they stand.
func (p Problem) compare(q Problem) int {
	return cmp.Or(cmp.Compare(p.Line, q.Line), cmp.Compare(p.Column, q.Column),
		strings.Compare(p.Found, q.Found), strings.Compare(p.Text, q.Text))
}

// quote shows what was found: in quotes, on one line, not endless.
func quote(s string) string {
	const most = 60
	if r := []rune(s); len(r) > most {
		s = string(r[:most]) + "…"
	}
	return fmt.Sprintf("%q", s)
}

// shown is a name as it stands, and in quotes where it would mislead as it
// stands: it is long, or has characters that cannot be seen.
func shown(s string) string {
	if q := quote(s); q[1:len(q)-1] != s {
		return q
	}
	return s
}

func allShown(names []string) []string {
	out := make([]string, len(names))
	for i, n := range names {
		out[i] = shown(n)
	}
	return out
}

// listOf joins words as a sentence does: a, b or c.
func listOf(words []string, last string) string {
	switch n := len(words); n {
	case 0:
		return ""
	case 1:
		return words[0]
	default:
		if words[n-1] == "…" {
			return strings.Join(words, ", ")
		}
		return strings.Join(words[:n-1], ", ") + " " + last + " " + words[n-1]
	}
}

// either returns the word for one, or the one for any other number.
func either(n int, one, many string) string {
	if n == 1 {
		return one
	}
	return many
}

// counted returns "1 part" and "2 parts".
func counted(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}
