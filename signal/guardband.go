package signal

import (
	"errors"
	"fmt"
	"math"
	"slices"
)

// GuardForEscapes returns the smallest guard band, 0 or more, at which the
// share of escapes is at most target (a fraction, not ppm), and the risk there.
// With shown, the upper bound of its interval is held under the target instead
// of the estimate, which a Known inspection does not have.
//
// It returns an error in words if no guard band can hold it: between two limits
// the cuts can move inwards only until they meet, and calls made at random let
// parts escape whatever the cuts.
func GuardForEscapes(p Process, in Inspection, target float64, shown bool) (Risk, error) {
	if !(target > 0 && target < 1) {
		return Risk{}, fmt.Errorf("escape target %v: want a share between 0 and 1 (10 ppm is 0.00001)", target)
	}
	r, err := Assess(p, in, 0)
	if err != nil {
		return Risk{}, err
	}
	g, limits, err := cutsOf(in)
	if err != nil {
		return Risk{}, err
	}
	// at returns what is to be held under the target.
	at := func(band float64) (float64, error) {
		if !shown {
			s := p.shares(g.Tighten(band), limits)
			return s.values()[qEscape], nil
		}
		return in.mostEscapes(p, band)
	}
	e, err := at(0)
	if err != nil {
		return Risk{}, err
	}
	if e <= target {
		return r, nil
	}
	most, step, err := p.guardRange(g)
	if err != nil {
		return Risk{}, err
	}
	lo, hi := 0.0, math.Min(step, most)
	for {
		if e, err = at(hi); err != nil {
			return Risk{}, err
		}
		if e <= target {
			break
		}
		if hi >= most {
			what := "escapes"
			if shown {
				what = "the upper bound of escapes"
			}
			return Risk{}, fmt.Errorf("no guard band holds %s under %.4g ppm: with each cut moved inwards by %.6g, as far as it can be, %.4g ppm remain", what, 1e6*target, most, 1e6*e)
		}
		lo, hi = hi, math.Min(2*hi, most)
	}
	for range 200 {
		mid := lo + (hi-lo)/2
		if !(lo < mid && mid < hi) || hi-lo <= 1e-10*step {
			break
		}
		if e, err = at(mid); err != nil {
			return Risk{}, err
		}
		if e <= target {
			hi = mid
		} else {
			lo = mid
		}
	}
	return Assess(p, in, hi)
}

// guardRange returns how far inwards the cuts can move and a step to search
// by. With one limit they can move until next to nothing of the process is
// accepted.
func (p Process) guardRange(g Gauge) (most, step float64, err error) {
	if g.HasLower && g.HasUpper {
		most = (g.UpperCut - g.LowerCut) / 2
		step = math.Min(g.LowerSigma, g.UpperSigma)
	} else {
		lo, hi := p.span()
		if g.HasLower {
			most, step = hi-g.LowerCut, g.LowerSigma
		} else {
			most, step = g.UpperCut-lo, g.UpperSigma
		}
		most = math.Max(most, 0) + 40*step
	}
	if !(most > 0) {
		return 0, 0, errors.New("the cuts leave no room to move inwards")
	}
	return most, math.Min(step, most), nil
}

// span is where the values of the process lie, all but next to none.
func (p Process) span() (lo, hi float64) {
	if len(p.Values) == 0 {
		return p.Mean - 12*p.SD, p.Mean + 12*p.SD
	}
	return slices.Min(p.Values), slices.Max(p.Values)
}

// outwardRange returns how far outwards the cuts must move for next to nothing of
// the process to be rejected.
func (p Process) outwardRange(g Gauge) float64 {
	lo, hi := p.span()
	out := 0.0
	if g.HasLower {
		out = math.Max(out, g.LowerCut-lo+40*g.LowerSigma)
	}
	if g.HasUpper {
		out = math.Max(out, hi-g.UpperCut+40*g.UpperSigma)
	}
	return out
}

// Edge tells where the least cost lies.
type Edge int

const (
	// NoEdge: at a guard band.
	NoEdge Edge = iota
	// InwardEdge: with the cuts as far inwards as they can be, where they meet or
	// next to nothing is accepted.
	InwardEdge
	// AcceptAll: accepting every part costs no more than any guard band.
	AcceptAll
)

// Cost is a guard band that costs least.
type Cost struct {
	Risk             Risk
	PerPart          float64 // expected cost of a part made
	PerPartNow       float64 // the same without a guard band
	PerPartAcceptAll float64 // the same if every part is accepted, without inspection
	Edge             Edge
}

// GuardForCost returns the guard band that costs least, where an escape costs
// costEscape and a good part rejected costs costReject. The band may be
// negative: cuts moved outwards, where false rejects cost more. It is found by
// a grid and golden sections in the best part of it. The grid reaches inwards
// until the cuts meet, or with one limit next to nothing is accepted, and
// outwards until next to nothing is rejected.
func GuardForCost(p Process, in Inspection, costEscape, costReject float64) (Cost, error) {
	if !finite(costEscape, costReject) || costEscape < 0 || costReject < 0 || costEscape+costReject == 0 {
		return Cost{}, fmt.Errorf("cost of an escape %v and of a false reject %v: want numbers of 0 or more, one of them above 0", costEscape, costReject)
	}
	g, limits, err := cutsOf(in)
	if err != nil {
		return Cost{}, err
	}
	if err := checkRisk(p, g, limits); err != nil {
		return Cost{}, err
	}
	most, _, err := p.guardRange(g)
	if err != nil {
		return Cost{}, err
	}
	cost := func(band float64) float64 {
		s := p.shares(g.Tighten(band), limits)
		v := s.values()
		return costEscape*v[qEscape] + costReject*v[qFalseReject]
	}
	outward := p.outwardRange(g)
	// Steps of a fraction of σ near the cuts, coarser farther out.
	sigma := math.Max(g.LowerSigma, g.UpperSigma)
	var grid []float64
	step := math.Max(sigma/4, 1e-5*most) // however small σ is, the grid ends
	for b := 0.0; b < most; b += math.Max(step, b/10) {
		grid = append(grid, b)
	}
	grid = append(grid, most)
	for b := step; b < outward; b += math.Max(step, b/10) {
		grid = append(grid, -b)
	}
	grid = append(grid, -outward)
	slices.Sort(grid)
	best, least := 0, math.Inf(1)
	for i, b := range grid {
		if v := cost(b); v < least {
			best, least = i, v
		}
	}
	s := p.shares(g, limits)
	v := s.values()
	out := Cost{PerPartNow: cost(0), PerPartAcceptAll: costEscape * v[qBad]}
	band := grid[best]
	if 0 < best && best < len(grid)-1 {
		band = golden(cost, grid[best-1], grid[best+1])
	}
	if out.PerPart = cost(band); out.PerPart > least {
		band, out.PerPart = grid[best], least
	}
	// Far out the cost tends to that of accepting all, and rounding decides.
	const rounding = 1e-9
	switch {
	case out.PerPartAcceptAll <= out.PerPart*(1+rounding):
		out.Edge = AcceptAll
	case best == len(grid)-1 || cost(most) <= out.PerPart+1e-12*(costEscape+costReject):
		out.Edge = InwardEdge
	}
	out.Risk, err = Assess(p, in, band)
	return out, err
}

// golden returns the minimum of a function with one minimum between a and b.
func golden(f func(float64) float64, a, b float64) float64 {
	const phi = 0.6180339887498949
	x1, x2 := b-phi*(b-a), a+phi*(b-a)
	f1, f2 := f(x1), f(x2)
	for range 60 {
		if f1 <= f2 {
			b, x2, f2 = x2, x1, f1
			x1 = b - phi*(b-a)
			f1 = f(x1)
		} else {
			a, x1, f1 = x1, x2, f2
			x2 = a + phi*(b-a)
			f2 = f(x2)
		}
	}
	return a + (b-a)/2
}
