package report

import (
	"cmp"
	"fmt"
	"io"
	"math"
	"slices"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

// flawBound is how the bound on a90 is made.
const flawBound = "one-sided 95 % bound of a90, by likelihood ratio"

// fewFlaws is what a hit/miss study should have (MIL-HDBK-1823A, 2009, asks
// for at least 60 targets; from memory).
const fewFlaws = 60

var flawAssumes = []string{
	"The chance that a flaw is found rises with the logarithm of its size along one curve and reaches 1 for large flaws.",
	"The flaws, their shape and place, the people, the light and the time they had are those of the work the figures are used for.",
	"Looks at one flaw do not know of each other.",
}

var flawCautions = []string{
	"False calls on sound places are not in these figures: study them beside it.",
	"A detectable size in use is set by those who answer for the structure, by the code and the customer. These figures alone release no part.",
}

// Flaw writes a hit/miss study of flaw size. rows are those that h was fitted
// to.
func Flaw(w io.Writer, st SmallStudy, rows []study.Tally, h *signal.HitMiss, term Terminal) error {
	p := &printer{w: w, term: term}
	s := flawScale(st, h)
	looks, found := 0, 0
	for _, r := range rows {
		looks, found = looks+r.Of, found+r.Count
	}
	p.smallHead(st, fmt.Sprintf("hit/miss study of flaw size · %s · found in %s of %s", format.Counted(len(h.Curve.Parts), "flaw"), format.Count(found), format.Counted(looks, "look")))
	p.line("")
	switch why := whyNoA9095(st, h); {
	case h.HasA9095 && why == "":
		few := ""
		if n := len(h.Curve.Parts); n < fewFlaws {
			few = fmt.Sprintf(", on the strength of only %s", format.Counted(n, "flaw"))
		}
		p.wrap(fmt.Sprintf("A flaw of %s is found at least nine times in ten, with 95 %% confidence (a90/95)%s.", s.WithUnit(s.Value(h.A9095)), few), "")
	case h.HasA9095:
		p.wrap("a90/95 is not shown: "+why+". Larger flaws are needed.", "")
	case h.Curve.Lower.Status != signal.Fitted:
		p.wrap("a90/95 is not shown: "+why+". Flaws of the sizes between are needed.", "")
	default:
		p.wrap("The study gives no a90/95: "+why+". More flaws are needed, above all around a90 and above it.", "")
	}
	p.table(flawTable(st, h))
	p.table(flawSizesTable(st, rows, h))
	if notes := flawNotes(st, rows, h); len(notes) > 0 {
		p.line("")
		for _, n := range notes {
			p.wrap(n, "")
		}
	}
	p.line("")
	p.line(p.term.bold("What this assumes"))
	for _, a := range flawAssumes {
		p.wrap("· "+a, "  ")
	}
	p.line("")
	for _, c := range flawCautions {
		p.wrap(c, "")
	}
	return p.err
}

func flawScale(st SmallStudy, h *signal.HitMiss) format.Scale {
	return format.NewScale(st.Unit, nil, h.A50.Value/10)
}

// largestFlaw is the largest size that was tried.
func largestFlaw(h *signal.HitMiss) float64 {
	largest := slices.MaxFunc(h.Curve.Parts, func(a, b signal.PartFit) int { return cmp.Compare(a.Value, b.Value) })
	return math.Exp(largest.Value)
}

// beyondTried reports whether a size is larger than every flaw tried; the
// logarithm and back may lose the last digit.
func beyondTried(h *signal.HitMiss, size float64) bool { return size > largestFlaw(h)*(1+1e-12) }

// whyNoA9095 says why a90/95 is not to be relied on: there is none, or it is
// an extrapolation. Empty if it is shown.
func whyNoA9095(st SmallStudy, h *signal.HitMiss) string {
	s := flawScale(st, h)
	switch {
	case !h.HasA9095:
		return h.Why
	case beyondTried(h, h.A9095):
		return "it lies beyond the largest flaw tried (" + s.WithUnit(s.Value(largestFlaw(h))) + ")"
	}
	return ""
}

// flawSize writes a size; one beyond the largest flaw tried is an
// extrapolation and has few digits.
func flawSize(s format.Scale, h *signal.HitMiss) func(float64) string {
	return func(x float64) string {
		if beyondTried(h, x) {
			return format.Short(x)
		}
		return s.Value(x)
	}
}

func flawTable(st SmallStudy, h *signal.HitMiss) Table {
	s := flawScale(st, h)
	t := Table{Name: "flaw", Title: inUnit("Size against chance of being found", s), Columns: []Column{{Name: "figure"}, {Name: "size", Numbers: true}, {Name: "what it tells", Long: true}}}
	t.Rows = append(t.Rows,
		[]Cell{say("a50"), boundedCell(s, h.A50, flawSize(s, h)), say("found half of the time")},
		[]Cell{say("a90"), boundedCell(s, h.A90, flawSize(s, h)), say("found nine times in ten")})
	bound := say(format.Dash)
	if h.HasA9095 {
		bound = valueCell(flawSize(s, h)(h.A9095), h.A9095)
	}
	t.Rows = append(t.Rows, []Cell{say("a90/95"), bound, say("a90 is not larger than this, with 95 % confidence, one-sided, by likelihood ratio")})
	way := "by maximum likelihood"
	if h.Curve.Lower.Status != signal.Fitted {
		way = "bias-reduced (Firth), since the likelihood has no maximum"
	}
	t.Note = fmt.Sprintf("Hit/miss model of MIL-HDBK-1823A (2009): %s curve over the logarithm of the size, %s. In brackets the two-sided %s interval.",
		h.Curve.Options.Link, way, format.Confidence(h.Curve.Options.Confidence))
	return t
}

// flawSizes adds the looks at flaws of one size, in order of size.
func flawSizes(rows []study.Tally, h *signal.HitMiss) []flawSizeJSON {
	at := make(map[float64]int)
	var out []flawSizeJSON
	for _, p := range h.Curve.Parts {
		size := rows[p.Row].Value
		i, ok := at[size]
		if !ok {
			i = len(out)
			at[size] = i
			out = append(out, flawSizeJSON{Size: size, Fitted: p.Fitted})
		}
		out[i].Found += p.Accepted
		out[i].Looks += p.Calls
	}
	slices.SortStableFunc(out, func(a, b flawSizeJSON) int { return cmp.Compare(a.Size, b.Size) })
	return out
}

// manySizes is how many sizes are listed before they are gathered in steps.
const manySizes = 30

// flawSizesTable shows found and fitted shares by size, in at most manySizes
// steps of as many sizes each.
func flawSizesTable(st SmallStudy, rows []study.Tally, h *signal.HitMiss) Table {
	sizes := flawSizes(rows, h)
	s := flawScale(st, h)
	t := Table{Name: "sizes", Title: inUnit("By size", s), Columns: []Column{{Name: "size", Numbers: true}, {Name: "found", Numbers: true}, {Name: "share", Numbers: true}, {Name: "fitted", Numbers: true}}}
	step := (len(sizes) + manySizes - 1) / manySizes
	for group := range slices.Chunk(sizes, max(1, step)) {
		var found, looks int
		var expected float64
		for _, g := range group {
			found, looks = found+g.Found, looks+g.Looks
			expected += g.Fitted * float64(g.Looks)
		}
		name := s.Value(group[0].Size)
		if last := s.Value(group[len(group)-1].Size); last != name {
			name += " to " + last
		}
		share, fitted := float64(found)/float64(looks), expected/float64(looks)
		t.Rows = append(t.Rows, []Cell{valueCell(name, group[0].Size), valueCell(fmt.Sprintf("%d of %d", found, looks), found),
			valueCell(format.Percent(share), share), valueCell(format.Percent(fitted), fitted)})
	}
	return t
}

func unnamed(rows []study.Tally) bool {
	return !slices.ContainsFunc(rows, func(r study.Tally) bool { return r.Name != "" })
}

// flawNotes are what the fit says of itself.
func flawNotes(st SmallStudy, rows []study.Tally, h *signal.HitMiss) []string {
	c, s := h.Curve, flawScale(st, h)
	var out []string
	if n := len(c.Parts); n < fewFlaws {
		out = append(out, fmt.Sprintf("There are %s; MIL-HDBK-1823A asks for %d or more in a hit/miss study.", format.Counted(n, "flaw"), fewFlaws))
	}
	if sizes := len(flawSizes(rows, h)); unnamed(rows) && 2*sizes <= len(rows) {
		out = append(out, fmt.Sprintf("The %d rows have %d different sizes and no names: each row counts as a flaw of its own. If rows are looks at the same flaw, name it (column flaw), or they count for too much.", len(rows), sizes))
	}
	if gap := c.Lower.Gap; gap != nil && gap.HasReject && gap.HasAccept {
		from, to := s.Value(math.Exp(gap.Reject)), s.WithUnit(s.Value(math.Exp(gap.Accept)))
		out = append(out, fmt.Sprintf("Hits and misses do not overlap in size: flaws up to %s were missed and flaws from %s found (one size at most had both). The curve is a bias-reduced one; where it turns between these sizes, and how steeply, the study does not tell: a90 has no interval.", from, to))
	}
	if h.HasA9095 && beyondTried(h, h.A9095) {
		out = append(out, fmt.Sprintf("The number given for a90/95 is an extrapolation beyond the largest flaw tried, %s: it rests on the shape of the curve alone.", s.WithUnit(s.Value(largestFlaw(h)))))
	}
	for _, i := range c.Outliers {
		p := c.Parts[i]
		name := p.Name
		if name == "" {
			name = fmt.Sprintf("row %d", p.Row+1)
		}
		out = append(out, fmt.Sprintf("The flaw of %s does not fit the curve: found in %d of %d looks where the other flaws make %s expected.", name, p.Accepted, p.Calls, format.Percent(c.ExpectedByOthers(i))))
	}
	if f := c.LackOfFit; f.Applied {
		out = append(out, fmt.Sprintf("The flaws scatter about the curve more than looks by chance would (p %s): they differ by more than their size. The intervals are widened for it.", format.Probability(f.P)))
	}
	return append(out, curveWarnings(c.Warnings)...)
}
