package signal

import (
	"cmp"
	"fmt"
	"slices"
)

// Spread is the number of standard deviations that the unanimous zone is taken
// to span: 5.15 covers 99 % of a normal distribution. 6 is the other choice in
// use.
const Spread = 5.15

// Zone is the unanimous zone at one limit.
type Zone struct {
	Side       Side
	Reject     float64 // from outside, the last value up to which every part was always rejected
	Accept     float64 // from inside, the last value up to which every part was always accepted
	RejectPart int     // their indices among the parts given
	AcceptPart int
	Width      float64 // distance between them, d
	// Between is the number of parts between them, whatever their calls. With
	// none, d is the gap between neighbours and only an upper bound of the zone.
	Between int
	Mixed   int // mixed parts among them
	Found   bool
	Why     string // why there is no zone
}

// Unanimity is the unanimous zone at each limit and what follows from its
// width.
type Unanimity struct {
	Lower, Upper *Zone // nil: no such limit
	MeanWidth    float64
	Spread       float64
	Sigma        float64 // MeanWidth / Spread; meaningful if Found
	PercentGRR   float64 // 6·Sigma over the tolerance, in percent; meaningful if HasGRR
	Found        bool    // at one limit or both
	HasGRR       bool
	Why          string // why there is no PercentGRR
}

// GRRBand grades a percentage of gauge repeatability and reproducibility.
type GRRBand int

// Below 10 %, 10 to 30 %, above 30 % of the tolerance (common practice, no
// source).
const (
	GRRGood GRRBand = iota
	GRRConditional
	GRRUnacceptable
)

func (b GRRBand) String() string {
	return nameOf(b, "good", "conditional", "not acceptable")
}

// BandGRR returns the band of a percentage of the tolerance.
func BandGRR(percent float64) GRRBand {
	switch {
	case percent < 10:
		return GRRGood
	case percent <= 30:
		return GRRConditional
	}
	return GRRUnacceptable
}

// Unanimous finds the unanimous zone at each limit (Measurement Systems
// Analysis reference manual, 4th ed. 2010, ch. III C, signal detection
// approach). From outside it walks from the outermost part on that side inward
// while every part was always rejected; from inside, from the middle of the
// limits outward while every part was always accepted. With one limit the
// inside walk starts at the far end of the parts. spread is the number of σ in
// the zone; 0 means Spread.
//
// A zone that is not there is marked with its reason. It returns an error if a
// value, count or limit cannot be.
func Unanimous(parts []Part, limits Limits, spread float64) (*Unanimity, error) {
	if err := limits.check(); err != nil {
		return nil, err
	}
	if err := checkParts(parts); err != nil {
		return nil, err
	}
	merged, row, err := merge(parts)
	if err != nil {
		return nil, err
	}
	switch {
	case spread == 0:
		spread = Spread
	case !(spread > 0) || !finite(spread):
		return nil, fmt.Errorf("spread %v: want a number of σ above 0, or 0 for %v", spread, Spread)
	}
	by := make([]int, len(merged))
	for i := range by {
		by[i] = i
	}
	slices.SortStableFunc(by, func(i, j int) int { return cmp.Compare(merged[i].Value, merged[j].Value) })
	u := &Unanimity{Spread: spread}
	first, last := 0, len(by)
	if limits.HasLower && limits.HasUpper {
		middle := limits.Lower/2 + limits.Upper/2
		for first < len(by) && merged[by[first]].Value < middle {
			first++
		}
		last = first
	}
	// Each side's parts, from outside in.
	var zones []*Zone
	if limits.HasLower {
		u.Lower = zone(Lower, merged, row, by[:last])
		zones = append(zones, u.Lower)
	}
	if limits.HasUpper {
		if !limits.HasLower {
			first = 0
		}
		outside := slices.Clone(by[first:])
		slices.Reverse(outside)
		u.Upper = zone(Upper, merged, row, outside)
		zones = append(zones, u.Upper)
	}
	n := 0
	for _, z := range zones {
		if z.Found {
			u.MeanWidth += z.Width
			n++
		}
	}
	if n == 0 {
		u.Why = "there is no unanimous zone at any limit"
		return u, nil
	}
	u.Found = true
	u.MeanWidth /= float64(n)
	u.Sigma = u.MeanWidth / spread
	if tolerance, ok := limits.Tolerance(); ok {
		u.HasGRR = true
		u.PercentGRR = 100 * u.Sigma / (tolerance / 6)
	} else {
		u.Why = "with one limit there is no tolerance to compare with"
	}
	return u, nil
}

// zone walks one side's parts, which run from outside in. Parts of one value
// count together: one accepted call among them ends the rejected run.
func zone(side Side, parts []Part, row []int, outside []int) *Zone {
	z := &Zone{Side: side}
	always := func(reject bool) func(i int) bool {
		return func(i int) bool {
			p := parts[i]
			return reject && p.Accepted == 0 || !reject && p.Accepted == p.Calls
		}
	}
	inside := slices.Clone(outside)
	slices.Reverse(inside)
	r := run(parts, outside, always(true))
	a := run(parts, inside, always(false))
	switch {
	case len(outside) == 0:
		z.Why = "no part lies on the side of the " + side.String() + " limit"
		return z
	case r == 0:
		z.Why = "the outermost part on the side of the " + side.String() + " limit was not always rejected"
		return z
	case a == 0:
		z.Why = "the innermost part on the side of the " + side.String() + " limit was not always accepted"
		return z
	}
	ri, ai := outside[r-1], inside[a-1]
	z.Reject, z.Accept, z.RejectPart, z.AcceptPart = parts[ri].Value, parts[ai].Value, row[ri], row[ai]
	z.Width = z.Accept - z.Reject
	if side == Upper {
		z.Width = -z.Width
	}
	z.Between = len(outside) - r - a
	for _, i := range outside[r : r+z.Between] {
		if p := parts[i]; p.Accepted > 0 && p.Accepted < p.Calls {
			z.Mixed++
		}
	}
	z.Found = true
	return z
}

// run returns how many parts from the start all pass, whole groups of equal
// value only.
func run(parts []Part, order []int, pass func(int) bool) int {
	n := 0
	for n < len(order) {
		j, all := n, true
		for ; j < len(order) && parts[order[j]].Value == parts[order[n]].Value; j++ {
			all = all && pass(order[j])
		}
		if !all {
			return n
		}
		n = j
	}
	return n
}
