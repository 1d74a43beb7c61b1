package verdict

// Shown reports whether the data show the verdict on the whole, by the rule
// for an appraiser: of a rejection, that they show it of one appraiser or of
// the kappa between them; of the others, that every figure which counts meets
// the level.
func (v *Verdict) Shown() bool {
	switch v.Overall {
	case NotShown:
		return false
	case Reject:
		for _, a := range v.Appraisers {
			if a.Shown() && a.Verdict == Reject {
				return true
			}
		}
		return v.betweenCounts() && v.Between.Met == Reject && v.Between.Evidence == Contradicted
	}
	return v.Unshown(v.Overall) == ""
}
