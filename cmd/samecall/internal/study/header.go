package study

import (
	"fmt"
	"slices"
	"strconv"
	"strings"
	"unicode"
)

// layout tells what stands in which field of a row. A field that is not there
// is −1.
type layout struct {
	long   bool
	header []string // names as written, trimmed

	part, reference, value int

	appraiser, trial, call int // long: one call a row

	cells []wideCell // wide: one part a row
}

// wideCell is a column of a wide table: one trial of one appraiser.
type wideCell struct {
	field     int
	appraiser string
	trial     int
}

const maxTrial = 1_000_000

// maxTyped is how long a name may be for an error to write it out.
const maxTyped = 200

// place names a field for a message: `column 4 (call)`.
func (l *layout) place(field int) string {
	if field < len(l.header) {
		return fmt.Sprintf("column %d (%s)", field+1, shown(l.header[field]))
	}
	return fmt.Sprintf("column %d", field+1)
}

var longOnly = []string{"appraiser", "trial", "call"}

// readHeader tells the layout from the header; sheet tells which sheet of a
// workbook it is from, empty for text. The problems have a column, not yet a
// file and line.
func readHeader(header, ignore []string, sheet string) (*layout, []Problem) {
	l := &layout{part: -1, reference: -1, value: -1, appraiser: -1, trial: -1, call: -1}
	for len(header) > 0 && strings.TrimSpace(header[len(header)-1]) == "" {
		header = header[:len(header)-1]
	}
	for _, h := range header {
		l.header = append(l.header, strings.TrimSpace(h))
	}
	ignored := make(map[string]bool)
	for _, name := range ignore {
		ignored[fold(name)] = true
	}
	fields := map[string]*int{"part": &l.part, "reference": &l.reference, "value": &l.value}
	if l.long = isLong(l.header, ignored); l.long {
		fields["appraiser"], fields["trial"], fields["call"] = &l.appraiser, &l.trial, &l.call
	}

	if len(l.header) == 1 && !ignored[fold(l.header[0])] {
		return l, []Problem{oneColumn(l.header[0], sheet)}
	}
	var list []Problem
	free := l.free(fields, ignored)
	likely := make(map[string]bool) // columns that are there, but under another name
	problem := func(field int, found, expected, text string) {
		list = append(list, Problem{Column: field + 1, Found: found, Expected: expected, Text: text})
	}
	twice := func(i, first int) {
		problem(i, "the column "+quote(l.header[i])+" a second time", "each column once", fmt.Sprintf("it stands in column %d already", first+1))
	}
	for i, h := range l.header {
		name := fold(h)
		if ignored[name] {
			continue
		}
		if to, ok := fields[name]; ok {
			if *to >= 0 {
				twice(i, *to)
				continue
			}
			*to = i
			continue
		}
		if h == "" {
			problem(i, "", "", fmt.Sprintf("column %d has no name; name it, or take it out of the table", i+1))
			continue
		}
		appraiser, trial, ok := splitTrial(h)
		if l.long || !ok {
			may, hint := meant(h, free)
			for _, c := range may {
				likely[c] = true
			}
			if l.long {
				problem(i, "the unknown column "+quote(h), listOf(sortedKeys(fields), "or"), hint+leaveOut(h, ignore))
				continue
			}
			hint += fmt.Sprintf("the column of an appraiser is named appraiser-trial, such as %s; ", quote(l.likelyTrial(i)))
			problem(i, "the column "+quote(h)+" without a trial number", "part, reference, value or an appraiser's trial", hint+leaveOut(h, ignore))
			continue
		}
		switch {
		case trial < 1 || trial > maxTrial:
			problem(i, "the column "+quote(h), fmt.Sprintf("a trial number from 1 to %d", maxTrial), "")
		default:
			same := slices.IndexFunc(l.cells, func(c wideCell) bool { return c.appraiser == appraiser && c.trial == trial })
			if same >= 0 {
				twice(i, l.cells[same].field)
				continue
			}
			l.cells = append(l.cells, wideCell{i, appraiser, trial})
		}
	}
	return l, append(list, l.missing(fields, likely, sheet)...)
}

// likelyTrial returns the name that a column may be meant to have, of one
// without a trial number: anna1 may be anna-1, and the second anna anna-2.
func (l *layout) likelyTrial(field int) string {
	h := l.header[field]
	if name := strings.TrimRight(h, "0123456789"); name != "" && name != h {
		return name + "-" + h[len(name):]
	}
	n := 0
	for _, other := range l.header[:field+1] {
		n += btoi(fold(other) == fold(h))
	}
	return fmt.Sprintf("%s-%d", h, n)
}

// oneColumn is the problem of a header of one column: another separator, or a
// title above the header.
func oneColumn(name, sheet string) Problem {
	p := Problem{Column: 1, Found: "one column, " + quote(name), Expected: "several, separated by comma, semicolon or tab",
		Text: "the first line that is not blank and no comment (#) is the header"}
	if sheet != "" {
		p.Expected = "the columns of a header"
		p.Text = "the first row that is not blank is the header: take a title above it out; " + sheet
	}
	return p
}

// isLong tells a long table by a column that only a long table has; where
// none is named right, by more than one that is nearly right or has another
// usual name.
func isLong(header []string, ignored map[string]bool) bool {
	almost, cells := 0, 0
	called := make(map[string]bool)
	for _, h := range header {
		name := fold(h)
		if ignored[name] {
			continue
		}
		if slices.Contains(longOnly, name) {
			return true
		}
		if _, _, ok := splitTrial(h); ok {
			cells++
			continue
		}
		if nearest(name, longOnly) != "" {
			almost++
		} else {
			for _, c := range alsoCalled(h, longOnly) {
				called[c] = true
			}
		}
	}
	return almost > 1 || almost+len(called) > 1 && cells == 0
}

// free returns the columns that the header does not have, in order.
func (l *layout) free(fields map[string]*int, ignored map[string]bool) []string {
	has := make(map[string]bool)
	for _, h := range l.header {
		if name := fold(h); !ignored[name] {
			has[name] = true
		}
	}
	return slices.DeleteFunc(sortedKeys(fields), func(name string) bool { return has[name] })
}

// meant returns which of the columns that are not there an unknown one may
// be, and a hint that says so.
func meant(h string, free []string) (columns []string, hint string) {
	if near := nearest(h, free); near != "" {
		return []string{near}, "did you mean " + near + "? "
	}
	if columns = alsoCalled(h, free); len(columns) > 0 {
		hint = rename(columns) + "; "
	}
	return columns, hint
}

// leaveOut says how an unknown column is left out, beside those that are
// ignored already. A name that cannot be typed as it is shown has no flag.
func leaveOut(h string, ignore []string) string {
	if len(h) > maxTyped || strings.ContainsFunc(h, func(r rune) bool { return !unicode.IsPrint(r) }) {
		return "to leave the column out, give it a plain name and list that by ignore"
	}
	all := append(slices.Clone(ignore), h)
	var words []string
	for _, w := range all {
		words = append(words, fmt.Sprintf("%q", w))
	}
	return fmt.Sprintf("to leave the column out: %s, or ignore = [%s] in a study file", asFlag("ignore", all...), strings.Join(words, ", "))
}

// missing returns a problem for each column that is not there. A column that
// is there but misspelt has its problem already.
func (l *layout) missing(fields map[string]*int, likely map[string]bool, sheet string) []Problem {
	var list []Problem
	need := []string{"part"}
	lacks := func(name string) bool { return *fields[name] < 0 && !likely[name] }
	switch {
	case l.long && l.trial >= 0 && lacks("appraiser") && lacks("call"):
		list = append(list, Problem{Column: l.trial + 1, Found: "the column trial without appraiser and call",
			Expected: `one call a row, with part, appraiser, trial and call, or one part a row, with a column for each appraiser and trial, such as "early-1"`})
	case l.long:
		need = append(need, longOnly...)
	}
	for _, name := range need {
		if !lacks(name) {
			continue
		}
		p := Problem{Found: "no column " + quote(name), Expected: "it in the header line"}
		switch {
		case name == "trial":
			p.Text = "a study of one trial needs it too: 1 in each row"
		case name == "part" && sheet != "":
			p.Text = "the first row that is not blank is read as the header; " + sheet
		case name == "part" && !l.long:
			p.Text = "the first line that is not blank and no comment (#) is read as the header"
		}
		list = append(list, p)
	}
	if !l.long && l.part >= 0 && len(l.cells) == 0 {
		list = append(list, Problem{Found: "no column with calls",
			Expected: `either the columns appraiser, trial and call, or a column for each appraiser and trial, such as "early-1"`})
	}
	return list
}

// splitTrial takes the trial number off the name of a wide table's column:
// digits at the end, behind one of - _ . : / or a space.
func splitTrial(h string) (appraiser string, trial int, ok bool) {
	name := strings.TrimRight(h, "0123456789")
	digits := h[len(name):]
	if digits == "" || name == "" {
		return "", 0, false
	}
	cut := strings.TrimSpace(name)
	if c := cut[max(len(cut)-1, 0):]; c != "" && strings.Contains("-_.:/", c) {
		cut = strings.TrimSpace(cut[:len(cut)-1])
	} else if len(cut) == len(strings.TrimLeft(name, " \t")) {
		return "", 0, false // nothing between name and number
	}
	if cut == "" {
		return "", 0, false
	}
	n, err := strconv.Atoi(digits)
	if err != nil {
		n = maxTrial + 1
	}
	appraiserName, _ := composed([]byte(cut))
	return string(appraiserName), n, true
}
