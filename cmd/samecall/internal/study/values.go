package study

import "fmt"

// Values is a column of measured values, in the order of the file.
type Values struct {
	Values []float64
	Column string // its name; empty in a file without a header
	Empty  int    // rows without a value
	Input  Input
}

// ReadValues reads a column of numbers from a CSV or an .xlsx file: the one
// named, else the only one, else the one named value. A file of nothing but
// numbers needs no header. Empty cells are passed over and counted. The error
// is a *Problems where the data is wrong, and another error where the file
// cannot be read.
func ReadValues(src Source, sheet, column string) (*Values, error) {
	t, err := src.readSmall(src.Path, sheet)
	if err != nil {
		return nil, err
	}
	field, err := t.valueColumn(column)
	if err != nil {
		return nil, err
	}
	out := &Values{Column: t.header[field], Input: t.input}
	t.unanswered(func(f int) bool { return f == field })
	if err := t.wrong(); err != nil {
		return nil, err
	}
	what := "a number"
	if out.Column != "" {
		what += " in column " + shown(out.Column)
	}
	for _, r := range t.rows {
		s := ""
		if field < len(r.fields) {
			s = r.fields[field]
		}
		if s == "" {
			out.Empty++
			continue
		}
		x, err := parseNumber([]byte(s), t.comma)
		if err != nil {
			if blankWords[fold(s)] {
				err = errNoValue
			}
			t.at(r, field, quote(s), what, err.Error())
			continue
		}
		out.Values = append(out.Values, x)
	}
	if len(t.list) == 0 && len(out.Values) == 0 {
		t.list = append(t.list, Problem{Line: t.line, Text: "there is no value below the header"})
	}
	if err := t.wrong(); err != nil {
		return nil, err
	}
	return out, nil
}

// valueColumn finds the column that holds the values.
func (t *smallTable) valueColumn(name string) (int, error) {
	if name == "" && len(t.header) == 1 {
		return 0, nil
	}
	want := name
	if want == "" {
		want = "value"
	}
	found := -1
	var names []string
	for i, h := range t.header {
		names = append(names, quote(h))
		if fold(h) != fold(want) {
			continue
		}
		if found >= 0 {
			t.list = append(t.list, Problem{Line: t.line, Column: i + 1, Found: "the column " + quote(h) + " a second time",
				Expected: "it once", Text: fmt.Sprintf("it stands in column %d already", found+1)})
			return 0, t.wrong()
		}
		found = i
	}
	if found < 0 {
		p := Problem{Line: t.line, Found: "no column " + quote(want), Expected: "it in the header line"}
		switch {
		case t.bare:
			p.Text = "the file has no header"
		case name == "":
			p.Text = "name the column that holds the values; there are " + listOf(firstFew(names), "and")
		default:
			p.Text = "there are " + listOf(firstFew(names), "and")
		}
		t.list = append(t.list, p)
		return 0, t.wrong()
	}
	return found, nil
}
