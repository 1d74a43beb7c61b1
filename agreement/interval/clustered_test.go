package interval

import (
	"encoding/csv"
	"os"
	"testing"
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
				if got.Lower > w.Lower || got.Upper < w.Upper {
					t.Errorf("%s: capped [%g, %g] is inside survey's [%g, %g]", what, got.Lower, got.Upper, w.Lower, w.Upper)
				}
				continue
			}
			near(t, what+" effective", got.Effective, w.Effective, 1e-6)
			near(t, what+" lower", got.Lower, w.Lower, 1e-6)
			near(t, what+" upper", got.Upper, w.Upper, 1e-6)
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
