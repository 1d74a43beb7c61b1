package figure

import (
	"fmt"
	"strings"
)

// Call is a cell of the call map.
type Call int

// Calls of a cell.
const (
	NoCall Call = iota
	Accepted
	Rejected
	WronglyAccepted
	WronglyRejected
	OtherWrong // a wrong kind or grade on the right side
)

// MapData is what a call map shows, the parts in the order of the axis.
type MapData struct {
	Order      string // how the parts are ordered, in words
	Parts      []string
	Appraisers []MapAppraiser
	Limits     []MapLimit
	Zones      [][2]int // first and last part in a grey zone
	Left       int      // parts left out for want of room
}

// MapAppraiser is the band of one appraiser: Calls[trial][part].
type MapAppraiser struct {
	Name  string
	Calls [][]Call
	Wrong int // how many calls are wrong
	Mixed int // how many parts are mixed
}

// MapLimit is a line between two parts: before the part of this index.
type MapLimit struct {
	Name   string
	Before int
}

// CallMap draws the call map: parts along the axis, a band for each
// appraiser, a cell for each trial. An accepted call is a light cell, a
// rejected one a dark one; a wrong call is orange with a mark, ⁄ for a wrong
// accept and × for a wrong reject. It returns nil without parts.
func CallMap(d MapData) *Figure {
	if len(d.Parts) == 0 || len(d.Appraisers) == 0 {
		return nil
	}
	const (
		size     = 12.0
		nameMost = 150.0
		top      = 26.0
		gap      = 10.0
		usual    = 860.0 // width of all parts together, where they are not too many
	)
	nameW := 40.0
	for _, a := range d.Appraisers {
		nameW = max(nameW, min(nameMost, textWidth(a.Name, size)+14))
	}
	n := float64(len(d.Parts))
	cellW := min(max(usual/n, 4), 22)
	cellH := min(max(cellW, 9), 15)
	height := top
	for _, a := range d.Appraisers {
		height += float64(len(a.Calls))*cellH + gap
	}
	height += 24
	legendY := height + 4
	f := &Figure{Name: "calls", Title: "Call map: every call on every part", Width: max(nameW+n*cellW+14, 560), Height: height + 24}
	left := func(part int) float64 { return nameW + float64(part)*cellW }

	bottom := height - 24
	for _, z := range d.Zones {
		f.rect(Zone, left(z[0]), top-6, float64(z[1]-z[0]+1)*cellW, bottom-top+4)
	}
	y := top
	var alt []string
	for _, a := range d.Appraisers {
		h := float64(len(a.Calls)) * cellH
		f.text(Ink, nameW-10, y+h/2+size/3, size, End, shorten(a.Name, size, nameW-10))
		for t, calls := range a.Calls {
			for part, c := range calls {
				f.call(c, left(part), y+float64(t)*cellH, cellW, cellH)
			}
		}
		y += h + gap
		alt = append(alt, fmt.Sprintf("%s: %d wrong calls, %d mixed parts", a.Name, a.Wrong, a.Mixed))
	}
	end := -1e9
	for _, l := range d.Limits {
		x := left(l.Before)
		f.Marks = append(f.Marks, Mark{Role: Limit, Line: &Line{x, top - 10, x, bottom}, Heavy: true})
		w := textWidth(l.Name, size)
		start := min(max(x-w/2, 2, end+8), f.Width-w-2)
		f.text(Ink, start, top-14, size, Start, l.Name)
		end = start + w
	}
	order := d.Order
	if d.Left > 0 {
		order += fmt.Sprintf("; %d parts without a wrong or mixed call are left out", d.Left)
	}
	f.text(Muted, nameW, bottom+18, size, Start, shorten(order, size, f.Width-nameW))

	x := 4.0
	legend := func(c Call, s string) {
		f.call(c, x, legendY, 13, 13)
		f.text(Muted, x+18, legendY+11, size, Start, s)
		x += 18 + textWidth(s, size) + 10
	}
	legend(Accepted, "accepted")
	legend(Rejected, "rejected")
	legend(WronglyAccepted, "wrongly accepted")
	legend(WronglyRejected, "wrongly rejected")
	if d.has(OtherWrong) {
		legend(OtherWrong, "wrong kind")
	}
	f.Width = max(f.Width, x)
	f.Alt = fmt.Sprintf("%d parts %s. %s.", len(d.Parts), d.Order, strings.Join(alt, "; "))
	return f
}

func (d MapData) has(c Call) bool {
	for _, a := range d.Appraisers {
		for _, calls := range a.Calls {
			for _, x := range calls {
				if x == c {
					return true
				}
			}
		}
	}
	return false
}

func (f *Figure) call(c Call, x, y, w, h float64) {
	const seam = 0.75
	role := map[Call]Role{Accepted: Accept, Rejected: Reject, WronglyAccepted: Wrong, WronglyRejected: Wrong, OtherWrong: Wrong}[c]
	if c == NoCall {
		f.rect(Rule, x+w/2-0.75, y+h/2-0.75, 1.5, 1.5)
		return
	}
	f.rect(role, x+seam/2, y+seam/2, w-seam, h-seam)
	cross := func(x1, y1, x2, y2 float64) {
		f.Marks = append(f.Marks, Mark{Role: Field, Line: &Line{x1, y1, x2, y2}, Heavy: w > 6})
	}
	l, r, t, b := x+w*0.22, x+w*0.78, y+h*0.22, y+h*0.78
	switch c {
	case WronglyAccepted:
		cross(l, b, r, t)
	case WronglyRejected:
		cross(l, b, r, t)
		cross(l, t, r, b)
	case OtherWrong:
		cross(l, (t+b)/2, r, (t+b)/2)
	}
}
