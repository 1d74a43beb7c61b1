package report

import (
	"cmp"
	"fmt"
	"strings"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/verdict"
)

// levelsFrom says of each criterion who set its levels.
func levelsFrom(r *Record) string {
	c := r.Study.Settings.Criteria
	const manual = "the Measurement Systems Analysis reference manual, 4th ed. 2010 (the default)"
	by := make(map[string][]string)
	for _, x := range []struct {
		label, key string
		own        *[2]float64
	}{{"effectiveness", verdict.Effectiveness, c.Effectiveness}, {"miss rate", verdict.Miss, c.Miss}, {"false-alarm rate", verdict.FalseAlarm, c.FalseAlarm}, {"kappa", verdict.Kappa, c.Kappa}} {
		source := manual
		switch {
		case x.own != nil && r.FlagLevels[x.key]:
			source = "the command line"
		case x.own != nil:
			source = "the study file"
		}
		by[source] = append(by[source], x.label)
	}
	var out []string
	for _, source := range []string{"the command line", "the study file", manual} {
		if of := by[source]; len(of) == 4 {
			out = append(out, "all from "+source)
		} else if len(of) > 0 {
			out = append(out, strings.Join(of, ", ")+" from "+source)
		}
	}
	return "Levels: " + strings.Join(out, "; ") + "."
}

// oneSidedHead heads the limits that answers rest on.
func oneSidedHead(r *Record) string {
	return "one-sided " + format.Confidence(r.Options.Confidence) + " limit"
}

// decidingCell is the one-sided limit that the answer for a criterion rests on.
// For programs it stands in the column of lower or of upper limits.
func decidingCell(c verdict.Criterion) Cell {
	limit, upper, ok := c.Deciding()
	switch {
	case !ok:
		return dashFor(cmp.Or(c.Estimate.Absent, c.Estimate.Unbounded))
	case upper:
		return Cell{Text: "≤ " + c.Exact(limit), Bounded: true, Upper: limit}
	}
	return Cell{Text: "≥ " + c.Exact(limit), Bounded: true, Lower: limit}
}

const moreParts = "parts more to settle it"

// settling says how many parts more would settle a criterion, in fewer words
// than a sentence has: "20 bad"; else why none would. For programs the number
// and the kind of part, or the reason, stand in two columns.
func settling(c verdict.Criterion) Cell {
	text := c.ToSettle()
	if c.More == 0 || text != format.Counted(c.More, c.Kind)+" more" {
		if text == "" {
			return say("")
		}
		return Cell{Text: text, Of: text}
	}
	return Cell{Text: strings.TrimSpace(format.Count(c.More) + " " + strings.TrimSuffix(c.Kind, "part")), Value: c.More, Of: c.Kind}
}

// criteriaTable holds each figure of each appraiser against its levels.
func criteriaTable(r *Record) Table {
	t := Table{
		Name:  "criteria",
		Title: "Criteria",
		Keys:  2,
		Columns: []Column{{Name: "appraiser"}, {Name: "figure", Whole: true}, {Name: "found", Numbers: true}, {Name: "accept", Numbers: true},
			{Name: "conditional", Numbers: true}, {Name: "by estimate"}, {Name: oneSidedHead(r), Numbers: true, Limits: true}, {Name: "data"}, {Name: moreParts, Long: true, Of: "kind of part, or why no more would"}},
		Note: levelsFrom(r) + " " + fmt.Sprintf("One-sided: at %s confidence the truth is at most, or at least, that; it is not an end of the two-sided interval. Shown: that limit, too, meets the level that the estimate meets (of a reject, misses the conditional level). Open: it does not.", format.Confidence(r.Options.Confidence)),
	}
	setAside := false
	add := func(name, figure string, c verdict.Criterion) {
		found, evidence, settle := dashFor(c.Estimate.Absent), "", say("")
		if c.Met != verdict.NotShown {
			found, evidence, settle = valueCell(c.Found(), c.Estimate.Value), c.Shows(), settling(c)
			setAside = setAside || c.Aside != ""
		}
		t.Rows = append(t.Rows, []Cell{say(name), say(figure), found, valueCell(c.Level(c.Levels[0]), c.Levels[0]), valueCell(c.Level(c.Levels[1]), c.Levels[1]), say(c.Met.String()), decidingCell(c), say(evidence), settle})
	}
	if r.Agreement.All != nil { // else nothing is known of any of these
		for _, a := range r.Verdict.Appraisers {
			for _, c := range a.Criteria {
				add(a.Name, c.Label(), c)
			}
		}
	}
	if b := r.Verdict.Between; b != nil {
		add("between", "kappa", *b)
	}
	if setAside {
		t.Note += " Set aside: the verdict does not rest on it, for the reason given."
	}
	return t
}
