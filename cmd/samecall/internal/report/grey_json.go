package report

import (
	"io"
	"math"

	"samecall/cmd/samecall/internal/judge"
	"samecall/signal"
)

// GreySchema names the contract of the JSON of zone (docs/json.md).
const GreySchema = "samecall/zone/1"

type greyDocument struct {
	Schema     string           `json:"schema"`
	Study      studyJSON        `json:"study"`
	Settings   greySettingsJSON `json:"settings"`
	Unanimous  *unanimousJSON   `json:"unanimous"`
	Curve      greyCurveJSON    `json:"curve"`
	Methods    []greyMethodJSON `json:"methods"`
	WhyDiffer  []string         `json:"why_they_differ"`
	Parts      []greyPartJSON   `json:"parts"`
	GaugeSizes []memberJSON     `json:"gauge_sizes"`
	Cautions   []string         `json:"cautions"`
	Warnings   []warningJSON    `json:"warnings"`
}

type greySettingsJSON struct {
	Confidence float64 `json:"confidence"`
	Link       string  `json:"link"`
	TwoSigmas  bool    `json:"two_sigmas"`
	Lapse      bool    `json:"lapse"`
	Spread     float64 `json:"spread"`
}

// greyCurveJSON is the curve of the judge contract and what zone adds to it.
type greyCurveJSON struct {
	curveJSON
	CallLogLikelihood *float64            `json:"loglik_of_calls,omitempty"`
	Parameters        int                 `json:"parameters,omitempty"`
	Deviance          *float64            `json:"deviance,omitempty"`
	DevianceDF        int                 `json:"deviance_df,omitempty"`
	NoLackOfFit       string              `json:"lack_of_fit_reason,omitempty"`
	Without           *withoutOutlierJSON `json:"without_outliers,omitempty"`
}

type withoutOutlierJSON struct {
	LogLikelihood float64         `json:"loglik"`
	Lower         *curveLimitJSON `json:"lower,omitempty"`
	Upper         *curveLimitJSON `json:"upper,omitempty"`
}

// greyMethodJSON sets the widths of both methods at a limit side by side.
type greyMethodJSON struct {
	Limit     string          `json:"limit"`
	Unanimous *widthJSON      `json:"unanimous,omitempty"`
	Curve     *curveWidthJSON `json:"curve,omitempty"`
}

type widthJSON struct {
	Width      float64  `json:"width"`
	Sigma      float64  `json:"sigma"`
	PercentGRR *float64 `json:"percent_grr,omitempty"`
}

type curveWidthJSON struct {
	Width      estimateJSON `json:"width"`
	Sigma      float64      `json:"sigma"`
	PercentGRR *float64     `json:"percent_grr,omitempty"`
}

type greyPartJSON struct {
	Part     string  `json:"part"`
	Value    float64 `json:"value"`
	Accepted int     `json:"accepted"`
	Calls    int     `json:"calls"`
	*fittedPartJSON
	Reason string `json:"reason,omitempty"` // why nothing is fitted
}

type fittedPartJSON struct {
	Fitted   float64 `json:"fitted"`
	Residual float64 `json:"residual"`
	Tail     float64 `json:"tail"`
	Leverage float64 `json:"leverage"`
	// CutChange and SigmaChange (a factor less 1) at the limit named.
	Limit       string  `json:"limit"`
	CutChange   float64 `json:"cut_change"`
	SigmaChange float64 `json:"sigma_change"`
	Drives      bool    `json:"drives_the_fit"`
	Outlier     bool    `json:"outlier"`
}

func newGreyPart(p judge.PartRow) greyPartJSON {
	out := greyPartJSON{Part: p.Name, Value: p.Value, Accepted: p.Accepted, Calls: p.Calls}
	if p.NoCut {
		out.Reason = "the limit where the part lies has no cut"
		return out
	}
	out.fittedPartJSON = &fittedPartJSON{p.Fitted, p.Residual, p.Tail, p.Leverage,
		p.Side.String(), p.CutChange[p.Side], finiteOr0(math.Expm1(p.LogSigmaChange[p.Side])), p.Drives, p.Outlier}
	return out
}

type memberJSON struct {
	Limit       string        `json:"limit"`
	Size        float64       `json:"size"`
	Uncertainty float64       `json:"uncertainty"`
	WearLimit   *float64      `json:"wear_limit,omitempty"`
	Wears       string        `json:"wears"`
	Deviation   *float64      `json:"deviation,omitempty"`
	Offset      *estimateJSON `json:"offset,omitempty"`
	Remainder   *estimateJSON `json:"remainder,omitempty"`
	Finding     string        `json:"finding,omitempty"`
	Worn        *bool         `json:"worn,omitempty"`
	PerhapsWorn *bool         `json:"perhaps_worn,omitempty"`
	Reason      string        `json:"reason,omitempty"`
}

// GreyJSON writes the grey zone in full for programs.
func GreyJSON(w io.Writer, g *judge.Grey, opt signal.Options) error {
	r := &Record{Result: g.Result}
	d := greyDocument{
		Schema:     GreySchema,
		Study:      newStudy(r),
		Settings:   greySettingsJSON{g.Result.Options.Confidence, opt.Link.String(), opt.TwoSigmas, opt.Lapse, g.Result.Zone.Unanimous.Spread},
		Unanimous:  newUnanimous(g.Result.Zone.Unanimous),
		Methods:    []greyMethodJSON{},
		WhyDiffer:  append([]string{}, WhyTheyDiffer(g)...),
		Parts:      []greyPartJSON{},
		GaugeSizes: []memberJSON{},
		Cautions:   greyCautions,
		Warnings:   []warningJSON{},
	}
	if zone := newZone(r); zone.Curve != nil {
		d.Curve.curveJSON = *zone.Curve
	}
	if c := curveOf(g); c != nil {
		d.Curve.CallLogLikelihood, d.Curve.Parameters = &c.CallLogLikelihood, c.Parameters
		if c.LackOfFit.DevianceDF > 0 {
			d.Curve.Deviance, d.Curve.DevianceDF = &c.LackOfFit.Deviance, c.LackOfFit.DevianceDF
		}
		if !c.LackOfFit.Tested {
			d.Curve.NoLackOfFit = c.LackOfFit.Why
		}
		if c.Without != nil {
			d.Curve.Without = &withoutOutlierJSON{c.Without.LogLikelihood, newCurveLimit(c.Without.Lower), newCurveLimit(c.Without.Upper)}
		}
	}
	for _, l := range g.Limits {
		d.Methods = append(d.Methods, newGreyMethod(l))
	}
	for _, p := range g.Rows {
		d.Parts = append(d.Parts, newGreyPart(p))
	}
	for _, m := range g.Members {
		d.GaugeSizes = append(d.GaugeSizes, newMember(m))
	}
	for _, n := range g.Result.Warnings {
		d.Warnings = append(d.Warnings, warningJSON(n))
	}
	return writeJSON(w, d)
}

// writeJSON writes a document as every command does.
func writeJSON(w io.Writer, d any) error { return encode(w, d, true) }

// finiteOr0 guards a figure that is one Newton step, which may overshoot.
func finiteOr0(x float64) float64 {
	if math.IsInf(x, 0) || math.IsNaN(x) {
		return 0
	}
	return x
}

func newGreyMethod(l judge.GreyLimit) greyMethodJSON {
	m := greyMethodJSON{Limit: l.Side.String()}
	grr := func(i int) *float64 {
		if !l.HasTolerance {
			return nil
		}
		return &l.PercentGRR[i]
	}
	if l.Unanimous.Found {
		m.Unanimous = &widthJSON{l.Unanimous.Width, l.Sigma, grr(0)}
	}
	if l.Curve.Known() {
		m.Curve = &curveWidthJSON{Width: newSignal(l.Curve.Width), Sigma: l.Curve.Sigma.Value}
		if informs(l.Curve) {
			m.Curve.PercentGRR = grr(1)
		}
	}
	return m
}

func newMember(m judge.MemberRow) memberJSON {
	out := memberJSON{Limit: m.Member.Side.String(), Size: m.Member.Size, Uncertainty: m.Member.Uncertainty, Wears: "smaller"}
	if m.Member.WearsUp {
		out.Wears = "larger"
	}
	if m.Member.HasWear {
		out.WearLimit = &m.Member.WearLimit
	}
	if m.Error != nil {
		out.Reason = m.Error.Error()
		return out
	}
	e := m.Explanation
	offset, remainder := newSignal(e.Offset), newSignal(e.Remainder)
	out.Deviation, out.Offset, out.Remainder, out.Finding = &e.Deviation, &offset, &remainder, e.Finding.String()
	if m.Member.HasWear {
		out.Worn, out.PerhapsWorn = &e.Worn, &e.PerhapsWorn
	}
	return out
}
