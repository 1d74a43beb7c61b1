package judge

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/gonum/stat"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

// RiskAsk says what risk is to find.
type RiskAsk struct {
	Process signal.Process
	Guards  []float64 // guard bands of the table; nil: multiples of σ

	Target     float64 // escapes as a share of all parts; meaningful if HasTarget
	HasTarget  bool
	Shown      bool // hold the upper bound of the escapes under the target
	CostEscape float64
	CostReject float64
	HasCosts   bool
}

// Risks is what an inspection does to a process.
type Risks struct {
	Ask     RiskAsk
	Limits  signal.Limits
	Gauge   signal.Gauge
	Curve   *signal.Curve // nil where the gauge is taken as known
	Scale   format.Scale
	Process ProcessFacts

	Appraiser  string      // whose curve it is; empty: of all together
	ValuesFile study.Input // the values of the process; empty for a normal one

	Now    signal.Risk // without a guard band
	Guards []GuardRow

	Target      *signal.Risk // with the guard band found; nil if not asked for or not reachable
	Unreachable error
	Cost        *signal.Cost
	NoCost      error
}

// ProcessFacts describes a process for people.
type ProcessFacts struct {
	N        int // values; 0: a normal process
	Mean, SD float64
	HasSD    bool
	Cp, Cpk  float64 // meaningful with HasCp and HasCpk; for values, of their mean and standard deviation
	HasCp    bool
	HasCpk   bool
}

// GuardRow is the risk at a guard band.
type GuardRow struct {
	Band  float64
	Sigma float64 // the band in σ, the mean σ of the limits
	Risk  signal.Risk
	Error error // where the cuts would cross, or the like
}

var guardSigmas = []float64{0, 0.25, 0.5, 1, 1.5, 2, 3}

// NewRisks assesses a fitted curve in a process.
func NewRisks(c *signal.Curve, ask RiskAsk, unit string) (*Risks, error) {
	g, err := c.Gauge()
	if err != nil {
		return nil, oneLimit(c, err)
	}
	r := &Risks{Ask: ask, Limits: c.Limits, Gauge: g, Curve: c}
	return r, r.assess(c, unit)
}

// oneLimit adds the way out where only one of two limits has a cut.
func oneLimit(c *signal.Curve, err error) error {
	for _, pair := range [][2]*signal.LimitFit{{c.Lower, c.Upper}, {c.Upper, c.Lower}} {
		if with, without := pair[0], pair[1]; with.Known() && without != nil && !without.Known() {
			return fmt.Errorf("%w. For the risk at the %s limit alone, leave the %s limit out", err, with.Side, without.Side)
		}
	}
	return err
}

// NewKnownRisks assesses a gauge that is taken as known, without intervals.
func NewKnownRisks(known signal.Known, ask RiskAsk, unit string) (*Risks, error) {
	r := &Risks{Ask: ask, Limits: known.Limits, Gauge: known.Gauge}
	return r, r.assess(known, unit)
}

// at is the risk with a guard band.
func (r *Risks) at(in signal.Inspection, band float64) (signal.Risk, error) {
	if band != 0 && r.Gauge.HasLower && r.Gauge.HasUpper && r.Gauge.LowerCut+band >= r.Gauge.UpperCut-band {
		return signal.Risk{}, errors.New("the cuts would meet: nothing is left to accept")
	}
	return signal.Assess(r.Ask.Process, in, band)
}

func (r *Risks) assess(in signal.Inspection, unit string) (err error) {
	r.Process = facts(r.Ask.Process, r.Limits)
	r.Scale = r.scale(unit)
	if r.Now, err = r.at(in, 0); err != nil {
		return err
	}
	sigma := r.sigma()
	bands := slices.Clone(r.Ask.Guards)
	if bands == nil {
		for _, k := range guardSigmas {
			bands = append(bands, k*sigma)
		}
	}
	for _, b := range bands {
		row := GuardRow{Band: b, Sigma: b / sigma}
		row.Risk, row.Error = r.at(in, b)
		r.Guards = append(r.Guards, row)
	}
	switch n := r.Process.N; {
	case !r.Ask.HasTarget:
	case n > 0 && r.Ask.Target*float64(n) < 1: // a share of less than one value
		r.Unreachable = fmt.Errorf("%s of the process cannot tell a share so small; give its mean and standard deviation, or more values", format.Counted(n, "value"))
	default:
		found, err := signal.GuardForEscapes(r.Ask.Process, in, r.Ask.Target, r.Ask.Shown)
		if err != nil {
			r.Unreachable = err
		} else {
			r.Target = &found
		}
	}
	if r.Ask.HasCosts {
		cost, err := signal.GuardForCost(r.Ask.Process, in, r.Ask.CostEscape, r.Ask.CostReject)
		if err != nil {
			r.NoCost = err
		} else {
			r.Cost = &cost
		}
	}
	return nil
}

// sigma is the σ of the limits, the mean where each has its own.
func (r *Risks) sigma() float64 {
	switch g := r.Gauge; {
	case g.HasLower && g.HasUpper:
		return (g.LowerSigma + g.UpperSigma) / 2
	case g.HasLower:
		return g.LowerSigma
	default:
		return g.UpperSigma
	}
}

func (r *Risks) scale(unit string) format.Scale {
	var limits []*float64
	if r.Limits.HasLower {
		limits = append(limits, &r.Limits.Lower)
	}
	if r.Limits.HasUpper {
		limits = append(limits, &r.Limits.Upper)
	}
	spreads := []float64{r.sigma()}
	if r.Process.HasSD {
		spreads = append(spreads, r.Process.SD)
	}
	return format.NewScale(unit, limits, spreads...)
}

// facts describes a process; capabilities are (upper−lower)/(6 sd) and the
// distance of the mean from the nearer limit over 3 sd.
func facts(p signal.Process, limits signal.Limits) ProcessFacts {
	f := ProcessFacts{N: len(p.Values), Mean: p.Mean, SD: p.SD, HasSD: true}
	if f.N > 0 {
		f.Mean, f.SD = stat.MeanStdDev(p.Values, nil)
		if f.HasSD = f.N > 1 && f.SD > 0; !f.HasSD {
			f.SD = 0
			return f
		}
	}
	if tolerance, ok := limits.Tolerance(); ok {
		f.Cp, f.HasCp = tolerance/(6*f.SD), true
	}
	f.Cpk = math.Inf(1)
	if limits.HasLower {
		f.Cpk = (f.Mean - limits.Lower) / (3 * f.SD)
	}
	if limits.HasUpper {
		f.Cpk = math.Min(f.Cpk, (limits.Upper-f.Mean)/(3*f.SD))
	}
	f.HasCpk = !math.IsInf(f.Cpk, 0)
	return f
}

// PooledCurve fits the curve of all appraisers together or, with a name, that
// of one. The error says why there is none.
func PooledCurve(s *study.Study, opt signal.Options, appraiser string) (*signal.Curve, error) {
	limits, err := zoneLimits(s)
	if err != nil {
		return nil, err
	}
	by := AcceptedByAppraiser(s)
	parts := pool(by)
	if appraiser != "" {
		a := slices.Index(s.Appraisers, appraiser)
		if a < 0 {
			return nil, fmt.Errorf("no appraiser is named %q; there are %s", appraiser, strings.Join(s.Appraisers, ", "))
		}
		parts = by[a]
	}
	c, err := signal.Fit(parts, limits, opt)
	if err != nil {
		return nil, fmt.Errorf("the calls give no acceptance curve: %w", wayOut(err))
	}
	return c, nil
}

// wayOut adds to the error of a fit what the user can do about it.
func wayOut(err error) error {
	if not, ok := errors.AsType[*signal.NotConvergedError](err); ok && not.TwoSigmas {
		return fmt.Errorf("%w: leave out --two-sigmas", err)
	}
	return err
}
