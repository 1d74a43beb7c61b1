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

// Plane draws the error plane: the miss rate against the false-alarm rate, a
// labelled point with its intervals for each appraiser, and the criteria as
// nested boxes at the origin. It returns nil without an appraiser.
func Plane(d PlaneData) *Figure {
	if len(d.Appraisers) == 0 {
		return nil
	}
	const (
		width, height = 640.0, 470.0
		leftW, bottom = 62.0, 52.0
		top, right    = 16.0, 20.0
		size          = 12.0
	)
	x := axis{0, reach(d.FalseAlarm[1], d.Appraisers, func(r Rates) float64 { return r.FalseUpper }), leftW, width - right}
	y := axis{0, reach(d.Miss[1], d.Appraisers, func(r Rates) float64 { return r.MissUpper }), height - bottom, top}
	f := &Figure{Name: "errors", Title: "Error plane: miss rate against false-alarm rate", Width: width, Height: height}

	// The boxes of the criteria, the wider one first.
	f.rect(Field, x.at(0), y.at(d.Miss[1]), x.at(d.FalseAlarm[1])-x.at(0), y.at(0)-y.at(d.Miss[1]))
	f.rect(Band, x.at(0), y.at(d.Miss[0]), x.at(d.FalseAlarm[0])-x.at(0), y.at(0)-y.at(d.Miss[0]))
	f.outline(Limit, x.at(0), y.at(d.Miss[1]), x.at(d.FalseAlarm[1])-x.at(0), y.at(0)-y.at(d.Miss[1]), false, true)
	f.outline(Limit, x.at(0), y.at(d.Miss[0]), x.at(d.FalseAlarm[0])-x.at(0), y.at(0)-y.at(d.Miss[0]), false, false)

	f.line(Ink, x.from, y.from, x.to, y.from)
	f.line(Ink, x.from, y.from, x.from, y.to)
	at, decimals := ticks(100*x.low, 100*x.high, 6)
	for _, v := range at {
		f.line(Ink, x.at(v/100), y.from, x.at(v/100), y.from+4)
		f.text(Muted, x.at(v/100), y.from+18, size, Middle, fixed(v, decimals))
	}
	at, decimals = ticks(100*y.low, 100*y.high, 6)
	for _, v := range at {
		f.line(Ink, x.from-4, y.at(v/100), x.from, y.at(v/100))
		f.text(Muted, x.from-8, y.at(v/100)+4, size, End, fixed(v, decimals))
	}
	f.text(Ink, (x.from+x.to)/2, height-10, size, Middle, "false-alarm rate, %: good parts rejected")
	f.turned(Ink, 16, (y.from+y.to)/2, size, Middle, "miss rate, %: bad parts accepted")

	labels := placer{right: width - 4, top: top}
	for _, r := range d.Appraisers {
		labels.keep(x.clamp(r.FalseAlarm)-5, y.clamp(r.Miss)-5, 10, 10)
	}
	var alt []string
	for _, r := range d.Appraisers {
		px, py := x.clamp(r.FalseAlarm), y.clamp(r.Miss)
		f.line(Right, x.clamp(r.FalseLower), py, x.clamp(r.FalseUpper), py)
		f.line(Right, px, y.clamp(r.MissLower), px, y.clamp(r.MissUpper))
		f.dot(Right, px, py, 5)
		labels.keep(x.clamp(r.FalseLower), py-1, x.clamp(r.FalseUpper)-x.clamp(r.FalseLower), 2)
		labels.keep(px-1, y.clamp(r.MissUpper), 2, y.clamp(r.MissLower)-y.clamp(r.MissUpper))
		alt = append(alt, r.Name+": "+r.Text)
	}
	for _, r := range d.Appraisers {
		labels.label(f, x.clamp(r.FalseAlarm), y.clamp(r.Miss), shorten(r.Name, size, 150), size)
	}
	f.Alt = fmt.Sprintf("Miss rate and false-alarm rate of each appraiser. %s. Solid box: accept, miss rate to %s %% and false-alarm rate to %s %%. Dashed box: conditional, to %s %% and %s %%.",
		strings.Join(alt, "; "), num(100*d.Miss[0]), num(100*d.FalseAlarm[0]), num(100*d.Miss[1]), num(100*d.FalseAlarm[1]))
	return f
}

// reach returns the end of an axis: beyond the level and all intervals, but
// not so far that one wide interval hides the rest.
func reach(level float64, all []Rates, upper func(Rates) float64) float64 {
	end := 1.25 * level
	for _, r := range all {
		end = max(end, upper(r))
	}
	return min(1, math.Ceil(end*21)/20)
}

// placer finds room for labels beside points.
type placer struct {
	right, top float64
	taken      []Rect
}

func (p *placer) keep(x, y, w, h float64) { p.taken = append(p.taken, Rect{X: x, Y: y, W: w, H: h}) }

func (p *placer) free(r Rect) bool {
	if r.X+r.W > p.right || r.Y < p.top {
		return false
	}
	for _, t := range p.taken {
		if r.X < t.X+t.W && t.X < r.X+r.W && r.Y < t.Y+t.H && t.Y < r.Y+r.H {
			return false
		}
	}
	return true
}

// label writes a text as near to a point as there is room, with a thin line
// to the point where it is not beside it.
func (p *placer) label(f *Figure, x, y float64, s string, size float64) {
	w, h := textWidth(s, size), size*1.15
	for _, far := range []float64{9, 24, 40, 58, 78, 100, 124, 150, 178, 208} {
		for _, d := range [][2]float64{{0.7, -1}, {-0.7, -1}, {0.7, 1}, {-0.7, 1}, {1, -2}, {-1, -2}, {1, 2}, {-1, 2}, {2, -1}, {-2, -1}, {2, 1}, {-2, 1}} {
			left := x + d[0]*far
			if d[0] < 0 {
				left -= w
			}
			box := Rect{X: left, Y: y + d[1]*far - h/2, W: w, H: h}
			if box.X < 64 || box.Y+box.H > y+200 || !p.free(box) {
				continue
			}
			p.keep(box.X, box.Y, box.W, box.H)
			if far > 9 {
				end := box.X
				if d[0] < 0 {
					end = box.X + box.W
				}
				f.line(Rule, x, y, end, box.Y+h/2)
			}
			f.text(Ink, box.X, box.Y+h*0.8, size, Start, s)
			return
		}
	}
}
