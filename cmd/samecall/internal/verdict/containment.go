package verdict

import (
	"fmt"
	"slices"

	"samecall/cmd/samecall/internal/judge"
)

// containment asks for what was passed before, where bad parts are accepted:
// a cut lies outside its limit, or the data show a miss rate above its accept
// level. Common practice, no source. Where nothing points beyond single
// appraisers it is what they passed.
func containment(r *judge.Result, v *Verdict) string {
	who := acceptBadParts(v)
	if has(v.Causes, Everyone, codeReversed) || len(who) == 0 {
		return ""
	}
	shared := slices.ContainsFunc(v.Causes, func(c Cause) bool { return c.Appraisers == nil })
	switch {
	case !shared && (len(who) < len(v.Appraisers) || v.peopleOnly()):
		var names []string
		for _, a := range who {
			names = append(names, v.Appraisers[a].Name)
		}
		return fmt.Sprintf("Consider parts passed by %s since the last good check as suspect, by your own rules.", some(names))
	case r.Study.Settings.Lower == nil && r.Study.Settings.Upper == nil:
		return "Consider parts passed by this inspection since its last good check as suspect, by your own rules."
	}
	return "Consider parts passed with this gauge since its last good check as suspect, by your own rules."
}

// acceptBadParts returns the appraisers who are known to accept bad parts.
func acceptBadParts(v *Verdict) []int {
	var who []int
	for a, ap := range v.Appraisers {
		outside := slices.ContainsFunc(v.Causes, func(c Cause) bool { return c.outside && c.of(a) })
		c := ap.criterion(Miss)
		shown := c.Met != NotShown && c.Estimate.Unbounded == nil && !c.meets(c.Estimate.OneSided.Lower, c.Levels[0])
		if outside || shown {
			who = append(who, a)
		}
	}
	return who
}

// peopleOnly reports whether every cause is one of single appraisers and their
// calls: nothing is to be done before something with them.
func (v *Verdict) peopleOnly() bool {
	return len(v.Causes) > 0 && !slices.ContainsFunc(v.Causes, func(c Cause) bool { return c.Appraisers == nil || c.beforePeople() })
}
