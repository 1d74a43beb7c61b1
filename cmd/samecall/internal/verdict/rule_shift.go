package verdict

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/stat/distuv"

	"samecall/signal"
)

// Our own choice, no source.
const (
	// An offset counts when it is at least this share of σ: less is lost in
	// the grey zone.
	offsetOfSigma = 0.5
	// The chance that in a study without any shift some offset is taken for one.
	offsetChance = 0.01
	// So many parts must lie between limit and cut: a single one may have a
	// wrong value.
	partsBetween = 2
	// Appraisers cut alike when the offset of each is at least this share of
	// the offset of all.
	alikeOffset = 0.5
)

// shiftedCut: the calls turn beside the limit. For all alike it is the gauge
// or the standard, for one appraiser its own.
func shiftedCut(f *finder) []Cause {
	if f.Zone == nil || f.Zone.Curves == nil {
		return nil
	}
	curves := f.Zone.Curves
	pooled := sides(plain(curves.Pooled))
	looks := len(pooled) * (1 + len(curves.Each))
	var out []Cause
	for _, l := range pooled {
		switch {
		case !f.several():
			if f.shifted(l, looks) {
				out = append(out, Cause{
					Code: codeCut, Appraiser: 0,
					Text:    f.shift(f.name(0)+" cuts", l, "With one appraiser, a worn or mis-set gauge and a shifted standard cannot be told apart") + f.calibrated(l),
					Do:      f.checkGauge(l, fmt.Sprintf("Check the %s limit of the gauge or standard that %s uses: calibrated size, wear, setting.", l.Side, f.name(0))),
					outside: outside(l),
				})
			}
		case f.cutAlike(l):
			if f.shifted(l, looks) {
				out = append(out, Cause{
					Code: codeGauge, Appraiser: Everyone,
					Text:    f.shift("All appraisers cut", l, "That points to a worn or mis-set gauge, or a shifted standard") + f.calibrated(l),
					Do:      f.checkGauge(l, fmt.Sprintf("Check the %s limit of the gauge or the standard: calibrated size, wear, setting. Correct it, then repeat the parts near that limit.", l.Side)),
					outside: outside(l),
				})
			}
		default:
			for a := range curves.Each {
				if own := f.ownSide(a, l.Side); own.Known() && f.shifted(own, looks) {
					out = append(out, Cause{
						Code: codeCut, Appraiser: a,
						Text:    f.shift(f.name(a)+" cuts", own, "Others do not, so it is the gauge or the standard of this one"),
						Do:      fmt.Sprintf("Compare the gauge and the standard of %s at the %s limit with those of the others.", f.name(a), l.Side),
						outside: outside(own),
					})
				}
			}
		}
	}
	return out
}

// cutAlike reports whether every appraiser cuts beside the limit as all do
// together.
func (f *finder) cutAlike(all *signal.LimitFit) bool {
	for a := range f.Zone.Curves.Each {
		own := f.ownSide(a, all.Side)
		if !own.Known() || own.Offset.Value*all.Offset.Value < alikeOffset*all.Offset.Value*all.Offset.Value {
			return false
		}
	}
	return true
}

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

// shifted reports whether a cut lies beside its limit by enough to matter,
// and for certain, though so many offsets are looked at (Bonferroni): by its
// standard error or, where it has none, by its interval, widened in the same
// proportion. (With a few parts in doubt, lack of fit can widen an interval
// without bound; the standard error carries it in measure.)
func (f *finder) shifted(l *signal.LimitFit, looks int) bool {
	o := l.Offset
	if !l.HasLimit || f.between(l.Limit, l.Cut.Value) < partsBetween {
		return false
	}
	z := func(tail float64) float64 { return -distuv.UnitNormal.Quantile(tail) }
	sure := z(offsetChance / 2 / float64(looks))
	offset, near, bounded := beside(o)
	doubt := sure * o.SE
	if o.SE == 0 {
		if !bounded {
			return false
		}
		doubt = (offset - near) * sure / z((1-o.Confidence)/2)
	}
	return offset >= offsetOfSigma*l.Sigma.Value && offset > doubt
}

// beside returns the size of an offset and the end of its interval nearer to
// the limit, both away from the limit.
func beside(o signal.Estimate) (offset, near float64, bounded bool) {
	if o.Value < 0 {
		return -o.Value, -o.Upper, o.HasUpper
	}
	return o.Value, o.Lower, o.HasLower
}

// between counts the parts with a value from one end to the other.
func (f *finder) between(x, y float64) int {
	n := 0
	for part, v := range f.Study.Values {
		if f.Study.HasValue[part] && v >= min(x, y) && v <= max(x, y) {
			n++
		}
	}
	return n
}

// shift tells of an offset; the sentence begins with who and ends with what
// it points to.
func (f *finder) shift(who string, l *signal.LimitFit, points string) string {
	s := f.Scale()
	where := "above"
	if l.Offset.Value < 0 {
		where = "below"
	}
	offset, near, bounded := beside(l.Offset)
	size := s.WithUnit(s.Value(offset))
	if l.Offset.HasLower && l.Offset.HasUpper && bounded && near > 0 {
		far := max(math.Abs(l.Offset.Lower), math.Abs(l.Offset.Upper))
		size += fmt.Sprintf(" (%s to %s)", s.Value(near), s.Value(far))
	}
	wrong := "good parts are rejected"
	if outside(l) {
		wrong = "bad parts are accepted"
	}
	return fmt.Sprintf("%s %s %s the %s limit, so that %s there. %s.", who, size, where, l.Side, wrong, points)
}

// outside reports whether a cut lies outside its limit.
func outside(l *signal.LimitFit) bool {
	return (l.Side == signal.Lower) == (l.Offset.Value < 0)
}
