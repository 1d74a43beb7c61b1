package report

import (
	"math"

	"samecall/cmd/samecall/internal/format"
	"samecall/signal"
)

// boundedCell is an estimate with its interval, each number by write.
func boundedCell(s format.Scale, e signal.Estimate, write func(float64) string) Cell {
	if e.Absent {
		return say(format.Dash)
	}
	c := Cell{Text: s.Estimate(e, write), Value: e.Value, Bounded: true}
	if !e.HasLower && !e.HasUpper {
		c.Text = write(e.Value)
	}
	if e.HasLower {
		c.Lower = e.Lower
	}
	if e.HasUpper {
		c.Upper = e.Upper
	}
	return c
}

func inUnit(title string, s format.Scale) string {
	if s.Unit == "" {
		return title
	}
	return title + ", in " + s.Unit
}

const (
	notKnown  = "not known"
	rowCut    = "cut: accepted half of the time"
	rowOffset = "cut − limit"
)

// oneBound is what is known of a cut at a limit where calls do not turn: where
// every part was accepted, that it lies beyond the outermost of them.
func oneBound(s format.Scale, l *signal.LimitFit, e signal.Estimate, write func(float64) string) Cell {
	switch {
	case l == nil:
		return say(format.Dash)
	case e.HasLower:
		return Cell{Text: "above " + write(e.Lower), Bounded: true, Lower: e.Lower}
	case e.HasUpper:
		return Cell{Text: "below " + write(e.Upper), Bounded: true, Upper: e.Upper}
	}
	return noFit(l)
}

// informs reports whether the calls say how wide the grey zone at a limit is:
// rejected and accepted ones overlap there, and the width has an upper bound.
// What a fit gives otherwise is a number without a meaning.
func informs(l *signal.LimitFit) bool {
	return l.Known() && l.Status == signal.Fitted && l.Width.HasUpper
}

// gapWidth is the gap that the grey zone is narrower than, where no part in it
// is mixed.
func gapWidth(l *signal.LimitFit) (float64, bool) {
	if g := l.Gap; l.Status != signal.Fitted && g != nil && g.HasReject && g.HasAccept {
		return math.Abs(g.Accept - g.Reject), true
	}
	return 0, false
}

// placeCell is where the curve cuts. A cut that nothing bounds on either side,
// where the calls do not say how steep the curve is, is not known.
func placeCell(s format.Scale, l *signal.LimitFit, e signal.Estimate, write func(float64) string) Cell {
	if !informs(l) && !e.HasLower && !e.HasUpper {
		return say(notKnown)
	}
	return boundedCell(s, e, write)
}

// atLimitCell is the acceptance at the limit itself.
func atLimitCell(s format.Scale, l *signal.LimitFit) Cell {
	switch e := l.AtLimit; {
	case !l.HasAtLimit:
		return say("")
	case !e.HasLower && !e.HasUpper: // it lies where no calls tell of the curve
		return say(notKnown)
	}
	return boundedCell(s, l.AtLimit, format.Percent)
}

// zoneShare is the width of the grey zone, of the tolerance.
func zoneShare(l *signal.LimitFit) Cell {
	gap, separated := gapWidth(l)
	switch {
	case informs(l):
		return boundedCell(format.Scale{}, l.Share, format.Percent)
	case separated && l.Width.Value > 0:
		return say("under " + format.Percent(gap*l.Share.Value/l.Width.Value))
	}
	return say(notKnown)
}

// zoneEnd is an end of the grey zone.
func zoneEnd(s format.Scale, l *signal.LimitFit, x float64) Cell {
	if !informs(l) {
		return say(notKnown)
	}
	return valueCell(s.Value(x), x)
}

// zoneWidth is the width of the grey zone; without mixed parts, the gap that
// it is narrower than.
func zoneWidth(s format.Scale, l *signal.LimitFit, interval bool) Cell {
	gap, separated := gapWidth(l)
	switch {
	case separated:
		return say("under " + s.Value(gap))
	case !informs(l):
		return say(notKnown)
	case interval:
		return boundedCell(s, l.Width, s.Value)
	}
	return valueCell(s.Value(l.Width.Value), l.Width.Value)
}
