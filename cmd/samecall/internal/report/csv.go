package report

import (
	"bufio"
	"fmt"
	"io"
	"strconv"
	"strings"

	"samecall/cmd/samecall/internal/format"
)

// CSV writes every table one below the other, each under its title, with a
// blank line between. Numbers have a decimal point; shares are fractions.
func CSV(w io.Writer, r *Record) error {
	out := bufio.NewWriter(w)
	for i, t := range numberTables(r) {
		if i > 0 {
			writeLine(out, nil)
		}
		heads, rows := t.flat()
		writeLine(out, []string{harmless(format.Plain(t.Title))})
		writeLine(out, texts(heads))
		for _, row := range rows {
			writeLine(out, record(row))
		}
	}
	return out.Flush()
}

// writeLine writes a row as RFC 4180 has it. Other than encoding/csv it quotes
// what has a semicolon or a tab, too, at which many a spreadsheet ends a field.
// Errors stay with the writer.
func writeLine(w *bufio.Writer, fields []string) {
	for i, f := range fields {
		if i > 0 {
			w.WriteByte(',')
		}
		if strings.ContainsAny(f, ",;\t\"\r\n") || f != strings.TrimSpace(f) {
			f = `"` + strings.ReplaceAll(f, `"`, `""`) + `"`
		}
		w.WriteString(f)
	}
	w.WriteByte('\n')
}

func texts(s []string) []string {
	out := make([]string, len(s))
	for i, x := range s {
		out[i] = harmless(format.Plain(x))
	}
	return out
}

func record(row []flatCell) []string {
	out := make([]string, len(row))
	for i, c := range row {
		switch x := c.Value.(type) {
		case nil:
		case string:
			out[i] = harmless(format.Plain(x))
		case float64:
			out[i] = strconv.FormatFloat(x, 'g', -1, 64)
		default:
			out[i] = fmt.Sprint(x)
		}
	}
	return out
}
