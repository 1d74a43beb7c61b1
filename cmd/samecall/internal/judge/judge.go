// Package judge puts a study through every method that applies to it.
package judge

import (
	"errors"
	"fmt"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

// Result is all that is known of a study.
type Result struct {
	Study     *study.Study
	Options   agreement.Options
	Agreement *agreement.Analysis
	Leans     []Lean // of each pair of appraisers; nil without accepting categories
	// Detection holds the detection indices of each appraiser; nil entries
	// where bad or good parts are lacking.
	Detection   []*signal.Detection
	NoDetection []error // why an entry is nil
	// Areas holds the area under each appraiser's ROC curve, where calls are
	// grades; nil elsewhere, and nil entries as in Detection.
	Areas    []*signal.Estimate
	NoArea   []error // why an entry is nil
	Zone     *Zone   // nil where the study has none
	NoZone   error   // why
	Warnings []Warning
}

// Warning is something to be said with the result; Code is fixed, for programs.
type Warning struct {
	Code, Text string
}

// Run computes the result of a study.
func Run(s *study.Study, opt agreement.Options, curve signal.Options) (*Result, error) {
	opt.Ordered = len(s.Settings.Order) > 0
	opt.Names = s.Appraisers
	a, err := agreement.Analyse(s.Ratings, opt)
	if err != nil {
		return nil, err
	}
	r := &Result{Study: s, Options: opt, Agreement: a, Leans: leans(s.Ratings, a)}
	for _, n := range s.Notes {
		r.Warnings = append(r.Warnings, Warning{n.Code, n.Text})
	}
	if n, ok := s.UnmatchedTrials(); ok && opt.Pairing == agreement.Matched {
		r.Warnings = append(r.Warnings, Warning{n.Code, n.Text})
	}
	if w, ok := missingCalls(s.Ratings); ok {
		r.Warnings = append(r.Warnings, w)
	}
	for _, w := range a.Warnings {
		r.Warnings = append(r.Warnings, Warning{w.Code, w.Text})
	}
	r.Detection, r.NoDetection = detection(s.Ratings, a.Patterns.List, opt.Confidence)
	if opt.Ordered && len(s.Categories) > 2 {
		r.Areas, r.NoArea = areas(s.Ratings, opt.Confidence)
	}
	curve.Confidence = opt.Confidence
	r.Zone, r.NoZone = NewZone(s, curve)
	return r, nil
}

// manyMissing is the share of calls whose lack is told. Our own choice, no source.
const manyMissing = 0.05

func missingCalls(r *agreement.Ratings) (Warning, bool) {
	made, missing := r.Count()
	share := float64(missing) / float64(max(1, made+missing))
	if share <= manyMissing {
		return Warning{}, false
	}
	return Warning{"missing_calls", fmt.Sprintf(
		"%s of %s calls are missing (%s). Every figure rests on the calls that were made; a call left blank is often one that was hard to make.",
		format.Count(missing), format.Count(made+missing), format.Percent(share))}, true
}

// ErrNoReference is why a study without a reference has no errors to count.
var ErrNoReference = errors.New("no part has a reference: nothing is known to be right or wrong")

func detection(r *agreement.Ratings, patterns []agreement.Pattern, confidence float64) (all []*signal.Detection, none []error) {
	all, none = make([]*signal.Detection, r.Appraisers()), make([]error, r.Appraisers())
	if !r.HasReference() || !r.HasAccept() {
		return all, none
	}
	for a := range all {
		var bad, good []signal.Tally
		for _, p := range patterns {
			if p.Reference == agreement.Missing {
				continue
			}
			t := signal.Tally{Parts: p.Parts}
			for _, c := range r.CallsIn(p.Row, a) {
				if c == agreement.Missing {
					continue
				}
				t.Calls++
				if !r.Accepts(c) {
					t.Rejected++
				}
			}
			if r.Accepts(p.Reference) {
				good = append(good, t)
			} else {
				bad = append(bad, t)
			}
		}
		d, err := signal.DetectByPart(bad, good, confidence)
		if none[a] = err; err == nil {
			all[a] = &d
		}
	}
	return all, none
}

// areas takes the place of a category in the order, from best to worst, as
// its grade.
func areas(r *agreement.Ratings, confidence float64) (all []*signal.Estimate, none []error) {
	all, none = make([]*signal.Estimate, r.Appraisers()), make([]error, r.Appraisers())
	if !r.HasReference() || !r.HasAccept() {
		return all, none
	}
	for a := range all {
		var parts []signal.Graded
		for part := range r.Parts() {
			ref := r.Reference(part)
			if ref == agreement.Missing {
				continue
			}
			g := signal.Graded{Bad: !r.Accepts(ref)}
			for _, c := range r.Calls(part, a) {
				if c != agreement.Missing {
					g.Grades = append(g.Grades, float64(c))
				}
			}
			parts = append(parts, g)
		}
		e, err := signal.AreaUnderROC(parts, confidence)
		if none[a] = err; err == nil {
			all[a] = &e
		}
	}
	return all, none
}
