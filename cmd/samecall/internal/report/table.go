package report

import (
	"slices"
	"strings"

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
	Keys    int    // columns that say what a row is about; 0 is taken as 1
	Note    string // a sentence to read with it; may be empty
}

// Column is a column of a Table.
type Column struct {
	Name    string
	Numbers bool   // set flush right, and never cut
	Long    bool   // text that goes on in further lines where there is no room
	Whole   bool   // words of our own that stay on one line
	Limits  bool   // limits alone, which programs get as numbers only
	Of      string // what counts in it are counted of, as a head
}

// Cell is a cell of a Table: what is read and, for programs, the number
// behind it (int, float64) or nil, what it is counted of, or a count of what,
// where it is a count, and its interval where it has one.
type Cell struct {
	Text         string
	Value        any
	Of           any // int, string or nil
	Bounded      bool
	Lower, Upper any // float64, or nil for a limit that does not exist
	// Why are the lines to be read below the table: why there is a dash, or no
	// interval.
	Why []string
}

func say(s string) Cell { return Cell{Text: s} }

// dash is a cell of a figure that is absent, and why.
func dash(why string) Cell { return Cell{Text: format.Dash, Why: []string{format.Dash + ": " + why}} }

// dashFor is dash with an error for the reason.
func dashFor(why error) Cell {
	if why == nil {
		return say(format.Dash)
	}
	return dash(why.Error())
}

// notes are the paragraphs to read below the table.
func (t Table) notes() []string {
	if t.Note == "" {
		return t.whys()
	}
	return append([]string{t.Note}, t.whys()...)
}

// whys are the reasons of dashes, and of intervals that are lacking, each once.
func (t Table) whys() []string {
	var out []string
	for _, row := range t.Rows {
		for _, c := range row {
			for _, why := range c.Why {
				if why = strings.TrimSuffix(why, ".") + "."; !slices.Contains(out, why) {
					out = append(out, why)
				}
			}
		}
	}
	return out
}

// render writes a table for a terminal of so many columns: no frame, one
// line under the heads.
func (t Table) render(width int) string {
	var out []string
	for _, b := range t.filled().blocks(width) {
		out = append(out, b.block(width))
	}
	return strings.Join(out, "\n\n")
}

// filled leaves out columns in which nothing stands.
func (t Table) filled() Table {
	out := t
	out.Columns, out.Rows = nil, make([][]Cell, len(t.Rows))
	for i, c := range t.Columns {
		if i >= t.keys() && !slices.ContainsFunc(t.Rows, func(row []Cell) bool { return row[i].Text != "" }) {
			continue
		}
		out.Columns = append(out.Columns, c)
		for j, row := range t.Rows {
			out.Rows[j] = append(out.Rows[j], row[i])
		}
	}
	return out
}

func (t Table) block(width int) string {
	w := table.NewWriter()
	style := table.StyleLight
	style.Options = table.Options{SeparateHeader: true}
	style.Format.Header = text.FormatDefault
	style.Box.PaddingLeft = ""
	style.Box.PaddingRight = strings.Repeat(" ", gap)
	w.SetStyle(style)
	room := t.fit(width)
	var head table.Row
	var configs []table.ColumnConfig
	for i, c := range t.Columns {
		head = append(head, broken(format.Plain(c.Name), room[i]))
		align := text.AlignLeft
		if c.Numbers {
			align = text.AlignRight
		}
		configs = append(configs, table.ColumnConfig{Number: i + 1, Align: align, AlignHeader: align, VAlignHeader: text.VAlignBottom})
	}
	w.SetColumnConfigs(configs)
	w.AppendHeader(head)
	for _, row := range t.Rows {
		var cells table.Row
		for i, c := range row {
			cell := format.Plain(c.Text)
			switch {
			case t.Columns[i].Numbers:
				cell = intervalBelow(cell, room[i])
			case t.Columns[i].Long:
				cell = wrapped(cell, room[i])
			default:
				cell = broken(cell, room[i])
			}
			cells = append(cells, cell)
		}
		w.AppendRow(cells)
	}
	lines := strings.Split(w.Render(), "\n")
	for i, l := range lines {
		lines[i] = strings.TrimRight(l, " ")
		if strings.Trim(l, "─") == "" {
			lines[i] = strings.TrimSuffix(l, strings.Repeat("─", gap)) // behind the last column
		}
	}
	return strings.Join(lines, "\n")
}

// broken breaks a name or a head into lines. One that would take more of them
// than anybody reads in row after row is cut.
func broken(s string, room int) string {
	const lines = 3
	if wide(s) > room {
		s = text.Snip(s, lines*room, "…")
	}
	return wrapped(s, room)
}

// intervalBelow sets the interval below its number where they have no room side by
// side.
func intervalBelow(s string, room int) string {
	if wide(s) > room {
		return strings.Replace(s, " (", "\n(", 1)
	}
	return s
}

func wide(s string) int { return text.StringWidthWithoutEscSequences(s) }

const gap = 2 // behind each column

const (
	// longestWord is how long a word may be that is never broken. All words
	// of our own are shorter: only names are longer.
	longestWord = 16
	// readable is the room that a text of several lines keeps as long as
	// something else can give way.
	readable = 24
)

// How far a table has been narrowed, one step after the other.
const (
	wholeTable = iota
	headsBroken
	longBroken  // long texts go on in further lines
	textsBroken // and so do all other texts
)

// least is the room that each column needs at a step of narrowing, with
// intervals beside their numbers or below them.
func (t Table) least(step int, below bool) []int {
	room := make([]int, len(t.Columns))
	for i, c := range t.Columns {
		room[i] = wide(format.Plain(c.Name))
		if step >= headsBroken {
			room[i] = widestWord(format.Plain(c.Name))
		}
		for _, row := range t.Rows {
			cell := format.Plain(row[i].Text)
			w := wide(cell)
			switch {
			case c.Numbers && below:
				w = text.LongestLineLen(intervalBelow(cell, 0))
			case c.Numbers:
			case c.Whole:
			case step >= textsBroken:
				w = min(w, widestWord(cell))
			case c.Long && step >= longBroken:
				w = min(w, max(readable, widestWord(cell)))
			}
			room[i] = max(room[i], w)
		}
	}
	return room
}

func widestWord(s string) int {
	widest := 1
	for word := range strings.SplitSeq(joined(s), " ") {
		widest = max(widest, wide(word))
	}
	return min(widest, longestWord)
}

// fit returns the room of each column, less than its content where the table
// would be wider than the terminal. First heads are broken, then texts, the
// widest column first; where that is not enough, intervals go below their
// numbers. Figures are never cut, nor words of our own.
func (t Table) fit(width int) []int {
	below := total(t.least(textsBroken, false)) > width
	room := t.least(wholeTable, below)
	for step := headsBroken; step <= textsBroken && total(room) > width; step++ {
		least := t.least(step, below)
		for total(room) > width {
			widest := -1
			for i := range room {
				if room[i] > least[i] && (widest < 0 || room[i] > room[widest]) {
					widest = i
				}
			}
			if widest < 0 {
				break
			}
			room[widest]--
		}
	}
	return room
}

// fits reports whether a table can be made as narrow as a terminal.
func (t Table) fits(width int) bool { return total(t.least(textsBroken, true)) <= width }

// total is how many columns of a terminal columns with so much room take.
func total(room []int) int {
	sum := -gap // none behind the last
	for _, r := range room {
		sum += r + gap
	}
	return sum
}

// blocks cuts a table that no narrowing makes fit into as few as do, of
// nearly the same width, each under the columns that say what a row is about.
func (t Table) blocks(width int) []Table {
	if t.fits(width) {
		return []Table{t}
	}
	room := t.least(textsBroken, false)
	ends := t.ends(room, width)
	for narrower := width - 1; narrower > 0; narrower-- {
		even := t.ends(room, narrower)
		if len(even) > len(ends) {
			break
		}
		ends = even
	}
	keys := t.keys()
	var out []Table
	from := keys
	for _, end := range ends {
		out = append(out, t.cut(keys, from, end))
		from = end
	}
	return out
}

func (t Table) keys() int { return min(max(t.Keys, 1), len(t.Columns)) }

// ends is behind which columns a table is cut to blocks of so much width, where
// its columns take so much room.
func (t Table) ends(room []int, width int) []int {
	keys := t.keys()
	var out []int
	from, taken := keys, total(room[:keys])
	for i := keys; i < len(room); i++ {
		if i > from && taken+gap+room[i] > width {
			out = append(out, i)
			from, taken = i, total(room[:keys])
		}
		taken += gap + room[i]
	}
	return append(out, len(room))
}

// cut is the table of the first columns and those of a range.
func (t Table) cut(keys, from, till int) Table {
	out := t
	out.Columns = slices.Concat(t.Columns[:keys], t.Columns[from:till])
	out.Rows = nil
	for _, row := range t.Rows {
		out.Rows = append(out.Rows, slices.Concat(row[:keys], row[from:till]))
	}
	return out
}
