package report

import (
	"strings"
	"unicode"
)

// flatCell is a cell for spreadsheets: string, int, float64 or nil.
type flatCell struct {
	Value any
	Share bool // a fraction that is read in percent
}

// flat returns a table for spreadsheets: a figure with an interval takes
// three columns, a limit alone two, a count and what it is counted of two, and
// numbers are numbers.
func (t Table) flat() (heads []string, rows [][]flatCell) {
	bounded, counted := make([]bool, len(t.Columns)), make([]bool, len(t.Columns))
	for i := range t.Columns {
		for _, row := range t.Rows {
			bounded[i] = bounded[i] || row[i].Bounded
			counted[i] = counted[i] || row[i].Of != nil
		}
	}
	for i, c := range t.Columns {
		if !c.Limits {
			heads = append(heads, c.Name)
		}
		if counted[i] {
			heads = append(heads, c.Of)
		}
		if bounded[i] {
			heads = append(heads, c.Name+", lower", c.Name+", upper")
		}
	}
	for _, row := range t.Rows {
		var cells []flatCell
		for i, c := range row {
			share := strings.Contains(c.Text, "%") && t.Columns[i].Name != grr // which is in percent, for programs too
			switch {
			case t.Columns[i].Limits:
			case c.Value != nil:
				cells = append(cells, flatCell{positiveZero(c.Value), share})
			case c.Text == "", c.Text == c.Of: // which stands in its own column
				cells = append(cells, flatCell{})
			default:
				cells = append(cells, flatCell{Value: c.Text})
			}
			if counted[i] {
				cells = append(cells, flatCell{Value: c.Of})
			}
			if !bounded[i] {
				continue
			}
			if c.Bounded {
				cells = append(cells, flatCell{positiveZero(c.Lower), share}, flatCell{positiveZero(c.Upper), share})
			} else {
				cells = append(cells, flatCell{}, flatCell{})
			}
		}
		rows = append(rows, cells)
	}
	return heads, rows
}

// positiveZero takes the sign from a zero.
func positiveZero(v any) any {
	if x, ok := v.(float64); ok {
		return x + 0
	}
	return v
}

// harmless keeps a text from being run as a formula by a spreadsheet that
// opens a CSV: an apostrophe before the signs that begin one, of either
// width, also behind spaces and what cannot be seen. So too behind a semicolon
// or a tab: a spreadsheet that separates fields by these may end one there,
// whether or not it stands in quotes (which for it are in the middle of one).
func harmless(s string) string {
	var b strings.Builder
	for {
		n := strings.IndexAny(s, ";\t") + 1
		if n == 0 {
			n = len(s)
		}
		if strings.IndexAny(strings.TrimLeftFunc(s[:n], unseen), "=+-@＝＋－＠") == 0 {
			b.WriteByte('\'')
		}
		b.WriteString(s[:n])
		if s = s[n:]; s == "" {
			return b.String()
		}
	}
}

// unseen tells characters that a reader does not see: white space, marks of
// direction and of word ends.
func unseen(r rune) bool {
	return unicode.IsSpace(r) || unicode.IsControl(r) || unicode.In(r, unicode.Cf, unicode.Other_Default_Ignorable_Code_Point, unicode.Variation_Selector)
}
