package verdict

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
	"samecall/signal"
)

// farPart is a part whose calls the acceptance curve through all others
// cannot explain.
type farPart struct {
	part  int
	fit   signal.PartFit
	wrong []int // the appraisers with a wrong call on it
}

// farParts returns the outliers of the pooled curve that were called wrong and
// lie farther from each cut than the grey zone, at its widest, is wide. (With
// few mixed parts the curve without an outlier can be too steep.)
func farParts(r *judge.Result) []farPart {
	if r.Zone == nil || r.Zone.Curves == nil {
		return nil
	}
	c := r.Zone.Curves.Pooled
	if len(c.Outliers) == 0 {
		return nil
	}
	byName := make(map[string]int, len(r.Study.Parts))
	for part, name := range r.Study.Parts {
		byName[name] = part
	}
	var out []farPart
	for _, i := range c.Outliers {
		f := farPart{part: byName[c.Parts[i].Name], fit: c.Parts[i]}
		if !farFromCuts(plain(c), f.fit.Value) {
			continue
		}
		inside := r.Zone.Limits.Inside(f.fit.Value)
		for a := range r.Study.Appraisers {
			if slices.ContainsFunc(r.Study.Ratings.Calls(f.part, a), func(c agreement.Category) bool {
				return c != agreement.Missing && r.Study.Ratings.Accepts(c) != inside
			}) {
				f.wrong = append(f.wrong, a)
			}
		}
		if len(f.wrong) > 0 {
			out = append(out, f)
		}
	}
	return out
}

func farFromCuts(c *signal.Curve, x float64) bool {
	for _, l := range sides(c) {
		if math.Abs(x-l.Cut.Value) <= max(l.Width.Value, l.Width.Upper) {
			return false
		}
	}
	return true
}

// farErrors: wrong calls on parts where nobody should be in doubt. Those of
// an appraiser who is in doubt everywhere, or calls without regard to the value,
// are no surprise.
func farErrors(f *finder) []Cause {
	var names []string
	var who []int
	for _, far := range f.far {
		surprising := slices.DeleteFunc(slices.Clone(far.wrong), func(a int) bool { return f.has(a, codeInconsistent, codeScattered) })
		if len(surprising) == 0 {
			continue
		}
		who = append(who, surprising...)
		if len(names) == manyNames {
			names = append(names, "…")
		}
		if len(names) < manyNames {
			names = append(names, f.place(far.fit))
		}
	}
	if len(names) == 0 {
		return nil
	}
	slices.Sort(who)
	who = slices.Compact(who)
	cause := Cause{
		Code: codeFar,
		Text: "Wrong calls where nobody should be in doubt: " + strings.Join(names, ", ") + ". Neither the width nor the place of the grey zone explains them.",
		Do:   "Check these parts and their records first: parts mixed up, a slip in writing down, a defect that the value does not tell of. Then attention and handling.",
	}
	if len(who) == 1 && f.several() {
		cause.Appraisers = who
		cause.Text = fmt.Sprintf("%s made wrong calls where nobody should be in doubt: %s. Neither the width nor the place of the grey zone explains them.", f.name(who[0]), strings.Join(names, ", "))
		cause.Do = fmt.Sprintf("Check these parts with %s, and the records of the calls: parts mixed up, a slip in writing down, attention, handling.", f.name(who[0]))
	}
	return []Cause{cause}
}

// place tells a part, its value and how its calls went.
func (f *finder) place(p signal.PartFit) string {
	s := f.Scale()
	return fmt.Sprintf("%s at %s (accepted in %s of %s)", p.Name, s.WithUnit(s.Value(p.Value)), format.Count(p.Accepted), format.Counted(p.Calls, "call"))
}
