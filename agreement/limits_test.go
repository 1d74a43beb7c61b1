package agreement

import (
	"slices"
	"strings"
	"testing"

	"samecall/agreement/interval"
)

// A limit that stands for itself is that of the two-sided interval at twice the
// confidence less one.
func TestEachLimitForItself(t *testing.T) {
	at := func(confidence float64) *Analysis {
		return analyse(t, msaStudy(t), func(o *Options) { o.Confidence = confidence })
	}
	two, one := at(0.90), at(0.95)
	check := func(what string, one, two Estimate) {
		t.Helper()
		near(t, what+", lower", one.OneSided.Lower, two.Interval.Lower, 1e-12)
		near(t, what+", upper", one.OneSided.Upper, two.Interval.Upper, 1e-12)
		if one.OneSided.Lower <= one.Interval.Lower && one.Interval.Lower > -1 && one.Interval.Lower > 0 {
			t.Errorf("%s: one-sided lower limit %v, two-sided %v", what, one.OneSided.Lower, one.Interval.Lower)
		}
	}
	for i := range one.Against {
		check("effectiveness", one.Against[i].Effectiveness.Estimate, two.Against[i].Effectiveness.Estimate)
		check("miss", one.Against[i].Miss.Estimate, two.Against[i].Miss.Estimate)
		check("false alarm", one.Against[i].FalseAlarm.Estimate, two.Against[i].FalseAlarm.Estimate)
		check("kappa against", one.Against[i].Kappa, two.Against[i].Kappa)
		check("kappa within", one.Within[i].Kappa, two.Within[i].Kappa)
	}
	check("Fleiss", one.Between.Fleiss, two.Between.Fleiss)
}

// BCa is asked for at the confidence expanded for few parts (Hesterberg 2015):
// in a study of 16 parts, by R's qt and pnorm, 0.97229 for 0.95:
// 1 − 2 pnorm(−qt(0.975, 15) √(16/15)).
func TestFewPartsExpandTheConfidence(t *testing.T) {
	near(t, "expanded", interval.Expanded(0.95, 16), 0.97229, 5e-6)
	r, err := New(16, 2, []int{3, 3})
	if err != nil {
		t.Fatal(err)
	}
	for p, row := range [][]Category{{0, 0, 0, 0, 0, 0}, {0, 0, 1, 0, 0, 0}, {0, 1, 1, 0, 1, 0}, {1, 1, 1, 1, 0, 1}, {1, 1, 1, 1, 1, 1}, {1, 1, 0, 1, 1, 1}, {0, 0, 0, 1, 0, 0}, {1, 1, 1, 1, 1, 1}} {
		copy(r.Row(p), row)
		copy(r.Row(p+8), row)
	}
	opt := DefaultOptions()
	s := &study{Ratings: r, patterns: r.patterns(), opt: opt}
	s.resampler = newResampler(s.patterns, opt, 1)
	s.begin(1)
	m, z := fleiss(s.counts(func(row []Category) []Category { return row }), s.times)
	e := s.estimate(m, z, errOneTrial, errWithinAlike)
	z = z.canonical(m)
	sums := z.sums()
	plain := must[interval.Interval](t)(interval.BCa(e.Value, s.resample(m, z), leaveOneOut(m, z, sums), 0.95))
	expanded := must[interval.Interval](t)(interval.BCa(e.Value, s.resample(m, z), leaveOneOut(m, z, sums), interval.Expanded(0.95, 16)))
	if !(e.Interval.Lower <= expanded.Lower && e.Interval.Upper >= expanded.Upper && expanded.Lower < plain.Lower) {
		t.Errorf("interval %v; BCa at 0.95 %v, expanded %v", e.Interval, plain, expanded)
	}
}

// Up to 1000 parts are resampled, more are linearised.
func TestManyPartsAreLinearised(t *testing.T) {
	for parts, want := range map[int]string{1000: "BCa over parts", 1001: "linearised over parts"} {
		a := analyse(t, onePassFail(t, parts/2, parts-parts/2, 40), func(o *Options) { o.Resamples = 200 })
		if got := a.Within[0].Kappa.Method; !strings.HasPrefix(got, want) {
			t.Errorf("%d parts: %s", parts, got)
		}
	}
}

// Either side of what makes a kappa misleading: 80 % of the calls in one category,
// and AC1 higher by 0.1. By hand, two calls a part: of n parts b are called
// reject twice, m once; kappa = 1 − m/n / (2p(1−p)), AC1 = 1 − m/n / (1 − 2p(1−p))
// with p = (b + m/2)/n.
func TestWherePrevalenceBegins(t *testing.T) {
	for _, c := range []struct {
		bad, good, mixed int
		prevalent        bool
	}{
		{18, 82, 2, false}, // p 0.19: kappa 0.935, AC1 0.971
		{17, 83, 5, false}, // p 0.195: kappa 0.841, AC1 0.927, 0.086 apart
		{16, 84, 7, true},  // p 0.195: kappa 0.777, AC1 0.898, 0.121 apart
		{20, 80, 9, false}, // p 0.245: kappa 0.757, AC1 0.857, 0.1003 apart, but 75.5 % only
	} {
		p := (float64(c.bad) + float64(c.mixed)/2) / 100
		kappa := 1 - float64(c.mixed)/100/(2*p*(1-p))
		e := analyse(t, onePassFail(t, c.bad, c.good, c.mixed), func(o *Options) { o.Resamples = 0 }).Within[0].Kappa
		near(t, "kappa", e.Value, kappa, closedForm)
		if e.Prevalent != c.prevalent {
			t.Errorf("%+v: kappa %.3f, prevalent %v", c, kappa, e.Prevalent)
		}
	}
}

// Of 200 parts six are bad: resampled studies often hold hardly one of them, and
// limits read from them hang on the seed. With twenty they do not.
func TestLimitsDoNotHangOnTheSeed(t *testing.T) {
	for bad, method := range map[int]string{6: "linearised over parts", 20: "BCa over parts"} {
		r := onePassFail(t, bad, 200-bad, 2)
		var lower []float64
		for seed := range uint64(4) {
			e := analyse(t, r, func(o *Options) { o.Seed = seed + 1 }).Against[0].Kappa
			if !strings.HasPrefix(e.Method, method) {
				t.Errorf("%d bad parts: %s", bad, e.Method)
			}
			lower = append(lower, e.Interval.Lower)
		}
		if apart := slices.Max(lower) - slices.Min(lower); apart > 0.05 {
			t.Errorf("%d bad parts: lower limits %v", bad, lower)
		}
	}
}
