package report

import (
	"io"

	"samecall/agreement"
	"samecall/agreement/interval"
	"samecall/cmd/samecall/internal/judge"
	"samecall/signal"
)

// Schema names the contract of the JSON (docs/json.md).
const Schema = "samecall/judge/1"

// manyNames is how many named parts are too many to be read: then the JSON is
// written without line breaks, which takes a third of the time.
const manyNames = 10_000

// JSON writes a result for programs.
func JSON(w io.Writer, r *Record) error {
	d := newDocument(r)
	return encode(w, d, d.names() <= manyNames)
}

// names returns how many parts are named in all lists together.
func (d document) names() int {
	n := 0
	for _, w := range d.Within {
		n += len(w.Mixed)
	}
	for _, a := range d.Against.Appraisers {
		n += len(a.Mixed) + len(a.WrongEveryTime)
	}
	return n
}

type document struct {
	Schema   string        `json:"schema"`
	Study    studyJSON     `json:"study"`
	Settings settingsJSON  `json:"settings"`
	Within   []withinJSON  `json:"within"`
	Between  betweenJSON   `json:"between"`
	Against  againstJSON   `json:"against"`
	Zone     zoneJSON      `json:"zone"`
	Verdict  verdictJSON   `json:"verdict"`
	Warnings []warningJSON `json:"warnings"`
}

type studyJSON struct {
	Title          string      `json:"title"`
	Characteristic string      `json:"characteristic,omitempty"`
	Gauge          string      `json:"gauge,omitempty"`
	Parts          int         `json:"parts"`
	BadParts       *int        `json:"bad_parts,omitempty"`
	GoodParts      *int        `json:"good_parts,omitempty"`
	Appraisers     []string    `json:"appraisers"`
	Trials         int         `json:"trials"`
	TrialNumbers   [][]int     `json:"trial_numbers"`
	Calls          int         `json:"calls"`
	Missing        int         `json:"missing"`
	Categories     []string    `json:"categories"`
	Accept         []string    `json:"accept"`
	Ordered        bool        `json:"ordered"`
	Reference      string      `json:"reference"`
	DerivedParts   int         `json:"derived_parts,omitempty"`
	Limits         limitsJSON  `json:"limits"`
	Inputs         []inputJSON `json:"inputs"`
}

type limitsJSON struct {
	Lower *float64 `json:"lower,omitempty"`
	Upper *float64 `json:"upper,omitempty"`
	Unit  string   `json:"unit,omitempty"`
}

type inputJSON struct {
	File   string `json:"file"`
	SHA256 string `json:"sha256"`
	Sheet  string `json:"sheet,omitempty"`
}

type settingsJSON struct {
	Confidence float64 `json:"confidence"`
	Resamples  int     `json:"resamples"`
	Seed       uint64  `json:"seed"`
	Pairing    string  `json:"pairing"`
}

type warningJSON struct {
	Code string `json:"code"`
	Text string `json:"text"`
}

// estimateJSON is E of the contract. A figure that cannot be computed has a
// reason and nothing else; one without an interval has a reason beside it.
type estimateJSON struct {
	Estimate      *float64   `json:"estimate,omitempty"`
	Lower         *float64   `json:"lower,omitempty"`
	Upper         *float64   `json:"upper,omitempty"`
	Method        string     `json:"method,omitempty"`
	StandardError *float64   `json:"standard_error,omitempty"`
	Independent   *rangeJSON `json:"independent,omitempty"`
	Reason        string     `json:"reason,omitempty"`
}

type rangeJSON struct {
	Lower float64 `json:"lower"`
	Upper float64 `json:"upper"`
}

// shareJSON is S of the contract.
type shareJSON struct {
	estimateJSON
	Count     int      `json:"count"`
	Of        int      `json:"of"`
	Effective *float64 `json:"effective,omitempty"`
}

type withinJSON struct {
	Appraiser string       `json:"appraiser"`
	Share     shareJSON    `json:"share"`
	Kappa     estimateJSON `json:"kappa"`
	Mixed     []string     `json:"mixed"`
}

type betweenJSON struct {
	Share               shareJSON      `json:"share"`
	Agreement           *float64       `json:"agreement,omitempty"`
	Pairs               []pairJSON     `json:"pairs"`
	Fleiss              estimateJSON   `json:"fleiss"`
	Categories          []categoryJSON `json:"categories"`
	SameAppraiser       estimateJSON   `json:"same_appraiser"`
	DifferentAppraisers estimateJSON   `json:"different_appraisers"`
	AC1                 estimateJSON   `json:"ac1"`
	Alpha               estimateJSON   `json:"alpha"`
}

type pairJSON struct {
	Appraisers [2]string       `json:"appraisers"`
	Table      agreement.Table `json:"table"`
	Agreement  *float64        `json:"agreement,omitempty"`
	Share      shareJSON       `json:"share"`
	Kappa      estimateJSON    `json:"kappa"`
	weightedJSON
	Lean *leanJSON `json:"rejects,omitempty"`
}

// leanJSON is who of two appraisers rejects more.
type leanJSON struct {
	Pairs      int       `json:"pairs"`
	First      int       `json:"first"`
	Second     int       `json:"second"`
	OnlyFirst  int       `json:"only_first"`
	OnlySecond int       `json:"only_second"`
	McNemar    *testJSON `json:"mcnemar,omitempty"`
}

// weightedJSON holds the kappas of ordered categories.
type weightedJSON struct {
	Linear    *estimateJSON `json:"kappa_linear,omitempty"`
	Quadratic *estimateJSON `json:"kappa_quadratic,omitempty"`
}

type categoryJSON struct {
	Category string       `json:"category"`
	Kappa    estimateJSON `json:"kappa"`
}

type againstJSON struct {
	Reason     string                 `json:"reason,omitempty"`
	Appraisers []againstAppraiserJSON `json:"appraisers"`
	All        *againstAllJSON        `json:"all,omitempty"`
}

type againstAllJSON struct {
	Effectiveness shareJSON       `json:"effectiveness"`
	Table         agreement.Table `json:"table"`
	Kappa         estimateJSON    `json:"kappa"`
	weightedJSON
	Categories     []categoryJSON `json:"categories,omitempty"`
	Miss           shareJSON      `json:"miss"`
	FalseAlarm     shareJSON      `json:"false_alarm"`
	WrongEveryTime []string       `json:"wrong_every_time"`
	Mixed          []string       `json:"mixed"`
	Tests          testsJSON      `json:"tests"`
}

type againstAppraiserJSON struct {
	Appraiser string `json:"appraiser"`
	againstAllJSON
	DPrime            *float64      `json:"d_prime,omitempty"`
	Criterion         *float64      `json:"criterion,omitempty"`
	DPrimeInterval    *estimateJSON `json:"d_prime_interval,omitempty"`
	CriterionInterval *estimateJSON `json:"criterion_interval,omitempty"`
	Reason            string        `json:"reason,omitempty"` // why there are none of these
	ROCArea           *estimateJSON `json:"roc_area,omitempty"`
}

// testsJSON holds the tests of direction; absent ones had nothing to test.
type testsJSON struct {
	McNemar       *testJSON `json:"mcnemar,omitempty"`
	Bowker        *testJSON `json:"bowker,omitempty"`
	StuartMaxwell *testJSON `json:"stuart_maxwell,omitempty"`
}

type testJSON struct {
	Statistic float64 `json:"statistic"`
	DF        int     `json:"df,omitempty"`
	P         float64 `json:"p"`
}

func newDocument(r *Record) document {
	d := document{
		Schema:   Schema,
		Study:    newStudy(r),
		Settings: settingsJSON{r.Options.Confidence, r.Options.Resamples, r.Options.Seed, r.Options.Pairing.String()},
		Between:  newBetween(r),
		Within:   []withinJSON{},
		Warnings: []warningJSON{},
	}
	for a, w := range r.Agreement.Within {
		d.Within = append(d.Within, withinJSON{r.Study.Appraisers[a], newShare(w.Share), newEstimate(w.Kappa), parts(r, w.Mixed)})
	}
	d.Against.Appraisers = []againstAppraiserJSON{}
	if r.Agreement.All == nil {
		d.Against.Reason = judge.ErrNoReference.Error()
	} else {
		for a := range r.Agreement.Against {
			d.Against.Appraisers = append(d.Against.Appraisers, newAgainstAppraiser(r, a))
		}
		all := newAgainst(r, r.Agreement.All)
		d.Against.All = &all
	}
	d.Zone = newZone(r)
	d.Verdict = newVerdict(r.Verdict)
	for _, w := range r.Warnings {
		d.Warnings = append(d.Warnings, warningJSON(w))
	}
	return d
}

func newStudy(r *Record) studyJSON {
	s := r.Study
	out := studyJSON{
		Title:          s.Settings.Title,
		Characteristic: s.Settings.Characteristic,
		Gauge:          s.Settings.Gauge,
		Parts:          len(s.Parts),
		Appraisers:     s.Appraisers,
		TrialNumbers:   s.TrialNames,
		Categories:     s.Categories,
		Accept:         []string{},
		Ordered:        r.Options.Ordered,
		Reference:      s.Reference.String(),
		DerivedParts:   s.DerivedParts,
		Limits:         limitsJSON{s.Settings.Lower, s.Settings.Upper, s.Settings.Unit},
		Inputs:         []inputJSON{},
	}
	out.Calls, out.Missing = s.Ratings.Count()
	for a := range s.Appraisers {
		out.Trials = max(out.Trials, s.Ratings.Trials(a))
	}
	for k, name := range s.Categories {
		if s.Ratings.Accepts(agreement.Category(k)) {
			out.Accept = append(out.Accept, name)
		}
	}
	if s.Ratings.HasReference() && s.Ratings.HasAccept() {
		bad, good := 0, 0
		for part := range s.Parts {
			switch ref := s.Ratings.Reference(part); {
			case ref == agreement.Missing:
			case s.Ratings.Accepts(ref):
				good++
			default:
				bad++
			}
		}
		out.BadParts, out.GoodParts = &bad, &good
	}
	for _, in := range s.Inputs {
		out.Inputs = append(out.Inputs, inputJSON(in))
	}
	return out
}

func newBetween(r *Record) betweenJSON {
	b := r.Agreement.Between
	out := betweenJSON{
		Share:               newShare(b.Share),
		Pairs:               []pairJSON{},
		Fleiss:              newEstimate(b.Fleiss),
		Categories:          newCategories(r, b.Categories),
		SameAppraiser:       newEstimate(b.SameAppraiser),
		DifferentAppraisers: newEstimate(b.DifferentAppraisers),
		AC1:                 newEstimate(b.AC1),
		Alpha:               newEstimate(b.Alpha),
	}
	if b.Share.Absent == nil {
		out.Agreement = &b.Agreement
	}
	for i, p := range b.Pairs {
		pair := pairJSON{
			Appraisers:   [2]string{r.Study.Appraisers[p.A], r.Study.Appraisers[p.B]},
			Table:        p.Table,
			Share:        newShare(p.Share),
			Kappa:        newEstimate(p.Kappa),
			weightedJSON: newWeighted(p.Linear, p.Quadratic),
		}
		if p.Pairs > 0 {
			share := float64(p.Alike) / float64(p.Pairs)
			pair.Agreement = &share
		}
		if r.Leans != nil {
			pair.Lean = newLean(r.Leans[i])
		}
		out.Pairs = append(out.Pairs, pair)
	}
	return out
}

func newLean(l judge.Lean) *leanJSON {
	byA, byB := l.Rejected()
	return &leanJSON{l.Pairs(), byA, byB, l.OnlyA(), l.OnlyB(), newTest(l.Test)}
}

func newAgainstAppraiser(r *Record, a int) againstAppraiserJSON {
	out := againstAppraiserJSON{
		Appraiser:      r.Study.Appraisers[a],
		againstAllJSON: newAgainst(r, &r.Agreement.Against[a]),
	}
	if d := r.Detection[a]; d != nil {
		out.DPrime, out.Criterion = &d.DPrime.Value, &d.Criterion.Value
		dPrime, criterion := newSignal(d.DPrime), newSignal(d.Criterion)
		out.DPrimeInterval, out.CriterionInterval = &dPrime, &criterion
	} else if none := r.NoDetection[a]; none != nil {
		out.Reason = none.Error()
	}
	if r.Areas == nil {
		return out
	}
	if e := r.Areas[a]; e != nil {
		area := newSignal(*e)
		out.ROCArea = &area
	} else if none := r.NoArea[a]; none != nil {
		out.ROCArea = &estimateJSON{Reason: none.Error()}
	}
	return out
}

func newAgainst(r *Record, a *agreement.Against) againstAllJSON {
	out := againstAllJSON{
		Effectiveness:  newShare(a.Effectiveness),
		Table:          a.Table,
		Kappa:          newEstimate(a.Kappa),
		weightedJSON:   newWeighted(a.Linear, a.Quadratic),
		Miss:           newShare(a.Miss),
		FalseAlarm:     newShare(a.FalseAlarm),
		WrongEveryTime: parts(r, a.WrongEveryTime),
		Mixed:          parts(r, a.Mixed),
		Tests:          testsJSON{newTest(a.McNemar), newTest(a.Bowker), newTest(a.StuartMaxwell)},
	}
	if len(a.Categories) > 0 {
		out.Categories = newCategories(r, a.Categories)
	}
	return out
}

func newTest(t *agreement.Test) *testJSON {
	if t == nil {
		return nil
	}
	return &testJSON{t.Statistic, t.DF, t.P}
}

func newWeighted(linear, quadratic *agreement.Estimate) weightedJSON {
	var w weightedJSON
	if linear != nil {
		e := newEstimate(*linear)
		w.Linear = &e
	}
	if quadratic != nil {
		e := newEstimate(*quadratic)
		w.Quadratic = &e
	}
	return w
}

func newCategories(r *Record, kappas []agreement.Estimate) []categoryJSON {
	out := []categoryJSON{}
	for k, e := range kappas {
		out = append(out, categoryJSON{r.Study.Categories[k], newEstimate(e)})
	}
	return out
}

func newEstimate(e agreement.Estimate) estimateJSON {
	if e.Absent != nil {
		return estimateJSON{Reason: e.Absent.Error()}
	}
	out := estimateJSON{Estimate: &e.Value}
	if e.Unbounded != nil {
		out.Reason = e.Unbounded.Error()
		return out
	}
	out.Lower, out.Upper, out.Method = &e.Interval.Lower, &e.Interval.Upper, e.Method
	if e.StandardError > 0 {
		out.StandardError = &e.StandardError
	}
	if i := e.Independent; i != nil {
		out.Independent = newRange(*i)
	}
	return out
}

func newRange(i interval.Interval) *rangeJSON { return &rangeJSON{i.Lower, i.Upper} }

func newShare(s agreement.Share) shareJSON {
	out := shareJSON{estimateJSON: newEstimate(s.Estimate), Count: s.Count, Of: s.Of}
	if s.Effective > 0 {
		out.Effective = &s.Effective
	}
	return out
}

// newSignal is an estimate of package signal; a bound that does not exist is
// left out, with its reason.
func newSignal(e signal.Estimate) estimateJSON {
	if e.Absent {
		return estimateJSON{Reason: e.Why}
	}
	out := estimateJSON{Estimate: &e.Value, Method: e.Method, Reason: e.Why}
	if e.HasLower {
		out.Lower = &e.Lower
	}
	if e.HasUpper {
		out.Upper = &e.Upper
	}
	if e.SE > 0 {
		out.StandardError = &e.SE
	}
	return out
}

// parts names the parts of the numbers given.
func parts(r *Record, numbers []int) []string {
	names := make([]string, len(numbers))
	for i, n := range numbers {
		names[i] = r.Study.Parts[n]
	}
	return names
}
