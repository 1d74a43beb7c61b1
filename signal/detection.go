package signal

import (
	"fmt"
	"math"
)

// Detection holds the detection indices of an inspection: how well it tells
// bad parts from good ones, and which way it leans. A hit is a bad part
// rejected; a false alarm is a good part rejected.
type Detection struct {
	Hit        float64  // hit rate used, log-linear corrected if it came from counts
	FalseAlarm float64  // false-alarm rate used, corrected likewise
	DPrime     Estimate // d′ = z(Hit) − z(FalseAlarm); 0: cannot tell good from bad
	Criterion  Estimate // c = −(z(Hit) + z(FalseAlarm))/2; below 0 leans to rejecting, above 0 to accepting
	Area       Estimate // area under the ROC curve that goes with d′: Φ(d′/√2)
}

// Detect returns the detection indices of so many hits on bad calls and false
// alarms on good calls. The rates are log-linear corrected, (x+½)/(n+1)
// (Hautus, Behavior Research Methods 27 (1995) 46–51), so that rates of 0 and 1
// give finite indices. The intervals are normal, with the variance of d′ by
// Gourevitch & Galanter (Psychometrika 32 (1967) 25–33); the area's interval is
// d′'s carried through Φ(d′/√2). They take calls as independent; where several
// calls were made on a part, use DetectByPart.
//
// It returns an error if a count is negative or exceeds its total, or a total
// is 0.
func Detect(hits, bad, falseAlarms, good int, confidence float64) (Detection, error) {
	if err := checkConfidence(confidence); err != nil {
		return Detection{}, err
	}
	if err := checkCount("hits", hits, "calls on bad parts", bad); err != nil {
		return Detection{}, err
	}
	if err := checkCount("false alarms", falseAlarms, "calls on good parts", good); err != nil {
		return Detection{}, err
	}
	h, f := logLinear(hits, bad), logLinear(falseAlarms, good)
	return detection(h, f, h*(1-h)/float64(bad), f*(1-f)/float64(good), confidence,
		"normal, variance by Gourevitch & Galanter, rates log-linear corrected"), nil
}

// Tally is how often one part was rejected out of its calls.
type Tally struct {
	Rejected, Calls int
	Parts           int // how many parts are so, alike, 0 or more; 0 counts as one
}

func (t Tally) parts() int { return max(1, t.Parts) }

// DetectByPart is Detect with the part as the sampled unit: the variance of
// each rate is linearised over parts (the ratio estimator of cluster sampling;
// Cochran, Sampling Techniques, 3rd ed. 1977, ch. 6), never less than the
// binomial one. With a single part of a kind the binomial variance is used on
// one call. Parts without a call are passed over.
func DetectByPart(bad, good []Tally, confidence float64) (Detection, error) {
	if err := checkConfidence(confidence); err != nil {
		return Detection{}, err
	}
	h, vh, err := clusteredRate(bad, "bad")
	if err != nil {
		return Detection{}, err
	}
	f, vf, err := clusteredRate(good, "good")
	if err != nil {
		return Detection{}, err
	}
	return detection(h, f, vh, vf, confidence, "normal, variance linearised over parts, rates log-linear corrected"), nil
}

// FromRates returns d′, criterion and area for rates as they are, without
// correction and without intervals. Both must lie strictly between 0 and 1.
func FromRates(hit, falseAlarm float64) (Detection, error) {
	for _, r := range [...]struct {
		name string
		rate float64
	}{{"hit rate", hit}, {"false-alarm rate", falseAlarm}} {
		if !(r.rate > 0 && r.rate < 1) {
			return Detection{}, fmt.Errorf("%s %v: d′ needs a rate strictly between 0 and 1; from counts, Detect corrects for it", r.name, r.rate)
		}
	}
	d := detection(hit, falseAlarm, 0, 0, 0.95, "")
	const why = "rates without counts have no interval"
	for _, e := range []*Estimate{&d.DPrime, &d.Criterion, &d.Area} {
		*e = Estimate{Value: e.Value, Why: why}
	}
	return d, nil
}

// detection builds the indices from rates and the variances of the rates.
func detection(h, f, varH, varF, confidence float64, method string) Detection {
	zh, zf := normalQuantile(h), normalQuantile(f)
	ph, pf := normalDensity(zh), normalDensity(zf)
	se := math.Sqrt(varH/(ph*ph) + varF/(pf*pf))
	half := twoSided(confidence) * se
	d := interval(zh-zf, half, confidence, method)
	d.SE = se
	c := interval(0-(zh+zf)/2, half/2, confidence, method)
	c.SE = se / 2
	a := d.map1(func(d float64) float64 { return normalCDF(d / math.Sqrt2) }, normalDensity(d.Value/math.Sqrt2)/math.Sqrt2)
	return Detection{Hit: h, FalseAlarm: f, DPrime: d, Criterion: c, Area: a}
}

func logLinear(x, n int) float64 { return (float64(x) + 0.5) / (float64(n) + 1) }

func checkCount(name string, x int, of string, n int) error {
	if n < 1 {
		return fmt.Errorf("%d %s: detection indices need at least one call on a bad and one on a good part", n, of)
	}
	if x < 0 || x > n {
		return fmt.Errorf("%d %s out of %d %s: want 0 to %d", x, name, n, of, n)
	}
	return nil
}

// clusteredRate returns the log-linear corrected share of rejected calls and
// its variance with the part as the sampled unit.
func clusteredRate(parts []Tally, kind string) (rate, variance float64, err error) {
	var rejected, calls, m int
	for i, t := range parts {
		if t.Calls < 0 || t.Rejected < 0 || t.Rejected > t.Calls {
			return 0, 0, fmt.Errorf("%s part %d: %d rejected out of %d calls", kind, i, t.Rejected, t.Calls)
		}
		if t.Parts < 0 {
			return 0, 0, fmt.Errorf("%s part %d: there are %d such parts", kind, i, t.Parts)
		}
		if t.Calls > 0 {
			n := t.parts()
			rejected, calls, m = rejected+n*t.Rejected, calls+n*t.Calls, m+n
		}
	}
	if m == 0 {
		return 0, 0, fmt.Errorf("no call on a %s part: detection indices need at least one call on a bad and one on a good part", kind)
	}
	rate = logLinear(rejected, calls)
	binomial := rate * (1 - rate) / float64(calls)
	if m == 1 {
		return rate, rate * (1 - rate), nil
	}
	p := float64(rejected) / float64(calls)
	for _, t := range parts {
		e := float64(t.Rejected) - p*float64(t.Calls)
		variance += float64(t.parts()) * e * e
	}
	variance *= float64(m) / float64(m-1) / float64(calls) / float64(calls)
	if rejected == 0 || rejected == calls {
		// No spread over parts to see; the parts, not the calls, bound it.
		return rate, rate * (1 - rate) / float64(m), nil
	}
	return rate, math.Max(variance, binomial), nil
}
