package study

import (
	"fmt"
	"strings"
)

// GaugeMember is one member of a go/no-go gauge as its calibration found it.
// In a study file it is a table below [gauge_sizes], named after the limit at
// which the member decides:
//
//	[gauge_sizes]
//	lower = {size = 9.9970, uncertainty = 0.0008, wear_limit = 9.9990}
//	upper = {size = 10.0361, uncertainty = 0.0008}
//
// and as a flag the same without braces:
//
//	--gauge-sizes-lower size=9.9970,uncertainty=0.0008,wear_limit=9.9990
type GaugeMember struct {
	Size        float64 // as calibrated, in the unit of the study
	Uncertainty float64 // expanded (k = 2), of the size
	WearLimit   float64 // the size at which the member is worn out; meaningful if HasWear
	HasWear     bool
	// WearsLarger: the member grows with wear, as a ring or a snap does; a
	// plug shrinks. The key wears says so, with smaller or larger; without
	// it a member at the lower limit shrinks and one at the upper limit grows,
	// as go members do.
	WearsLarger bool
	hasWears    bool
}

// GaugeSizes holds the gauge's members by the limit at which they decide;
// nil where nothing is said.
type GaugeSizes struct {
	Lower, Upper *GaugeMember
}

const memberForm = "{size = NUMBER, uncertainty = NUMBER} with the expanded uncertainty (k = 2) of the calibration certificate, and wear_limit = NUMBER if there is one"

// memberKey reads a member of the study file; upper says at which limit.
func memberKey(to **GaugeMember, upper bool) func(any) error {
	return func(v any) error {
		table, ok := v.(map[string]any)
		if !ok {
			return wrongType(v, "a table, "+memberForm)
		}
		m, err := newMember(table, upper)
		if err != nil {
			return err
		}
		*to = m
		return nil
	}
}

// ParseGaugeMember reads a member as a flag gives it, key=value with commas
// between; upper says at which limit it decides.
func ParseGaugeMember(s string, upper bool) (*GaugeMember, error) {
	table := make(map[string]any)
	for _, pair := range strings.Split(s, ",") {
		key, value, ok := strings.Cut(pair, "=")
		key, value = strings.TrimSpace(key), strings.TrimSpace(value)
		if !ok {
			return nil, badValue{quote(pair), "size=NUMBER,uncertainty=NUMBER and, if there is one, wear_limit=NUMBER"}
		}
		if _, twice := table[key]; twice {
			return nil, badValue{key + " twice", "it once"}
		}
		table[key] = value
		switch x, err := parseNumber([]byte(value), false); err {
		case nil:
			table[key] = x
		case errTooLarge, errTooSmall:
			return nil, fmt.Errorf("found %s: %w", value, err)
		}
	}
	m, err := newMember(table, upper)
	if err != nil {
		return nil, err
	}
	return m, m.fault()
}

func newMember(table map[string]any, upper bool) (*GaugeMember, error) {
	m := &GaugeMember{WearsLarger: upper}
	numbers := map[string]*float64{"size": &m.Size, "uncertainty": &m.Uncertainty, "wear_limit": &m.WearLimit}
	given := make(map[string]bool)
	for _, key := range sortedKeys(table) {
		given[key] = true
		switch to := numbers[key]; {
		case to != nil:
			x, ok := number(table[key])
			if !ok {
				return nil, wrongType(table[key], "a number for "+key)
			}
			*to = x
		case key == "wears":
			switch table[key] {
			case "smaller":
				m.WearsLarger = false
			case "larger":
				m.WearsLarger = true
			default:
				return nil, wrongType(table[key], `"smaller" or "larger" for wears`)
			}
			m.hasWears = true
		default:
			return nil, badValue{"the unknown key " + quote(key), "size, uncertainty, wear_limit or wears"}
		}
	}
	for _, key := range []string{"size", "uncertainty"} {
		if !given[key] {
			return nil, badValue{"no " + key, memberForm}
		}
	}
	m.HasWear = given["wear_limit"]
	return m, nil
}

// fault is what about a member cannot be, nil if all is well.
func (m *GaugeMember) fault() error {
	for _, x := range []float64{m.Size, m.Uncertainty, m.WearLimit} {
		if err := CheckNumber(x); err != nil {
			return fmt.Errorf("found %v: %w", x, err)
		}
	}
	if m.Uncertainty < 0 {
		return fmt.Errorf("the uncertainty is %v; expected 0 or more", m.Uncertainty)
	}
	if m.hasWears && !m.HasWear {
		return fmt.Errorf("wears is given without wear_limit; it says to which side of the wear limit a worn member lies")
	}
	return nil
}

// faults finds members that cannot be.
func (g GaugeSizes) faults() []fault {
	var out []fault
	for _, m := range []struct {
		key string
		*GaugeMember
	}{{"gauge_sizes.lower", g.Lower}, {"gauge_sizes.upper", g.Upper}} {
		if m.GaugeMember == nil {
			continue
		}
		if err := m.fault(); err != nil {
			out = append(out, fault{m.key, m.key + ": " + err.Error()})
		}
	}
	return out
}

// merge returns g with the members of over in place of its own.
func (g GaugeSizes) merge(over GaugeSizes) GaugeSizes {
	if over.Lower != nil {
		g.Lower = over.Lower
	}
	if over.Upper != nil {
		g.Upper = over.Upper
	}
	return g
}
