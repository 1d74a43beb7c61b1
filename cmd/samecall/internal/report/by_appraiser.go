package report

import (
	"slices"
	"strings"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/verdict"
)

const (
	// mostNamed is how many appraisers of one verdict are all named; of more,
	// only fewNamed.
	mostNamed = 4
	fewNamed  = 3
)

// byAppraiser says in one line which verdict each appraiser has, worst first,
// and whether the data show it; empty where that says no more than the overall
// verdict.
func byAppraiser(v *verdict.Verdict) string {
	groups := make(map[string][]string)
	var order []verdict.Appraiser
	for _, a := range v.Appraisers {
		key := verdictWords(a)
		if groups[key] == nil {
			order = append(order, a)
		}
		groups[key] = append(groups[key], a.Name)
	}
	if len(v.Appraisers) < 2 || len(order) == 1 && v.Overall == order[0].Verdict && v.Overall != verdict.Reject && v.Overall != verdict.Conditional {
		return ""
	}
	slices.SortStableFunc(order, func(a, b verdict.Appraiser) int {
		switch {
		case a.Verdict != b.Verdict:
			return int(b.Verdict) - int(a.Verdict)
		case a.Shown():
			return -1
		}
		return 1
	})
	var out []string
	for _, a := range order {
		key := verdictWords(a)
		names := named(groups[key])
		if len(order) == 1 && len(v.Appraisers) > mostNamed {
			names = "all " + format.Count(len(v.Appraisers))
		}
		out = append(out, key+": "+names)
	}
	return strings.TrimSuffix("By appraiser: "+strings.Join(out, "; "), ".") + "."
}

// carriedBy says after a verdict on the whole how far the data carry it; empty
// where there is none.
func carriedBy(v *verdict.Verdict) string {
	switch {
	case v.Overall == verdict.NotShown:
		return ""
	case v.Shown():
		return " (the data show it)"
	}
	return " (open: the data do not show it)"
}

// headline is the verdict on the whole in its own line.
func headline(v *verdict.Verdict) string {
	return "Verdict: " + strings.ToUpper(v.Overall.String()) + carriedBy(v)
}

// verdictWords is the verdict on an appraiser, with how far the data carry it.
func verdictWords(a verdict.Appraiser) string {
	switch {
	case a.Verdict == verdict.NotShown:
		return a.Verdict.String()
	case a.Shown():
		return a.Verdict.String() + " (the data show it)"
	}
	return a.Verdict.String() + " (open)"
}

// evidenceWord is the same for a table.
func evidenceWord(a verdict.Appraiser) string { return shownWord(a.Verdict, a.Shown()) }

func shownWord(level verdict.Level, shown bool) string {
	switch {
	case level == verdict.NotShown:
		return ""
	case shown:
		return "shown"
	}
	return "open"
}

// named names a few of several, and counts the others.
func named(names []string) string {
	if len(names) > mostNamed {
		return strings.Join(names[:fewNamed], ", ") + " and " + format.Count(len(names)-fewNamed) + " more"
	}
	last := len(names) - 1
	if last == 0 {
		return names[0]
	}
	return strings.Join(names[:last], ", ") + " and " + names[last]
}

// verdictLines are the reasons for the verdict, and the line on each appraiser.
func verdictLines(r *Record) []string {
	out := reasonLines(r)
	if each := byAppraiser(r.Verdict); each != "" {
		out = append(out, each)
	}
	return out
}

// evidenceNote explains the words on the verdict on an appraiser.
const evidenceNote = "Data: shown, if they show that verdict at the confidence; open, if not."
