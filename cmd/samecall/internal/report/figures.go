package report

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/figure"
	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/verdict"
	"samecall/signal"
)

// Figures returns the pictures of a record that its study has.
func Figures(r *Record) []*figure.Figure {
	var out []*figure.Figure
	for _, f := range []*figure.Figure{squareFigure(r), planeFigure(r), mapFigure(r), curveFigure(r)} {
		if f != nil {
			out = append(out, f)
		}
	}
	return out
}

func squareFigure(r *Record) *figure.Figure {
	s := newSquare(r)
	cell := func(a, b int) figure.Cell {
		share, kappa := s.at(a, b)
		c := figure.Cell{Text: format.Dash, Kappa: format.Dash}
		if share.Absent == nil {
			c.Share, c.Known, c.Text = share.Value, true, format.Percent(share.Value)
		}
		if kappa.Absent == nil {
			c.Kappa = format.Figure(kappa.Value)
		}
		return c
	}
	d := figure.SquareData{}
	for a, name := range s.names {
		d.Names = append(d.Names, format.Plain(name))
		row := make([]figure.Cell, len(s.names))
		for b := a; b < len(s.names); b++ {
			row[b] = cell(a, b)
		}
		d.Pair = append(d.Pair, row)
		if s.ref != nil {
			d.Reference = append(d.Reference, cell(a, len(s.names)))
		}
	}
	return figure.Square(d)
}

func planeFigure(r *Record) *figure.Figure {
	var d figure.PlaneData
	for a, v := range r.Verdict.Appraisers {
		if r.Agreement.All == nil {
			return nil
		}
		g := r.Agreement.Against[a]
		for _, c := range v.Criteria {
			switch c.Name {
			case verdict.Miss:
				d.Miss = c.Levels
			case verdict.FalseAlarm:
				d.FalseAlarm = c.Levels
			}
		}
		if g.Miss.Absent != nil || g.FalseAlarm.Absent != nil {
			continue
		}
		d.Appraisers = append(d.Appraisers, figure.Rates{
			Name: format.Plain(v.Name),
			Miss: g.Miss.Value, MissLower: g.Miss.Interval.Lower, MissUpper: g.Miss.Interval.Upper,
			FalseAlarm: g.FalseAlarm.Value, FalseLower: g.FalseAlarm.Interval.Lower, FalseUpper: g.FalseAlarm.Interval.Upper,
			Text: "miss rate " + format.Share(g.Miss) + ", false-alarm rate " + format.Share(g.FalseAlarm),
		})
	}
	return figure.Plane(d)
}

// mostMapParts is how many parts a call map shows; of more, those with a
// wrong or mixed call, up to as many.
const mostMapParts = 300

func mapFigure(r *Record) *figure.Figure {
	order, how := mapOrder(r)
	left := 0
	if len(order) > mostMapParts {
		kept := slices.DeleteFunc(slices.Clone(order), func(part int) bool { return !doubtful(r, part) })
		if len(kept) > mostMapParts {
			kept = kept[:mostMapParts]
		}
		left = len(order) - len(kept)
		order = kept
	}
	d := figure.MapData{Order: how, Left: left}
	for _, part := range order {
		d.Parts = append(d.Parts, format.Plain(r.Study.Parts[part]))
	}
	s := r.Study.Ratings
	for a, name := range r.Study.Appraisers {
		m := figure.MapAppraiser{Name: format.Plain(name), Mixed: len(r.Agreement.Within[a].Mixed)}
		for t := range s.Trials(a) {
			row := make([]figure.Call, len(order))
			for i, part := range order {
				row[i] = mapCall(r, s.Calls(part, a)[t], s.Reference(part))
			}
			m.Calls = append(m.Calls, row)
		}
		if r.Agreement.All != nil {
			calls, right := r.Agreement.Against[a].Table.Total()
			m.Wrong = calls - right
		}
		d.Appraisers = append(d.Appraisers, m)
	}
	d.Limits, d.Zones = mapLimits(r, order, left > 0)
	return figure.CallMap(d)
}

func mapCall(r *Record, call, ref agreement.Category) figure.Call {
	s := r.Study.Ratings
	switch {
	case call == agreement.Missing:
		return figure.NoCall
	case ref != agreement.Missing && call != ref && s.HasAccept() && s.Accepts(call) && !s.Accepts(ref):
		return figure.WronglyAccepted
	case ref != agreement.Missing && call != ref && s.HasAccept() && !s.Accepts(call) && s.Accepts(ref):
		return figure.WronglyRejected
	case ref != agreement.Missing && call != ref:
		return figure.OtherWrong
	case s.Accepts(call) || !s.HasAccept():
		return figure.Accepted
	}
	return figure.Rejected
}

// doubtful reports whether a call on a part is wrong or differs from another.
func doubtful(r *Record, part int) bool {
	ref := r.Study.Ratings.Reference(part)
	for _, c := range r.Study.Ratings.Row(part) {
		if c == agreement.Missing {
			continue
		}
		if ref == agreement.Missing {
			ref = c
		}
		if c != ref {
			return true
		}
	}
	return false
}

// mapOrder orders the parts: by value, else bad ones before good ones, each
// by the share of accepted calls.
func mapOrder(r *Record) (order []int, how string) {
	order = make([]int, len(r.Study.Parts))
	for i := range order {
		order[i] = i
	}
	if r.Study.Values != nil {
		slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(sortValue(r, a), sortValue(r, b)) })
		return order, "in order of value, from low to high"
	}
	s := r.Study.Ratings
	accepted := make([]float64, len(order))
	for part := range order {
		n, yes := 0, 0
		for _, c := range s.Row(part) {
			if c != agreement.Missing {
				n++
				if s.Accepts(c) {
					yes++
				}
			}
		}
		if n > 0 {
			accepted[part] = float64(yes) / float64(n)
		}
	}
	slices.SortStableFunc(order, func(a, b int) int {
		return cmp.Or(cmp.Compare(rank(r, a), rank(r, b)), cmp.Compare(accepted[a], accepted[b]))
	})
	if r.Agreement.All != nil && s.HasAccept() {
		return order, "bad ones, then good ones, each by how often they were accepted"
	}
	return order, "by how often they were accepted"
}

// sortValue puts parts without a value last.
func sortValue(r *Record, part int) float64 {
	if !r.Study.HasValue[part] {
		return math.Inf(1)
	}
	return r.Study.Values[part]
}

// rank puts bad parts before good ones, and those without reference last.
func rank(r *Record, part int) int {
	ref := r.Study.Ratings.Reference(part)
	switch {
	case ref == agreement.Missing:
		return 2
	case r.Study.Ratings.Accepts(ref):
		return 1
	}
	return 0
}

// mapLimits finds where limits and grey zones lie among ordered parts, or
// bad and good meet. In a map with parts left out there are no zones.
func mapLimits(r *Record, order []int, cut bool) (limits []figure.MapLimit, zones [][2]int) {
	first := func(from func(part int) bool) int {
		i := slices.IndexFunc(order, from)
		if i < 0 {
			return len(order)
		}
		return i
	}
	if r.Study.Values == nil {
		if r.Agreement.All != nil && r.Study.Ratings.HasAccept() {
			limits = append(limits, figure.MapLimit{Name: "bad | good", Before: first(func(p int) bool { return rank(r, p) > 0 })})
		}
		return limits, nil
	}
	if l := r.Study.Settings.Lower; l != nil {
		limits = append(limits, figure.MapLimit{Name: "lower limit", Before: first(func(p int) bool { return sortValue(r, p) >= *l })})
	}
	if u := r.Study.Settings.Upper; u != nil {
		limits = append(limits, figure.MapLimit{Name: "upper limit", Before: first(func(p int) bool { return sortValue(r, p) > *u })})
	}
	if cut {
		return limits, nil
	}
	for _, l := range curveLimits(r) {
		from := first(func(p int) bool { return sortValue(r, p) >= l.From })
		to := first(func(p int) bool { return sortValue(r, p) > l.To })
		if to > from {
			zones = append(zones, [2]int{from, to - 1})
		}
	}
	return limits, zones
}

// curveLimits returns the limits at which the pooled curve is known.
func curveLimits(r *Record) []*signal.LimitFit {
	if r.Zone == nil || r.Zone.Curves == nil {
		return nil
	}
	var out []*signal.LimitFit
	for _, l := range []*signal.LimitFit{r.Zone.Curves.Pooled.Lower, r.Zone.Curves.Pooled.Upper} {
		if l.Known() {
			out = append(out, l)
		}
	}
	return out
}

// gridPoints is at how many values a curve is drawn.
const gridPoints = 161

func curveFigure(r *Record) *figure.Figure {
	if r.Zone == nil || r.Zone.Curves == nil {
		return nil
	}
	all := r.Zone.Curves
	scale := r.Scale()
	d := figure.CurveData{Unit: format.Plain(scale.Unit), Decimals: scale.Decimals, Text: curveText(r)}
	low, high := math.Inf(1), math.Inf(-1)
	for _, p := range all.Pooled.Parts {
		low, high = min(low, p.Value), max(high, p.Value)
		d.Points = append(d.Points, figure.CurvePoint{Value: p.Value, Share: float64(p.Accepted) / float64(p.Calls), Outlier: p.Outlier})
	}
	for _, l := range []*float64{r.Study.Settings.Lower, r.Study.Settings.Upper} {
		if l != nil {
			low, high = min(low, *l), max(high, *l)
		}
	}
	margin := 0.03 * (high - low)
	low, high = low-margin, high+margin
	for i := range gridPoints {
		x := low + (high-low)*float64(i)/(gridPoints-1)
		band := all.Pooled.Band(x)
		d.Grid = append(d.Grid, x)
		d.Fit = append(d.Fit, all.Pooled.Accept(x))
		lower, upper := 0.0, 1.0
		if band.HasLower {
			lower = band.Lower
		}
		if band.HasUpper {
			upper = band.Upper
		}
		d.Low, d.High = append(d.Low, lower), append(d.High, upper)
	}
	if len(all.Each) > 1 {
		for a, own := range all.Each {
			if own == nil {
				continue
			}
			o := figure.OwnCurve{Name: format.Plain(r.Study.Appraisers[a])}
			for _, x := range d.Grid {
				o.Share = append(o.Share, own.Accept(x))
			}
			d.Own = append(d.Own, o)
		}
	}
	if l := r.Study.Settings.Lower; l != nil {
		d.Limits = append(d.Limits, figure.CurveLimit{Name: "lower limit " + scale.Value(*l), Value: *l})
	}
	if u := r.Study.Settings.Upper; u != nil {
		d.Limits = append(d.Limits, figure.CurveLimit{Name: "upper limit " + scale.Value(*u), Value: *u})
	}
	for _, l := range curveLimits(r) {
		d.Zones = append(d.Zones, [2]float64{l.From, l.To})
	}
	return figure.AcceptanceCurve(d)
}

// curveText says the fitted curve in words.
func curveText(r *Record) string {
	s := r.Scale()
	text := ""
	for _, l := range curveLimits(r) {
		text += fmt.Sprintf("At the %s limit parts are accepted half of the time at %s, σ is %s and the grey zone reaches from %s to %s. ",
			l.Side, s.WithUnit(s.Estimate(l.Cut, s.Value)), s.Value(l.Sigma.Value), s.Value(l.From), s.Value(l.To))
	}
	return text
}
