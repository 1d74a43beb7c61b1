package interval

import (
	"encoding/json"
	"math"
	"os"
	"testing"
)

// readJSON reads results that other programs computed on published data; see
// testdata/reference/README.md.
func readJSON(t *testing.T, name string, into any) {
	t.Helper()
	b, err := os.ReadFile("../../testdata/reference/" + name)
	if err == nil {
		err = json.Unmarshal(b, into)
	}
	if err != nil {
		t.Fatal(err)
	}
}

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s: %.14g, want %.14g within %g", what, got, want, tolerance)
	}
}

// Source: scipy.stats.beta.ppf (expected-py.json, binomial).
func TestBinomialAgainstSciPy(t *testing.T) {
	var want struct {
		Binomial []struct {
			X, N               int
			Clopper_Pearson_95 [2]float64
			Upper_One_Sided_95 float64
			Lower_One_Sided_95 float64
		}
	}
	readJSON(t, "expected-py.json", &want)
	if len(want.Binomial) == 0 {
		t.Fatal("no cases")
	}
	for _, c := range want.Binomial {
		ci := ClopperPearson(c.X, c.N, 0.95)
		near(t, "lower", ci.Lower, c.Clopper_Pearson_95[0], 1e-9)
		near(t, "upper", ci.Upper, c.Clopper_Pearson_95[1], 1e-9)
		near(t, "upper one-sided", UpperLimit(c.X, c.N, 0.95), c.Upper_One_Sided_95, 1e-9)
		near(t, "lower one-sided", LowerLimit(c.X, c.N, 0.95), c.Lower_One_Sided_95, 1e-9)
	}
}

// Source: R's binom.test and prop.test (expected-r.json, msa_manual).
func TestSharesAgainstR(t *testing.T) {
	type limits struct {
		X, N         int
		Lower, Upper float64
	}
	var want struct {
		MSA struct {
			Within              map[string]limits
			Effectiveness       map[string]limits
			EffectivenessWilson map[string]limits `json:"effectiveness_wilson"`
			Miss                map[string]limits `json:"miss_rate_calls"`
			FalseAlarm          map[string]limits `json:"false_alarm_rate_calls"`
		} `json:"msa_manual"`
	}
	readJSON(t, "expected-r.json", &want)
	for _, group := range []map[string]limits{want.MSA.Within, want.MSA.Effectiveness, want.MSA.Miss, want.MSA.FalseAlarm} {
		if len(group) != 3 {
			t.Fatal("a group without its three appraisers")
		}
		for _, c := range group {
			ci := ClopperPearson(c.X, c.N, 0.95)
			near(t, "lower", ci.Lower, c.Lower, 1e-9)
			near(t, "upper", ci.Upper, c.Upper, 1e-9)
		}
	}
	for name, c := range want.MSA.EffectivenessWilson {
		e := want.MSA.Effectiveness[name]
		ci := Wilson(e.X, e.N, 0.95)
		near(t, "Wilson lower", ci.Lower, c.Lower, 1e-9)
		near(t, "Wilson upper", ci.Upper, c.Upper, 1e-9)
	}
}

// Source: expected-r.json zero_failure and expected-py.json demonstration:
// the smallest number of parts that shows a rate. One part fewer must not.
func TestOneSidedLimitsMatchDemonstrationSizes(t *testing.T) {
	var want struct {
		Demonstration []struct {
			Rate, Confidence float64
			Allowed          int `json:"failures_allowed"`
			N                int
		}
	}
	readJSON(t, "expected-py.json", &want)
	if len(want.Demonstration) == 0 {
		t.Fatal("no cases")
	}
	for _, c := range want.Demonstration {
		if got := UpperLimit(c.Allowed, c.N, c.Confidence); got > c.Rate {
			t.Errorf("%+v: limit %g with n parts", c, got)
		}
		if got := UpperLimit(c.Allowed, c.N-1, c.Confidence); got <= c.Rate {
			t.Errorf("%+v: limit %g with one part fewer", c, got)
		}
	}
}
