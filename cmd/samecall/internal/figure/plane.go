package figure

import (
	"fmt"
	"math"
	"strings"
)

// Rates are the two error rates of an appraiser with their intervals.
type Rates struct {
	Name                               string
	Miss, MissLower, MissUpper         float64
	FalseAlarm, FalseLower, FalseUpper float64
	Text                               string // both, as read
}

// PlaneData is what an error plane shows: appraisers, and the accept and the
// conditional level of both rates.
type PlaneData struct {
	Appraisers       []Rates
	Miss, FalseAlarm [2]float64
}

const (
	planeSize = 12.0 // of texts
	planeLine = 14.0 // from one line of a label to the next
	planeDot  = 5.0
	planeCap  = 3.0 // half of the stroke at the end of an interval
)

// Plane draws the error plane: the miss rate against the false-alarm rate, a
// labelled point with its intervals for each appraiser, and the criteria as
// nested boxes at the origin. Appraisers with the same rates share a point
// and a label of several lines. It returns nil without an appraiser.
func Plane(d PlaneData) *Figure {
	if len(d.Appraisers) == 0 {
		return nil
	}
	const (
		width, height = 640.0, 440.0
		leftW, bottom = 62.0, 66.0
		top, right    = 16.0, 20.0
		size          = planeSize
	)
	x := axis{0, reach(d.FalseAlarm[1], d.Appraisers, func(r Rates) float64 { return r.FalseUpper }), leftW, width - right}
	y := axis{0, reach(d.Miss[1], d.Appraisers, func(r Rates) float64 { return r.MissUpper }), height - bottom, top}
	f := &Figure{Name: "errors", Title: "Error plane: miss rate against false-alarm rate", Width: width, Height: height}
	labels := &placer{within: Rect{X: leftW + 3, Y: 2, W: width - leftW - 6, H: height - bottom - 4}}

	// The boxes of the criteria, the wider one first.
	box := func(level int) Rect {
		miss, alarm := y.clamp(d.Miss[level]), x.clamp(d.FalseAlarm[level])
		return Rect{X: x.from, Y: miss, W: alarm - x.from, H: y.from - miss}
	}
	accept, conditional := box(0), box(1)
	f.rect(Field, conditional.X, conditional.Y, conditional.W, conditional.H)
	f.rect(Band, accept.X, accept.Y, accept.W, accept.H)
	f.outline(Limit, conditional.X, conditional.Y, conditional.W, conditional.H, false, Dashed)
	f.outline(Limit, accept.X, accept.Y, accept.W, accept.H, false, 0)
	for _, b := range []Rect{accept, conditional} {
		labels.crossed = append(labels.crossed, Rect{X: b.X, Y: b.Y - 1, W: b.W, H: 2}, Rect{X: b.X + b.W - 1, Y: b.Y, W: 2, H: b.H})
	}

	f.line(Ink, x.from, y.from, x.to, y.from)
	f.line(Ink, x.from, y.from, x.from, y.to)
	at, decimals := ticks(100*x.low, 100*x.high, 8)
	for _, v := range at {
		f.line(Ink, x.at(v/100), y.from, x.at(v/100), y.from+4)
		f.text(Muted, x.at(v/100), y.from+18, size, Middle, decimal(v, decimals))
	}
	at, decimals = ticks(100*y.low, 100*y.high, 8)
	for _, v := range at {
		f.line(Ink, x.from-4, y.at(v/100), x.from, y.at(v/100))
		f.text(Muted, x.from-8, y.at(v/100)+4, size, End, decimal(v, decimals))
	}
	f.text(Ink, (x.from+x.to)/2, y.from+36, size, Middle, "false-alarm rate, %: good parts rejected")
	f.turned(Ink, 16, (y.from+y.to)/2, size, Middle, "miss rate, %: bad parts accepted")

	var alt []string
	for _, r := range d.Appraisers {
		px, py := x.clamp(r.FalseAlarm), y.clamp(r.Miss)
		l, u := x.clamp(r.FalseLower), x.clamp(r.FalseUpper)
		b, t := y.clamp(r.MissLower), y.clamp(r.MissUpper)
		f.line(Right, l, py, u, py)
		f.line(Right, px, b, px, t)
		for _, end := range []float64{l, u} {
			f.line(Right, end, py-planeCap, end, py+planeCap)
		}
		for _, end := range []float64{b, t} {
			f.line(Right, px-planeCap, end, px+planeCap, end)
		}
		labels.crossed = append(labels.crossed, Rect{X: l, Y: py - planeCap, W: u - l, H: 2 * planeCap}, Rect{X: px - planeCap, Y: t, W: 2 * planeCap, H: b - t})
		alt = append(alt, r.Name+": "+r.Text)
	}
	groups := together(d.Appraisers, x, y)
	for _, g := range groups {
		labels.taken = append(labels.taken, Rect{X: g.at.X - planeDot, Y: g.at.Y - planeDot, W: 2 * planeDot, H: 2 * planeDot})
	}
	unlabelled := 0
	for _, g := range groups {
		if !f.label(labels, g) {
			unlabelled += len(g.names)
		}
	}
	for _, g := range groups { // above the leaders
		f.dot(Right, g.at.X, g.at.Y, planeDot)
	}
	key := height - 8
	f.rect(Band, leftW, key-11, 18, 12)
	f.outline(Limit, leftW, key-11, 18, 12, false, 0)
	f.text(Muted, leftW+25, key, size, Start, "accept level")
	f.rect(Field, leftW+125, key-11, 18, 12)
	f.outline(Limit, leftW+125, key-11, 18, 12, false, Dashed)
	f.text(Muted, leftW+150, key, size, Start, "conditional level")
	if unlabelled > 0 {
		f.text(Muted, width-right, key, size, End, fmt.Sprintf("%d without a label for want of room", unlabelled))
	}
	f.Alt = fmt.Sprintf("Miss rate and false-alarm rate of each appraiser. %s. Solid box: accept, miss rate to %s %% and false-alarm rate to %s %%. Dashed box: conditional, to %s %% and %s %%.",
		strings.Join(alt, "; "), num(100*d.Miss[0]), num(100*d.FalseAlarm[0]), num(100*d.Miss[1]), num(100*d.FalseAlarm[1]))
	return f
}

// reach returns the end of an axis: beyond the level and all intervals.
func reach(level float64, all []Rates, upper func(Rates) float64) float64 {
	end := 1.25 * level
	for _, r := range all {
		end = max(end, upper(r))
	}
	return max(0.01, min(1, math.Ceil(end*21)/20))
}

// pointGroup is appraisers whose points cannot be told apart.
type pointGroup struct {
	at    Point
	names []string
}

func together(all []Rates, x, y axis) []pointGroup {
	const near = 2.0
	var out []pointGroup
next:
	for _, r := range all {
		p := Point{x.clamp(r.FalseAlarm), y.clamp(r.Miss)}
		for i := range out {
			if math.Hypot(out[i].at.X-p.X, out[i].at.Y-p.Y) < near {
				out[i].names = append(out[i].names, r.Name)
				continue next
			}
		}
		out = append(out, pointGroup{p, []string{r.Name}})
	}
	return out
}

// label writes the names of a group beside its point, a line each.
func (f *Figure) label(labels *placer, g pointGroup) bool {
	const (
		most    = 14 // lines of a label
		longest = 170.0
	)
	lines := g.names
	if len(lines) > most {
		lines = append(append([]string(nil), lines[:most-1]...), fmt.Sprintf("and %d more", len(g.names)-most+1))
	}
	w := 0.0
	for i, s := range lines {
		if i == 0 {
			lines = append([]string(nil), lines...)
		}
		lines[i] = shorten(s, planeSize, longest)
		w = max(w, textWidth(lines[i], planeSize))
	}
	box, leader, ok := labels.place(g.at, w, planeLine*float64(len(lines)))
	if !ok {
		return false
	}
	if leader != nil {
		f.line(Muted, leader.X1, leader.Y1, leader.X2, leader.Y2)
	}
	for i, s := range lines {
		// Beside the point a label ends or begins there.
		anchor, at := Start, box.X
		if box.X+box.W/2 < g.at.X {
			anchor, at = End, box.X+box.W
		}
		f.Marks = append(f.Marks, Mark{Role: Ink, Text: &Text{X: at, Y: box.Y + planeLine*(float64(i)+0.78), Size: planeSize, Anchor: anchor, Text: s, Halo: true}})
	}
	return true
}
