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
	// Appraisers have different cuts when the test of "same cut" gives less.
	different = 0.05
)

// shiftedCut: the calls turn beside the limit. For all alike it is the gauge
// or the standard, for one appraiser its own.
func shiftedCut(f *finder) []Cause {
	if f.Zone == nil || f.Zone.Curves == nil {
		return nil
	}
	curves := f.Zone.Curves
	pooled := plain(curves.Pooled)
	looks := len(sides(pooled)) * (1 + len(curves.Each))
	sameCut := !curves.SameCut.Done || curves.SameCut.P >= different
	var out []Cause
	for _, l := range sides(pooled) {
		var own []*signal.LimitFit // of each appraiser, those that are shifted
		var who []int
		known, sameWay := 0, true
		for a, c := range curves.Each {
			if c == nil {
				continue
			}
			fit := side(plain(c), l.Side)
			if !fit.Known() {
				continue
			}
			known++
			if shifted(fit, looks) {
				own, who = append(own, fit), append(who, a)
				sameWay = sameWay && (fit.Offset.Value > 0) == (own[0].Offset.Value > 0)
			}
		}
		all := known > 1 && len(own) == known && sameWay
		switch {
		case len(f.Study.Appraisers) == 1 && shifted(l, looks):
			out = append(out, Cause{
				Code: codeCut, Appraiser: 0,
				Text: f.shift(f.name(0)+" cuts", l, "With one appraiser, a worn or mis-set gauge and a shifted standard cannot be told apart"),
				Do:   fmt.Sprintf("Check the %s limit of the gauge or standard that %s uses: calibrated size, wear, setting.", l.Side, f.name(0)),
			})
		case sameCut && shifted(l, looks), all && shifted(l, looks):
			out = append(out, Cause{
				Code: codeGauge, Appraiser: Everyone,
				Text: f.shift("All appraisers cut", l, "That points to a worn or mis-set gauge, or a shifted standard"),
				Do:   fmt.Sprintf("Check the %s limit of the gauge or the standard: calibrated size, wear, setting. Correct it, then repeat the parts near that limit.", l.Side),
			})
		case !sameCut:
			for i, a := range who {
				out = append(out, Cause{
					Code: codeCut, Appraiser: a,
					Text: f.shift(f.name(a)+" cuts", own[i], "The appraisers do not cut alike, so it is the gauge or the standard of this one"),
					Do:   fmt.Sprintf("Compare the gauge and the standard of %s at the %s limit with those of the others.", f.name(a), l.Side),
				})
			}
		}
	}
	return out
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

func side(c *signal.Curve, s signal.Side) *signal.LimitFit {
	if s == signal.Lower {
		return c.Lower
	}
	return c.Upper
}

// shifted reports whether a cut lies beside its limit by enough to matter,
// and for certain: the interval of the offset, widened because so many
// offsets are looked at (Bonferroni), leaves out 0.
func shifted(l *signal.LimitFit, looks int) bool {
	o := l.Offset
	if !l.HasLimit || !o.HasLower || !o.HasUpper {
		return false
	}
	near := o.Lower
	if o.Value < 0 {
		near = -o.Upper
	}
	offset := math.Abs(o.Value)
	z := func(tail float64) float64 { return -distuv.UnitNormal.Quantile(tail) }
	tail := (1 - o.Confidence) / 2
	widened := (offset - near) * z(tail/float64(looks)) / z(tail)
	return offset >= offsetOfSigma*l.Sigma.Value && near > 0 && offset > widened
}

// shift tells of an offset; the sentence begins with who and ends with what
// it points to.
func (f *finder) shift(who string, l *signal.LimitFit, points string) string {
	s := f.Scale()
	where, low, high := "above", l.Offset.Lower, l.Offset.Upper
	if l.Offset.Value < 0 {
		where, low, high = "below", -high, -low
	}
	wrong := "good parts are rejected"
	if (l.Side == signal.Lower) == (l.Offset.Value < 0) { // outside the limit
		wrong = "bad parts are accepted"
	}
	return fmt.Sprintf("%s %s (%s to %s) %s the %s limit, so that %s there. %s.",
		who, s.WithUnit(s.Value(math.Abs(l.Offset.Value))), s.Value(low), s.Value(high), where, l.Side, wrong, points)
}
