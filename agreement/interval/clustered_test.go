package interval

import (
	"encoding/csv"
	"math"
	"os"
	"testing"

	"pgregory.net/rapid"
)

// msaClusters returns, for each appraiser, misses by bad part and false
// alarms by good part in the MSA manual's study (testdata/reference/README.md).
func msaClusters(t *testing.T) (miss, falseAlarm map[string][]Cluster) {
	t.Helper()
	f, err := os.Open("../../testdata/reference/msa-manual-50x3x3.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	miss, falseAlarm = map[string][]Cluster{}, map[string][]Cluster{}
	for _, row := range rows[1:] {
		for a, name := range []string{"A", "B", "C"} {
			accepted := 0
			for _, c := range row[3+3*a : 6+3*a] {
				if c == "1" {
					accepted++
				}
			}
			if row[1] == "0" {
				miss[name] = append(miss[name], Cluster{accepted, 3, 1})
			} else {
				falseAlarm[name] = append(falseAlarm[name], Cluster{3 - accepted, 3, 1})
			}
		}
	}
	return miss, falseAlarm
}

// Source: R's survey package, svyciprop(method = "beta") with the part as
// the cluster (expected-r.json, clustered). survey lets the effective number
// exceed the real one, which Korn & Graubard's limits must not: where it
// does, for appraisers A and B, the effective number is checked at its cap.
func TestKornGraubardAgainstSurvey(t *testing.T) {
	type result struct {
		Estimate, Lower, Upper, SE float64
		Calls, Parts               int
		Effective                  float64 `json:"effective_calls"`
	}
	var want struct {
		MSA struct {
			Clustered struct {
				Miss       map[string]result
				FalseAlarm map[string]result `json:"false_alarm"`
			}
		} `json:"msa_manual"`
	}
	readJSON(t, "expected-r.json", &want)
	miss, falseAlarm := msaClusters(t)
	for _, kind := range []struct {
		name     string
		clusters map[string][]Cluster
		want     map[string]result
	}{{"miss", miss, want.MSA.Clustered.Miss}, {"false alarm", falseAlarm, want.MSA.Clustered.FalseAlarm}} {
		for _, name := range []string{"A", "B", "C"} {
			got, w := KornGraubard(kind.clusters[name], 0.95), kind.want[name]
			what := kind.name + " " + name
			if got.Calls != w.Calls || got.Parts != w.Parts {
				t.Errorf("%s: %d calls on %d parts, want %d on %d", what, got.Calls, got.Parts, w.Calls, w.Parts)
			}
			near(t, what, got.Value, w.Estimate, 1e-9)
			independent := w.Estimate * (1 - w.Estimate) / (w.SE * w.SE)
			if independent > float64(w.Calls) { // survey did not cap
				near(t, what+" effective, capped", got.Effective, w.Effective*float64(w.Calls)/independent, 1e-6)
				if got.Published.Lower > w.Lower || got.Published.Upper < w.Upper {
					t.Errorf("%s: capped [%g, %g] is inside survey's [%g, %g]", what, got.Published.Lower, got.Published.Upper, w.Lower, w.Upper)
				}
				continue
			}
			near(t, what+" effective", got.Effective, w.Effective, 1e-6)
			near(t, what+" lower", got.Published.Lower, w.Lower, 1e-6)
			near(t, what+" upper", got.Published.Upper, w.Upper, 1e-6)
		}
	}
}

func TestKornGraubardWithoutVariance(t *testing.T) {
	for _, c := range []struct {
		name     string
		clusters []Cluster
		want     Interval
	}{
		{"no event: the parts count", []Cluster{{0, 3, 16}}, ClopperPearson(0, 16, 0.95)},
		{"nothing but events", []Cluster{{3, 3, 16}}, ClopperPearson(16, 16, 0.95)},
		{"no call", []Cluster{{0, 0, 5}}, Interval{0, 1}},
		{"nothing", nil, Interval{0, 1}},
	} {
		if got := KornGraubard(c.clusters, 0.95); got.Interval != c.want {
			t.Errorf("%s: %v, want %v", c.name, got.Interval, c.want)
		}
	}
	if got := KornGraubard([]Cluster{{1, 3, 1}}, 0.95); got.Lower < 0 || got.Upper > 1 || got.Width() < 0.5 {
		t.Errorf("one part: %v", got)
	}
	// Every part alike: no variance between parts, so calls are capped at the real number.
	if got := KornGraubard([]Cluster{{1, 2, 20}}, 0.95); got.Effective > 40 || got.Width() <= 0 {
		t.Errorf("parts alike: %+v", got)
	}
}

// A one-sided limit at 50 % is one of the two of a confidence of 0.
func TestKornGraubardWithoutConfidence(t *testing.T) {
	for _, confidence := range []float64{0, 1e-300, 1e-16, 1e-9} {
		got := KornGraubard([]Cluster{{1, 3, 4}, {0, 3, 6}}, confidence)
		if !(got.Lower <= got.Value && got.Value <= got.Upper && got.Effective > 0 && got.Effective <= 30) {
			t.Errorf("confidence %g: %+v", confidence, got)
		}
	}
}

// One miss never shows what no miss cannot, though the published limits do:
// of 16 parts called three times, by Clopper & Pearson 1 − 0.025^(1/16) for none.
func TestKornGraubardIsNoSurerThanItsParts(t *testing.T) {
	one := KornGraubard([]Cluster{{1, 3, 1}, {0, 3, 15}}, 0.95)
	near(t, "none", 1-math.Pow(0.025, 1.0/16), 0.2059, 5e-5)
	near(t, "one", one.Upper, 1-math.Pow(0.025, 1.0/16), 1e-12)
	near(t, "one, published", one.Published.Upper, 0.1211, 5e-5)
	rapid.Check(t, func(t *rapid.T) {
		clusters := drawClusters(t)
		confidence := rapid.SampledFrom([]float64{0, 0.5, 0.9, 0.95, 0.9999, almostOne}).Draw(t, "confidence")
		r := KornGraubard(clusters, confidence)
		if r.Parts == 0 {
			return
		}
		none := KornGraubard([]Cluster{{0, 1, r.Parts}}, confidence)
		if r.Upper < none.Upper || r.Lower > 1-none.Upper+1e-12 {
			t.Fatalf("%v at %v: %v; no event on %d parts: %v", clusters, confidence, r.Interval, r.Parts, none.Interval)
		}
		if r.Upper < r.Published.Upper || r.Lower > r.Published.Lower || !r.Contains(r.Value) {
			t.Fatalf("%v at %v: %v, published %v", clusters, confidence, r.Interval, r.Published)
		}
	})
}

func drawClusters(t *rapid.T) []Cluster {
	var clusters []Cluster
	for range rapid.IntRange(0, 6).Draw(t, "kinds of part") {
		calls := rapid.IntRange(0, 30).Draw(t, "calls")
		clusters = append(clusters, Cluster{rapid.IntRange(0, calls).Draw(t, "events"), calls, rapid.IntRange(0, 20).Draw(t, "parts")})
	}
	return clusters
}

// A limit of one side is one of the two at the confidence turned about.
func TestOneSidedLimitOfARate(t *testing.T) {
	near(t, "each side", EachSide(0.95), 0.90, 1e-15)
	near(t, "each side", EachSide(0.3), 0, 0)
	// Without an event a rate is a share of parts, whose one-sided limit is
	// checked against SciPy.
	near(t, "upper", KornGraubard([]Cluster{{0, 3, 59}}, EachSide(0.95)).Upper, UpperLimit(0, 59, 0.95), 1e-15)
}
