package verdict

import (
	"samecall/agreement"
	"samecall/cmd/samecall/internal/judge"
)

// Everyone stands for all appraisers in a Cause.
const Everyone = -1

// Cause is something behind the errors, read from their pattern, with the
// figures that it rests on.
type Cause struct {
	Code      string // fixed, for programs; docs/verdict.md lists them
	Appraiser int    // whose it is, or Everyone
	Text      string
	Do        string // what to do about it
}

// Thresholds of the rules in docs/verdict.md. Our own choice, no source.
const (
	// An offset counts when it is at least this share of σ: less is lost in
	// the grey zone.
	offsetOfSigma = 0.5
	// A test between appraisers counts below this probability.
	different = 0.05
	// Wrong calls count as consistent when at least this share of them fell
	// on parts that were wrong every time, on two parts or more.
	steadyShare = 0.5
	steadyParts = 2
	// Appraisers are consistent but different when kappa within is that much
	// above kappa between.
	kappaGap = 0.1
	// Two kinds are confused when so many calls take one for the other, a
	// share of the calls on parts of either kind and of all wrong calls.
	confusedCalls = 4
	confusedRate  = 0.2
	confusedShare = 0.5
	// Grades lean when this share of all calls, and of the wrong ones, goes
	// wrong one way.
	leaningRate  = 0.1
	leaningShare = 0.8
	// The grey zone is wide above this share of the tolerance (common
	// practice for %GRR, no source).
	wideZone = 0.30
)

// A rule looks for one kind of cause.
type rule func(r *judge.Result, p []pattern, levels map[string]Levels) []Cause

// causes applies the rules in turn. A later rule sees what was found before,
// so that one fault gets one cause.
func causes(r *judge.Result, levels map[string]Levels) []Cause {
	p := patterns(r)
	var found []Cause
	for _, rule := range []rule{inconsistent, farErrors, shiftedCut, confusedKinds, leaningGrades} {
		found = append(found, rule(r, p, levels)...)
	}
	if !has(found, Everyone, codeGauge, codeStandard, codeKinds, codeGrades) {
		found = append(found, steadyErrors(r, p, found)...)
	}
	if len(found) == 0 {
		found = append(found, apart(r, levels)...)
	}
	if len(found) == 0 {
		found = append(found, nearLimits(r, p, levels)...)
	}
	return found
}

// has reports whether a cause with one of the codes was found for an
// appraiser, or for anybody if Everyone is asked for.
func has(found []Cause, appraiser int, codes ...string) bool {
	for _, c := range found {
		if appraiser != Everyone && c.Appraiser != appraiser && c.Appraiser != Everyone {
			continue
		}
		for _, code := range codes {
			if c.Code == code {
				return true
			}
		}
	}
	return false
}

// pattern is how the wrong calls of one appraiser fall.
type pattern struct {
	wrong        int   // wrong calls
	misses       int   // bad parts accepted, among them
	falseAlarms  int   // good parts rejected
	steady       []int // parts called twice or more and wrong every time
	steadyCalls  int   // wrong calls on those
	steadyMisses int   // misses on those
}

// patterns returns the pattern of each appraiser; nil without a reference.
func patterns(r *judge.Result) []pattern {
	if r.Agreement.All == nil {
		return nil
	}
	s := r.Study.Ratings
	out := make([]pattern, s.Appraisers())
	for a := range out {
		p := &out[a]
		for part := range s.Parts() {
			ref := s.Reference(part)
			if ref == agreement.Missing {
				continue
			}
			calls, wrong, misses := 0, 0, 0
			for _, c := range s.Calls(part, a) {
				if c == agreement.Missing {
					continue
				}
				calls++
				if c == ref {
					continue
				}
				wrong++
				switch {
				case s.Accepts(c) && !s.Accepts(ref):
					misses++
				case s.Accepts(ref) && !s.Accepts(c):
					p.falseAlarms++
				}
			}
			p.wrong += wrong
			p.misses += misses
			if calls >= 2 && wrong == calls {
				p.steady = append(p.steady, part)
				p.steadyCalls += wrong
				p.steadyMisses += misses
			}
		}
	}
	return out
}
