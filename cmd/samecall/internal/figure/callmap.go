package figure

import (
	"fmt"
	"strings"
)

// Call is a cell of the call map.
type Call int

// Calls of a cell. Where calls are kinds or grades without an acceptable one,
// Kind and more is one of MapData.Kinds.
const (
	NoCall Call = iota
	Accepted
	Rejected
	WronglyAccepted
	WronglyRejected
	OtherWrong // a wrong kind or grade, on the right side if there are sides
	Kind
)

// MapData is what a call map shows, the parts in the order of the axis.
type MapData struct {
	Order      string   // how the parts are ordered, in words
	Kinds      []string // names of kinds or grades; nil in a pass/fail study
	Parts      []string
	Appraisers []MapAppraiser
	Limits     []MapLimit
	Groups     []MapGroup
	Zones      [][2]int // first and last part in a grey zone
	Left       string   // what is left out for want of room, in words
}

// MapAppraiser is the band of one appraiser: Calls[trial][part].
type MapAppraiser struct {
	Name  string
	Calls [][]Call
	Text  string // wrong calls and mixed parts, in words
}

// MapLimit is a line between two parts: before the part of this index.
type MapLimit struct {
	Name   string
	Before int
}

// MapGroup is a name over parts: from the one index to before the other.
type MapGroup struct {
	Name       string
	From, Till int
}

const (
	mapSize = 12.0 // of texts
	mapTop  = 26.0 // above the cells
	mapGap  = 10.0 // between bands
	// mapWidth is what all cells together take, where there are not too many.
	mapWidth = 860.0
)

// CallMap draws the call map: parts along the axis, a band for each
// appraiser, a cell for each trial. An accepted call is a light cell, a
// rejected one a dark one; a wrong call is orange with a mark, a stroke for a
// wrong accept and a cross for a wrong reject. It returns nil without parts.
func CallMap(d MapData) *Figure {
	if len(d.Parts) == 0 || len(d.Appraisers) == 0 {
		return nil
	}
	const (
		nameMost = 150.0
		size     = mapSize
	)
	nameW := 44.0
	for _, a := range d.Appraisers {
		nameW = max(nameW, min(nameMost, textWidth(a.Name, size)+14))
	}
	n := float64(len(d.Parts))
	cellW := min(max(mapWidth/n, 4), 22)
	cellH := min(max(cellW, 9), 15)
	bottom := mapTop
	for _, a := range d.Appraisers {
		bottom += float64(len(a.Calls))*cellH + mapGap
	}
	f := &Figure{Name: "calls", Title: "Call map: every call on every part", Width: max(nameW+n*cellW+14, 560)}
	left := func(part int) float64 { return nameW + float64(part)*cellW }

	for _, z := range d.Zones {
		f.rect(Zone, left(z[0]), mapTop-6, float64(z[1]-z[0]+1)*cellW, bottom-mapTop+4)
	}
	y := mapTop
	seen := make(map[Call]bool)
	var alt []string
	for _, a := range d.Appraisers {
		h := float64(len(a.Calls)) * cellH
		f.text(Ink, nameW-10, y+h/2+size/3, size, End, shorten(a.Name, size, nameW-12))
		for t, calls := range a.Calls {
			for part, c := range calls {
				seen[c] = true
				f.call(c, left(part), y+float64(t)*cellH, cellW, cellH)
			}
		}
		y += h + mapGap
		alt = append(alt, a.Name+": "+a.Text)
	}
	var named []span
	for _, l := range d.Limits {
		x := left(l.Before)
		f.Marks = append(f.Marks, Mark{Role: Limit, Line: &Line{x, mapTop - 10, x, bottom}, Heavy: true})
		if l.Name != "" {
			named = append(named, span{x, textWidth(l.Name, size)})
		}
	}
	starts := spread(named, 2, f.Width-2, 8)
	for _, l := range d.Limits {
		if l.Name != "" {
			f.text(Ink, starts[0], mapTop-14, size, Start, l.Name)
			starts = starts[1:]
		}
	}
	for _, g := range d.Groups {
		from, till := left(g.From)+2, left(g.Till)-2
		f.text(Ink, (from+till)/2, mapTop-14, size, Middle, shorten(g.Name, size, till-from))
	}
	words := d.Order
	if d.Left != "" {
		words += "; " + d.Left
	}
	y = bottom + 16
	for _, line := range wrap(words, size, f.Width-nameW-4, 2) {
		f.text(Muted, nameW, y, size, Start, line)
		y += 15
	}
	f.Height = f.legend(d, seen, y+2)
	f.Alt = fmt.Sprintf("%d parts, %s. %s.", len(d.Parts), words, strings.Join(alt, "; "))
	return f
}

// legend explains the calls that are there, and returns where it ends.
func (f *Figure) legend(d MapData, seen map[Call]bool, y float64) float64 {
	const (
		side    = 13.0
		longest = 180.0
		margin  = 4.0
	)
	x := margin
	item := func(s string, draw func(x, y float64)) {
		s = shorten(s, mapSize, longest)
		w := side + 5 + textWidth(s, mapSize)
		if x > margin && x+w > f.Width {
			x, y = margin, y+side+8
		}
		draw(x, y)
		f.text(Muted, x+side+5, y+11, mapSize, Start, s)
		x += w + 14
	}
	add := func(c Call, s string) {
		if seen[c] {
			item(s, func(x, y float64) { f.call(c, x, y, side, side) })
		}
	}
	add(Accepted, "accepted")
	add(Rejected, "rejected")
	add(WronglyAccepted, "wrongly accepted")
	add(WronglyRejected, "wrongly rejected")
	for k, name := range d.Kinds {
		if k >= len(kindRoles)-1 && len(d.Kinds) > len(kindRoles) {
			for more := k; more < len(d.Kinds); more++ {
				seen[Kind+Call(k)] = seen[Kind+Call(k)] || seen[Kind+Call(more)]
			}
			add(Kind+Call(k), "any other")
			break
		}
		add(Kind+Call(k), name)
	}
	other := "not as the reference"
	if len(d.Kinds) == 0 {
		other = "right side, other category"
	}
	add(OtherWrong, other)
	add(NoCall, "no call")
	if len(d.Zones) > 0 {
		item("grey zone", func(x, y float64) { f.rect(Zone, x, y, side, side) })
	}
	return y + side + 4
}

func (f *Figure) call(c Call, x, y, w, h float64) {
	const seam = 0.75
	if c == NoCall {
		f.rect(Muted, x+w/2-1, y+h/2-1, 2, 2)
		return
	}
	role := Wrong
	switch {
	case c == Accepted:
		role = Accept
	case c == Rejected:
		role = Reject
	case c >= Kind:
		role = kindRoles[min(int(c-Kind), len(kindRoles)-1)]
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
