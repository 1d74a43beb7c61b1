package figure

import (
	"fmt"
	"strings"
)

// Cell is a cell of the agreement square: the share of parts on which all
// calls are alike, and kappa, as read; Known if there is a share.
type Cell struct {
	Share float64
	Known bool
	Text  string // the share as read
	Kappa string
}

// SquareData is what an agreement square shows: Pair[a][b] for each two
// appraisers (b > a), and the diagonal Pair[a][a] for each with itself.
type SquareData struct {
	Names     []string
	Pair      [][]Cell
	Reference []Cell // nil without a reference
}

// largestSquare is how many appraisers fit in a square that can be read.
const largestSquare = 16

// Square draws the agreement square: each appraiser with itself on the
// diagonal, each pair beside it, and the reference in a last column. The bar
// in a cell is as long as the share. It returns nil for fewer than two
// appraisers or more than can be read.
func Square(d SquareData) *Figure {
	n := len(d.Names)
	if n < 2 || n > largestSquare {
		return nil
	}
	const (
		cellW, cellH = 78.0, 58.0
		gap          = 3.0
		split        = 14.0 // before the reference
		size         = 13.0
		line         = 15.0
		nameMost     = 150.0
	)
	// A row's name stands beside its cell on the diagonal; only that of the
	// first row needs room at the side, those below have more and more.
	nameW := 0.0
	for a, name := range d.Names {
		nameW = max(nameW, min(nameMost, textWidth(name, size)+14)-float64(a)*(cellW+gap))
	}
	headLines := 1
	heads := make([][]string, n)
	for a, name := range d.Names {
		heads[a] = wrap(name, size, cellW, 3)
		headLines = max(headLines, len(heads[a]))
	}
	headH := 14 + line*float64(headLines)
	columns := n
	width := nameW + float64(n)*(cellW+gap)
	if d.Reference != nil {
		columns++
		width += split + cellW + gap
	}
	f := &Figure{Name: "square", Title: "Agreement square", Width: width, Height: headH + float64(n)*(cellH+gap)}
	left := func(column int) float64 {
		x := nameW + float64(column)*(cellW+gap)
		if column == n {
			x += split
		}
		return x
	}
	for b := range columns {
		head := []string{"reference"}
		if b < n {
			head = heads[b]
		}
		for i, s := range head {
			f.text(Muted, left(b)+cellW/2, headH-10-line*float64(len(head)-1-i), size, Middle, s)
		}
	}
	var alt []string
	for a, name := range d.Names {
		top := headH + float64(a)*(cellH+gap)
		end := left(a) - 10
		f.text(Ink, end, top+cellH/2+size/3, size, End, shorten(name, size, end-2))
		for b := a; b < columns; b++ {
			c := Cell{}
			what := name + " with itself"
			switch {
			case b == n:
				c, what = d.Reference[a], name+" against the reference"
			default:
				c = d.Pair[a][b]
				if b > a {
					what = name + " and " + d.Names[b]
				}
			}
			f.cell(left(b), top, cellW, cellH, c)
			if a == b {
				f.outline(Ink, left(b)+1, top+1, cellW-2, cellH-2, true, 0)
			}
			alt = append(alt, fmt.Sprintf("%s: %s, kappa %s", what, c.Text, c.Kappa))
		}
	}
	f.Alt = "Share of parts on which all calls are alike, and kappa. " + strings.Join(alt, "; ") + "."
	return f
}

func (f *Figure) cell(x, y, w, h float64, c Cell) {
	const bar, pad = 5.0, 8.0
	f.rect(Field, x, y, w, h)
	f.bold(Ink, x+w/2, y+h/2-2, 16, Middle, c.Text)
	f.text(Muted, x+w/2, y+h/2+13, 11, Middle, "kappa "+c.Kappa)
	if !c.Known {
		return
	}
	full := w - 2*pad
	f.rect(Rule, x+pad, y+h-bar-4, full, bar)
	f.rect(Right, x+pad, y+h-bar-4, full*c.Share, bar)
}
