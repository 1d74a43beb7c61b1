package report

import "strings"

// flat returns a table for spreadsheets: a figure with an interval takes
// three columns, and numbers are numbers. Cells are string, int, float64 or
// nil.
func (t Table) flat() (heads []string, rows [][]any) {
	bounded := make([]bool, len(t.Columns))
	for i := range t.Columns {
		for _, row := range t.Rows {
			bounded[i] = bounded[i] || row[i].Bounded
		}
	}
	for i, c := range t.Columns {
		heads = append(heads, c.Name)
		if bounded[i] {
			heads = append(heads, c.Name+", lower", c.Name+", upper")
		}
	}
	for _, row := range t.Rows {
		var cells []any
		for i, c := range row {
			switch {
			case c.Value != nil:
				cells = append(cells, c.Value)
			case c.Text == "":
				cells = append(cells, nil)
			default:
				cells = append(cells, c.Text)
			}
			if !bounded[i] {
				continue
			}
			if c.Bounded {
				cells = append(cells, c.Lower, c.Upper)
			} else {
				cells = append(cells, nil, nil)
			}
		}
		rows = append(rows, cells)
	}
	return heads, rows
}

// harmless keeps a text from being run as a formula by a spreadsheet that
// opens a CSV: an apostrophe before the signs that begin one, of either
// width, also behind spaces.
func harmless(s string) string {
	if strings.IndexAny(strings.TrimSpace(s), "=+-@＝＋－＠") == 0 {
		return "'" + s
	}
	return s
}
