package judge

import (
	"cmp"
	"math"
	"slices"

	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

// Grey is the grey zone of a study in full: both methods limit by limit, each
// part beside the curve, and the gauge's own sizes.
type Grey struct {
	Result  *Result // of which only the study and its zone are there
	Parts   []signal.Part
	Limits  []GreyLimit
	Rows    []PartRow // in order of value; empty without a curve
	Members []MemberRow
}

// GreyLimit is a limit by both methods.
type GreyLimit struct {
	Side      signal.Side
	Limit     float64
	Unanimous *signal.Zone
	Curve     *signal.LimitFit // nil without a curve

	// Sigma of the unanimous zone at this limit alone: its width over the
	// spread. Meaningful if Unanimous.Found.
	Sigma float64
	// PercentGRR is 6 σ over the tolerance in percent, by the unanimous zone
	// and by the curve; meaningful if the method has a σ and HasTolerance.
	PercentGRR   [2]float64
	HasTolerance bool

	// Outermost is the mixed part farthest from the cut on either side, as an
	// index into Grey.Parts; −1 if none is mixed.
	Outermost int
}

// PartRow is a part beside the fitted curve.
type PartRow struct {
	signal.PartFit
	Side signal.Side // the limit on which the part bears most
	// Drives: without the part, a cut or σ would change by more than 2/√n of
	// its standard error (Belsley, Kuh & Welsch, Regression Diagnostics, 1980,
	// section 2.1), n the parts that bear on the fit.
	Drives bool
	// Matters: the curve or the calls leave a doubt about the part.
	Matters bool
}

// MemberRow is a member of the gauge beside the offset at its limit.
type MemberRow struct {
	Member      signal.Member
	Explanation *signal.Explanation // nil with Error
	Error       error
}

// NewGrey computes the grey zone of a study in full; spread is the number of
// σ that the unanimous zone is taken to span. The error says why a study has
// none.
func NewGrey(s *study.Study, opt signal.Options, spread float64) (*Grey, error) {
	zone, err := NewZone(s, opt)
	if err != nil {
		return nil, err
	}
	g := &Grey{Parts: pool(AcceptedByAppraiser(s))}
	if zone.Unanimous, err = signal.Unanimous(g.Parts, zone.Limits, spread); err != nil {
		return nil, err
	}
	g.Result = &Result{Study: s, Zone: zone}
	g.Result.Options.Confidence = opt.Confidence
	g.Result.Options.Ordered = len(s.Settings.Order) > 0
	for _, n := range s.Notes {
		g.Result.Warnings = append(g.Result.Warnings, Warning{n.Code, n.Text})
	}
	g.Limits = GreyLimits(zone)
	for i := range g.Limits {
		g.Limits[i].Outermost = outermost(g.Parts, &g.Limits[i])
	}
	if zone.Curves != nil {
		g.Rows = partRows(zone.Curves.Pooled)
	}
	g.Members = members(s.Settings.GaugeSizes, zone)
	return g, nil
}

// GreyLimits sets both methods side by side at each limit of a zone.
func GreyLimits(zone *Zone) []GreyLimit {
	var out []GreyLimit
	tolerance, hasTolerance := zone.Limits.Tolerance()
	for side, z := range []*signal.Zone{zone.Unanimous.Lower, zone.Unanimous.Upper} {
		if z == nil {
			continue
		}
		l := GreyLimit{Side: signal.Side(side), Limit: zone.Limits.Lower, Unanimous: z, HasTolerance: hasTolerance, Outermost: -1}
		if l.Side == signal.Upper {
			l.Limit = zone.Limits.Upper
		}
		if z.Found {
			l.Sigma = z.Width / zone.Unanimous.Spread
			l.PercentGRR[0] = percentGRR(l.Sigma, tolerance)
		}
		if zone.Curves != nil {
			l.Curve = limitOf(zone.Curves.Pooled, l.Side)
			if l.Curve.Known() {
				l.PercentGRR[1] = percentGRR(l.Curve.Sigma.Value, tolerance)
			}
		}
		out = append(out, l)
	}
	return out
}

// percentGRR is 6 σ over the tolerance, in percent; 0 without a tolerance.
func percentGRR(sigma, tolerance float64) float64 {
	if !(tolerance > 0) {
		return 0
	}
	return 100 * 6 * sigma / tolerance
}

func limitOf(c *signal.Curve, side signal.Side) *signal.LimitFit {
	if side == signal.Lower {
		return c.Lower
	}
	return c.Upper
}

// outermost finds the mixed part within the unanimous zone that lies farthest
// from the cut.
func outermost(parts []signal.Part, l *GreyLimit) int {
	if !l.Unanimous.Found || !l.Curve.Known() {
		return -1
	}
	lo, hi := min(l.Unanimous.Reject, l.Unanimous.Accept), max(l.Unanimous.Reject, l.Unanimous.Accept)
	found, far := -1, -1.0
	for i, p := range parts {
		if p.Value < lo || p.Value > hi || p.Accepted == 0 || p.Accepted == p.Calls {
			continue
		}
		if d := math.Abs(p.Value - l.Curve.Cut.Value); d > far {
			found, far = i, d
		}
	}
	return found
}

// partRows puts the parts in order of value and finds those that matter.
func partRows(c *signal.Curve) []PartRow {
	const sure = 0.001 // fitted closer than this to 0 or 1, a part bears little
	n := 0
	for _, p := range c.Parts {
		if !p.NoCut && p.Fitted > sure && p.Fitted < 1-sure {
			n++
		}
	}
	rows := make([]PartRow, len(c.Parts))
	for i, p := range c.Parts {
		r := PartRow{PartFit: p}
		strongest := 0.0
		for k := range 2 {
			cut := relative(p.CutChange[k], c.Params[2*k])
			sigma := relative(p.LogSigmaChange[k], c.Params[2*k+1])
			if cut > strongest {
				strongest, r.Side = cut, signal.Side(k)
			}
			r.Drives = r.Drives || n > 0 && max(cut, sigma) > 2/math.Sqrt(float64(n))
		}
		mixed := p.Accepted > 0 && p.Accepted < p.Calls
		r.Matters = mixed || p.NoCut && p.Accepted > 0 || p.Outlier || r.Drives || p.Fitted > sure && p.Fitted < 1-sure || math.Abs(p.Residual) > 2
		rows[i] = r
	}
	slices.SortStableFunc(rows, func(a, b PartRow) int { return cmp.Compare(a.Value, b.Value) })
	return rows
}

// relative is a change in standard errors of its parameter.
func relative(change float64, p signal.Param) float64 {
	if !p.Has || !(p.SE > 0) {
		return 0
	}
	return math.Abs(change) / p.SE
}

// members compares the gauge's calibrated sizes with the offsets found.
func members(sizes study.GaugeSizes, z *Zone) []MemberRow {
	var rows []MemberRow
	for side, m := range []*study.GaugeMember{sizes.Lower, sizes.Upper} {
		if m == nil {
			continue
		}
		r := MemberRow{Member: signal.Member{Side: signal.Side(side), Size: m.Size, Uncertainty: m.Uncertainty,
			WearLimit: m.WearLimit, HasWear: m.HasWear, WearsUp: m.WearsLarger}}
		if z.Curves == nil {
			r.Error = z.NoCurve
		} else {
			r.Explanation, r.Error = signal.Explain(limitOf(z.Curves.Pooled, r.Member.Side), r.Member)
		}
		rows = append(rows, r)
	}
	return rows
}
