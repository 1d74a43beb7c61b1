package report

import (
	"github.com/jedib0t/go-pretty/v6/table"
	"github.com/jedib0t/go-pretty/v6/text"
	"samecall/cmd/samecall/internal/format"
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
	Numbers bool // set flush right, and never cut
	Long    bool // text that goes on in further lines where there is no room
}

// Cell is a cell of a Table: what is read and, for programs, the number
// behind it (int, float64) or nil, and its interval where it has one.
type Cell struct {
	Text         string
	Value        any
	Bounded      bool
	Lower, Upper any // float64, or nil for a limit that does not exist
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
		head = append(head, format.Plain(c.Name))
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
			cell := format.Plain(c.Text)
			if t.Columns[i].Long {
				cell = wrapped(cell, room[i])
			} else {
				cell = text.Snip(cell, room[i], "…")
			}
			cells = append(cells, cell)
		}
		w.AppendRow(cells)
	}
	return trimLines(w.Render())
}

const gap = 2 // behind each column

// leastRoom is what a column keeps however narrow the terminal is.
const leastRoom = 8

// fit returns the room of each column: its widest cell, less where the table
// would be wider than the terminal. Names and long texts give way, the widest
// first; figures are never cut, so that a table of many figures may still be
// too wide.
func (t Table) fit(width int) []int {
	room := make([]int, len(t.Columns))
	total := 0
	for i, c := range t.Columns {
		room[i] = text.StringWidthWithoutEscSequences(format.Plain(c.Name))
		for _, row := range t.Rows {
			room[i] = max(room[i], text.StringWidthWithoutEscSequences(format.Plain(row[i].Text)))
		}
		total += room[i] + gap
	}
	for total > width {
		widest := -1
		for i, c := range t.Columns {
			if !c.Numbers && room[i] > leastRoom && (widest < 0 || room[i] > room[widest]) {
				widest = i
			}
		}
		if widest < 0 {
			break
		}
		room[widest]--
		total--
	}
	return room
}

// width returns how many columns of a terminal the table takes in the room given.
func (t Table) width(room []int) int {
	total := 0
	for _, r := range room {
		total += r + gap
	}
	return total
}
