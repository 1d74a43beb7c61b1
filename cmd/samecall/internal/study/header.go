package study

import (
	"fmt"
	"slices"
	"strconv"
	"strings"
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

// place names a field for a message: `column 4 (call)`.
func (l *layout) place(field int) string {
	if field < len(l.header) {
		return fmt.Sprintf("column %d (%s)", field+1, l.header[field])
	}
	return fmt.Sprintf("column %d", field+1)
}

var longOnly = []string{"appraiser", "trial", "call"}

// readHeader tells the layout from the header. The problems have a column,
// not yet a file and line.
func readHeader(header, ignore []string) (*layout, []Problem) {
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
		return l, []Problem{{Column: 1, Found: "one column, " + quote(l.header[0]), Expected: "several, separated by comma, semicolon or tab",
			Text: "the first line that is not blank and no comment is the header"}}
	}
	var list []Problem
	likely := make(map[string]bool) // columns that are there, but misspelt
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
		if near := nearest(h, sortedKeys(fields)); near != "" {
			likely[near] = true
		}
		if h == "" {
			problem(i, "", "", fmt.Sprintf("column %d has no name; name it, or take it out of the table", i+1))
			continue
		}
		if l.long {
			problem(i, "the unknown column "+quote(h), listOf(sortedKeys(fields), "or"), l.meant(h, fields))
			continue
		}
		appraiser, trial, ok := splitTrial(h)
		switch {
		case !ok:
			text := fmt.Sprintf("the column of an appraiser is named appraiser-trial, such as %q", h+"-1")
			problem(i, "the column "+quote(h)+" without a trial number", "part, reference, value or an appraiser's trial", text+"; "+l.meant(h, fields))
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
	return l, append(list, l.missing(fields, likely)...)
}

// isLong tells a long table by a column that only a long table has; where
// none is spelt right, by more than one that is nearly right.
func isLong(header []string, ignored map[string]bool) bool {
	almost := 0
	for _, h := range header {
		name := fold(h)
		if ignored[name] {
			continue
		}
		if slices.Contains(longOnly, name) {
			return true
		}
		if _, _, ok := splitTrial(h); ok {
			continue
		}
		if nearest(name, longOnly) != "" {
			almost++
		}
	}
	return almost > 1
}

// meant says what a column that is not known may be.
func (l *layout) meant(h string, fields map[string]*int) string {
	hint := fmt.Sprintf("to leave the column out: ignore = [%q]", h)
	if near := nearest(h, sortedKeys(fields)); near != "" {
		return "did you mean " + near + "? " + hint
	}
	return hint
}

// missing returns a problem for each column that is not there. A column that
// is there but misspelt has its problem already.
func (l *layout) missing(fields map[string]*int, likely map[string]bool) []Problem {
	var list []Problem
	need := []string{"part"}
	if l.long {
		need = append(need, longOnly...)
	}
	for _, name := range need {
		if *fields[name] >= 0 || likely[name] {
			continue
		}
		p := Problem{Found: "no column " + quote(name), Expected: "it in the header line"}
		switch {
		case name == "trial":
			p.Text = "a study of one trial needs it too: 1 in each row"
		case name == "part" && !l.long:
			p.Text = "the first line that is not blank and no comment is read as the header"
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
