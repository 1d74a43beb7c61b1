package report

import (
	"encoding/csv"
	"fmt"
	"io"
	"strconv"

	"samecall/cmd/samecall/internal/format"
)

// CSV writes every table one below the other, each under its title, with a
// blank line between. Numbers have a decimal point; shares are fractions.
func CSV(w io.Writer, r *Record) error {
	c := csv.NewWriter(w)
	for i, t := range numberTables(r) {
		heads, rows := t.flat()
		lines := [][]string{{harmless(format.Plain(t.Title))}, texts(heads)}
		if i > 0 {
			lines = append([][]string{nil}, lines...)
		}
		for _, row := range rows {
			lines = append(lines, record(row))
		}
		if err := c.WriteAll(lines); err != nil {
			return err
		}
	}
	return nil
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
