package verdict

import "samecall/cmd/samecall/internal/judge"

// containment asks for what was passed before, where bad parts are accepted:
// a cut lies outside its limit, or the data show a miss rate above its accept
// level. Common practice, no source.
func containment(r *judge.Result, v *Verdict) string {
	if has(v.Causes, Everyone, codeReversed) || !acceptsBadParts(v) {
		return ""
	}
	if r.Study.Settings.Lower == nil && r.Study.Settings.Upper == nil {
		return "Consider parts passed by this inspection since its last good check as suspect, by your own rules."
	}
	return "Consider parts passed with this gauge since its last good check as suspect, by your own rules."
}

func acceptsBadParts(v *Verdict) bool {
	for _, c := range v.Causes {
		if c.outside {
			return true
		}
	}
	for _, a := range v.Appraisers {
		c := a.criterion(Miss)
		if c.Met != NotShown && c.Estimate.Unbounded == nil && !c.meets(c.Estimate.OneSided.Lower, c.Levels[0]) {
			return true
		}
	}
	return false
}
