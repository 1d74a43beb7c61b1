package verdict

import (
	"fmt"
	"math"
	"slices"

	"samecall/signal"
)

// ownSide is an appraiser's own curve at a limit; nil if it has none.
func (f *finder) ownSide(a int, at signal.Side) *signal.LimitFit {
	c := f.Zone.Curves.Each[a]
	switch {
	case c == nil:
		return nil
	case at == signal.Lower:
		return plain(c).Lower
	}
	return plain(c).Upper
}

// plain is a curve without the parts that it cannot explain.
func plain(c *signal.Curve) *signal.Curve {
	if c.Without != nil {
		return c.Without
	}
	return c
}

// sides returns the limits at which the calls of a curve turn.
func sides(c *signal.Curve) (out []*signal.LimitFit) {
	for _, l := range []*signal.LimitFit{c.Lower, c.Upper} {
		if l.Known() {
			out = append(out, l)
		}
	}
	return out
}

// without names the parts that a curve cannot explain, which were left out of
// the figures told; empty if there are none.
func without(c *signal.Curve) string {
	if c.Without == nil {
		return ""
	}
	var names []string
	for _, i := range c.Outliers {
		names = append(names, c.Parts[i].Name)
	}
	return leftOut(names)
}

func leftOut(names []string) string {
	if len(names) == 0 {
		return ""
	}
	return " (without " + few(names, len(names)) + ", which the curve cannot explain)"
}

// where says on which side of its limit a cut lies.
func where(l *signal.LimitFit) string {
	way := "above"
	if l.Offset.Value < 0 {
		way = "below"
	}
	return fmt.Sprintf("%s the %s limit", way, l.Side)
}

// outside reports whether a cut lies outside its limit.
func outside(l *signal.LimitFit) bool {
	return (l.Side == signal.Lower) == (l.Offset.Value < 0)
}

// nearest reports whether a value is nearer to a limit than to the other one.
func nearest(c *signal.Curve, l *signal.LimitFit, x float64) bool {
	if !c.Limits.HasLower || !c.Limits.HasUpper {
		return true
	}
	toLower, toUpper := math.Abs(x-c.Limits.Lower), math.Abs(x-c.Limits.Upper)
	return l.Side == signal.Lower && toLower <= toUpper || l.Side == signal.Upper && toUpper <= toLower
}

// beside returns the size of an offset and the end of its interval nearer to
// the limit, both away from the limit.
func beside(o signal.Estimate) (offset, near float64, bounded bool) {
	if o.Value < 0 {
		return -o.Value, -o.Upper, o.HasUpper
	}
	return o.Value, o.Lower, o.HasLower
}

// inZone reports whether a value lies in a grey zone of a curve.
func inZone(c *signal.Curve, x float64) bool {
	return slices.ContainsFunc(sides(c), func(l *signal.LimitFit) bool { return x >= l.From && x <= l.To })
}

// toLimit is the distance of a value from the nearest limit.
func toLimit(l signal.Limits, x float64) float64 {
	d := math.Inf(1)
	if l.HasLower {
		d = math.Abs(x - l.Lower)
	}
	if l.HasUpper {
		d = min(d, math.Abs(x-l.Upper))
	}
	return d
}
