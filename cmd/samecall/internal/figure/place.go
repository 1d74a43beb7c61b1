package figure

import "math"

// placer finds room for labels beside points. Nothing may lie on what is
// taken; on what is crossed a label lies only where there is no other room
// nearby.
type placer struct {
	within  Rect // labels stay in here
	taken   []Rect
	crossed []Rect
}

// apart is the least room between two labels.
const apart = 2.0

func meet(a, b Rect) bool {
	return a.X < b.X+b.W && b.X < a.X+a.W && a.Y < b.Y+b.H && b.Y < a.Y+a.H
}

func anyMeets(r Rect, list []Rect) bool {
	for _, t := range list {
		if meet(r, t) {
			return true
		}
	}
	return false
}

func (p *placer) inside(r Rect) bool {
	w := p.within
	return r.X >= w.X && r.Y >= w.Y && r.X+r.W <= w.X+w.W && r.Y+r.H <= w.Y+w.H
}

// place finds the nearest room of a size beside a point and takes it. The
// leader runs from the point to it; nil where it is beside the point. It is
// false where there is no room.
func (p *placer) place(at Point, w, h float64) (box Rect, leader *Line, ok bool) {
	const (
		beside, nearby = 8.0, 70.0
		directions     = 48
	)
	farthest := math.Hypot(p.within.W, p.within.H)
	for _, pass := range []struct {
		reach            float64
		crossed, blocked bool
	}{{nearby, false, false}, {nearby, true, false}, {farthest, false, false}, {farthest, true, false}, {farthest, true, true}} {
		for far := beside; far <= pass.reach; far += 5 {
			for i := range directions {
				// Up and right first: there labels are looked for.
				turn := float64((i+1)/2) * 2 * math.Pi / directions
				if i%2 == 1 {
					turn = -turn
				}
				sin, cos := math.Sincos(math.Pi/4 + turn)
				box := Rect{X: at.X + cos*(far+w/2) - w/2, Y: at.Y - sin*(far+h/2) - h/2, W: w, H: h}
				grown := Rect{X: box.X - apart, Y: box.Y - apart, W: w + 2*apart, H: h + 2*apart}
				if !p.inside(box) || anyMeets(grown, p.taken) || !pass.crossed && anyMeets(box, p.crossed) {
					continue
				}
				var leader *Line
				if gap := distance(at, box); gap > 2*beside {
					leader = &Line{at.X, at.Y, min(max(at.X, box.X), box.X+w), min(max(at.Y, box.Y), box.Y+h)}
					if !pass.blocked && p.blocked(*leader) {
						continue
					}
				}
				if leader != nil {
					p.crossed = append(p.crossed, along(*leader)...)
				}
				p.taken = append(p.taken, box)
				return box, leader, true
			}
		}
	}
	return Rect{}, nil, false
}

// blocked reports whether a leader runs over what is taken, save the mark of
// its own point.
func (p *placer) blocked(l Line) bool {
	for _, step := range along(l)[2:] {
		if anyMeets(step, p.taken) {
			return true
		}
	}
	return false
}

// along covers a line with small squares.
func along(l Line) []Rect {
	const side = 4.0
	n := max(3, int(math.Hypot(l.X2-l.X1, l.Y2-l.Y1)/side))
	out := make([]Rect, n)
	for i := range out {
		t := float64(i) / float64(n-1)
		out[i] = Rect{X: l.X1 + t*(l.X2-l.X1) - side/2, Y: l.Y1 + t*(l.Y2-l.Y1) - side/2, W: side, H: side}
	}
	return out
}

// distance is that of a point to a rectangle.
func distance(p Point, r Rect) float64 {
	return math.Hypot(max(r.X-p.X, 0, p.X-r.X-r.W), max(r.Y-p.Y, 0, p.Y-r.Y-r.H))
}
