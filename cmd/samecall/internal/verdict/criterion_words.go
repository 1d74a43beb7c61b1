package verdict

import (
	"fmt"
	"slices"
	"strconv"
	"strings"

	"samecall/cmd/samecall/internal/format"
)

// Label is the criterion's name as people read it.
func (c Criterion) Label() string {
	switch {
	case c.Name == Miss:
		return "miss rate"
	case c.Name == FalseAlarm:
		return "false-alarm rate"
	case c.between:
		return "kappa between appraisers"
	}
	return c.Name
}

// of names the criterion and whose it is.
func (c Criterion) of(who []string) string {
	if c.between {
		return c.Label()
	}
	return c.Label() + " of " + some(who)
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
		if s := strconv.FormatFloat(x, 'g', 4, 64); len(s) > len("0.00") {
			return s
		}
		return format.Figure(x)
	}
	return strconv.FormatFloat(100*x, 'g', 4, 64) + " %"
}

// Found writes the estimate.
func (c Criterion) Found() string { return c.exact(c.Estimate.Value) }

// exact writes a value beside the levels of the criterion.
func (c Criterion) exact(x float64) string { return besides(x, c.Number(x), c.Levels[:]...) }

// besides writes a figure that stands beside levels: as the text given or,
// where that stands otherwise to a level than the figure does (on it and not
// below, as 0.7478 rounded and 0.75), with more digits, four at least.
func besides(x float64, text string, levels ...float64) string {
	number, percent := strings.CutSuffix(text, " %")
	value, unit := x, ""
	if percent {
		value, unit = 100*x, "e-2"
	}
	for n := 4; n < 17 && misleads(x, number+unit, levels); n++ {
		number = strings.ReplaceAll(strconv.FormatFloat(value, 'g', n, 64), "-", "−")
	}
	if percent {
		number += " %"
	}
	return number
}

// misleads reports whether a number as it is read stands otherwise to a level
// than x does.
func misleads(x float64, number string, levels []float64) bool {
	read, err := strconv.ParseFloat(strings.NewReplacer("−", "-", "<", "").Replace(number), 64)
	return err != nil || slices.ContainsFunc(levels, func(level float64) bool { return side(read, level) != side(x, level) })
}

// Text says what was found against what was asked: "miss rate 6.3 %, more
// than the 5 % allowed".
func (c Criterion) Text() string {
	if c.Met == NotShown {
		return c.Label() + " not known: " + strings.TrimSuffix(c.Estimate.Absent.Error(), ": the "+c.Label()+" is unknown")
	}
	short, enough, asked := "less than", "at least", "required"
	if c.atMost() {
		short, enough, asked = "more than", "at most", "allowed"
	}
	text := c.Label() + " " + c.Found() + ", "
	switch c.Met {
	case Accept:
		return text + enough + " " + c.Level(c.Levels[0])
	case Conditional:
		return fmt.Sprintf("%s%s the %s to accept, but %s %s", text, short, c.Level(c.Levels[0]), enough, c.Level(c.Levels[1]))
	}
	return fmt.Sprintf("%s%s the %s %s", text, short, c.Level(c.Levels[1]), asked)
}

// claim is what Evidence speaks of: "at most 5 %".
func (c Criterion) claim() string {
	met, missed := "at least", "below"
	if c.atMost() {
		met, missed = "at most", "above"
	}
	if c.Met == Reject {
		return missed + " " + c.Level(c.Against)
	}
	return met + " " + c.Level(c.Against)
}

// EvidenceText says what the data show of it and, where that is open, what
// would settle it.
func (c Criterion) EvidenceText() string {
	switch {
	case c.Met == NotShown:
		return ""
	case c.Evidence != Open && c.Met == Conditional:
		return "The data show that it is " + c.claim() + "."
	case c.Evidence != Open:
		return "The data show it."
	}
	if c.Met == Reject {
		return "Open: " + c.otherSide() + "." + c.tooFew()
	}
	return "Open: " + c.open() + "."
}

// otherSide says what speaks against a rejection that is open.
func (c Criterion) otherSide() string {
	if c.Estimate.Unbounded != nil {
		return c.Estimate.Unbounded.Error()
	}
	limit := c.deciding(c.Estimate.OneSided)
	far, level := "high", "the "+c.Level(c.Against)+" required"
	if c.atMost() {
		far, level = "low", "the "+c.Level(c.Against)+" allowed"
	}
	reach := "above "
	switch {
	case onLevel(limit, c.Against):
		reach = "on "
	case c.atMost():
		reach = "within "
	}
	bound := "as " + far + " as " + c.exact(limit)
	if x, yes := strings.CutPrefix(c.exact(limit), "<"); yes {
		bound = "less than " + x
	}
	text := fmt.Sprintf("it may be %s (one-sided, %s), %s%s", bound, format.Confidence(c.Confidence), reach, level)
	if c.More > 0 {
		return text + fmt.Sprintf("; %s more at this %s would show it", format.Counted(c.More, c.Kind), c.measure())
	}
	return text + fmt.Sprintf("; not even %s times the parts would show it", format.Count(manyTimes))
}

// tooFew says, with a space before it, that so few parts cannot show a rate of
// errors as low as the level asks, however good the calls.
func (c Criterion) tooFew() string {
	if !c.atMost() || c.meets(c.Best, c.Against) {
		return ""
	}
	return fmt.Sprintf(" %s cannot show a %s below %s: at best %s.", format.Counted(c.Parts, c.Kind), c.Label(), c.Level(c.Against), c.exact(c.Best))
}

// open says why a criterion is open and what would settle it.
func (c Criterion) open() string {
	if c.Estimate.Unbounded != nil {
		return c.Estimate.Unbounded.Error()
	}
	text := ""
	if c.Name != Kappa && !c.meets(c.Best, c.Against) {
		than := "more"
		if c.atMost() {
			than = "less"
		}
		text = fmt.Sprintf("%s cannot show %s than %s; ", format.Counted(c.Parts, c.Kind), than, c.exact(c.Best))
	}
	switch {
	case c.More > 0 && c.errorFree():
		return text + fmt.Sprintf("%s more without an error would settle it", format.Counted(c.More, c.Kind))
	case c.More > 0:
		return text + fmt.Sprintf("%s more at this %s would settle it", format.Counted(c.More, c.Kind), c.measure())
	case c.errorFree(): // and the level leaves no room for an error
		return text + "no number of parts can show that it is " + c.claim()
	case onLevel(c.Estimate.Value, c.Against):
		return text + "it lies on its level, which more parts would not settle"
	}
	return text + fmt.Sprintf("it lies so close to its level that not even %s times the parts would settle it", format.Count(manyTimes))
}

// Shows says in a word whether the data show what the estimate says: that it
// meets the level it reaches or, of a rejection, that it misses the
// conditional level; or that the figure is not counted.
func (c Criterion) Shows() string {
	switch {
	case c.Met == NotShown:
		return ""
	case !c.counts():
		return "set aside"
	case c.Evidence == Open:
		return "open"
	}
	return "shown"
}

// ToSettle says in a few words what would settle a criterion that is open, or
// why it is not counted.
func (c Criterion) ToSettle() string {
	switch {
	case c.Met != NotShown && !c.counts():
		return c.Aside
	case c.Met == NotShown || c.Evidence != Open:
		return ""
	case c.More > 0:
		return format.Counted(c.More, c.Kind) + " more"
	case c.Estimate.Unbounded != nil:
		return c.Estimate.Unbounded.Error()
	case c.errorFree():
		return "no number of parts can"
	case onLevel(c.Estimate.Value, c.Against):
		return "on its level: more parts cannot"
	}
	return fmt.Sprintf("not even %s times the parts", format.Count(manyTimes))
}

// errorFree reports whether not one error was found.
func (c Criterion) errorFree() bool {
	if c.atMost() {
		return c.Estimate.Value == 0
	}
	return c.Estimate.Value == 1
}

// measure is what stays the same in a larger study.
func (c Criterion) measure() string {
	switch c.Name {
	case Kappa:
		return "kappa"
	case Effectiveness:
		return "share"
	}
	return "rate"
}
