package signal

import (
	"cmp"
	"errors"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/stat"
	"gonum.org/v1/gonum/stat/distuv"
)

// ShortTrials is how many trials a short study asks of each part (Measurement
// Systems Analysis reference manual, 4th ed. 2010, ch. III C, analytic method).
const ShortTrials = 20

// The other constants of the method: how many parts it asks for, and how many of
// them between never and always accepted; the factor that turns the spread of 20
// trials into repeatability; those of the t statistic.
const (
	shortParts        = 8
	shortBetween      = 6
	shortAdjustment   = 1.08
	shortTFactor      = 31.3
	shortDF           = 19
	shortTProbability = 0.975
)

// Precondition is one thing that the short study asks of its parts.
type Precondition struct {
	Name string
	Need int
	Have int
	Met  bool
}

// ShortPoint is one part of a short study.
type ShortPoint struct {
	Value    float64
	Accepted int
	Trials   int
	Adjusted float64 // adjusted share of acceptance
	Z        float64 // its normal quantile
	Used     bool    // in the line; extremes beyond the first are not
}

// ShortStudy is the analysis of a short study at one limit.
type ShortStudy struct {
	Side   Side
	Limit  float64
	Points []ShortPoint // in order of value

	Preconditions []Precondition // each, met or not

	// The line through (value, Z) by least squares. Meaningful if HasLine.
	Intercept, Slope float64
	Cut              float64 // the value accepted half of the time
	Sigma            float64 // 1/|Slope|
	// Bias is the distance of the cut beyond the limit, away from the
	// tolerance: above 0, parts beyond the limit are accepted.
	Bias          float64
	Repeatability float64 // distance from 0.5 to 99.5 % acceptance, over 1.08
	T             float64 // 31.3 |Bias| / Repeatability
	Critical      float64 // t(0.975, 19)
	Significant   bool    // T exceeds Critical: the bias is not zero
	HasLine       bool
	Why           string // why there is no line

	// Fit is the same data by maximum likelihood; nil with FitError.
	Fit      *Curve
	FitError error
}

// Short analyses a short study at one limit: a few parts of known value, each
// tried twenty times. It is the manual's analytic method: of a accepted out of
// m trials the adjusted share is (a+½)/m below one half, (a−½)/m above, and ½
// at one half (the rule is from memory); the line through its normal quantiles
// gives the cut at one half and the repeatability from the distance between
// 0.5 % and 99.5 %, over 1.08.
//
// The manual draws the line on probability paper; here it is a least-squares
// line of quantile on value. Of the parts never accepted only the one next to
// the others is used, and of those always accepted likewise: those farther out
// say nothing of the slope. On the manual's own data this gives cut −0.0124,
// bias 0.0024 and repeatability 0.0079, where its paper was read as −0.0123,
// 0.0023 and 0.0073; neither using every extreme nor none comes as near.
//
// Preconditions that the data fail are named, not refused. It returns an error
// if a count or the limit cannot be.
func Short(parts []Part, side Side, limit float64, options Options) (*ShortStudy, error) {
	if side != Lower && side != Upper {
		return nil, fmt.Errorf("side %d: want Lower or Upper", int(side))
	}
	if !finite(limit) {
		return nil, fmt.Errorf("limit %v is not a number", limit)
	}
	if _, err := options.check(); err != nil {
		return nil, err
	}
	if err := checkParts(parts); err != nil {
		return nil, err
	}
	merged, _, err := merge(parts)
	if err != nil {
		return nil, err
	}
	if len(merged) == 0 {
		return nil, errors.New("no part has a trial")
	}
	slices.SortStableFunc(merged, func(a, b Part) int { return cmp.Compare(a.Value, b.Value) })
	s := &ShortStudy{Side: side, Limit: limit, Critical: distuv.StudentsT{Sigma: 1, Nu: shortDF}.Quantile(shortTProbability)}
	for _, p := range merged {
		a := adjusted(p.Accepted, p.Calls)
		s.Points = append(s.Points, ShortPoint{Value: p.Value, Accepted: p.Accepted, Trials: p.Calls, Adjusted: a, Z: normalQuantile(a)})
	}
	s.Preconditions = preconditions(merged)
	s.use()
	s.line()
	limits := AtLeast(limit)
	if side == Upper {
		limits = AtMost(limit)
	}
	s.Fit, s.FitError = Fit(merged, limits, options)
	return s, nil
}

// adjusted is the manual's share of acceptance.
func adjusted(a, m int) float64 {
	switch {
	case 2*a < m:
		return (float64(a) + 0.5) / float64(m)
	case 2*a > m:
		return (float64(a) - 0.5) / float64(m)
	}
	return 0.5
}

// preconditions checks what the method asks, one by one.
func preconditions(parts []Part) []Precondition {
	var never, always, between int
	trials := math.MaxInt
	for _, p := range parts {
		trials = min(trials, p.Calls)
		switch p.Accepted {
		case 0:
			never++
		case p.Calls:
			always++
		default:
			between++
		}
	}
	exact := true
	for _, p := range parts {
		exact = exact && p.Calls == ShortTrials
	}
	list := []Precondition{
		{Name: "eight parts or more", Need: shortParts, Have: len(parts), Met: len(parts) >= shortParts},
		{Name: "twenty trials of each part", Need: ShortTrials, Have: trials, Met: exact},
		{Name: "one part never accepted", Need: 1, Have: never, Met: never >= 1},
		{Name: "one part always accepted", Need: 1, Have: always, Met: always >= 1},
		{Name: "six parts accepted sometimes", Need: shortBetween, Have: between, Met: between >= shortBetween},
	}
	if trials >= ShortTrials && !exact { // more than twenty: name the largest
		for _, p := range parts {
			list[1].Have = max(list[1].Have, p.Calls)
		}
	}
	return list
}

// use marks the points that the line goes through.
func (s *ShortStudy) use() {
	n := len(s.Points)
	at := func(i int) *ShortPoint { // from outside in
		if s.Side == Upper {
			i = n - 1 - i
		}
		return &s.Points[i]
	}
	first, last := 0, n-1
	for first+1 < n && at(first).Accepted == 0 && at(first+1).Accepted == 0 {
		first++
	}
	all := func(p *ShortPoint) bool { return p.Accepted == p.Trials }
	for last > first && all(at(last)) && all(at(last-1)) {
		last--
	}
	for i := first; i <= last; i++ {
		at(i).Used = true
	}
}

// line fits the line and what follows from it.
func (s *ShortStudy) line() {
	var x, z []float64
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, p := range s.Points {
		if p.Used {
			x, z = append(x, p.Value), append(z, p.Z)
			lo, hi = math.Min(lo, p.Value), math.Max(hi, p.Value)
		}
	}
	if !(hi > lo) {
		s.Why = "a line needs two parts of different value"
		return
	}
	// Centred, so that a band of a micrometre around 250 mm keeps its digits.
	centre, scale := lo+(hi-lo)/2, (hi-lo)/2
	for i := range x {
		x[i] = (x[i] - centre) / scale
	}
	a, b := stat.LinearRegression(x, z, nil, false)
	outward := -1.0
	if s.Side == Upper {
		outward = 1
	}
	if !(-outward*b > 1e-12) {
		s.Why = fmt.Sprintf("acceptance does not rise from the %s limit inwards; is it the %s limit, or are accepted and rejected swapped?", s.Side, 1-s.Side)
		return
	}
	s.Slope = b / scale
	s.Cut = centre - scale*a/b
	s.Intercept = a - b*centre/scale
	s.Sigma = scale / math.Abs(b)
	s.Bias = outward*(s.Cut-s.Limit) + 0 // never −0
	s.Repeatability = 2 * Probit.greyQuantile() * s.Sigma / shortAdjustment
	s.T = shortTFactor * math.Abs(s.Bias) / s.Repeatability
	s.Significant = s.T > s.Critical
	s.HasLine = true
	if !finite(s.Slope, s.Cut, s.Intercept, s.Sigma, s.Bias, s.Repeatability, s.T) {
		*s = ShortStudy{Side: s.Side, Limit: s.Limit, Points: s.Points, Preconditions: s.Preconditions, Critical: s.Critical,
			Why: "the line is not a finite number in the unit of the values"}
	}
}
