package report

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strings"

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

// How much a call map shows: of more parts those with most wrong or mixed
// calls, of more appraisers those with most wrong calls.
const (
	mostMapParts      = 300
	mostMapAppraisers = 24
)

func mapFigure(r *Record) *figure.Figure {
	order, how := mapOrder(r)
	shown := chosenParts(r, order)
	who := chosenAppraisers(r)
	d := figure.MapData{Order: how, Left: leftOut(r, len(shown), len(who))}
	if !r.Study.Ratings.HasAccept() {
		for _, k := range r.Study.Categories {
			d.Kinds = append(d.Kinds, format.Plain(k))
		}
	}
	for _, part := range shown {
		d.Parts = append(d.Parts, format.Plain(r.Study.Parts[part]))
	}
	s := r.Study.Ratings
	for _, a := range who {
		m := figure.MapAppraiser{Name: format.Plain(r.Study.Appraisers[a]), Text: format.Counted(len(r.Agreement.Within[a].Mixed), "mixed part")}
		if r.Agreement.All != nil {
			m.Text = format.Counted(wrongCalls(r, a), "wrong call") + ", " + m.Text
		}
		for t := range s.Trials(a) {
			row := make([]figure.Call, len(shown))
			for i, part := range shown {
				row[i] = mapCall(r, s.Calls(part, a)[t], s.Reference(part))
			}
			m.Calls = append(m.Calls, row)
		}
		d.Appraisers = append(d.Appraisers, m)
	}
	d.Groups = mapGroups(r, shown)
	d.Limits, d.Zones = mapLimits(r, shown, len(shown) < len(order))
	return figure.CallMap(d)
}

// chosenParts are the parts that a call map shows, in the order given.
func chosenParts(r *Record, order []int) []int {
	if len(order) <= mostMapParts {
		return order
	}
	worst := slices.Clone(order)
	doubt := make([]int, len(r.Study.Parts))
	for _, part := range order {
		doubt[part] = doubtful(r, part)
	}
	slices.SortStableFunc(worst, func(a, b int) int { return cmp.Compare(doubt[b], doubt[a]) })
	keep := make(map[int]bool, mostMapParts)
	for _, part := range worst[:mostMapParts] {
		keep[part] = true
	}
	return slices.DeleteFunc(slices.Clone(order), func(part int) bool { return !keep[part] })
}

// chosenAppraisers are the appraisers that a call map shows.
func chosenAppraisers(r *Record) []int {
	all := make([]int, len(r.Study.Appraisers))
	for a := range all {
		all[a] = a
	}
	if len(all) <= mostMapAppraisers {
		return all
	}
	slices.SortStableFunc(all, func(a, b int) int { return cmp.Compare(mapDoubt(r, b), mapDoubt(r, a)) })
	all = all[:mostMapAppraisers]
	slices.Sort(all)
	return all
}

// mapDoubt counts wrong calls or, without a reference, mixed parts.
func mapDoubt(r *Record, a int) int {
	if r.Agreement.All != nil {
		return wrongCalls(r, a)
	}
	return len(r.Agreement.Within[a].Mixed)
}

func wrongCalls(r *Record, a int) int {
	calls, right := r.Agreement.Against[a].Table.Total()
	return calls - right
}

// leftOut says what a call map does not show; empty if it shows everything.
func leftOut(r *Record, parts, appraisers int) string {
	var out []string
	if parts < len(r.Study.Parts) {
		out = append(out, fmt.Sprintf("the %s with most wrong or mixed calls of %s", format.Counted(parts, "part"), format.Count(len(r.Study.Parts))))
	}
	if appraisers < len(r.Study.Appraisers) {
		out = append(out, fmt.Sprintf("the %s with most of them of %s", format.Counted(appraisers, "appraiser"), format.Count(len(r.Study.Appraisers))))
	}
	return strings.Join(out, "; ")
}

func mapCall(r *Record, call, ref agreement.Category) figure.Call {
	s := r.Study.Ratings
	wrong := ref != agreement.Missing && call != ref
	switch {
	case call == agreement.Missing:
		return figure.NoCall
	case wrong && s.HasAccept() && s.Accepts(call) && !s.Accepts(ref):
		return figure.WronglyAccepted
	case wrong && s.HasAccept() && !s.Accepts(call) && s.Accepts(ref):
		return figure.WronglyRejected
	case wrong:
		return figure.OtherWrong
	case !s.HasAccept():
		return figure.Kind + figure.Call(call)
	case s.Accepts(call):
		return figure.Accepted
	}
	return figure.Rejected
}

// doubtful counts the calls on a part that are wrong or, without a reference,
// differ from the first.
func doubtful(r *Record, part int) int {
	n := 0
	ref := r.Study.Ratings.Reference(part)
	for _, c := range r.Study.Ratings.Row(part) {
		if c == agreement.Missing {
			continue
		}
		if ref == agreement.Missing {
			ref = c
		}
		if c != ref {
			n++
		}
	}
	return n
}

// mapOrder orders the parts: by value, else bad ones before good ones, each
// by the share of accepted calls, else by kind, each by how mixed.
func mapOrder(r *Record) (order []int, how string) {
	order = make([]int, len(r.Study.Parts))
	for i := range order {
		order[i] = i
	}
	s := r.Study.Ratings
	switch {
	case r.Study.Values != nil:
		slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(sortValue(r, a), sortValue(r, b)) })
		return order, "in order of value, from low to high"
	case !s.HasAccept():
		how = "by their most frequent call, each by how many calls differ"
		if r.Agreement.All != nil {
			how = "by what they truly are, each by how many calls are wrong"
		}
		kinds, differ := make([]int, len(order)), make([]int, len(order))
		for part := range order {
			kinds[part], differ[part] = kindOf(r, part), differing(r, part)
		}
		slices.SortStableFunc(order, func(a, b int) int {
			return cmp.Or(cmp.Compare(kinds[a], kinds[b]), cmp.Compare(differ[a], differ[b]))
		})
		return order, how
	}
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
	if r.Agreement.All != nil {
		return order, "bad ones, then good ones, each by how often they were accepted"
	}
	return order, "by how often they were accepted"
}

// kindOf is the reference of a part or, without one, its most frequent call.
func kindOf(r *Record, part int) int {
	s := r.Study.Ratings
	if ref := s.Reference(part); ref != agreement.Missing {
		return int(ref)
	}
	if r.Agreement.All != nil {
		return len(r.Study.Categories) // parts without a reference last
	}
	counts := make([]int, len(r.Study.Categories)+1)
	best := len(r.Study.Categories) // of a part without calls
	for _, c := range s.Row(part) {
		if c != agreement.Missing {
			counts[c]++
			if counts[c] > counts[best] || counts[c] == counts[best] && int(c) < best {
				best = int(c)
			}
		}
	}
	return best
}

// differing counts the calls on a part that are not of its kind.
func differing(r *Record, part int) int {
	n, kind := 0, kindOf(r, part)
	for _, c := range r.Study.Ratings.Row(part) {
		if c != agreement.Missing && int(c) != kind {
			n++
		}
	}
	return n
}

// mapGroups names the kinds over parts that are ordered by them; nil where
// parts are ordered otherwise.
func mapGroups(r *Record, order []int) []figure.MapGroup {
	if r.Study.Values != nil || r.Study.Ratings.HasAccept() {
		return nil
	}
	var out []figure.MapGroup
	for i, part := range order {
		kind := kindOf(r, part)
		if i == 0 || kind != kindOf(r, order[i-1]) {
			name := ""
			if kind < len(r.Study.Categories) {
				name = format.Plain(r.Study.Categories[kind])
			}
			out = append(out, figure.MapGroup{Name: name, From: i})
		}
		out[len(out)-1].Till = i + 1
	}
	return out
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
		for i, g := range mapGroups(r, order) {
			if i > 0 {
				limits = append(limits, figure.MapLimit{Before: g.From})
			}
		}
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

// curveLimits returns the limits at which the grey zone of the pooled curve
// is known.
func curveLimits(r *Record) []*signal.LimitFit {
	if r.Zone == nil || r.Zone.Curves == nil {
		return nil
	}
	var out []*signal.LimitFit
	for _, l := range []*signal.LimitFit{r.Zone.Curves.Pooled.Lower, r.Zone.Curves.Pooled.Upper} {
		if widthKnown(l) {
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
	d := figure.CurveData{Unit: format.Plain(scale.Unit), Text: curveText(r)}
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
		d.Known = append(d.Known, band.HasLower || band.HasUpper)
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
