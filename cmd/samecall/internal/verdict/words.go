package verdict

import (
	"fmt"
	"slices"
	"strconv"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
)

// Label is the criterion's name as people read it.
func (c Criterion) Label() string {
	switch c.Name {
	case Miss:
		return "miss rate"
	case FalseAlarm:
		return "false-alarm rate"
	}
	return c.Name
}

// Number writes a value of the criterion's kind.
func (c Criterion) Number(x float64) string {
	if c.Name == Kappa {
		return format.Figure(x)
	}
	return format.Percent(x)
}

// Level writes a level as it was set.
func (c Criterion) Level(x float64) string {
	if c.Name == Kappa {
		return format.Figure(x)
	}
	return strconv.FormatFloat(100*x, 'g', 4, 64) + " %"
}

// Text says what was found against what was asked: "miss rate 6.3 % against
// 5 % at most".
func (c Criterion) Text() string {
	if c.Met == NotShown {
		return c.Label() + " not known: " + c.Estimate.Absent.Error()
	}
	bound := "at least"
	if c.atMost() {
		bound = "at most"
	}
	return fmt.Sprintf("%s %s against %s %s", c.Label(), c.Number(c.Estimate.Value), c.Level(c.Against), bound)
}

// EvidenceText says what the data show of it and, where that is open, what
// would settle it.
func (c Criterion) EvidenceText() string {
	switch {
	case c.Met == NotShown:
		return ""
	case c.Evidence == Shown:
		return "The data show it."
	case c.Evidence == Contradicted && c.atMost():
		return "The data show that it is above."
	case c.Evidence == Contradicted:
		return "The data show that it is below."
	}
	text := "Open"
	if c.Name != Kappa && !c.meets(c.Best, c.Against) {
		than := "more"
		if c.atMost() {
			than = "less"
		}
		text += fmt.Sprintf(": %s cannot show %s than %s", format.Counted(c.Parts, c.Kind), than, c.Number(c.Best))
	}
	if c.More == 0 {
		return text + "; the figure is so close to the level that more parts would not settle it."
	}
	show := "that it holds"
	switch {
	case c.Met == Reject && c.atMost():
		show = "that it is above"
	case c.Met == Reject:
		show = "that it is below"
	}
	return text + fmt.Sprintf("; if the rate stayed, %s more would show %s.", format.Counted(c.More, c.Kind), show)
}

// reasons returns the one or two sentences that decide the verdict, and how
// far the data carry each.
func reasons(r *judge.Result, v *Verdict) (why, carry []string) {
	type ground struct {
		who string
		c   Criterion
	}
	var grounds []ground
	for _, a := range v.Appraisers {
		for _, c := range a.Criteria {
			if c.Met == v.Overall {
				grounds = append(grounds, ground{a.Name, c})
			}
		}
	}
	if b := v.Between; b != nil && b.Met == v.Overall {
		grounds = append(grounds, ground{"all appraisers together", *b})
	}
	if v.Overall == Accept {
		n := 0
		open := 0
		for _, g := range grounds {
			n++
			if g.c.Evidence == Open {
				open++
			}
		}
		why = append(why, "Every figure meets its accept level.")
		if open > 0 {
			carry = append(carry, fmt.Sprintf("%d of the %d figures are open: the estimates meet the level, the data do not show it. %s", open, n, weakest(v)))
		} else {
			carry = append(carry, "The data show every one of them.")
		}
		return why, carry
	}
	if r.Agreement.All == nil {
		return []string{"No part has a reference: whether the calls are right cannot be told."}, nil
	}
	// The furthest from its level first.
	slices.SortStableFunc(grounds, func(a, b ground) int {
		switch x, y := a.c.distance(), b.c.distance(); {
		case x > y:
			return -1
		case x < y:
			return 1
		}
		return 0
	})
	const most = 2
	for i, g := range grounds {
		if i == most {
			why = append(why, fmt.Sprintf("And %s more.", format.Counted(len(grounds)-most, "figure")))
			break
		}
		why = append(why, g.who+": "+g.c.Text()+".")
		carry = append(carry, g.c.EvidenceText())
	}
	return why, carry
}

// distance is how far a figure is from its level, in units of what the level
// leaves.
func (c Criterion) distance() float64 {
	d := c.Against - c.Estimate.Value
	if c.atMost() {
		return -d / max(c.Against, 0.01)
	}
	return d / max(1-c.Against, 0.01)
}

// weakest says which open figure needs most.
func weakest(v *Verdict) string {
	text, most := "", 0
	for _, a := range v.Appraisers {
		for _, c := range a.Criteria {
			if c.Evidence == Open && c.More > most {
				most = c.More
				text = fmt.Sprintf("Furthest from it is the %s of %s. %s", c.Label(), a.Name, c.EvidenceText())
			}
		}
	}
	return text
}

// largerStudy is how many times the present number of parts may be asked for.
const largerStudy = 3

// next returns what to do now: what the causes ask for, then what the study
// lacks.
func next(r *judge.Result, v *Verdict) []string {
	var out []string
	add := func(s string) {
		if s != "" && !slices.Contains(out, s) {
			out = append(out, s)
		}
	}
	for _, c := range v.Causes {
		add(c.Do)
	}
	if all := r.Agreement.All; all != nil && len(r.Study.Appraisers) > 1 && len(all.WrongEveryTime) > 0 && !has(v.Causes, Everyone, codeStandard) {
		add(fmt.Sprintf("Every call on %s was wrong: check the reference of these parts before anything else.", list(r, all.WrongEveryTime)))
	}
	need := make(map[string]Criterion)
	for _, a := range v.Appraisers {
		for _, c := range a.Criteria {
			if c.Met == NotShown {
				continue
			}
			if c.Evidence == Open && c.Met != Reject && c.More > need[c.Kind].More {
				need[c.Kind] = c
			}
		}
	}
	for _, kind := range []string{"bad part", "good part", "part"} {
		c := need[kind]
		switch {
		case c.More == 0:
			continue
		case c.More > largerStudy*c.Parts:
			add(fmt.Sprintf("Showing that the %s holds would take %s more: rather than enlarge the study, bring the rate down.", c.Label(), format.Counted(c.More, kind)))
		default:
			add(fmt.Sprintf("To show that the %s holds, add %s near the limits.", c.Label(), format.Counted(c.More, kind)))
		}
		break
	}
	switch {
	case r.Agreement.All == nil:
		add("Give each part a reference (a column reference, or value and limits): without one, nobody knows whether the calls are right.")
	case v.Overall == NotShown:
		add("Add parts of the kind that is missing; a study needs both bad and good ones, close to the limits.")
	}
	for a, w := range r.Agreement.Within {
		if w.Share.Absent != nil {
			add(fmt.Sprintf("Let %s call the parts a second and third time: with one trial nobody knows whether it repeats itself.", r.Study.Appraisers[a]))
			break
		}
	}
	if v.Overall == Accept && len(v.Causes) == 0 && len(out) == 0 {
		add("Nothing is to be fixed. Repeat the study when the gauge, the people or the parts change.")
	}
	return out
}
