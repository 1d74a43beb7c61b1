package verdict

import (
	"fmt"
	"math"
	"slices"

	"samecall/cmd/samecall/internal/format"
	"samecall/signal"
)

// wideZone is the share of the tolerance above which the grey zone at a limit
// is wide. Our own choice, after the 30 % of %GRR (common practice, no source).
const wideZone = 0.30

// zones returns the limits whose grey zone the data tell: rejected and accepted
// calls overlap, some part in the zone is mixed, and σ is bounded.
func (f *finder) zones() (out []*signal.LimitFit) {
	if f.Zone == nil || f.Zone.Curves == nil {
		return nil
	}
	c := plain(f.Zone.Curves.Pooled)
	for _, l := range sides(c) {
		if l.Status == signal.Fitted && l.Sigma.HasUpper && slices.ContainsFunc(c.Parts, func(p signal.PartFit) bool {
			return p.Accepted > 0 && p.Accepted < p.Calls && p.Value >= l.From && p.Value <= l.To
		}) {
			out = append(out, l)
		}
	}
	return out
}

// insideZone is the share of the wrong calls that must lie in the grey zone
// for them to be told by it. The zone holds 99 % of what is in doubt; the rest
// is for chance. Our own choice, no source.
const insideZone = 0.95

// nearLimits: no other cause, figures that miss their level, and the wrong
// calls of most appraisers lie where the curve expects them: near the limits.
func nearLimits(f *finder) []Cause {
	if len(f.found) > 0 || !f.missed || f.together.wrong == 0 || f.several() && !f.most(f.withWrongCalls()) {
		return nil
	}
	width := f.zoneWidth()
	if width == "" {
		return nil
	}
	inside := f.wrongInZones()
	if float64(inside) < insideZone*float64(f.together.wrong) {
		return nil
	}
	near := "All wrong calls lie"
	if inside < f.together.wrong {
		near = fmt.Sprintf("%s of %s lie", format.Count(inside), format.Counted(f.together.wrong, "wrong call"))
	}
	cause := Cause{
		Code: codeNear,
		Text: near + " in the grey zone of a limit" + without(f.Zone.Curves.Pooled) + "." + width,
		Do:   fmt.Sprintf("Measure the parts in the grey zone (%s), or move the cuts inwards by a guard band.", f.zoneRanges()),
	}
	switch share, known := f.zoneShare(); {
	case known && share > wideZone:
		cause.Code = codeWide
		cause.Text += " That is wide for this tolerance."
		cause.Do = fmt.Sprintf("Make the call surer with a better gauge or fixture; or measure the parts in the grey zone (%s); or move the cuts inwards by a guard band.", f.zoneRanges())
	case known:
		cause.Text += " That is not wide for this tolerance: the study holds many parts in it."
	}
	cause.Text += f.unsureShift()
	return []Cause{cause}
}

// withWrongCalls counts the appraisers with any wrong call.
func (f *finder) withWrongCalls() (n int) {
	for _, p := range f.patterns {
		n += btoi(p.wrong > 0)
	}
	return n
}

// wrongInZones counts the wrong calls on parts in a grey zone.
func (f *finder) wrongInZones() (n int) {
	zones := f.zones()
	for _, p := range f.Zone.Curves.Pooled.Parts {
		if !slices.ContainsFunc(zones, func(l *signal.LimitFit) bool { return p.Value >= l.From && p.Value <= l.To }) {
			continue
		}
		if f.Zone.Limits.Inside(p.Value) {
			n += p.Calls - p.Accepted
		} else {
			n += p.Accepted
		}
	}
	return n
}

// unsureShift tells, with a space before it, of cuts beside their limit that
// are no cause of their own, since they are not certain.
func (f *finder) unsureShift() string {
	s := f.Scale()
	var told []string
	for _, l := range sides(plain(f.Zone.Curves.Pooled)) {
		if !l.HasLimit || !besideLimit(l) {
			continue
		}
		told = append(told, s.WithUnit(s.Value(math.Abs(l.Offset.Value)))+" "+where(l))
	}
	switch len(told) {
	case 0:
		return ""
	case 1:
		return " The cut lies " + told[0] + "; whether it is shifted is not certain."
	}
	return " The cuts lie " + and(told) + "; whether they are shifted is not certain."
}

// zoneWidth tells the width of the grey zone in a sentence with a space
// before it; nothing where the data do not tell it.
func (f *finder) zoneWidth() string {
	s := f.Scale()
	var widths, at []string
	for _, l := range f.zones() {
		text := s.WithUnit(s.Value(l.Width.Value)) + " wide"
		if l.HasShare {
			text += " (" + format.Percent(l.Share.Value) + " of the tolerance)"
		}
		widths, at = append(widths, text), append(at, text+" at the "+l.Side.String()+" limit")
	}
	switch {
	case len(widths) == 0:
		return ""
	case len(widths) == 2 && widths[0] == widths[1]:
		return " The grey zone is " + widths[0] + " at each limit."
	}
	return " The grey zone is " + and(at) + "."
}

// zoneRanges tells from where to where the grey zone reaches.
func (f *finder) zoneRanges() string {
	s := f.Scale()
	var out []string
	for _, l := range f.zones() {
		out = append(out, s.WithUnit(s.Value(l.From)+" to "+s.Value(l.To))+" at the "+l.Side.String()+" limit")
	}
	return and(out)
}

// zoneShare is the larger share of the tolerance that the grey zone takes,
// and whether it is known.
func (f *finder) zoneShare() (share float64, known bool) {
	for _, l := range f.zones() {
		if l.HasShare {
			share, known = max(share, l.Share.Value), true
		}
	}
	return share, known
}
