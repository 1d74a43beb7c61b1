package report

import (
	"fmt"
	"strings"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/study"
)

const (
	// mostParts and mostColumns are how many parts and appraisers a record
	// prints every call of: what can still be checked by hand.
	mostParts   = 200
	mostColumns = 8
)

// callsTable lists every call, so that a printed record can be computed
// again; empty for a study too large to be printed.
func callsTable(r *Record) Table {
	t := Table{Name: "every call", Title: "Every call", Columns: []Column{{Name: "part"}}}
	if len(r.Study.Parts) > mostParts || len(r.Study.Appraisers) > mostColumns {
		return t
	}
	s := r.Study
	if s.Values != nil {
		t.Columns = append(t.Columns, Column{Name: "value", Numbers: true})
	}
	if r.Agreement.All != nil {
		t.Columns = append(t.Columns, Column{Name: "reference"})
	}
	for _, name := range s.Appraisers {
		t.Columns = append(t.Columns, Column{Name: name})
	}
	values := format.Alike(s.Values...) // of parts without a value they are not read
	order, how := mapOrder(r)
	for _, part := range order {
		row := []Cell{say(s.Parts[part])}
		if s.Values != nil {
			value := say(format.Dash)
			if s.HasValue[part] {
				value = valueCell(values[part], s.Values[part])
			}
			row = append(row, value)
		}
		if r.Agreement.All != nil {
			row = append(row, say(category(r, s.Ratings.Reference(part))))
		}
		for a := range s.Appraisers {
			var calls []string
			for _, c := range s.Ratings.Calls(part, a) {
				calls = append(calls, letter(r, c))
			}
			between := ", "
			if s.PassFail { // a letter each
				between = ""
			}
			row = append(row, say(strings.Join(calls, between)))
		}
		t.Rows = append(t.Rows, row)
	}
	t.Note = "Parts " + how + "; the calls of an appraiser trial by trial, – where there is none."
	if s.PassFail {
		t.Note += fmt.Sprintf(" A: %s, R: %s.", s.Categories[1], s.Categories[0])
	}
	return t
}

// letter writes a call: one letter in a pass/fail study, else its category.
func letter(r *Record, c agreement.Category) string {
	switch {
	case c == agreement.Missing || !r.Study.PassFail:
		return category(r, c)
	case r.Study.Ratings.Accepts(c):
		return "A"
	}
	return "R"
}

func category(r *Record, c agreement.Category) string {
	if c == agreement.Missing {
		return format.Dash
	}
	return r.Study.Categories[c]
}

// memberText writes the calibrated size of a gauge's member.
func memberText(s format.Scale, limit string, m *study.GaugeMember) string {
	if m == nil {
		return ""
	}
	text := fmt.Sprintf("%s %s ± %s", limit, s.WithUnit(format.Number(m.Size)), format.Number(m.Uncertainty))
	if m.HasWear {
		text += ", worn at " + format.Number(m.WearLimit)
	}
	return text
}
