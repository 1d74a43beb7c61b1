package judge

import (
	"errors"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

// Zone is the grey zone around the limits.
type Zone struct {
	Limits    signal.Limits
	Unanimous *signal.Unanimity
	Curves    *signal.Appraisers // pooled and by appraiser; nil without a curve
	NoCurve   error              // why there is none
}

var (
	errNoValues   = errors.New("the parts have no values: where the calls turn is not known")
	errNoLimits   = errors.New("no limit is given: set lower or upper")
	errZoneAccept = errors.New("no category is set as acceptable: the calls do not turn at a limit")
)

// NewZone computes the grey zone of a study. The error says why a study has
// none.
func NewZone(s *study.Study, opt signal.Options) (*Zone, error) {
	limits, err := zoneLimits(s)
	if err != nil {
		return nil, err
	}
	byAppraiser := AcceptedByAppraiser(s)
	z := &Zone{Limits: limits}
	if z.Unanimous, err = signal.Unanimous(pool(byAppraiser), limits, 0); err != nil {
		return nil, err
	}
	z.Curves, z.NoCurve = signal.FitAppraisers(byAppraiser, limits, opt)
	z.NoCurve = wayOut(z.NoCurve)
	return z, nil
}

// zoneLimits returns the limits of a study, and an error that says why it has
// no grey zone.
func zoneLimits(s *study.Study) (signal.Limits, error) {
	limits := signal.Limits{}
	if l := s.Settings.Lower; l != nil {
		limits.Lower, limits.HasLower = *l, true
	}
	if u := s.Settings.Upper; u != nil {
		limits.Upper, limits.HasUpper = *u, true
	}
	switch {
	case s.Values == nil:
		return limits, errNoValues
	case !limits.HasLower && !limits.HasUpper:
		return limits, errNoLimits
	case !s.Ratings.HasAccept():
		return limits, errZoneAccept
	}
	return limits, nil
}

// AcceptedByAppraiser counts, for each appraiser, the accepted calls on each
// part that has a value, all in the same order of parts.
func AcceptedByAppraiser(s *study.Study) [][]signal.Part {
	out := make([][]signal.Part, len(s.Appraisers))
	for a := range out {
		for part, name := range s.Parts {
			if !s.HasValue[part] {
				continue
			}
			p := signal.Part{Name: name, Value: s.Values[part]}
			for _, c := range s.Ratings.Calls(part, a) {
				if c == agreement.Missing {
					continue
				}
				p.Calls++
				if s.Ratings.Accepts(c) {
					p.Accepted++
				}
			}
			out[a] = append(out[a], p)
		}
	}
	return out
}

// pool adds the calls of all appraisers, part by part.
func pool(byAppraiser [][]signal.Part) []signal.Part {
	all := append([]signal.Part(nil), byAppraiser[0]...)
	for _, parts := range byAppraiser[1:] {
		for i, p := range parts {
			all[i].Accepted += p.Accepted
			all[i].Calls += p.Calls
		}
	}
	return all
}

// Scale returns how values of the study are written.
func (r *Result) Scale() format.Scale {
	set := r.Study.Settings
	var spreads []float64
	if r.Zone != nil && r.Zone.Curves != nil {
		for _, l := range []*signal.LimitFit{r.Zone.Curves.Pooled.Lower, r.Zone.Curves.Pooled.Upper} {
			if l.Known() {
				spreads = append(spreads, l.Sigma.Value)
			}
		}
	}
	return format.NewScale(set.Unit, []*float64{set.Lower, set.Upper}, spreads...)
}
