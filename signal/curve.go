package signal

import (
	"errors"
	"fmt"
	"math"
)

// Options says how an acceptance curve is fitted. The zero value is the usual
// fit: probit, one σ for both limits, 95 % intervals, lack of fit widening
// them where it is found.
type Options struct {
	Link       Link
	TwoSigmas  bool    // a σ for each limit instead of one for both
	Confidence float64 // of the intervals; 0 means 0.95
	Lapse      bool    // estimate the share of calls made at random too
	LackOfFit  LackOfFitRule
	// SkipIntervals leaves out profile-likelihood intervals, the test of equal
	// σ and the search for outliers, for callers who fit many times.
	SkipIntervals bool
}

func (o Options) check() (Options, error) {
	if o.Confidence == 0 {
		o.Confidence = 0.95
	}
	if o.Link != Probit && o.Link != Logit {
		return o, fmt.Errorf("link %d: want Probit or Logit", int(o.Link))
	}
	if o.LackOfFit < WidenIfFound || o.LackOfFit > WidenNever {
		return o, fmt.Errorf("lack-of-fit rule %d: want WidenIfFound, WidenAlways or WidenNever", int(o.LackOfFit))
	}
	return o, checkConfidence(o.Confidence)
}

// Status says how much the calls could tell about a limit.
type Status int

const (
	// Fitted: rejected and accepted calls overlap; maximum likelihood.
	Fitted Status = iota
	// Separated: no part at the limit is mixed, and every rejected one lies
	// beyond every accepted one. The grey zone is narrower than the gap between
	// the neighbouring parts; cut and σ are bias-reduced (Firth 1993).
	Separated
	// QuasiSeparated: as Separated, but calls are mixed at one single value.
	QuasiSeparated
	// OneSided: calls do not turn at this limit: every part on its side was
	// accepted, or they turn the wrong way. Nothing but a bound can be told.
	OneSided
)

func (s Status) String() string {
	return nameOf(s, "fitted", "separated", "quasi-separated", "one-sided")
}

// Gap is what a limit without mixed parts shows: the neighbouring values
// between which the calls turn.
type Gap struct {
	Reject, Accept       float64 // the always-rejected and the always-accepted neighbour
	HasReject, HasAccept bool
	Mixed                float64 // the one value where calls were mixed
	HasMixed             bool
}

// LimitFit is the acceptance curve at one limit. Cut, Sigma and what follows
// are meaningful unless Status is OneSided; then Cut may carry one bound.
type LimitFit struct {
	Side     Side
	Limit    float64
	HasLimit bool
	Status   Status
	Why      string // the reason, if Status is not Fitted

	Cut    Estimate // the value accepted half of the time
	Offset Estimate // Cut minus Limit
	Sigma  Estimate // standard deviation of the error behind the calls

	// The grey zone, from 0.5 to 99.5 % acceptance: 5.15 σ with the probit link,
	// 5.84 σ with the logit link.
	From, To float64
	Width    Estimate
	Share    Estimate // Width over the tolerance; meaningful if HasShare
	HasShare bool

	AtLimit    Estimate // probability of acceptance at the limit itself
	HasAtLimit bool

	Gap *Gap // unless Status is Fitted
}

// Known tells whether the limit has a cut and a σ.
func (l *LimitFit) Known() bool { return l != nil && l.Status != OneSided }

// Curve is a fitted acceptance curve.
type Curve struct {
	Options Options
	Limits  Limits
	Lower   *LimitFit // nil if there is no such limit
	Upper   *LimitFit

	Lapse    Estimate // share of calls made at random; meaningful if HasLapse
	HasLapse bool
	// LapseGain is the log-likelihood that a share of calls made at random adds,
	// if Options.Lapse asks for it: also where σ is not determined besides one, so
	// that HasLapse is false.
	LapseGain float64

	// LogLikelihood is that of the grouped binomial counts, with their
	// coefficients; CallLogLikelihood that of the single calls, without.
	LogLikelihood     float64
	CallLogLikelihood float64
	Parameters        int

	LackOfFit LackOfFit
	SameSigma *Test // same σ at both limits; nil if it does not apply

	Parts  []PartFit // in the order given; rows of one name together
	Calls  int
	Params [5]Param // lower cut, lower log σ, upper cut, upper log σ, logit lapse

	// Outliers lists, by index into Parts, parts whose calls the curve through
	// the others cannot explain; Without is the curve without them.
	Outliers []int
	Without  *Curve

	Warnings []error

	local              [locals]float64         // cut and log σ of each limit, logit ε, in scaled units
	known              [locals]bool            // which of them the curve has
	cov                [locals][locals]float64 // their covariance by the observed information, not widened
	hasCov             [locals]bool
	expected           [locals][locals]float64 // covariance by the expected information
	sc                 scaling
	free               int     // parameters of maximum likelihood
	blockLogLikelihood float64 // of the last such block, without lapses
	blocks             []*block
	factor             float64
	crit               float64 // cut-off of twice the log-likelihood for the intervals
}

// Param is one fitted parameter on the scale where its likelihood is nearest
// to normal, with standard errors before any widening for lack of fit.
type Param struct {
	Name       string
	Value      float64
	SE         float64 // by the observed information; 0 if there is none
	ExpectedSE float64 // by the expected (Fisher) information
	Has        bool
}

// NotConvergedError says that a fit did not reach a verified maximum of the
// likelihood. No estimate is returned with it.
type NotConvergedError struct {
	What   string // which fit
	Reason string
	// TwoSigmas tells that each limit was to have a σ of its own: one for both
	// may fit.
	TwoSigmas bool
}

func (e *NotConvergedError) Error() string {
	text := fmt.Sprintf("%s did not converge: %s", e.What, e.Reason)
	if e.TwoSigmas {
		text += "; one σ for both limits may fit"
	}
	return text
}

// ErrNoTurn is wrapped by the error of a fit where calls turn at no limit.
var ErrNoTurn = errors.New("the calls do not turn from reject to accept at any limit")

// Fit fits the acceptance curve
//
//	P(accept | x) = F((x−m_L)/σ_L) − F((x−m_U)/σ_U)
//
// to parts by maximum likelihood; with one limit, the other factor falls away.
// Intervals are profile-likelihood. Where no part at a limit is mixed
// (complete separation) or only one value is (quasi-complete), that limit is
// fitted by itself with Firth's bias reduction and says so in its Status.
//
// It returns an error if a value or count cannot be, if there are no calls, if
// all parts have one value, if the calls turn at no limit (ErrNoTurn), or if
// the maximum of the likelihood could not be verified (NotConvergedError).
func Fit(parts []Part, limits Limits, options Options) (*Curve, error) {
	if err := limits.check(); err != nil {
		return nil, err
	}
	d, err := prepare(parts, options)
	if err != nil {
		return nil, err
	}
	d.limits = limits
	d.has = [2]bool{limits.HasLower, limits.HasUpper}
	return d.fit(!d.options.SkipIntervals)
}

// side returns the fit at a limit, or nil.
func (c *Curve) side(k int) *LimitFit {
	if k == 0 {
		return c.Lower
	}
	return c.Upper
}

// each calls f for each limit that the curve has.
func (c *Curve) each(f func(l *LimitFit)) {
	for k := range 2 {
		if l := c.side(k); l != nil {
			f(l)
		}
	}
}

// Accept returns the fitted probability that a part of value x is accepted.
// A limit at which calls do not turn is taken to reject nothing. It is NaN where
// x is.
func (c *Curve) Accept(x float64) float64 {
	p, _ := c.probability(c.sc.in(x))
	return p
}

// probability returns P and Q = 1 − P at a scaled value.
func (c *Curve) probability(t float64) (p, q float64) {
	at := c.at()
	var tm term
	tm.at(c.Options.Link, at.z(t), at.has, 0, 0, c.epsilon())
	return math.Min(1, math.Max(0, tm.p)), math.Min(1, math.Max(0, tm.q))
}

func (c *Curve) epsilon() float64 {
	if c.known[logitE] {
		return logistic(c.local[logitE])
	}
	return 0
}

func (c *Curve) at() curveAt {
	var a curveAt
	for k := range 2 {
		if c.known[2*k] {
			a.has[k], a.cut[k], a.inverse[k] = true, c.local[2*k], math.Exp(-c.local[2*k+1])
		}
	}
	return a
}

// warn adds a warning.
func (c *Curve) warn(code WarningCode, format string, args ...any) {
	c.Warnings = append(c.Warnings, Warning{code, fmt.Sprintf(format, args...)})
}
