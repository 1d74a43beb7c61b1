package signal

// Warning is said with a result, and is no failure. It is an error so that
// warnings can be handled like errors.
type Warning struct {
	Code WarningCode
	Text string
}

func (w Warning) Error() string { return w.Text }

// WarningCode names the kind of a warning for programs.
type WarningCode string

// The kinds of warning.
const (
	WarnNoLapse     WarningCode = "no-lapse-rate"
	WarnSeparated   WarningCode = "separated"
	WarnOneSided    WarningCode = "one-sided"
	WarnFewValues   WarningCode = "few-values"
	WarnOverlap     WarningCode = "zones-overlap"
	WarnLackOfFit   WarningCode = "lack-of-fit"
	WarnOutliers    WarningCode = "outliers"
	WarnNotCompared WarningCode = "not-compared"
	WarnRoughTest   WarningCode = "rough-test"
)
