package report

import "samecall/agreement"

// belowNote says, where one of several coefficients is below −1, why that can
// be; empty elsewhere. (Rounding may put one of −1 a little below it.)
func belowNote(coefficients ...agreement.Estimate) string {
	for _, e := range coefficients {
		if e.Absent == nil && e.Value < -1-1e-12 {
			return "A kappa below −1 tells nothing: its agreement is that of the few parts called twice or more, its chance that of all parts called."
		}
	}
	return ""
}

// withinKappas are the kappas of appraisers over their own trials.
func withinKappas(within []agreement.Within) (out []agreement.Estimate) {
	for _, w := range within {
		out = append(out, w.Kappa)
	}
	return out
}
