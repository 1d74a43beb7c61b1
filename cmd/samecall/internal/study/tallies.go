package study

import (
	"fmt"
)

// Tally is a row of a small table: of so many tries at one part, how many
// came off.
type Tally struct {
	Name   string // may be empty
	Value  float64
	Count  int
	Of     int
	inLine int
}

// Tallies is what was read of a small table, in its order.
type Tallies struct {
	Rows  []Tally
	Input Input
}

// ReadShort reads the table of a short study at one limit: the columns value,
// accepted and trials, and part if parts have names. The path may be "-", a
// CSV or an .xlsx file. The error is a *Problems where the data is wrong, and
// another error where the file cannot be read.
func ReadShort(src Source, sheet string, ignore []string) (*Tallies, error) {
	t, err := src.readSmall(src.Path, sheet)
	if err != nil {
		return nil, err
	}
	if err := t.pick([]smallColumn{{"part", false}, {"value", true}, {"accepted", true}, {"trials", true}}, ignore); err != nil {
		return nil, err
	}
	var rows []Tally
	for _, r := range t.rows {
		value, hasValue := t.number(r, "value")
		row, ok := t.tally(r, "accepted", "trials")
		if ok && hasValue {
			row.Name, row.Value = t.text(r, "part"), value
			rows = append(rows, row)
		}
	}
	return t.tallies(rows, "value")
}

// ReadFlaws reads the table of a hit/miss study: the column size, and either
// found and looks (how often the flaw was found in so many looks) or hit, one
// look a row; and flaw if flaws have names. Otherwise it is as ReadShort.
func ReadFlaws(src Source, sheet string, ignore []string) (*Tallies, error) {
	t, err := src.readSmall(src.Path, sheet)
	if err != nil {
		return nil, err
	}
	if err := t.pick([]smallColumn{{"flaw", false}, {"size", true}, {"found", false}, {"looks", false}, {"hit", false}}, ignore); err != nil {
		return nil, err
	}
	counts := t.has("found") && t.has("looks") && !t.has("hit")
	if single := t.has("hit") && !t.has("found") && !t.has("looks"); !counts && !single {
		t.list = append(t.list, Problem{Line: t.line, Found: "the columns " + listOf(sortedKeys(t.columns), "and"),
			Expected: "size with found and looks (counts), or size with hit (one look a row)"})
		return nil, t.wrong()
	}
	var rows []Tally
	words := make(map[string]bool)
	for _, r := range t.rows {
		if w := fold(t.text(r, "hit")); w != "" {
			words[w] = true
		}
	}
	for _, r := range t.rows {
		size, hasSize := t.number(r, "size")
		if hasSize && size <= 0 {
			t.at(r, t.columns["size"], shown(t.text(r, "size")), "a size above 0", "the curve runs over the logarithm of the size")
			hasSize = false
		}
		var row Tally
		var ok bool
		if counts {
			row, ok = t.tally(r, "found", "looks")
		} else {
			row, ok = t.hit(r, dashIsCall(words))
		}
		if ok && hasSize {
			row.Name, row.Value = t.text(r, "flaw"), size
			rows = append(rows, row)
		}
	}
	return t.tallies(rows, "size")
}

// tally reads how many of how many, and notes what cannot be.
func (t *smallTable) tally(r smallRow, count, of string) (Tally, bool) {
	a, okA := t.count(r, count)
	n, okN := t.count(r, of)
	switch {
	case !okA || !okN:
		return Tally{}, false
	case n == 0:
		t.at(r, t.columns[of], "0", "1 or more in column "+of, "leave the row out if nobody tried")
		return Tally{}, false
	case a > n:
		t.at(r, t.columns[count], fmt.Sprintf("%d in column %s", a, count), fmt.Sprintf("no more than %s, which is %d", of, n), "")
		return Tally{}, false
	}
	return Tally{Count: a, Of: n, inLine: r.line}, true
}

// Words for found and missed in the column hit.
var (
	hitWords  = folded([]string{"1", "hit", "found", "yes", "+"})
	missWords = folded([]string{"0", "miss", "missed", "no", "-"})
)

// hit reads one look; dash says that a dash is a miss, and not a missing look.
func (t *smallTable) hit(r smallRow, dash bool) (Tally, bool) {
	word := t.text(r, "hit")
	row := Tally{Of: 1, inLine: r.line}
	switch k := fold(word); {
	case k == "-" && !dash:
		t.at(r, t.columns["hit"], quote(word), "1 (found) or 0 (missed) in column hit", "a dash without + in the column may be meant as no look; leave the row out if nobody looked")
		return row, false
	case hitWords[k]:
		row.Count = 1
	case missWords[k]:
	case word == "":
		t.at(r, t.columns["hit"], "nothing", "1 (found) or 0 (missed) in column hit", "leave the row out if nobody looked")
		return row, false
	default:
		t.at(r, t.columns["hit"], quote(word), "1, hit, found or yes; 0, miss, missed or no", "")
		return row, false
	}
	return row, true
}

// tallies is the whole table; what names the column of the values.
func (t *smallTable) tallies(rows []Tally, what string) (*Tallies, error) {
	first := make(map[string]Tally)
	for _, r := range rows {
		if r.Name == "" {
			continue
		}
		f, ok := first[r.Name]
		if !ok {
			first[r.Name] = r
		} else if f.Value != r.Value {
			t.list = append(t.list, Problem{Line: r.inLine, Column: t.columns[what] + 1, Found: fmt.Sprintf("the %s %v of %s", what, r.Value, quote(r.Name)),
				Expected: fmt.Sprintf("%v, as in %s %d", f.Value, t.lines(), f.inLine), Text: "one name is one part"})
		}
	}
	if err := t.wrong(); err != nil {
		return nil, err
	}
	return &Tallies{Rows: rows, Input: t.input}, nil
}
