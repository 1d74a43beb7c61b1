package signal

import (
	"errors"
	"fmt"
	"math"
)

// Part is one inspected item: its measured value and how its calls went.
type Part struct {
	// Name is optional. Rows with the same non-empty name are one part: their
	// calls are added before anything is computed.
	Name     string
	Value    float64
	Accepted int // calls that accepted it
	Calls    int // all its calls; a part with none is passed over
}

// Side names a specification limit.
type Side int

// The two specification limits.
const (
	Lower Side = iota
	Upper
)

func (s Side) String() string {
	if s == Upper {
		return "upper"
	}
	return "lower"
}

// Limits holds the specification limits; either may be absent.
type Limits struct {
	Lower, Upper       float64
	HasLower, HasUpper bool
}

// Between returns both limits.
func Between(lower, upper float64) Limits {
	return Limits{Lower: lower, Upper: upper, HasLower: true, HasUpper: true}
}

// AtLeast returns a lower limit alone.
func AtLeast(lower float64) Limits { return Limits{Lower: lower, HasLower: true} }

// AtMost returns an upper limit alone.
func AtMost(upper float64) Limits { return Limits{Upper: upper, HasUpper: true} }

// Tolerance returns upper minus lower limit, and whether both are there.
func (l Limits) Tolerance() (float64, bool) {
	if l.HasLower && l.HasUpper {
		return l.Upper - l.Lower, true
	}
	return 0, false
}

// Inside tells whether a value conforms; a value on a limit does.
func (l Limits) Inside(x float64) bool {
	return (!l.HasLower || x >= l.Lower) && (!l.HasUpper || x <= l.Upper)
}

func (l Limits) check() error {
	if !l.HasLower && !l.HasUpper {
		return errors.New("no specification limit: give a lower or an upper limit, or both")
	}
	if l.HasLower && !finite(l.Lower) || l.HasUpper && !finite(l.Upper) {
		return fmt.Errorf("specification limits %v and %v: want finite numbers", l.Lower, l.Upper)
	}
	if l.HasLower && l.HasUpper && !(l.Lower < l.Upper) {
		return fmt.Errorf("lower limit %v is not below upper limit %v", l.Lower, l.Upper)
	}
	return nil
}

// checkParts refuses values and counts that cannot be, and more calls together
// than can be counted.
func checkParts(parts []Part) error {
	_, err := countCalls(parts, 0)
	return err
}

// countCalls is checkParts, with so many calls counted before, and returns how
// many there are with these.
func countCalls(parts []Part, calls int) (int, error) {
	for i, p := range parts {
		switch {
		case !finite(p.Value):
			return 0, fmt.Errorf("part %s: value %v is not a number", label(parts, i), p.Value)
		case p.Calls < 0:
			return 0, fmt.Errorf("part %s: %d calls", label(parts, i), p.Calls)
		case p.Accepted < 0 || p.Accepted > p.Calls:
			return 0, fmt.Errorf("part %s: %d accepted out of %d calls", label(parts, i), p.Accepted, p.Calls)
		case p.Calls > math.MaxInt-calls:
			return 0, fmt.Errorf("part %s: with its %d calls there are more than can be counted", label(parts, i), p.Calls)
		}
		calls += p.Calls
	}
	return calls, nil
}

// label names a part for a message.
func label(parts []Part, i int) string {
	if parts[i].Name != "" {
		return parts[i].Name
	}
	return fmt.Sprintf("#%d", i+1)
}

// merge adds the rows of equal name together and passes over parts without
// calls. row[i] is the index in parts of merged part i's first row.
func merge(parts []Part) (merged []Part, row []int, err error) {
	merged, row = make([]Part, 0, len(parts)), make([]int, 0, len(parts))
	var seen map[string]int
	for i, p := range parts {
		if p.Calls == 0 {
			continue
		}
		if p.Name != "" {
			if seen == nil {
				seen = make(map[string]int, len(parts))
			}
			if at, ok := seen[p.Name]; ok {
				m := &merged[at]
				if m.Value != p.Value {
					return nil, nil, fmt.Errorf("part %s has two values, %v and %v", p.Name, m.Value, p.Value)
				}
				m.Accepted, m.Calls = m.Accepted+p.Accepted, m.Calls+p.Calls
				continue
			}
			seen[p.Name] = len(merged)
		}
		merged, row = append(merged, p), append(row, i)
	}
	return merged, row, nil
}

// scaling maps values to t = (x − centre)/scale, of order 1, so that a band of
// a micrometre around 250 mm is fitted as well as one around 0.
type scaling struct{ centre, scale float64 }

// scale returns the scaling of the values, or an error if they are all alike.
func scale(parts []Part) (scaling, error) {
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, p := range parts {
		lo, hi = math.Min(lo, p.Value), math.Max(hi, p.Value)
	}
	half := hi/2 - lo/2
	if !(half > 0) || !finite(half, 1/half) {
		return scaling{}, fmt.Errorf("all parts have the value %v: where calls turn needs parts of different value", lo)
	}
	return scaling{centre: lo + half, scale: half}, nil
}

func (s scaling) in(x float64) float64   { return (x - s.centre) / s.scale }
func (s scaling) out(t float64) float64  { return s.centre + t*s.scale }
func (s scaling) size(t float64) float64 { return t * s.scale }
