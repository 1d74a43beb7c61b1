package figure

import (
	"image/color"
	"io"
	"math"
	"strconv"
	"strings"

	"github.com/rivo/uniseg"
	"golang.org/x/text/unicode/bidi"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/font/liberation"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
)

// PNG writes the figure in its light colours, two dots to a pixel.
func (f *Figure) PNG(w io.Writer) error {
	const dotsPerInch = 2 * 96
	img := vgimg.NewWith(vgimg.UseWH(length(f.Width), length(f.Height)), vgimg.UseDPI(dotsPerInch), vgimg.UseBackgroundColor(color.White))
	c := canvas{draw.New(img), f.Height, font.NewCache(liberation.Collection())}
	for _, m := range f.Marks {
		c.mark(m)
	}
	_, err := vgimg.PngCanvas{Canvas: img}.WriteTo(w)
	return err
}

// length is so many CSS pixels, of which an inch has 96.
func length(x float64) vg.Length { return vg.Length(x) * vg.Inch / 96 }

type canvas struct {
	draw.Canvas
	height float64
	fonts  *font.Cache
}

// at turns a place around: the canvas has its origin at the lower left.
func (c canvas) at(x, y float64) vg.Point {
	return vg.Point{X: length(x), Y: length(c.height - y)}
}

func (c canvas) mark(m Mark) {
	c.SetColor(light(m.Role))
	c.SetLineWidth(length(m.strokeWidth()))
	var lengths []vg.Length
	for _, d := range dashes[m.Dash] {
		lengths = append(lengths, length(d))
	}
	c.SetLineDash(lengths, 0)
	switch {
	case m.Rect != nil:
		r := m.Rect
		path := c.polygon([]Point{{r.X, r.Y}, {r.X + r.W, r.Y}, {r.X + r.W, r.Y + r.H}, {r.X, r.Y + r.H}}, true)
		if r.Outline {
			c.Stroke(path)
		} else {
			c.Fill(path)
		}
	case m.Line != nil:
		c.Stroke(c.polygon([]Point{{m.Line.X1, m.Line.Y1}, {m.Line.X2, m.Line.Y2}}, false))
	case m.Path != nil:
		c.Stroke(c.polygon(m.Path, false))
	case m.Area != nil:
		c.Fill(c.polygon(m.Area, true))
	case m.Dot != nil:
		var path vg.Path
		centre := c.at(m.Dot.X, m.Dot.Y)
		r := length(m.Dot.R)
		path.Move(vg.Point{X: centre.X + r, Y: centre.Y})
		path.Arc(centre, r, 0, 2*math.Pi)
		path.Close()
		if m.Dot.Outline {
			c.Stroke(path)
		} else {
			c.Fill(path)
		}
	case m.Text != nil:
		c.writing(m)
	}
}

func (c canvas) writing(m Mark) {
	t := m.Text
	f := font.Font{Typeface: "Liberation", Variant: "Sans", Size: length(t.Size)}
	if m.Heavy {
		f.Weight = 3 // bold
	}
	face := c.fonts.Lookup(f, f.Size)
	at := c.at(t.X, t.Y)
	text := visual(t.Text)
	shift := [...]vg.Length{0, -0.5, -1}[t.Anchor] * face.Width(text)
	c.Push()
	c.Translate(at)
	if t.Turn {
		c.Rotate(math.Pi / 2)
	}
	if t.Halo {
		const wide = 1.2
		c.SetColor(light(Paper))
		for i := range 8 {
			sin, cos := math.Sincos(float64(i) * math.Pi / 4)
			c.FillString(face, vg.Point{X: shift + length(wide*cos), Y: length(wide * sin)}, text)
		}
		c.SetColor(light(m.Role))
	}
	c.FillString(face, vg.Point{X: shift}, text)
	c.Pop()
}

// visual puts a text in the order in which it is drawn from left to right,
// and a sign in the place of what the typeface has no letter for.
func visual(s string) string {
	var known strings.Builder
	for g := uniseg.NewGraphemes(s); g.Next(); {
		if _, ok := advance(g.Runes()[0]); ok {
			known.WriteString(g.Str())
		} else {
			known.WriteString("□")
		}
	}
	var p bidi.Paragraph
	if _, err := p.SetString(known.String()); err != nil {
		return known.String()
	}
	order, err := p.Order()
	if err != nil {
		return known.String()
	}
	var out strings.Builder
	for i := range order.NumRuns() {
		run := order.Run(i)
		if run.Direction() == bidi.RightToLeft {
			out.WriteString(bidi.ReverseString(run.String()))
		} else {
			out.WriteString(run.String())
		}
	}
	return out.String()
}

func (c canvas) polygon(points []Point, closed bool) vg.Path {
	var path vg.Path
	for i, p := range points {
		if i == 0 {
			path.Move(c.at(p.X, p.Y))
		} else {
			path.Line(c.at(p.X, p.Y))
		}
	}
	if closed {
		path.Close()
	}
	return path
}

func light(role Role) color.Color {
	for _, p := range palette {
		if p.role == role {
			rgb, err := strconv.ParseUint(p.light[1:], 16, 32)
			if err == nil {
				return color.RGBA{R: uint8(rgb >> 16), G: uint8(rgb >> 8), B: uint8(rgb), A: 255}
			}
		}
	}
	return color.Black
}
