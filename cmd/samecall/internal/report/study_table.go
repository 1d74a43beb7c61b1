package report

import (
	"fmt"
	"slices"
	"strings"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/study"
)

// studyTable says what was studied and decided, and how it came about.
func studyTable(r *Record) Table {
	t := Table{Name: "study", Title: "What was studied", Columns: []Column{{Name: "what"}, {Name: "value", Long: true}}}
	add := func(what, value string) {
		if value != "" {
			t.Rows = append(t.Rows, []Cell{say(what), say(value)})
		}
	}
	number := func(what, text string, value any) {
		t.Rows = append(t.Rows, []Cell{say(what), valueCell(text, value)})
	}
	d := newStudy(r)
	set := r.Study.Settings
	add("title", title(r))
	add("characteristic", set.Characteristic)
	add("gauge", set.Gauge)
	add("limits", limitsText(r))
	add("calibrated size", memberText(r.Scale(), "lower", set.GaugeSizes.Lower))
	add("calibrated size", memberText(r.Scale(), "upper", set.GaugeSizes.Upper))
	parts := format.Count(d.Parts)
	if d.BadParts != nil {
		parts += fmt.Sprintf(": %s bad, %s good", format.Count(*d.BadParts), format.Count(*d.GoodParts))
	}
	if d.BadParts == nil {
		number("parts", parts, d.Parts)
	} else {
		add("parts", parts)
	}
	add("appraisers", strings.Join(r.Study.Appraisers, ", "))
	add("trials", trials(r))
	add("trials of each", trialsOfEach(r))
	number("calls", format.Count(d.Calls), d.Calls)
	if d.Missing > 0 {
		number("missing calls", format.Count(d.Missing), d.Missing)
	}
	categories := strings.Join(r.Study.Categories, ", ")
	if d.Ordered {
		categories += ", from best to worst"
	}
	add("categories", categories)
	add("accepted", strings.Join(d.Accept, ", "))
	add("words that accept", strings.Join(set.Accept, ", "))
	add("words that reject", strings.Join(set.Reject, ", "))
	add("reference", referenceText(r.Study))
	add("verdict", r.Verdict.Overall.String()+carriedBy(r.Verdict))
	number("confidence", format.Confidence(r.Options.Confidence), r.Options.Confidence)
	add("resamples", resamplesText(r))
	add("pairing of trials", r.Options.Pairing.String())
	if r.Zone != nil && r.Zone.Curves != nil {
		sigma := "one σ for both limits"
		if r.Zone.Curves.Pooled.Options.TwoSigmas {
			sigma = "a σ for each limit"
		}
		add("acceptance curve", r.Zone.Curves.Pooled.Options.Link.String()+", "+sigma)
	}
	for _, in := range r.Study.Inputs {
		add("sheet of "+in.File, in.Sheet)
		add("SHA-256 of "+in.File, in.SHA256)
	}
	add("samecall", r.Version)
	return t
}

// withCommand adds the line that computes a record again, for outputs that
// neither break nor escape what stands in a cell.
func withCommand(t Table, r *Record) Table {
	t.Rows = slices.Clip(t.Rows)
	t.Rows = append(t.Rows, []Cell{say(computedBy), say(r.Command)})
	if r.RunIn != "" {
		t.Rows = append(t.Rows, []Cell{say("run in"), say(r.RunIn)})
	}
	return t
}

const computedBy = "computed by"

// aboveCommand is read before the line that computes a record again, where it
// stands on its own.
func aboveCommand(r *Record) string {
	if r.RunIn == "" {
		return "Computed by this line:"
	}
	return "Computed by this line, run in " + r.RunIn + ":"
}

// trialsOfEach lists the trials of each appraiser, where they are not 1, 2 and
// so on of all; empty elsewhere.
func trialsOfEach(r *Record) string {
	plain := true
	var out []string
	for a, numbers := range r.Study.TrialNames {
		for i, n := range numbers {
			plain = plain && n == i+1
		}
		plain = plain && len(numbers) == len(r.Study.TrialNames[0])
		out = append(out, r.Study.Appraisers[a]+" "+study.TrialNumbers(numbers))
	}
	if plain {
		return ""
	}
	return strings.Join(out, "; ")
}

// resamplesText says how many resamples the intervals of kappas rest on: those
// that were drawn, not those that were asked for.
func resamplesText(r *Record) string {
	n := r.Agreement.Intervals
	drawn := fmt.Sprintf("%d, seed %d", r.Options.Resamples, r.Options.Seed)
	none := "none"
	if n := r.Options.Resamples; n > 0 {
		none = fmt.Sprintf("none of the %d asked for", n)
	}
	switch {
	case n.Resampled > 0 && n.Linearised > 0:
		return fmt.Sprintf("%s, for %s of %s kappas and coefficients; none for the others (linearised)", drawn, format.Count(n.Resampled), format.Count(n.Resampled+n.Linearised))
	case n.Resampled > 0:
		return drawn
	case n.Linearised > 0:
		return none + " (linearised)"
	}
	return none + " (no interval rests on them)"
}

// causesTable lists causes and what to do next.
func causesTable(r *Record) Table {
	t := Table{Name: "findings", Title: "Findings", Columns: []Column{{Name: "kind"}, {Name: "text", Long: true}}}
	add := func(kind, text string) { t.Rows = append(t.Rows, []Cell{say(kind), say(text)}) }
	for _, why := range reasonLines(r) {
		add("reason", why)
	}
	if each := byAppraiser(r.Verdict); each != "" {
		add("by appraiser", strings.TrimPrefix(each, "By appraiser: "))
	}
	for _, c := range r.Verdict.Causes {
		add("cause", c.Text)
	}
	for _, n := range r.Verdict.Next {
		add("next", n)
	}
	for _, n := range allNotes(r) {
		add("note", n)
	}
	for _, c := range r.Verdict.Cautions {
		add("caution", c)
	}
	return t
}

// allNotes are the sentences to be said with the result.
func allNotes(r *Record) []string {
	var out []string
	out = append(out, zoneNotes(r, onPage)...)
	for _, w := range r.Warnings {
		out = append(out, w.Text)
	}
	return out
}
