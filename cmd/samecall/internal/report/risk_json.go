package report

import (
	"io"

	"samecall/cmd/samecall/internal/judge"
	"samecall/signal"
)

// RiskSchema names the contract of the JSON of risk (docs/json.md).
const RiskSchema = "samecall/risk/1"

type riskDocument struct {
	Schema    string      `json:"schema"`
	Study     *studyJSON  `json:"study,omitempty"`
	Appraiser string      `json:"appraiser,omitempty"`
	Limits    limitsJSON  `json:"limits"`
	Process   processJSON `json:"process"`
	Gauge     gaugeJSON   `json:"gauge"`
	Risk      riskJSON    `json:"risk"`
	Guards    []guardJSON `json:"guard_bands"`
	Target    *targetJSON `json:"escape_target,omitempty"`
	Cost      *costJSON   `json:"cost,omitempty"`
	Cautions  []string    `json:"cautions"`
	Warnings  []string    `json:"warnings"`
}

type processJSON struct {
	Kind   string   `json:"kind"` // normal or values
	Values int      `json:"values,omitempty"`
	File   string   `json:"file,omitempty"`
	SHA256 string   `json:"sha256,omitempty"`
	Mean   float64  `json:"mean"`
	SD     *float64 `json:"sd,omitempty"`
	Cp     *float64 `json:"cp,omitempty"`
	Cpk    *float64 `json:"cpk,omitempty"`
}

type gaugeJSON struct {
	Known      bool     `json:"known"` // given, not fitted
	Link       string   `json:"link"`
	Confidence *float64 `json:"confidence,omitempty"`
	Lower      *cutJSON `json:"lower,omitempty"`
	Upper      *cutJSON `json:"upper,omitempty"`
	Lapse      float64  `json:"lapse"`
}

type cutJSON struct {
	Cut   float64 `json:"cut"`
	Sigma float64 `json:"sigma"`
}

// riskJSON holds shares as fractions of 1.
type riskJSON struct {
	Bad               estimateJSON  `json:"bad"`
	Escape            estimateJSON  `json:"escape"`
	EscapeLower       *estimateJSON `json:"escape_lower,omitempty"`
	EscapeUpper       *estimateJSON `json:"escape_upper,omitempty"`
	FalseReject       estimateJSON  `json:"false_reject"`
	FalseRejectLower  *estimateJSON `json:"false_reject_lower,omitempty"`
	FalseRejectUpper  *estimateJSON `json:"false_reject_upper,omitempty"`
	Accepted          estimateJSON  `json:"accepted"`
	BadAmongAccepted  estimateJSON  `json:"bad_among_accepted"`
	GoodAmongRejected estimateJSON  `json:"good_among_rejected"`
}

type guardJSON struct {
	GuardBand float64   `json:"guard_band"`
	Sigmas    float64   `json:"sigmas"`
	Risk      *riskJSON `json:"risk,omitempty"`
	Reason    string    `json:"reason,omitempty"`
}

type targetJSON struct {
	Target    float64   `json:"target"`
	Shown     bool      `json:"shown"`
	GuardBand *float64  `json:"guard_band,omitempty"`
	Risk      *riskJSON `json:"risk,omitempty"`
	Reason    string    `json:"reason,omitempty"`
}

type costJSON struct {
	Escape     float64   `json:"escape"`
	Reject     float64   `json:"reject"`
	GuardBand  *float64  `json:"guard_band,omitempty"`
	PerPart    *float64  `json:"per_part,omitempty"`
	PerPartNow *float64  `json:"per_part_now,omitempty"`
	AcceptAll  *float64  `json:"per_part_accept_all,omitempty"`
	AtEdge     bool      `json:"at_edge"`
	Edge       string    `json:"edge,omitempty"` // inward or accept-all
	Risk       *riskJSON `json:"risk,omitempty"`
	Reason     string    `json:"reason,omitempty"`
}

// RiskJSON writes the risk for programs. study is nil where the gauge was
// given without one.
func RiskJSON(w io.Writer, r *judge.Risks, study *Record) error {
	d := riskDocument{
		Schema:   RiskSchema,
		Limits:   limitsJSON{Unit: r.Scale.Unit},
		Process:  processJSON{Kind: "normal", Values: r.Process.N, File: r.ValuesFile.File, SHA256: r.ValuesFile.SHA256, Mean: r.Process.Mean},
		Gauge:    newGauge(r),
		Risk:     newRisk(r, r.Now),
		Guards:   []guardJSON{},
		Cautions: riskCautions(r),
		Warnings: append([]string{}, riskWarnings(r)...),
	}
	if study != nil {
		s := newStudy(study)
		d.Study = &s
	}
	d.Appraiser = r.Appraiser
	if r.Limits.HasLower {
		d.Limits.Lower = &r.Limits.Lower
	}
	if r.Limits.HasUpper {
		d.Limits.Upper = &r.Limits.Upper
	}
	if r.Process.N > 0 {
		d.Process.Kind = "values"
	}
	if r.Process.HasSD {
		d.Process.SD = &r.Process.SD
	}
	if r.Process.HasCp {
		d.Process.Cp = &r.Process.Cp
	}
	if r.Process.HasCpk {
		d.Process.Cpk = &r.Process.Cpk
	}
	for _, g := range r.Guards {
		row := guardJSON{GuardBand: g.Band, Sigmas: g.Sigma}
		if g.Error != nil {
			row.Reason = g.Error.Error()
		} else {
			risk := newRisk(r, g.Risk)
			row.Risk = &risk
		}
		d.Guards = append(d.Guards, row)
	}
	if r.Ask.HasTarget {
		t := targetJSON{Target: r.Ask.Target, Shown: r.Ask.Shown}
		if r.Unreachable != nil {
			t.Reason = r.Unreachable.Error()
		} else {
			risk := newRisk(r, *r.Target)
			t.GuardBand, t.Risk = &r.Target.GuardBand, &risk
		}
		d.Target = &t
	}
	if r.Ask.HasCosts {
		c := costJSON{Escape: r.Ask.CostEscape, Reject: r.Ask.CostReject}
		if r.NoCost != nil {
			c.Reason = r.NoCost.Error()
		} else {
			risk := newRisk(r, r.Cost.Risk)
			c.GuardBand, c.PerPart, c.PerPartNow, c.AcceptAll, c.Risk = &r.Cost.Risk.GuardBand, &r.Cost.PerPart, &r.Cost.PerPartNow, &r.Cost.PerPartAcceptAll, &risk
			c.AtEdge, c.Edge = r.Cost.Edge != signal.NoEdge, map[signal.Edge]string{signal.InwardEdge: "inward", signal.AcceptAll: "accept-all"}[r.Cost.Edge]
		}
		d.Cost = &c
	}
	return writeJSON(w, d)
}

func newGauge(r *judge.Risks) gaugeJSON {
	g := gaugeJSON{Known: r.Curve == nil, Link: r.Gauge.Link.String(), Lapse: r.Gauge.Lapse}
	if r.Curve != nil {
		g.Confidence = &r.Curve.Options.Confidence
	}
	if r.Gauge.HasLower {
		g.Lower = &cutJSON{r.Gauge.LowerCut, r.Gauge.LowerSigma}
	}
	if r.Gauge.HasUpper {
		g.Upper = &cutJSON{r.Gauge.UpperCut, r.Gauge.UpperSigma}
	}
	return g
}

func newRisk(r *judge.Risks, x signal.Risk) riskJSON {
	out := riskJSON{
		Bad:               newSignal(x.Bad),
		Escape:            newSignal(x.Escape),
		FalseReject:       newSignal(x.FalseReject),
		Accepted:          newSignal(x.Accepted),
		BadAmongAccepted:  newSignal(x.BadAmongAccepted),
		GoodAmongRejected: newSignal(x.GoodAmongRejected),
	}
	of := func(has bool, e signal.Estimate) *estimateJSON {
		if !has {
			return nil
		}
		j := newSignal(e)
		return &j
	}
	out.EscapeLower, out.FalseRejectLower = of(r.Limits.HasLower, x.EscapeLower), of(r.Limits.HasLower, x.FalseRejectLower)
	out.EscapeUpper, out.FalseRejectUpper = of(r.Limits.HasUpper, x.EscapeUpper), of(r.Limits.HasUpper, x.FalseRejectUpper)
	return out
}
