package verdict

import (
	"fmt"
	"math"
	"slices"

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
	// So many parts must lie between limit and cut, or one more be called wrong in
	// the way that the shift makes: a single one may have a wrong value. So many
	// called wrong do where the offset is this many times what makes it certain.
	partsBetween = 2
	overCertain  = 2
	// Appraisers cut alike when the offset of each is at least this share of
	// the offset of all.
	alikeOffset = 0.5
	// The data tell the appraisers' cuts apart when cuts that are the same would
	// differ as much with less than this chance.
	apartChance = 0.01
)

// shiftedCut: the calls turn beside the limit. For all alike it is the gauge
// or the standard; for some, what these use.
func shiftedCut(f *finder) []Cause {
	if f.Zone == nil || f.Zone.Curves == nil {
		return nil
	}
	curves := f.Zone.Curves
	pooled := plain(curves.Pooled)
	looks := len(sides(pooled)) * (1 + len(curves.Each))
	var out []Cause
	for _, l := range sides(pooled) {
		switch {
		case !f.several():
			if shifted(pooled, l, looks) && !f.blurred(0, l) {
				out = append(out, Cause{
					Code: codeCut, Appraisers: []int{0},
					Text:    f.shift(f.name(0)+" cuts", l, without(curves.Pooled), "With one appraiser, a worn or mis-set gauge and a shifted standard cannot be told apart") + f.calibrated(l),
					Do:      f.checkGauge(l, fmt.Sprintf("Check the %s limit of the gauge or standard that %s uses: calibrated size, wear, setting.", l.Side, f.name(0))),
					outside: outside(l),
				})
			}
		case f.cutAlike(l) || f.notToldApart():
			if shifted(pooled, l, looks) {
				who := "All appraisers cut"
				if !f.cutAlike(l) {
					who = "All appraisers together cut"
				}
				out = append(out, Cause{
					Code:    codeGauge,
					Text:    f.shift(who, l, without(curves.Pooled), "That points to a worn or mis-set gauge, or a shifted standard") + f.calibrated(l),
					Do:      f.checkGauge(l, fmt.Sprintf("Check the %s limit of the gauge or the standard: calibrated size, wear, setting. Correct it, then repeat the parts near that limit.", l.Side)),
					outside: outside(l),
				})
			}
		default:
			out = append(out, f.ownShifts(l.Side, looks)...)
		}
	}
	return out
}

// cutAlike reports whether every appraiser cuts beside the limit as all do
// together.
func (f *finder) cutAlike(all *signal.LimitFit) bool {
	for a := range f.Zone.Curves.Each {
		own := f.ownSide(a, all.Side)
		if !own.Known() || all.Offset.Value == 0 || own.Offset.Value/all.Offset.Value < alikeOffset {
			return false
		}
	}
	return true
}

// notToldApart reports whether the calls of all appraisers are such as the same
// cuts may give: how their own offsets differ is then chance.
//
// The test is against chi-square, whatever the lack of fit: cuts that differ make
// one themselves. It tells nothing where somebody has hardly a cut.
func (f *finder) notToldApart() bool {
	for a := range f.Study.Appraisers {
		if f.hardlyCuts(a) {
			return false
		}
	}
	c := f.Zone.Curves
	return c.SameCut.Done && len(c.Compared) == len(c.Each) &&
		distuv.ChiSquared{K: float64(c.SameCut.DF)}.Survival(c.SameCut.Statistic) >= apartChance
}

// hardlyCuts reports whether an appraiser's calls are mixed everywhere, or go
// without regard to the value.
func (f *finder) hardlyCuts(a int) bool { return f.has(a, codeInconsistent, codeScattered) }

// blurred reports whether an offset is lost in the calls of an appraiser who
// hardly cuts.
func (f *finder) blurred(a int, own *signal.LimitFit) bool {
	return f.hardlyCuts(a) && math.Abs(own.Offset.Value) < own.Sigma.Value
}

// ownShifts are the appraisers' own shifts at a limit, one cause for those who
// share one: the same way.
func (f *finder) ownShifts(at signal.Side, looks int) (out []Cause) {
	for _, way := range []float64{-1, 1} {
		var who []int
		var cuts []*signal.LimitFit
		for a, c := range f.Zone.Curves.Each {
			own := f.ownSide(a, at)
			if !own.Known() || way*own.Offset.Value <= 0 || f.blurred(a, own) {
				continue
			}
			if shifted(plain(c), f.doubted(own), looks) {
				who, cuts = append(who, a), append(cuts, own)
			}
		}
		if len(who) == 0 {
			continue
		}
		out = append(out, f.ownShift(at, who, cuts))
	}
	return out
}

// ownShift is the cause of those whose own cuts lie on one side of a limit.
func (f *finder) ownShift(at signal.Side, who []int, cuts []*signal.LimitFit) Cause {
	people := f.people(who)
	cause := Cause{
		Code: codeCut, Appraisers: who,
		Do:      fmt.Sprintf("Compare the gauge and the standard of %s at the %s limit with those of the others.", people, at),
		outside: outside(cuts[0]),
	}
	points := ""
	switch {
	case len(who) == len(f.Study.Appraisers):
		people, points = "All appraisers", "By different amounts: the standard that they share comes first, then each one's gauge"
		cause.Code, cause.Appraisers = codeGauge, nil
		cause.Do = fmt.Sprintf("Check the %s limit of the standard that all work by, then each gauge: calibrated size, wear, setting.", at)
	case f.others(who, cuts):
		points = "Whether that goes for others too the study does not tell"
	case len(who) == 1:
		points = "Others do not, so it is the gauge or the standard of this one"
	default:
		points = "Others do not, so it is a gauge or a standard that these share, or each one's own"
	}
	if len(who) == 1 {
		cause.Text = f.shift(people+" cuts", cuts[0], without(f.Zone.Curves.Each[who[0]]), points)
		return cause
	}
	cause.Text = f.shiftOfSeveral(people, cuts, f.withoutOfEach(who), points)
	return cause
}

// withoutOfEach names the parts left out of the curves of several appraisers.
func (f *finder) withoutOfEach(who []int) string {
	var names []string
	for _, a := range who {
		if c := f.Zone.Curves.Each[a]; c.Without != nil {
			for _, i := range c.Outliers {
				if !slices.Contains(names, c.Parts[i].Name) {
					names = append(names, c.Parts[i].Name)
				}
			}
		}
	}
	return leftOut(names)
}

// doubted is an appraiser's own side whose offset is no surer than the σ of all
// allows: its own σ, of a few mixed parts, can be small by chance. The standard
// error of a cut grows with the root of σ.
func (f *finder) doubted(own *signal.LimitFit) *signal.LimitFit {
	out := *own
	for _, l := range sides(plain(f.Zone.Curves.Pooled)) {
		if l.Side == own.Side && l.Sigma.Value > own.Sigma.Value && own.Sigma.Value > 0 {
			out.Offset.SE *= math.Sqrt(l.Sigma.Value / own.Sigma.Value)
		}
	}
	return &out
}

// others reports whether a shift may be that of others, too: one whose own cut
// is not known, or lies the same way by a good part of the least of these.
func (f *finder) others(who []int, cuts []*signal.LimitFit) bool {
	least := math.Inf(1)
	for _, l := range cuts {
		least = min(least, math.Abs(l.Offset.Value))
	}
	for a := range f.Zone.Curves.Each {
		own := f.ownSide(a, cuts[0].Side)
		if !slices.Contains(who, a) && (!own.Known() || own.Offset.Value*math.Copysign(1, cuts[0].Offset.Value) >= alikeOffset*least) {
			return true
		}
	}
	return false
}

// people names appraisers.
func (f *finder) people(who []int) string {
	var names []string
	for _, a := range who {
		names = append(names, f.name(a))
	}
	return some(names)
}

// shifted reports whether a cut of a curve lies beside its limit by enough to
// matter, and for certain, though so many offsets are looked at (Bonferroni): by
// its standard error or, where it has none, by its interval, widened in the same
// proportion. (With a few parts in doubt, lack of fit can widen an interval
// without bound; the standard error carries it in measure.)
func shifted(c *signal.Curve, l *signal.LimitFit, looks int) bool {
	o := l.Offset
	if !l.HasLimit || !besideLimit(l) {
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
	if offset <= doubt {
		return false
	}
	wrong := shiftedParts(c, l)
	return between(c, l) >= partsBetween || wrong > partsBetween || wrong == partsBetween && offset > overCertain*doubt
}

// between counts the parts of a curve from a limit to its cut.
func between(c *signal.Curve, l *signal.LimitFit) (n int) {
	for _, p := range c.Parts {
		n += btoi(p.Value >= min(l.Limit, l.Cut.Value) && p.Value <= max(l.Limit, l.Cut.Value))
	}
	return n
}

// besideLimit reports whether an offset is large enough to matter.
func besideLimit(l *signal.LimitFit) bool {
	return math.Abs(l.Offset.Value) >= offsetOfSigma*l.Sigma.Value
}

// shiftedParts counts the parts of a curve that were called wrong at a limit in
// the way that a cut beside it makes: bad ones accepted where it lies outside,
// good ones rejected where it lies inside.
func shiftedParts(c *signal.Curve, l *signal.LimitFit) int {
	n := 0
	for _, p := range c.Parts {
		beyond := p.Value > l.Limit // on the side of the bad parts
		if l.Side == signal.Lower {
			beyond = p.Value < l.Limit
		}
		if outside(l) && beyond && p.Accepted > 0 || !outside(l) && !beyond && p.Accepted < p.Calls && nearest(c, l, p.Value) {
			n++
		}
	}
	return n
}

// shift tells of an offset; the sentence begins with who and ends with what
// it points to.
func (f *finder) shift(who string, l *signal.LimitFit, without, points string) string {
	s := f.Scale()
	offset, near, bounded := beside(l.Offset)
	size := s.WithUnit(s.Value(offset))
	if l.Offset.HasLower && l.Offset.HasUpper && bounded && near > 0 {
		far := max(math.Abs(l.Offset.Lower), math.Abs(l.Offset.Upper))
		size += fmt.Sprintf(" (%s to %s)", s.Value(near), s.Value(far))
	}
	return fmt.Sprintf("%s %s %s%s. %s.", who, size, follows(l), without, points)
}

// shiftOfSeveral tells of the offsets of several appraisers.
func (f *finder) shiftOfSeveral(people string, cuts []*signal.LimitFit, without, points string) string {
	s := f.Scale()
	least, most := math.Inf(1), 0.0
	for _, l := range cuts {
		size := math.Abs(l.Offset.Value)
		least, most = min(least, size), max(most, size)
	}
	size := s.Value(least)
	if s.Value(most) != size {
		size += " to " + s.Value(most)
	}
	return fmt.Sprintf("%s cut %s %s%s. %s.", people, s.WithUnit(size), follows(cuts[0]), without, points)
}

// follows says where a cut lies, and what follows.
func follows(l *signal.LimitFit) string {
	wrong := "good parts are rejected"
	if outside(l) {
		wrong = "bad parts are accepted"
	}
	return fmt.Sprintf("%s, so that %s there", where(l), wrong)
}
