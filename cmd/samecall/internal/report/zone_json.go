package report

import (
	"errors"
	"fmt"
	"slices"

	"samecall/signal"
)

// zoneJSON is the grey zone; a study without one has a reason and nothing else.
type zoneJSON struct {
	Reason    string         `json:"reason,omitempty"`
	Unanimous *unanimousJSON `json:"unanimous,omitempty"`
	Curve     *curveJSON     `json:"curve,omitempty"`
}

type unanimousJSON struct {
	Lower      *unanimousZoneJSON `json:"lower,omitempty"`
	Upper      *unanimousZoneJSON `json:"upper,omitempty"`
	MeanWidth  *float64           `json:"mean_width,omitempty"`
	Sigma      *float64           `json:"sigma,omitempty"`
	PercentGRR *float64           `json:"percent_grr,omitempty"`
	Band       string             `json:"band,omitempty"`
	Reason     string             `json:"reason,omitempty"`
}

type unanimousZoneJSON struct {
	Reject     *float64 `json:"reject,omitempty"`
	Accept     *float64 `json:"accept,omitempty"`
	Width      *float64 `json:"width,omitempty"`
	MixedParts int      `json:"mixed_parts"`
	Reason     string   `json:"reason,omitempty"`
}

type curveJSON struct {
	Reason        string               `json:"reason,omitempty"`
	Link          string               `json:"link,omitempty"`
	LogLikelihood *float64             `json:"loglik,omitempty"`
	Lower         *curveLimitJSON      `json:"lower,omitempty"`
	Upper         *curveLimitJSON      `json:"upper,omitempty"`
	Lapse         *estimateJSON        `json:"lapse,omitempty"`
	LackOfFit     *lackOfFitJSON       `json:"lack_of_fit,omitempty"`
	Outliers      []string             `json:"outliers"`
	Appraisers    []appraiserCurveJSON `json:"appraisers"`
	Tests         *curveTestsJSON      `json:"tests,omitempty"`
	Warnings      []string             `json:"warnings,omitempty"`
}

type curveLimitJSON struct {
	Status           string        `json:"status"`
	Reason           string        `json:"reason,omitempty"`
	Cut              *estimateJSON `json:"cut,omitempty"`
	Offset           *estimateJSON `json:"offset,omitempty"`
	Sigma            *estimateJSON `json:"sigma,omitempty"`
	From             *float64      `json:"from,omitempty"`
	To               *float64      `json:"to,omitempty"`
	ShareOfTolerance *estimateJSON `json:"share_of_tolerance,omitempty"`
	AcceptedAtLimit  *estimateJSON `json:"accepted_at_limit,omitempty"`
	Gap              *gapJSON      `json:"gap,omitempty"`
}

// gapJSON are the neighbouring values between which the calls turn, where no
// part between them is mixed.
type gapJSON struct {
	Reject *float64 `json:"reject,omitempty"`
	Accept *float64 `json:"accept,omitempty"`
	Mixed  *float64 `json:"mixed,omitempty"`
}

type lackOfFitJSON struct {
	X2      float64 `json:"x2"`
	DF      int     `json:"df"`
	P       float64 `json:"p"`
	Factor  float64 `json:"factor"`
	Applied bool    `json:"applied"`
}

type appraiserCurveJSON struct {
	Appraiser string          `json:"appraiser"`
	Reason    string          `json:"reason,omitempty"`
	Lower     *curveLimitJSON `json:"lower,omitempty"`
	Upper     *curveLimitJSON `json:"upper,omitempty"`
}

// curveTestsJSON are likelihood-ratio tests between appraisers.
type curveTestsJSON struct {
	SameCut    *testJSON `json:"same_cut,omitempty"`
	SameSigma  *testJSON `json:"same_sigma,omitempty"`
	SameCurve  *testJSON `json:"same_curve,omitempty"`
	BothLimits *testJSON `json:"same_sigma_at_both_limits,omitempty"`
}

func newZone(r *Record) zoneJSON {
	z := r.Zone
	if z == nil {
		return zoneJSON{Reason: r.NoZone.Error()}
	}
	out := zoneJSON{Unanimous: newUnanimous(z.Unanimous)}
	if z.Curves == nil {
		out.Curve = &curveJSON{Reason: z.NoCurve.Error(), Outliers: []string{}, Appraisers: []appraiserCurveJSON{}}
		return out
	}
	out.Curve = newCurve(r, z.Curves)
	return out
}

func newUnanimous(u *signal.Unanimity) *unanimousJSON {
	out := &unanimousJSON{Lower: newUnanimousZone(u.Lower), Upper: newUnanimousZone(u.Upper), Reason: u.Why}
	if u.Found {
		out.MeanWidth, out.Sigma = &u.MeanWidth, &u.Sigma
	}
	if u.HasGRR {
		out.PercentGRR = &u.PercentGRR
		out.Band = signal.BandGRR(u.PercentGRR).String()
	}
	return out
}

func newUnanimousZone(z *signal.Zone) *unanimousZoneJSON {
	if z == nil {
		return nil
	}
	if !z.Found {
		return &unanimousZoneJSON{Reason: z.Why}
	}
	return &unanimousZoneJSON{Reject: &z.Reject, Accept: &z.Accept, Width: &z.Width, MixedParts: z.Mixed}
}

func newCurve(r *Record, all *signal.Appraisers) *curveJSON {
	c := all.Pooled
	out := &curveJSON{
		Link:          c.Options.Link.String(),
		LogLikelihood: &c.LogLikelihood,
		Lower:         newCurveLimit(c.Lower),
		Upper:         newCurveLimit(c.Upper),
		Outliers:      []string{},
		Appraisers:    []appraiserCurveJSON{},
		Tests: &curveTestsJSON{
			SameCut:   newRatioTest(&all.SameCut),
			SameSigma: newRatioTest(&all.SameSigma),
			SameCurve: newRatioTest(&all.SameCurve),
		},
	}
	out.Tests.BothLimits = newRatioTest(c.SameSigma)
	if c.HasLapse {
		e := newSignal(c.Lapse)
		out.Lapse = &e
	}
	if l := c.LackOfFit; l.Tested {
		out.LackOfFit = &lackOfFitJSON{l.X2, l.DF, l.P, l.Factor, l.Applied}
	}
	for _, i := range c.Outliers {
		out.Outliers = append(out.Outliers, c.Parts[i].Name)
	}
	for a, own := range all.Each {
		row := appraiserCurveJSON{Appraiser: r.Study.Appraisers[a]}
		if own == nil {
			row.Reason = all.Errors[a].Error()
		} else {
			row.Lower, row.Upper = newCurveLimit(own.Lower), newCurveLimit(own.Upper)
		}
		out.Appraisers = append(out.Appraisers, row)
	}
	for _, w := range c.Warnings {
		out.Warnings = append(out.Warnings, w.Error())
	}
	out.Warnings = append(out.Warnings, comparedWarnings(r.Study.Appraisers, all)...)
	return out
}

func newCurveLimit(l *signal.LimitFit) *curveLimitJSON {
	if l == nil {
		return nil
	}
	out := &curveLimitJSON{Status: l.Status.String(), Reason: l.Why}
	if g := l.Gap; g != nil {
		out.Gap = &gapJSON{}
		if g.HasReject {
			out.Gap.Reject = &g.Reject
		}
		if g.HasAccept {
			out.Gap.Accept = &g.Accept
		}
		if g.HasMixed {
			out.Gap.Mixed = &g.Mixed
		}
	}
	if !l.Known() {
		return out
	}
	of := func(e signal.Estimate) *estimateJSON {
		j := newSignal(e)
		return &j
	}
	out.Cut, out.Sigma = of(l.Cut), of(l.Sigma)
	if l.HasLimit {
		out.Offset = of(l.Offset)
	}
	out.From, out.To = &l.From, &l.To
	if l.HasShare {
		out.ShareOfTolerance = of(l.Share)
	}
	if l.HasAtLimit {
		out.AcceptedAtLimit = of(l.AtLimit)
	}
	return out
}

func newRatioTest(t *signal.Test) *testJSON {
	if t == nil || !t.Done {
		return nil
	}
	return &testJSON{t.Statistic, t.DF, t.P}
}

// comparedWarnings are the warnings of curves by appraiser, with the names that
// package signal does not know.
func comparedWarnings(names []string, all *signal.Appraisers) []string {
	var out []string
	for a, own := range all.Each {
		switch {
		case slices.Contains(all.Compared, a):
		case own == nil:
			out = append(out, fmt.Sprintf("%s is not compared: %v", names[a], all.Errors[a]))
		default:
			out = append(out, names[a]+" is not compared: its calls do not turn at each limit")
		}
	}
	for _, w := range all.Warnings {
		var known signal.Warning
		if !errors.As(w, &known) || known.Code != signal.WarnNotCompared {
			out = append(out, w.Error())
		}
	}
	return out
}
