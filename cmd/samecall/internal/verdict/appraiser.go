package verdict

// Shown reports whether the data show the verdict on an appraiser: of a
// rejection, that one figure misses the conditional level; of the others, that
// every figure which counts meets the level. Nothing is shown of an appraiser
// whose verdict is NotShown.
func (a Appraiser) Shown() bool {
	switch a.Verdict {
	case NotShown:
		return false
	case Reject:
		for _, c := range a.Criteria {
			if c.counts() && c.Met == Reject && c.Evidence == Contradicted {
				return true
			}
		}
		return false
	}
	v := Verdict{Appraisers: []Appraiser{a}}
	return v.Unshown(a.Verdict) == ""
}

// Deciding is the one-sided limit that the evidence for a criterion rests on,
// and whether it is an upper one. There is none without an estimate, and where
// nothing bounds it.
func (c Criterion) Deciding() (limit float64, upper, ok bool) {
	if c.Estimate.Absent != nil || c.Estimate.Unbounded != nil {
		return 0, false, false
	}
	return c.deciding(c.Estimate.OneSided), c.atMost() == (c.Met != Reject), true
}

// Exact writes a value beside the levels of the criterion, as the sentences on
// it do: with more digits where it would else seem to lie on another side.
func (c Criterion) Exact(x float64) string { return c.exact(x) }
