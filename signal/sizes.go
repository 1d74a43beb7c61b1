package signal

import (
	"fmt"
	"math"
)

// Member is one member of a go/no-go gauge as calibrated: the go or no-go end
// that decides at one limit.
type Member struct {
	Side        Side    // the limit at which it decides
	Size        float64 // calibrated size
	Uncertainty float64 // expanded uncertainty of Size, k = 2
	// WearLimit is the size beyond which the member is worn out; meaningful if
	// HasWear. WearsUp: the member grows with wear, as a ring or snap gauge
	// does; a plug shrinks.
	WearLimit float64
	HasWear   bool
	WearsUp   bool
}

// Finding says how far a member's size explains where its limit cuts.
type Finding int

// The finding is Explained where the offset lies within the member's deviation
// ± its uncertainty, PartlyExplained where the two intervals only overlap, and
// Unexplained where they do not meet.
const (
	Explained Finding = iota
	PartlyExplained
	Unexplained
)

func (f Finding) String() string {
	return nameOf(f, "explained", "partly explained", "not explained")
}

// Explanation compares the offset of a cut with the calibrated size of the
// gauge member behind it.
type Explanation struct {
	Member    Member
	Deviation float64 // Size minus limit
	// Lower and Upper are Deviation ∓ Uncertainty.
	Lower, Upper float64
	Offset       Estimate // as found
	// Remainder is the offset that the deviation leaves, with an interval that
	// carries both uncertainties.
	Remainder Estimate
	Finding   Finding
	// Worn: the size lies beyond the wear limit; PerhapsWorn: it lies within
	// its uncertainty of it.
	Worn, PerhapsWorn bool
}

// Explain tells whether the calibrated size of a gauge member explains the
// offset found at its limit.
//
// It returns an error if a number is not finite, the uncertainty is negative,
// or the fit has no cut with an interval there.
func Explain(l *LimitFit, m Member) (*Explanation, error) {
	if l == nil || !l.Known() || !l.HasLimit {
		return nil, fmt.Errorf("no cut was found at the %s limit to compare the gauge with", m.Side)
	}
	if l.Side != m.Side {
		return nil, fmt.Errorf("the gauge member is for the %s limit, the cut for the %s one", m.Side, l.Side)
	}
	if !finite(m.Size, m.Uncertainty, m.WearLimit) || m.Uncertainty < 0 {
		return nil, fmt.Errorf("gauge member at the %s limit: size %v, uncertainty %v, wear limit %v: want finite numbers, the uncertainty not negative", m.Side, m.Size, m.Uncertainty, m.WearLimit)
	}
	if !l.Offset.HasLower && !l.Offset.HasUpper {
		return nil, fmt.Errorf("the offset at the %s limit has no interval to compare the gauge with: %s", m.Side, l.Offset.Why)
	}
	e := &Explanation{Member: m, Deviation: m.Size - l.Limit, Offset: l.Offset}
	e.Lower, e.Upper = e.Deviation-m.Uncertainty, e.Deviation+m.Uncertainty
	r := Estimate{Value: l.Offset.Value - e.Deviation, Confidence: l.Offset.Confidence, Method: "offset's interval and expanded uncertainty (k = 2), added in quadrature", Why: l.Offset.Why}
	if l.Offset.HasLower {
		r.Lower, r.HasLower = r.Value-math.Hypot(l.Offset.Value-l.Offset.Lower, m.Uncertainty), true
	}
	if l.Offset.HasUpper {
		r.Upper, r.HasUpper = r.Value+math.Hypot(l.Offset.Upper-l.Offset.Value, m.Uncertainty), true
	}
	e.Remainder = r
	switch {
	case l.Offset.Value >= e.Lower && l.Offset.Value <= e.Upper:
		e.Finding = Explained
	case (!l.Offset.HasLower || l.Offset.Lower <= e.Upper) && (!l.Offset.HasUpper || l.Offset.Upper >= e.Lower):
		e.Finding = PartlyExplained
	default:
		e.Finding = Unexplained
	}
	if m.HasWear {
		beyond := m.WearLimit - m.Size
		if m.WearsUp {
			beyond = -beyond
		}
		e.Worn = beyond > 0
		e.PerhapsWorn = math.Abs(beyond) <= m.Uncertainty
	}
	return e, nil
}
