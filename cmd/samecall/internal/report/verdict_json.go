package report

import "samecall/cmd/samecall/internal/verdict"

type verdictJSON struct {
	Overall    string                 `json:"overall"`
	Evidence   string                 `json:"evidence,omitempty"`
	Reasons    []string               `json:"reasons"`
	Carry      []string               `json:"carry"`
	Appraisers []appraiserVerdictJSON `json:"appraisers"`
	Between    *criterionJSON         `json:"between,omitempty"`
	Causes     []string               `json:"causes"`
	CauseCodes []causeJSON            `json:"cause_codes"`
	Next       []string               `json:"next"`
	Cautions   []string               `json:"cautions"`
}

type appraiserVerdictJSON struct {
	Appraiser string          `json:"appraiser"`
	Verdict   string          `json:"verdict"`
	Evidence  string          `json:"evidence,omitempty"`
	Criteria  []criterionJSON `json:"criteria"`
}

type criterionJSON struct {
	Name        string   `json:"name"`
	Estimate    *float64 `json:"estimate,omitempty"`
	Met         string   `json:"met"`
	Evidence    string   `json:"evidence,omitempty"`
	Accept      float64  `json:"accept"`
	Conditional float64  `json:"conditional"`
	// Lower and Upper are one-sided limits, each for itself at the confidence.
	Lower     *float64 `json:"lower_one_sided,omitempty"`
	Upper     *float64 `json:"upper_one_sided,omitempty"`
	Kind      string   `json:"kind"`
	Parts     int      `json:"parts"`
	MoreParts int      `json:"more_parts,omitempty"`
	// NotCounted says why the verdict does not rest on the figure.
	NotCounted string `json:"not_counted,omitempty"`
	Reason     string `json:"reason,omitempty"`
}

type causeJSON struct {
	Code       string   `json:"code"`
	Appraiser  string   `json:"appraiser,omitempty"`
	Appraisers []string `json:"appraisers,omitempty"` // several who share it
}

func newVerdict(v *verdict.Verdict) verdictJSON {
	list := func(texts []string) []string { return append([]string{}, texts...) }
	out := verdictJSON{
		Overall:    v.Overall.String(),
		Evidence:   shownWord(v.Overall, v.Shown()),
		Reasons:    list(v.Reasons),
		Carry:      list(v.Carry),
		Appraisers: []appraiserVerdictJSON{},
		Causes:     []string{},
		CauseCodes: []causeJSON{},
		Next:       list(v.Next),
		Cautions:   list(v.Cautions),
	}
	for _, a := range v.Appraisers {
		row := appraiserVerdictJSON{Appraiser: a.Name, Verdict: a.Verdict.String(), Evidence: evidenceWord(a), Criteria: []criterionJSON{}}
		for _, c := range a.Criteria {
			row.Criteria = append(row.Criteria, newCriterionJSON(c))
		}
		out.Appraisers = append(out.Appraisers, row)
	}
	if v.Between != nil {
		c := newCriterionJSON(*v.Between)
		out.Between = &c
	}
	for _, c := range v.Causes {
		out.Causes = append(out.Causes, c.Text)
		code := causeJSON{Code: c.Code}
		for _, a := range c.Appraisers {
			code.Appraisers = append(code.Appraisers, v.Appraisers[a].Name)
		}
		if len(code.Appraisers) == 1 {
			code.Appraiser, code.Appraisers = code.Appraisers[0], nil
		}
		out.CauseCodes = append(out.CauseCodes, code)
	}
	return out
}

func newCriterionJSON(c verdict.Criterion) criterionJSON {
	out := criterionJSON{
		Name: c.Name, Met: c.Met.String(), Accept: c.Levels[0], Conditional: c.Levels[1],
		Kind: c.Kind, Parts: c.Parts, MoreParts: c.More, NotCounted: c.Aside,
	}
	if c.Estimate.Absent != nil {
		out.Reason = c.Estimate.Absent.Error()
		return out
	}
	out.Estimate, out.Evidence = &c.Estimate.Value, c.Evidence.String()
	if c.Estimate.Unbounded == nil {
		out.Lower, out.Upper = &c.Estimate.OneSided.Lower, &c.Estimate.OneSided.Upper
	}
	return out
}
