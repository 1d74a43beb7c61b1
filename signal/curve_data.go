package signal

import (
	"cmp"
	"errors"
	"fmt"
	"math"
	"slices"
)

// dataset holds the parts of one fit, in order of value, scaled.
type dataset struct {
	parts    []Part
	row      []int // index of each part's first row among the parts given
	limits   Limits
	has      [2]bool // which limits the curve has
	options  Options
	sc       scaling
	x        []float64
	accepted []float64
	rejected []float64
}

// prepare checks, merges, sorts and scales the parts.
func prepare(parts []Part, options Options) (*dataset, error) {
	o, err := options.check()
	if err != nil {
		return nil, err
	}
	if err := checkParts(parts); err != nil {
		return nil, err
	}
	merged, row, err := merge(parts)
	if err != nil {
		return nil, err
	}
	if len(merged) == 0 {
		return nil, errors.New("no part has a call")
	}
	d := &dataset{options: o, parts: merged, row: row}
	if d.sc, err = scale(merged); err != nil {
		return nil, err
	}
	d.order()
	return d, nil
}

// order sorts the parts by value, and fills the scaled columns. Equal values
// are ordered by their counts, so that the order given never matters.
func (d *dataset) order() {
	by := make([]int, len(d.parts))
	for i := range by {
		by[i] = i
	}
	slices.SortFunc(by, func(i, j int) int {
		a, b := d.parts[i], d.parts[j]
		return cmp.Or(cmp.Compare(a.Value, b.Value), cmp.Compare(a.Calls, b.Calls), cmp.Compare(a.Accepted, b.Accepted), cmp.Compare(d.row[i], d.row[j]))
	})
	parts, row := make([]Part, len(by)), make([]int, len(by))
	columns := make([]float64, 3*len(by))
	d.x, d.accepted, d.rejected = columns[:len(by)], columns[len(by):2*len(by)], columns[2*len(by):]
	for k, i := range by {
		p := d.parts[i]
		parts[k], row[k] = p, d.row[i]
		d.x[k], d.accepted[k], d.rejected[k] = d.sc.in(p.Value), float64(p.Accepted), float64(p.Calls-p.Accepted)
	}
	d.parts, d.row = parts, row
}

// drop returns the data without some parts, given by their place in d.parts.
func (d *dataset) drop(out map[int]bool) *dataset {
	e := *d
	e.parts, e.row = nil, nil
	for i := range d.parts {
		if !out[i] {
			e.parts, e.row = append(e.parts, d.parts[i]), append(e.row, d.row[i])
		}
	}
	return &e
}

// model returns the likelihood of parts from up to to, with the limits has.
func (d *dataset) model(from, to int, has [2]bool) *model {
	m := &model{link: d.options.Link, x: d.x[from:to], accepted: d.accepted[from:to], rejected: d.rejected[from:to], first: []int{0, to - from}, lapse: absent}
	g := indices{cut: [2]int{absent, absent}, logSigma: [2]int{absent, absent}}
	for k := range 2 {
		if has[k] {
			g.cut[k] = m.n
			m.n++
		}
	}
	for k := range 2 {
		if !has[k] {
			continue
		}
		if k == 1 && has[0] && !d.options.TwoSigmas {
			g.logSigma[1] = g.logSigma[0]
			continue
		}
		g.logSigma[k] = m.n
		m.n++
	}
	m.groups = []indices{g}
	return m
}

// half is the parts that tell of one limit: those on its side of the middle.
type half struct {
	k        int // 0 lower, 1 upper
	from, to int
	status   Status
	why      string
	// Scaled values: the last one inward with a rejected call, the last one
	// outward with an accepted call.
	reject, accept       float64
	hasReject, hasAccept bool
	reversed             bool
}

// halves splits the parts at the middle between the limits and tells what each
// half can say of its limit.
func (d *dataset) halves() [2]half {
	n := len(d.x)
	hs := [2]half{{k: 0, to: n}, {k: 1, to: n}}
	if d.has[0] && d.has[1] {
		middle := d.sc.in(d.limits.Lower/2 + d.limits.Upper/2)
		// The split must lie among accepted calls, or one half would have none:
		// where all lie to one side of the middle, at the one nearest to it.
		middle = d.acceptedNear(middle)
		hs[0].to, _ = slices.BinarySearchFunc(d.x, middle, func(x, m float64) int {
			if x <= m {
				return -1
			}
			return 1
		})
		hs[1].from, _ = slices.BinarySearch(d.x, middle)
		// Parts beyond the middle that were always accepted tell of this limit
		// too, up to the first rejected call, which is the other limit's.
		for to := hs[0].to; to < n; hs[0].to = to {
			if to = d.alike(to, 1); d.anyRejected(hs[0].to, to) {
				break
			}
		}
		for from := hs[1].from; from > 0; hs[1].from = from {
			if from = d.alike(from-1, -1) + 1; d.anyRejected(from, hs[1].from) {
				break
			}
		}
	}
	for k := range hs {
		if d.has[k] {
			d.classify(&hs[k])
		}
	}
	return hs
}

// alike returns the first row from i on, in the direction given, that has
// another value than row i: several rows may be of one value, or of one part.
func (d *dataset) alike(i, step int) int {
	j := i
	for j >= 0 && j < len(d.x) && d.x[j] == d.x[i] {
		j += step
	}
	return j
}

func (d *dataset) anyRejected(from, to int) bool {
	return slices.ContainsFunc(d.rejected[from:to], func(n float64) bool { return n > 0 })
}

// acceptedNear returns t if calls were accepted on both sides of it (or at
// none), else the value with an accepted call that is nearest to t.
func (d *dataset) acceptedNear(t float64) float64 {
	lo, hi, any := 0.0, 0.0, false
	for i, a := range d.accepted {
		if a > 0 {
			if !any {
				lo, any = d.x[i], true
			}
			hi = d.x[i]
		}
	}
	if !any {
		return t
	}
	return math.Min(math.Max(t, lo), hi)
}

// classify tells whether a half's calls overlap, are separated or one-sided.
func (d *dataset) classify(h *half) {
	sign := 1.0
	if h.k == 1 {
		sign = -1
	}
	var calls, sumX, sumA float64
	for i := h.from; i < h.to; i++ {
		u := sign * d.x[i]
		if d.rejected[i] > 0 && (!h.hasReject || u > h.reject) {
			h.reject, h.hasReject = u, true
		}
		if d.accepted[i] > 0 && (!h.hasAccept || u < h.accept) {
			h.accept, h.hasAccept = u, true
		}
		n := d.accepted[i] + d.rejected[i]
		calls, sumX, sumA = calls+n, sumX+n*u, sumA+d.accepted[i]
	}
	side := Side(h.k).String()
	switch {
	case !h.hasReject && !h.hasAccept:
		h.status, h.why = OneSided, "no part lies on the side of the "+side+" limit"
	case !h.hasReject:
		h.status, h.why = OneSided, "no call was rejected on the side of the "+side+" limit: the study needs parts beyond it"
	case !h.hasAccept:
		h.status, h.why = OneSided, "no call was accepted on the side of the "+side+" limit: the study needs parts inside it"
	case d.x[h.from] == d.x[h.to-1]:
		h.status, h.reversed = OneSided, true
		h.why = "all parts on the side of the " + side + " limit have one value: where calls turn needs parts of different value"
	case h.reject < h.accept:
		h.status, h.why = Separated, "no part at the "+side+" limit is mixed: the grey zone is narrower than the gap between the neighbouring parts"
	case h.reject == h.accept:
		h.status, h.why = QuasiSeparated, "calls at the "+side+" limit are mixed at one single value: σ has no lower bound"
	default:
		// The likelihood is concave in intercept and slope, so the sign of its
		// derivative at slope 0 is that of the best slope.
		var score float64
		for i := h.from; i < h.to; i++ {
			n := d.accepted[i] + d.rejected[i]
			score += (sign*d.x[i] - sumX/calls) * (d.accepted[i] - n*sumA/calls)
		}
		if !(score > 1e-12*calls) {
			h.status, h.reversed = OneSided, true
			h.why = "calls do not turn towards acceptance from the " + side + " limit inwards" + d.againstTurn(h)
		}
	}
	h.reject, h.accept = sign*h.reject, sign*h.accept
}

// againstTurn names what may stand against a turn: an accepted part far out, a
// rejected one far in, or calls of swapped meaning.
func (d *dataset) againstTurn(h *half) string {
	innermost, outermost := h.to-1, h.from
	if h.k == 1 {
		innermost, outermost = outermost, innermost
	}
	out, in := d.parts[outermost], d.parts[innermost]
	switch far, near := out.Accepted == out.Calls, in.Accepted == 0; {
	case far && near:
		return "; check that accept and reject are not swapped"
	case far:
		return fmt.Sprintf(": %s, the farthest out, was always accepted; check its value", d.named(outermost))
	case near && !d.has[1-h.k]:
		return fmt.Sprintf(": %s, the farthest in, was always rejected; is there another limit?", d.named(innermost))
	}
	return "; check the values of the parts, and that accept and reject are not swapped"
}

// named names part i, with its value.
func (d *dataset) named(i int) string {
	p := d.parts[i]
	name := "the part"
	if p.Name != "" {
		name = "part " + p.Name
	}
	return fmt.Sprintf("%s at %.10g", name, p.Value)
}

// noCut tells whether part i lies where rejected calls give no cut.
func (d *dataset) noCut(hs [2]half, i int) bool {
	in := func(h half) bool { return d.has[h.k] && h.from <= i && i < h.to }
	lost := func(h half) bool { return h.status == OneSided && h.hasReject }
	for k, h := range hs {
		if in(h) && lost(h) {
			return !in(hs[1-k]) || lost(hs[1-k])
		}
	}
	return false
}

// starts returns two guesses of cut and log σ at a limit: one from the balance
// of wrong calls, one from the overlap.
func (d *dataset) starts(h half) (cut, logSigma [2]float64) {
	sign := 1.0
	if h.k == 1 {
		sign = -1
	}
	lo, hi := math.Min(h.reject, h.accept), math.Max(h.reject, h.accept)
	cut[1] = lo + (hi-lo)/2
	logSigma[1] = math.Log(math.Max((hi-lo)/4, 1e-9))
	// The cut that leaves as many rejected calls inside as accepted ones
	// outside.
	var inside float64
	for i := h.from; i < h.to; i++ {
		inside += d.rejected[i]
	}
	var outside float64
	n := h.to - h.from
	at := func(j int) int {
		if sign > 0 {
			return h.from + j
		}
		return h.to - 1 - j
	}
	cut[0] = cut[1]
	for j := range n {
		i := at(j)
		inside -= d.rejected[i]
		outside += d.accepted[i]
		if outside >= inside {
			cut[0] = d.x[i]
			break
		}
	}
	var wrong, distance float64
	for i := h.from; i < h.to; i++ {
		u := sign * (d.x[i] - cut[0])
		w := d.accepted[i]
		if u > 0 {
			w = d.rejected[i]
		}
		wrong, distance = wrong+w, distance+w*math.Abs(u)
	}
	logSigma[0] = logSigma[1]
	if wrong > 0 && distance > 0 {
		logSigma[0] = math.Log(1.5 * distance / wrong)
	}
	return cut, logSigma
}
