package figure

import (
	"cmp"
	"fmt"
	"slices"
	"strings"
)

// CurveData is what an acceptance curve shows, in the unit of the values.
type CurveData struct {
	Unit   string
	Points []CurvePoint // a part each
	Grid   []float64    // values at which the curves are known
	Fit    []float64    // share accepted by the fitted curve; nil without one
	Low    []float64    // its band; nil without one
	High   []float64
	Known  []bool // where the band is bounded
	Own    []OwnCurve
	Limits []CurveLimit
	Zones  [][2]float64
	Text   string // the fit in words, with its numbers
}

// CurvePoint is a part: its value and the share of calls that accepted it.
type CurvePoint struct {
	Value, Share float64
	Outlier      bool
}

// OwnCurve is the curve of one appraiser.
type OwnCurve struct {
	Name  string
	Share []float64
}

// CurveLimit is a specification limit.
type CurveLimit struct {
	Name  string
	Value float64
}

// AcceptanceCurve draws the share accepted against the value: a ring for each
// part, the fitted curve and its band, each appraiser's own curve thin, the
// limits and the grey zones. It returns nil without parts.
func AcceptanceCurve(d CurveData) *Figure {
	if len(d.Points) == 0 || len(d.Grid) < 2 {
		return nil
	}
	const (
		width, height = 760.0, 400.0
		leftW, bottom = 58.0, 62.0
		top, right    = 30.0, 20.0
		size          = 12.0
	)
	x := axis{d.Grid[0], d.Grid[len(d.Grid)-1], leftW, width - right}
	y := axis{0, 1, height - bottom, top}
	f := &Figure{Name: "curve", Title: "Acceptance curve: share accepted against value", Width: width, Height: height}
	for _, z := range d.Zones {
		from, to := x.clamp(z[0]), x.clamp(z[1])
		f.rect(Zone, from, y.to, to-from, y.from-y.to)
	}
	for v := 0.0; v <= 1; v += 0.25 {
		f.line(Rule, x.from, y.at(v), x.to, y.at(v))
		f.text(Muted, x.from-8, y.at(v)+4, size, End, decimal(100*v, 0))
	}
	for _, area := range d.bands(x, y) {
		f.Marks = append(f.Marks, Mark{Role: Band, Area: area})
	}
	path := func(share []float64) []Point {
		var p []Point
		for i, v := range d.Grid {
			p = append(p, Point{x.at(v), y.at(share[i])})
		}
		return p
	}
	dash := func(own int) Dash {
		if len(d.Own) > len(dashes) { // more than can be told apart
			return 0
		}
		return Dash(own)
	}
	for i, o := range d.Own {
		f.Marks = append(f.Marks, Mark{Role: Thin, Path: path(o.Share), Dash: dash(i)})
	}
	if d.Fit != nil {
		f.Marks = append(f.Marks, Mark{Role: Right, Path: path(d.Fit), Heavy: true})
	}
	names := make([]span, len(d.Limits))
	for i, l := range d.Limits {
		at := x.clamp(l.Value)
		f.Marks = append(f.Marks, Mark{Role: Limit, Line: &Line{at, y.from, at, y.to - 6}, Heavy: true})
		d.Limits[i].Name = shorten(l.Name, size, width/2-10)
		names[i] = span{at, textWidth(d.Limits[i].Name, size)}
	}
	for i, start := range spread(names, 2, width-2, 8) {
		f.text(Ink, start, y.to-12, size, Start, d.Limits[i].Name)
	}
	shown := gather(d.Points)
	for _, p := range shown {
		role := Ink
		if p.Outlier {
			role = Wrong
		}
		f.Marks = append(f.Marks, Mark{Role: role, Dot: &Dot{X: x.clamp(p.Value), Y: y.at(p.Share), R: 3.5, Outline: true}, Heavy: p.Outlier})
	}
	f.line(Ink, x.from, y.from, x.to, y.from)
	at, labels := x.ticksThatFit(x.low, x.high, size)
	for i, v := range at {
		f.line(Ink, x.at(v), y.from, x.at(v), y.from+4)
		half := textWidth(labels[i], size) / 2
		f.text(Muted, min(max(x.at(v), half+2), width-half-2), y.from+18, size, Middle, labels[i])
	}
	unit := "value"
	if d.Unit != "" {
		unit += ", " + d.Unit
	}
	f.text(Ink, (x.from+x.to)/2, y.from+36, size, Middle, shorten(unit, size, x.to-x.from))
	f.turned(Ink, 16, (y.from+y.to)/2, size, Middle, "share accepted, %")
	key := keyLine{f: f, x: leftW, y: height - 10, from: leftW, to: width - right, size: size}
	if d.Fit != nil {
		key.add("all appraisers", func(x, y float64) {
			f.Marks = append(f.Marks, Mark{Role: Right, Line: &Line{x, y, x + keySample, y}, Heavy: true})
		})
	}
	own := func(i int, name string) {
		key.add(name, func(x, y float64) {
			f.Marks = append(f.Marks, Mark{Role: Thin, Line: &Line{x, y, x + keySample, y}, Dash: dash(i)})
		})
	}
	switch n := len(d.Own); {
	case n > len(dashes):
		own(0, "each appraiser")
	case n > 1:
		for i, o := range d.Own {
			own(i, shorten(o.Name, size, longestKey))
		}
	}
	part, outlier := "a part", false
	if len(shown) < len(d.Points) {
		part = "parts of like value"
	}
	for _, p := range shown {
		outlier = outlier || p.Outlier
	}
	key.add(part, func(x, y float64) {
		f.Marks = append(f.Marks, Mark{Role: Ink, Dot: &Dot{X: x + keySample/2, Y: y, R: 3.5, Outline: true}})
	})
	if outlier {
		key.add("does not fit the curve", func(x, y float64) {
			f.Marks = append(f.Marks, Mark{Role: Wrong, Dot: &Dot{X: x + keySample/2, Y: y, R: 3.5, Outline: true}, Heavy: true})
		})
	}
	if len(d.Zones) > 0 {
		key.add("grey zone", func(x, y float64) { f.rect(Zone, x, y-6, keySample, 12) })
	}
	f.Height = key.y + 10

	mixed := 0
	for _, p := range d.Points {
		if p.Share > 0 && p.Share < 1 {
			mixed++
		}
	}
	f.Alt = strings.TrimSpace(fmt.Sprintf("%d parts, %d of them mixed. %s", len(d.Points), mixed, d.Text))
	return f
}

// keyLine explains marks in one line, or in more where they do not fit.
type keyLine struct {
	f        *Figure
	x, y     float64 // of the next mark
	from, to float64
	size     float64
}

const (
	keySample  = 34.0  // how long a sample is: every dash stands in it twice
	longestKey = 180.0 // of a name
)

func (k *keyLine) add(what string, draw func(x, y float64)) {
	const (
		gap  = 6.0
		line = 20.0
	)
	w := keySample + gap + textWidth(what, k.size)
	if k.x > k.from && k.x+w > k.to {
		k.x, k.y = k.from, k.y+line
	}
	draw(k.x, k.y-4)
	k.f.text(Muted, k.x+keySample+gap, k.y, k.size, Start, what)
	k.x += w + 14
}

// bands are the outlines of the band, where there is one.
func (d CurveData) bands(x, y axis) [][]Point {
	var out [][]Point
	var upper, lower []Point
	end := func() {
		if len(upper) > 1 {
			for i := len(lower) - 1; i >= 0; i-- {
				upper = append(upper, lower[i])
			}
			out = append(out, upper)
		}
		upper, lower = nil, nil
	}
	for i := range d.Low {
		if !d.Known[i] {
			end()
			continue
		}
		at := x.at(d.Grid[i])
		upper, lower = append(upper, Point{at, y.at(d.High[i])}), append(lower, Point{at, y.at(d.Low[i])})
	}
	end()
	return out
}

// gather puts neighbouring parts together where there are too many to see
// each. Outliers stay what they are.
func gather(points []CurvePoint) []CurvePoint {
	const (
		most = 150
		bins = 60
	)
	if len(points) <= most {
		return points
	}
	var plain, out []CurvePoint
	for _, p := range points {
		if p.Outlier {
			out = append(out, p)
		} else {
			plain = append(plain, p)
		}
	}
	slices.SortStableFunc(plain, func(a, b CurvePoint) int { return cmp.Compare(a.Value, b.Value) })
	for i := range bins {
		some := plain[i*len(plain)/bins : (i+1)*len(plain)/bins]
		if len(some) == 0 {
			continue
		}
		var mean CurvePoint
		for _, p := range some {
			mean.Value += p.Value / float64(len(some))
			mean.Share += p.Share / float64(len(some))
		}
		mean.Share = min(mean.Share, 1)
		out = append(out, mean)
	}
	return out
}
