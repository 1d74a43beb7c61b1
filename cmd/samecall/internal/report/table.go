package report

import (
	"slices"

	"github.com/jedib0t/go-pretty/v6/table"
	"github.com/jedib0t/go-pretty/v6/text"
)

// Table is one table of a report, the same for the terminal, the page and
// other programs.
type Table struct {
	Name    string // short and fixed, for sheets and files
	Title   string
	Columns []Column
	Rows    [][]Cell
	Note    string // a sentence to read with it; may be empty
}

// Column is a column of a Table.
type Column struct {
	Name    string
	Numbers bool // set flush right
}

// Cell is a cell of a Table: what is read and, for programs, the number
// behind it (int, float64) or nil.
type Cell struct {
	Text  string
	Value any
}

func say(s string) Cell { return Cell{Text: s} }

// render writes a table for a terminal of so many columns: no frame, one
// line under the heads.
func (t Table) render(width int) string {
	w := table.NewWriter()
	style := table.StyleLight
	style.Options = table.Options{SeparateHeader: true}
	style.Format.Header = text.FormatDefault
	style.Box.PaddingLeft = ""
	style.Box.PaddingRight = "  "
	w.SetStyle(style)
	var head table.Row
	var configs []table.ColumnConfig
	for i, c := range t.Columns {
		head = append(head, plain(c.Name))
		align := text.AlignLeft
		if c.Numbers {
			align = text.AlignRight
		}
		configs = append(configs, table.ColumnConfig{Number: i + 1, Align: align, AlignHeader: align})
	}
	room := t.fit(width)
	w.SetColumnConfigs(configs)
	w.AppendHeader(head)
	for _, row := range t.Rows {
		var cells table.Row
		for i, c := range row {
			cells = append(cells, text.Snip(plain(c.Text), room[i], "…"))
		}
		w.AppendRow(cells)
	}
	return trimLines(w.Render())
}

// fit returns the room of each column: its widest cell, less where the table
// would be wider than the terminal. The widest columns give way first.
func (t Table) fit(width int) []int {
	const gap = 2
	room := make([]int, len(t.Columns))
	total := 0
	for i, c := range t.Columns {
		room[i] = text.StringWidthWithoutEscSequences(c.Name)
		for _, row := range t.Rows {
			room[i] = max(room[i], text.StringWidthWithoutEscSequences(plain(row[i].Text)))
		}
		total += room[i] + gap
	}
	const least = 6
	for total > width {
		widest := slices.Index(room, slices.Max(room))
		if room[widest] <= least {
			break
		}
		room[widest]--
		total--
	}
	return room
}
