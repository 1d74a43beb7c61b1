package figure

import (
	"fmt"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// box is the room that a text may take at most.
func box(t *Text) Rect {
	w := textWidth(t.Text, t.Size)
	r := Rect{X: t.X - w*[...]float64{0, 0.5, 1}[t.Anchor], Y: t.Y - 0.78*t.Size, W: w, H: t.Size}
	if t.Turn {
		r = Rect{X: t.X - 0.78*t.Size, Y: t.Y - w*[...]float64{1, 0.5, 0}[t.Anchor], W: t.Size, H: w}
	}
	return r
}

// checkTexts fails where two texts of a figure lie over each other or one
// leaves it.
func checkTexts(t interface{ Fatalf(string, ...any) }, f *Figure) {
	const hair = 0.5
	type placed struct {
		text string
		Rect
	}
	var texts []placed
	for _, m := range f.Marks {
		if m.Text == nil || m.Text.Text == "" {
			continue
		}
		b := box(m.Text)
		if b.X < -hair || b.Y < -hair || b.X+b.W > f.Width+hair || b.Y+b.H > f.Height+hair {
			t.Fatalf("%s: %q leaves the figure: %+v in %v × %v", f.Name, m.Text.Text, b, f.Width, f.Height)
		}
		for _, other := range texts {
			if meet(b, other.Rect) {
				t.Fatalf("%s: %q lies over %q", f.Name, m.Text.Text, other.text)
			}
		}
		texts = append(texts, placed{m.Text.Text, Rect{X: b.X + hair, Y: b.Y + hair, W: b.W - 2*hair, H: b.H - 2*hair}})
	}
	for _, m := range f.Marks {
		if m.Rect != nil && (m.Rect.W < 0 || m.Rect.H < 0) {
			t.Fatalf("%s: a rectangle of %v × %v", f.Name, m.Rect.W, m.Rect.H)
		}
	}
}

func rates(t *rapid.T) []Rates {
	n := rapid.IntRange(1, 40).Draw(t, "appraisers")
	out := make([]Rates, n)
	close := rapid.Float64Range(0.001, 1).Draw(t, "close") // how far the points lie apart
	for i := range out {
		draw := func(what string) (value, lower, upper float64) {
			value = rapid.Float64Range(0, close).Draw(t, what)
			return value, value * rapid.Float64Range(0, 1).Draw(t, "lower"), value + (1-value)*rapid.Float64Range(0, 1).Draw(t, "upper")
		}
		out[i].Name = names().Draw(t, "name")
		out[i].Miss, out[i].MissLower, out[i].MissUpper = draw("miss")
		out[i].FalseAlarm, out[i].FalseLower, out[i].FalseUpper = draw("false alarm")
	}
	return out
}

func TestPlaneAlways(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		accept := rapid.Float64Range(0, 1).Draw(t, "accept")
		conditional := rapid.Float64Range(accept, 1).Draw(t, "conditional")
		f := Plane(PlaneData{Appraisers: rates(t), Miss: [2]float64{accept, conditional}, FalseAlarm: [2]float64{accept, conditional}})
		checkTexts(t, f)
	})
}

// Twelve names, wherever their points lie, find room.
func TestPlaneLabelsEach(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		all := rates(t)
		all = all[:min(len(all), 12)]
		for i := range all {
			all[i].Name = fmt.Sprintf("Inspector %c", 'A'+i)
		}
		f := Plane(PlaneData{Appraisers: all, Miss: [2]float64{0.02, 0.05}, FalseAlarm: [2]float64{0.05, 0.10}})
		checkTexts(t, f)
		for _, r := range all {
			if !strings.Contains(f.Inline(), ">"+r.Name+"<") {
				t.Fatalf("%s has no label", r.Name)
			}
		}
	})
}

func TestPlaneWithoutAppraisers(t *testing.T) {
	if f := Plane(PlaneData{}); f != nil {
		t.Errorf("a figure of nobody: %+v", f)
	}
}

func TestSquareAlways(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(2, largestSquare).Draw(t, "appraisers")
		d := SquareData{}
		for range n {
			d.Names = append(d.Names, names().Draw(t, "name"))
			row := make([]Cell, n)
			for b := range row {
				row[b] = Cell{Share: 1, Known: true, Text: "100 %", Kappa: "−0.98"}
			}
			d.Pair = append(d.Pair, row)
		}
		if rapid.Bool().Draw(t, "reference") {
			d.Reference = d.Pair[0]
		}
		checkTexts(t, Square(d))
	})
}

func TestSquareLimits(t *testing.T) {
	for _, n := range []int{0, 1, largestSquare + 1} {
		if f := Square(SquareData{Names: make([]string, n)}); f != nil {
			t.Errorf("a square of %d appraisers", n)
		}
	}
}

func TestCallMapAlways(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		parts := rapid.IntRange(1, 300).Draw(t, "parts")
		d := MapData{Order: "in order of value, from low to high", Left: rapid.SampledFrom([]string{"", "the 300 parts with most wrong or mixed calls of 2 000"}).Draw(t, "left")}
		d.Parts = make([]string, parts)
		kinds := rapid.IntRange(0, 12).Draw(t, "kinds")
		for range kinds {
			d.Kinds = append(d.Kinds, names().Draw(t, "kind"))
		}
		for range rapid.IntRange(1, 4).Draw(t, "appraisers") {
			a := MapAppraiser{Name: names().Draw(t, "name")}
			for range rapid.IntRange(1, 3).Draw(t, "trials") {
				row := make([]Call, parts)
				for i := range row {
					row[i] = Call(i % (int(Kind) + kinds))
				}
				a.Calls = append(a.Calls, row)
			}
			d.Appraisers = append(d.Appraisers, a)
		}
		if rapid.Bool().Draw(t, "values") {
			lower := rapid.IntRange(0, parts).Draw(t, "lower")
			d.Limits = []MapLimit{{"lower limit", lower}, {"upper limit", rapid.IntRange(lower, parts).Draw(t, "upper")}}
		} else if kinds > 0 {
			at := 0
			for _, k := range d.Kinds {
				till := rapid.IntRange(at, parts).Draw(t, "till")
				d.Groups = append(d.Groups, MapGroup{k, at, till})
				at = till
			}
		}
		checkTexts(t, CallMap(d))
	})
}

func TestCurveAlways(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d := CurveData{Unit: names().Draw(t, "unit")}
		low := rapid.Float64Range(-1e6, 1e6).Draw(t, "low")
		width := rapid.Float64Range(1e-3, 1e6).Draw(t, "width")
		for range rapid.IntRange(1, 400).Draw(t, "parts") {
			d.Points = append(d.Points, CurvePoint{Value: low + width*rapid.Float64Range(0, 1).Draw(t, "value"), Share: rapid.Float64Range(0, 1).Draw(t, "share"), Outlier: rapid.Bool().Draw(t, "outlier")})
		}
		for i := range 11 {
			d.Grid = append(d.Grid, low+width*float64(i)/10)
			d.Fit, d.Low, d.High = append(d.Fit, 0.5), append(d.Low, 0.4), append(d.High, 0.6)
			d.Known = append(d.Known, rapid.Bool().Draw(t, "known"))
		}
		lower := rapid.Float64Range(0, 1).Draw(t, "lower")
		d.Limits = []CurveLimit{
			{"lower limit " + decimal(low+width*lower, 6), low + width*lower},
			{"upper limit " + decimal(low+width, 6), low + width*rapid.Float64Range(lower, 1).Draw(t, "upper")},
		}
		d.Zones = [][2]float64{{low - width, low + width/3}, {low + width/2, low + 3*width}}
		d.Own = []OwnCurve{{"a", d.Fit}, {"b", d.Low}}
		checkTexts(t, AcceptanceCurve(d))
	})
}

// A reader can tell the appraisers' curves apart without colour, and what the
// band of a call map is.
func TestLegends(t *testing.T) {
	d := CurveData{Points: []CurvePoint{{Value: 1, Share: 0.5}}, Grid: []float64{0, 2}}
	for _, name := range []string{"early", "late", "night"} {
		d.Own = append(d.Own, OwnCurve{Name: name, Share: []float64{0, 1}})
	}
	said := func(f *Figure, text string) bool {
		for _, m := range f.Marks {
			if m.Text != nil && m.Text.Text == text {
				return true
			}
		}
		return false
	}
	f := AcceptanceCurve(d)
	seen := make(map[Dash]bool)
	for _, m := range f.Marks {
		if m.Role == Thin && m.Path != nil {
			if seen[m.Dash] {
				t.Errorf("two curves have the dash %d", m.Dash)
			}
			seen[m.Dash] = true
		}
	}
	for _, o := range d.Own {
		if !said(f, o.Name) {
			t.Errorf("the legend does not name the curve of %s", o.Name)
		}
	}
	calls := CallMap(MapData{Parts: []string{"1", "2"}, Appraisers: []MapAppraiser{{Name: "early", Calls: [][]Call{{Accepted, OtherWrong}}}}, Zones: [][2]int{{0, 1}}})
	for _, text := range []string{"grey zone", "right side, other category"} {
		if !said(calls, text) {
			t.Errorf("the legend of the call map does not explain: %s", text)
		}
	}
}
