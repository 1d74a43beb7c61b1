// Package figure draws the pictures of a record: the agreement square, the
// call map, the error plane and the acceptance curve. A figure is a list of
// marks, written as SVG for pages and as PNG for other programs.
package figure

// Figure is a picture, its origin at the upper left, in units of one CSS
// pixel.
type Figure struct {
	Name          string // short and fixed, for files
	Title         string // what it shows
	Alt           string // the same with its numbers, for those who cannot see it
	Width, Height float64
	Marks         []Mark
}

// Names are those of all figures that there are.
func Names() []string { return []string{"square", "errors", "calls", "curve"} }

// Role is what a mark is; it decides the colours. Blue and orange are told
// apart by colour-blind readers, and no mark differs from another by its
// colour alone.
type Role string

// Roles of marks.
const (
	Paper  Role = "paper"  // what it is drawn on
	Ink    Role = "ink"    // text and axes
	Muted  Role = "muted"  // lesser text, ticks
	Rule   Role = "rule"   // thin lines of a grid
	Field  Role = "field"  // background of a cell
	Zone   Role = "zone"   // the grey zone
	Limit  Role = "limit"  // specification limits, criteria
	Right  Role = "right"  // agreement, right calls: blue
	Wrong  Role = "wrong"  // disagreement, wrong calls: orange
	Band   Role = "band"   // band of a curve
	Thin   Role = "thin"   // curves of single appraisers
	Accept Role = "accept" // an accepted call
	Reject Role = "reject" // a rejected call
)

// kindRoles are the shades of calls that are kinds or grades, from light to
// dark.
var kindRoles = [...]Role{"kind-1", "kind-2", "kind-3", "kind-4", "kind-5", "kind-6"}

// Mark is one thing drawn; exactly one of its shapes is set.
type Mark struct {
	Role  Role
	Rect  *Rect
	Line  *Line
	Path  []Point // a polyline
	Area  []Point // a polygon, filled
	Dot   *Dot
	Text  *Text
	Heavy bool // a heavier line, a bold text
	Dash  Dash // of a line
}

// Dash is how a line is dashed; the zero one is not.
type Dash int

// Dashed is the usual dash.
const Dashed Dash = 1

// dashes are the lengths of strokes and gaps in turn, of patterns that are
// told apart where lines cross.
var dashes = [...][]float64{nil, {5, 4}, {1.5, 3}, {11, 3}, {8, 3, 1.5, 3}, {8, 3, 1.5, 3, 1.5, 3}}

// Point is a place in a figure.
type Point struct{ X, Y float64 }

// Rect is a rectangle, filled, or its outline.
type Rect struct {
	X, Y, W, H float64
	Outline    bool
}

// Line is a straight line.
type Line struct{ X1, Y1, X2, Y2 float64 }

// Dot is a filled circle, or its outline.
type Dot struct {
	X, Y, R float64
	Outline bool
}

// Anchor is where in a text its place is.
type Anchor int

// Anchors of a text.
const (
	Start Anchor = iota
	Middle
	End
)

// Text is a line of text; Y is its base line.
type Text struct {
	X, Y   float64
	Size   float64
	Anchor Anchor
	Turn   bool // read upwards
	Halo   bool // on a thin ground of paper, where it lies over lines
	Text   string
}

func (f *Figure) rect(role Role, x, y, w, h float64) {
	f.Marks = append(f.Marks, Mark{Role: role, Rect: &Rect{X: x, Y: y, W: w, H: h}})
}

func (f *Figure) outline(role Role, x, y, w, h float64, heavy bool, dash Dash) {
	f.Marks = append(f.Marks, Mark{Role: role, Rect: &Rect{X: x, Y: y, W: w, H: h, Outline: true}, Heavy: heavy, Dash: dash})
}

func (f *Figure) line(role Role, x1, y1, x2, y2 float64) {
	f.Marks = append(f.Marks, Mark{Role: role, Line: &Line{x1, y1, x2, y2}})
}

func (f *Figure) dot(role Role, x, y, r float64) {
	f.Marks = append(f.Marks, Mark{Role: role, Dot: &Dot{X: x, Y: y, R: r}})
}

func (f *Figure) text(role Role, x, y, size float64, anchor Anchor, s string) {
	f.Marks = append(f.Marks, Mark{Role: role, Text: &Text{X: x, Y: y, Size: size, Anchor: anchor, Text: s}})
}

func (f *Figure) bold(role Role, x, y, size float64, anchor Anchor, s string) {
	f.Marks = append(f.Marks, Mark{Role: role, Text: &Text{X: x, Y: y, Size: size, Anchor: anchor, Text: s}, Heavy: true})
}

func (f *Figure) turned(role Role, x, y, size float64, anchor Anchor, s string) {
	f.Marks = append(f.Marks, Mark{Role: role, Text: &Text{X: x, Y: y, Size: size, Anchor: anchor, Text: s, Turn: true}})
}
