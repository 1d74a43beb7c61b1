package report

import (
	"io"

	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

// ShortSchema names the contract of the JSON of short (docs/json.md).
const ShortSchema = "samecall/short/1"

type shortDocument struct {
	Schema        string             `json:"schema"`
	Title         string             `json:"title,omitempty"`
	Input         inputJSON          `json:"input"`
	Limit         float64            `json:"limit"`
	Side          string             `json:"side"`
	Unit          string             `json:"unit,omitempty"`
	Preconditions []preconditionJSON `json:"preconditions"`
	AllMet        bool               `json:"all_met"`
	Analytic      analyticJSON       `json:"analytic"`
	Likelihood    likelihoodJSON     `json:"maximum_likelihood"`
	Parts         []shortPartJSON    `json:"parts"`
	Conclusion    []string           `json:"conclusion"`
	Cautions      []string           `json:"cautions"`
}

type preconditionJSON struct {
	Name string `json:"name"`
	Need int    `json:"need"`
	Have int    `json:"have"`
	Met  bool   `json:"met"`
}

type analyticJSON struct {
	Reason        string   `json:"reason,omitempty"`
	Intercept     *float64 `json:"intercept,omitempty"`
	Slope         *float64 `json:"slope,omitempty"`
	Cut           *float64 `json:"cut,omitempty"`
	Sigma         *float64 `json:"sigma,omitempty"`
	Bias          *float64 `json:"bias,omitempty"`
	Repeatability *float64 `json:"repeatability,omitempty"`
	T             *float64 `json:"t,omitempty"`
	Critical      float64  `json:"t_critical"`
	Significant   *bool    `json:"significant,omitempty"`
}

type likelihoodJSON struct {
	Reason        string          `json:"reason,omitempty"`
	Link          string          `json:"link,omitempty"`
	LogLikelihood *float64        `json:"loglik,omitempty"`
	Limit         *curveLimitJSON `json:"curve,omitempty"`
	Bias          *estimateJSON   `json:"bias,omitempty"`
	LackOfFit     *lackOfFitJSON  `json:"lack_of_fit,omitempty"`
}

type shortPartJSON struct {
	Value    float64  `json:"value"`
	Accepted int      `json:"accepted"`
	Trials   int      `json:"trials"`
	Adjusted float64  `json:"adjusted"`
	Z        float64  `json:"z"`
	Fitted   *float64 `json:"fitted,omitempty"`
	Used     bool     `json:"used"`
}

// ShortJSON writes the analysis of a short study for programs.
func ShortJSON(w io.Writer, st SmallStudy, s *signal.ShortStudy) error {
	d := shortDocument{
		Schema: ShortSchema, Title: st.Title, Input: inputJSON(st.Input), Limit: s.Limit, Side: s.Side.String(), Unit: st.Unit,
		Preconditions: []preconditionJSON{}, AllMet: len(failed(s)) == 0,
		Analytic:   analyticJSON{Critical: s.Critical},
		Parts:      []shortPartJSON{},
		Conclusion: shortConclusion(st, s),
		Cautions:   shortCautions,
	}
	for _, c := range s.Preconditions {
		d.Preconditions = append(d.Preconditions, preconditionJSON(c))
	}
	if s.HasLine {
		d.Analytic = analyticJSON{Intercept: &s.Intercept, Slope: &s.Slope, Cut: &s.Cut, Sigma: &s.Sigma, Bias: &s.Bias,
			Repeatability: &s.Repeatability, T: &s.T, Critical: s.Critical, Significant: &s.Significant}
	} else {
		d.Analytic.Reason = s.Why
	}
	d.Likelihood = newLikelihood(s.Fit, s.FitError, s.Side)
	if l := shortFit(s); l != nil {
		bias := newSignal(outward(s.Side, l.Offset))
		d.Likelihood.Bias = &bias
	}
	for _, p := range s.Points {
		row := shortPartJSON{Value: p.Value, Accepted: p.Accepted, Trials: p.Trials, Adjusted: p.Adjusted, Z: p.Z, Used: p.Used}
		if shortFit(s) != nil {
			share := s.Fit.Accept(p.Value)
			row.Fitted = &share
		}
		d.Parts = append(d.Parts, row)
	}
	return writeJSON(w, d)
}

func newLikelihood(c *signal.Curve, err error, side signal.Side) likelihoodJSON {
	if c == nil {
		return likelihoodJSON{Reason: err.Error()}
	}
	l := c.Lower
	if side == signal.Upper {
		l = c.Upper
	}
	out := likelihoodJSON{Link: c.Options.Link.String(), LogLikelihood: &c.LogLikelihood, Limit: newCurveLimit(l)}
	if f := c.LackOfFit; f.Tested {
		out.LackOfFit = &lackOfFitJSON{f.X2, f.DF, f.P, f.Factor, f.Applied}
	}
	return out
}

// FlawSchema names the contract of the JSON of flaw (docs/json.md).
const FlawSchema = "samecall/flaw/1"

type flawDocument struct {
	Schema     string         `json:"schema"`
	Title      string         `json:"title,omitempty"`
	Input      inputJSON      `json:"input"`
	Unit       string         `json:"unit,omitempty"`
	Confidence float64        `json:"confidence"`
	Flaws      int            `json:"flaws"`
	Looks      int            `json:"looks"`
	Found      int            `json:"found"`
	A50        estimateJSON   `json:"a50"`
	A90        estimateJSON   `json:"a90"`
	A9095      estimateJSON   `json:"a90_95"`
	Sigma      estimateJSON   `json:"sigma_log"`
	Likelihood likelihoodJSON `json:"maximum_likelihood"`
	Sizes      []flawSizeJSON `json:"sizes"`
	Outliers   []flawSizeJSON `json:"outliers"`
	Notes      []string       `json:"notes"`
	Assumes    []string       `json:"assumes"`
	Cautions   []string       `json:"cautions"`
}

type flawSizeJSON struct {
	Flaw   string  `json:"flaw,omitempty"`
	Size   float64 `json:"size"`
	Found  int     `json:"found"`
	Looks  int     `json:"looks"`
	Fitted float64 `json:"fitted"`
}

// FlawJSON writes a hit/miss study for programs.
func FlawJSON(w io.Writer, st SmallStudy, rows []study.Tally, h *signal.HitMiss) error {
	c := h.Curve
	d := flawDocument{
		Schema: FlawSchema, Title: st.Title, Input: inputJSON(st.Input), Unit: st.Unit, Confidence: c.Options.Confidence,
		Flaws: len(c.Parts), A50: newSignal(h.A50), A90: newSignal(h.A90), A9095: estimateJSON{Reason: whyNoA9095(st, h)},
		Sigma: newSignal(c.Lower.Sigma), Likelihood: newLikelihood(c, nil, signal.Lower),
		Sizes: []flawSizeJSON{}, Outliers: []flawSizeJSON{}, Notes: append([]string{}, flawNotes(st, rows, h)...), Assumes: flawAssumes, Cautions: flawCautions,
	}
	// The curve runs over the logarithm of the size; its cuts there are a50.
	d.Likelihood.Limit = nil
	if h.HasA9095 {
		d.A9095.Estimate, d.A9095.Method = &h.A9095, flawBound
	}
	for _, p := range flawSizes(rows, h) {
		d.Looks += p.Looks
		d.Found += p.Found
		d.Sizes = append(d.Sizes, p)
	}
	for _, i := range c.Outliers {
		p := c.Parts[i]
		d.Outliers = append(d.Outliers, flawSizeJSON{p.Name, rows[p.Row].Value, p.Accepted, p.Calls, p.Fitted})
	}
	return writeJSON(w, d)
}
