package figure

import (
	"fmt"
	"strings"
)

// CurveData is what an acceptance curve shows, in the unit of the values.
type CurveData struct {
	Unit     string
	Decimals int
	Points   []CurvePoint // a part each
	Grid     []float64    // values at which the curves are known
	Fit      []float64    // share accepted by the fitted curve; nil without one
	Low      []float64    // its band
	High     []float64
	Own      []OwnCurve
	Limits   []CurveLimit
	Zones    [][2]float64
	Text     string // the fit in words, with its numbers
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
		f.text(Muted, x.from-8, y.at(v)+4, size, End, fixed(100*v, 0))
	}
	if d.Low != nil {
		var area []Point
		for i, v := range d.Grid {
			area = append(area, Point{x.at(v), y.at(d.High[i])})
		}
		for i := len(d.Grid) - 1; i >= 0; i-- {
			area = append(area, Point{x.at(d.Grid[i]), y.at(d.Low[i])})
		}
		f.Marks = append(f.Marks, Mark{Role: Band, Area: area})
	}
	path := func(share []float64) []Point {
		var p []Point
		for i, v := range d.Grid {
			p = append(p, Point{x.at(v), y.at(share[i])})
		}
		return p
	}
	for _, o := range d.Own {
		f.Marks = append(f.Marks, Mark{Role: Thin, Path: path(o.Share)})
	}
	if d.Fit != nil {
		f.Marks = append(f.Marks, Mark{Role: Right, Path: path(d.Fit), Heavy: true})
	}
	end := -1e9
	for _, l := range d.Limits {
		at := x.clamp(l.Value)
		f.Marks = append(f.Marks, Mark{Role: Limit, Line: &Line{at, y.from, at, y.to - 6}, Heavy: true})
		w := textWidth(l.Name, size)
		start := min(max(at-w/2, x.from, end+8), width-w-2)
		f.text(Ink, start, y.to-12, size, Start, l.Name)
		end = start + w
	}
	for _, p := range d.Points {
		role := Ink
		if p.Outlier {
			role = Wrong
		}
		f.Marks = append(f.Marks, Mark{Role: role, Dot: &Dot{X: x.clamp(p.Value), Y: y.at(p.Share), R: 3.5, Outline: true}, Heavy: p.Outlier})
	}
	f.line(Ink, x.from, y.from, x.to, y.from)
	at, decimals := ticks(x.low, x.high, 6)
	for _, v := range at {
		f.line(Ink, x.at(v), y.from, x.at(v), y.from+4)
		f.text(Muted, x.at(v), y.from+18, size, Middle, fixed(v, decimals))
	}
	unit := "value"
	if d.Unit != "" {
		unit += ", " + d.Unit
	}
	f.text(Ink, (x.from+x.to)/2, y.from+36, size, Middle, unit)
	f.turned(Ink, 16, (y.from+y.to)/2, size, Middle, "share accepted, %")
	legendY := height - 6.0
	f.Marks = append(f.Marks, Mark{Role: Right, Line: &Line{leftW, legendY - 4, leftW + 22, legendY - 4}, Heavy: true})
	f.text(Muted, leftW+28, legendY, size, Start, "all appraisers")
	if len(d.Own) > 1 {
		f.line(Thin, leftW+140, legendY-4, leftW+162, legendY-4)
		f.text(Muted, leftW+168, legendY, size, Start, "each appraiser")
	}
	f.Marks = append(f.Marks, Mark{Role: Ink, Dot: &Dot{X: leftW + 291, Y: legendY - 4, R: 3.5, Outline: true}})
	f.text(Muted, leftW+302, legendY, size, Start, "a part")
	f.rect(Zone, leftW+370, legendY-10, 22, 12)
	f.text(Muted, leftW+398, legendY, size, Start, "grey zone")

	mixed := 0
	for _, p := range d.Points {
		if p.Share > 0 && p.Share < 1 {
			mixed++
		}
	}
	f.Alt = strings.TrimSpace(fmt.Sprintf("%d parts, %d of them mixed. %s", len(d.Points), mixed, d.Text))
	return f
}
