package verdict

import (
	"cmp"
	"slices"

	"samecall/cmd/samecall/internal/judge"
)

// Everyone stands for all appraisers where one is asked for.
const Everyone = -1

// Cause is something behind the errors, read from their pattern, with the
// figures that it rests on.
type Cause struct {
	Code       string // fixed, for programs; docs/verdict.md lists them
	Appraisers []int  // whose it is; nil: everyone's
	Text       string
	Do         string // what to do about it

	outside bool // a cut lies outside its limit: bad parts are accepted
}

// of reports whether the cause is an appraiser's own, or one of everyone.
func (c Cause) of(appraiser int) bool {
	return c.Appraisers == nil || slices.Contains(c.Appraisers, appraiser)
}

// Codes of the causes.
const (
	codeAlike        = "all_alike"            // every call of everybody is the same
	codeReversed     = "reversed"             // nearly every call is wrong
	codeInconsistent = "inconsistent"         // does not repeat its own calls
	codeScattered    = "scattered"            // calls made without regard to the value
	codeFar          = "far_errors"           // wrong calls where nobody should be in doubt
	codeGauge        = "gauge_shifted"        // all cut beside the limit alike
	codeCut          = "appraiser_shifted"    // one appraiser cuts beside the limit
	codeStandard     = "standard_shifted"     // all are wrong about the same parts, every time
	codeSteady       = "consistently_wrong"   // one appraiser is wrong about the same parts, every time
	codeApart        = "consistent_different" // each repeats its calls, and they differ
	codeKinds        = "kinds_confused"       // two kinds of category are taken for each other
	codeGrades       = "grades_lean"          // grades too strict or too lenient
	codeWide         = "wide_grey_zone"       // nothing but the width of the grey zone
	codeNear         = "near_limits"          // the same, and the zone is not wide
)

// finder looks for causes.
type finder struct {
	*judge.Result
	levels   map[string]Levels
	missed   bool      // some figure misses its accept level
	patterns []pattern // of the wrong calls of each appraiser; nil without a reference
	together pattern   // of those of all
	far      []farPart // parts that the acceptance curve cannot explain
	found    []Cause
}

// causes applies the rules of docs/verdict.md in turn. A later rule sees what
// was found before, so that one fault gets one cause.
func causes(r *judge.Result, levels map[string]Levels, missed bool) []Cause {
	f := &finder{Result: r, levels: levels, missed: missed}
	f.far = farParts(r)
	f.patterns, f.together = patterns(r, f.far)
	if f.found = uniform(f); len(f.found) > 0 {
		return f.found
	}
	for _, rule := range []func(*finder) []Cause{
		confusedKinds, leaningGrades, inconsistent, scattered, farErrors, shiftedCut, steadyErrors, apart, nearLimits,
	} {
		f.found = append(f.found, rule(f)...)
	}
	alsoInconsistent(f)
	// Told in the order in which something is to be done about them.
	slices.SortStableFunc(f.found, func(a, b Cause) int { return cmp.Compare(a.rank(), b.rank()) })
	return f.found
}

// has reports whether a cause with one of the codes was found for an
// appraiser or for everyone.
func (f *finder) has(appraiser int, codes ...string) bool { return has(f.found, appraiser, codes...) }

func has(found []Cause, appraiser int, codes ...string) bool {
	return slices.ContainsFunc(found, func(c Cause) bool { return c.of(appraiser) && slices.Contains(codes, c.Code) })
}

// name is an appraiser's name.
func (f *finder) name(a int) string { return f.Study.Appraisers[a] }

// several reports whether the study has more than one appraiser.
func (f *finder) several() bool { return len(f.Study.Appraisers) > 1 }

// rank is 0 of a cause that comes before people, 1 of the others.
func (c Cause) rank() int {
	if c.beforePeople() {
		return 0
	}
	return 1
}

// beforePeople reports whether what to do about a cause comes before anything
// with people: it begins at the gauge, or at the records.
func (c Cause) beforePeople() bool {
	return slices.Contains([]string{codeGauge, codeCut, codeAlike, codeReversed}, c.Code)
}
