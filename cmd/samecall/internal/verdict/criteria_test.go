package verdict

import (
	"encoding/json"
	"errors"
	"fmt"
	"os"
	"regexp"
	"strings"
	"testing"

	"samecall/agreement"
	"samecall/agreement/interval"
)

// one is a figure with its one-sided limits.
func one(value, lower, upper float64) agreement.Estimate {
	return agreement.Estimate{Value: value, OneSided: interval.Interval{Lower: lower, Upper: upper}}
}

func TestLevels(t *testing.T) {
	for _, c := range []struct {
		name     string
		e        agreement.Estimate
		met      Level
		evidence Evidence
		against  float64
		text     string
	}{
		{Effectiveness, one(0.95, 0.92, 0.98), Accept, Shown, 0.90, "effectiveness 95 %, at least 90 %"},
		{Effectiveness, one(0.90, 0.90, 0.98), Accept, Shown, 0.90, "effectiveness 90 %, at least 90 %"},
		{Effectiveness, one(0.90, 0.89, 0.98), Accept, Open, 0.90, "effectiveness 90 %, at least 90 %"},
		{Effectiveness, one(0.8999, 0.82, 0.95), Conditional, Shown, 0.80, "effectiveness 89.99 %, less than the 90 % to accept, but at least 80 %"},
		{Effectiveness, one(0.80, 0.70, 0.95), Conditional, Open, 0.80, "effectiveness 80 %, less than the 90 % to accept, but at least 80 %"},
		{Effectiveness, one(0.7999, 0.70, 0.81), Reject, Open, 0.80, "effectiveness 79.99 %, less than the 80 % required"},
		{Effectiveness, one(0.70, 0.60, 0.79), Reject, Contradicted, 0.80, "effectiveness 70 %, less than the 80 % required"},
		{Effectiveness, one(0.70, 0.60, 0.80), Reject, Open, 0.80, "effectiveness 70 %, less than the 80 % required"},
		{Miss, one(0, 0, 0.02), Accept, Shown, 0.02, "miss rate 0 %, at most 2 %"},
		{Miss, one(0.02, 0, 0.021), Accept, Open, 0.02, "miss rate 2.0 %, at most 2 %"},
		{Miss, one(0.021, 0, 0.05), Conditional, Shown, 0.05, "miss rate 2.1 %, more than the 2 % to accept, but at most 5 %"},
		{Miss, one(0.05, 0.01, 0.06), Conditional, Open, 0.05, "miss rate 5.0 %, more than the 2 % to accept, but at most 5 %"},
		{Miss, one(0.06, 0.05, 0.08), Reject, Open, 0.05, "miss rate 6.0 %, more than the 5 % allowed"},
		{Miss, one(0.07, 0.051, 0.08), Reject, Contradicted, 0.05, "miss rate 7.0 %, more than the 5 % allowed"},
		{FalseAlarm, one(0.05, 0.03, 0.05), Accept, Shown, 0.05, "false-alarm rate 5.0 %, at most 5 %"},
		{FalseAlarm, one(0.10, 0.03, 0.15), Conditional, Open, 0.10, "false-alarm rate 10.0 %, more than the 5 % to accept, but at most 10 %"},
		{FalseAlarm, one(0.11, 0.101, 0.2), Reject, Contradicted, 0.10, "false-alarm rate 11.0 %, more than the 10 % allowed"},
		{Kappa, one(0.75, 0.75, 0.9), Accept, Shown, 0.75, "kappa 0.75, at least 0.75"},
		{Kappa, one(0.7499, 0.5, 0.9), Conditional, Shown, 0.40, "kappa 0.7499, less than the 0.75 to accept, but at least 0.40"},
		{Kappa, one(0.39, 0.1, 0.5), Reject, Open, 0.40, "kappa 0.39, less than the 0.40 required"},
		{Kappa, one(-0.1, -0.3, 0.2), Reject, Contradicted, 0.40, "kappa −0.10, less than the 0.40 required"},
	} {
		got := newCriterion(c.name, Default[c.name], c.e, "part", 50, 0.95)
		if got.Met != c.met || got.Evidence != c.evidence || got.Against != c.against {
			t.Errorf("%s %v: %v, %v of %v; want %v, %v of %v", c.name, c.e.Value, got.Met, got.Evidence, got.Against, c.met, c.evidence, c.against)
		}
		if got.Text() != c.text {
			t.Errorf("%s %v: %q, want %q", c.name, c.e.Value, got.Text(), c.text)
		}
	}
}

// An open rejection tells the other side by its one-sided limit; a met level
// tells what so few parts can show at best: 1 − 0.05^(1/16) = 17.1 %, and
// 1 − 0.05^(1/100) = 2.95 %.
func TestOpenIsTold(t *testing.T) {
	for _, c := range []struct {
		name  string
		e     agreement.Estimate
		parts int
		more  int
		text  string
	}{
		{Miss, one(0.063, 0.017, 0.2), 16, 6, "Open: it may be as low as 1.7 % (one-sided, 95 %), within the 5 % allowed; 6 parts more at this rate would show it. 16 parts cannot show a miss rate below 5 %: at best 17.1 %."},
		{Miss, one(0.063, 0.017, 0.2), 100, 1, "Open: it may be as low as 1.7 % (one-sided, 95 %), within the 5 % allowed; 1 part more at this rate would show it."},
		{Miss, one(0.0501, 0.017, 0.2), 100, 0, "Open: it may be as low as 1.7 % (one-sided, 95 %), within the 5 % allowed; not even 1\u00a0000 times the parts would show it."},
		{Effectiveness, one(0.75, 0.6, 0.87), 16, 9, "Open: it may be as high as 87 % (one-sided, 95 %), above the 80 % required; 9 parts more at this share would show it."},
		{Effectiveness, one(0.75, 0.6, 0.8001), 16, 9, "Open: it may be as high as 80.01 % (one-sided, 95 %), above the 80 % required; 9 parts more at this share would show it."},
		{Miss, one(0.5, 0.00001, 0.9), 100, 9, "Open: it may be less than 0.01 % (one-sided, 95 %), within the 5 % allowed; 9 parts more at this rate would show it."},
		{Kappa, one(0.3, 0.1, 0.5), 16, 9, "Open: it may be as high as 0.50 (one-sided, 95 %), above the 0.40 required; 9 parts more at this kappa would show it."},
		{Miss, one(0, 0, 0.171), 16, 133, "Open: 16 parts cannot show less than 17.1 %; 133 parts more without an error would settle it."},
	} {
		got := newCriterion(c.name, Default[c.name], c.e, "part", c.parts, 0.95)
		got.More = c.more
		if got.EvidenceText() != c.text {
			t.Errorf("%s %v: %q, want %q", c.name, c.e.Value, got.EvidenceText(), c.text)
		}
	}
}

// Rounded, a figure may read as if it stood otherwise to a level that it stands
// beside: then it has more digits.
func TestFigureBesideALevel(t *testing.T) {
	for _, c := range []struct {
		name  string
		x     float64
		level Levels
		want  string
	}{
		{Kappa, 0.7478, Default[Kappa], "0.7478"},
		{Kappa, 0.749996, Default[Kappa], "0.749996"},
		{Kappa, 0.7521, Default[Kappa], "0.7521"},
		{Kappa, 0.75, Default[Kappa], "0.75"},
		{Kappa, 0.75 - 1e-16, Default[Kappa], "0.75"}, // computed from sums
		{Kappa, 0.76, Default[Kappa], "0.76"},
		{Kappa, 0.7460, Levels{0.747, 0.40}, "0.746"}, // 0.75 would read as met
		{Kappa, 0.995, Levels{0.99, 0.40}, "0.995"},
		{Kappa, -0.0049, Levels{0, -0.5}, "−0.0049"},
		{Miss, 0.0501, Default[Miss], "5.01 %"},
		{Miss, 0.05, Default[Miss], "5.0 %"},
		{Miss, 0.063, Default[Miss], "6.3 %"},
		{Miss, 0.00003, Default[Miss], "<0.01 %"},
		{Effectiveness, 54.0 / 60, Default[Effectiveness], "90 %"},
		{Effectiveness, 0.8045, Default[Effectiveness], "80.45 %"},
		{Effectiveness, 0.84, Levels{0.843, 0.8}, "84 %"},
	} {
		got := newCriterion(c.name, c.level, one(c.x, 0, 1), "part", 50, 0.95)
		if got.Found() != c.want {
			t.Errorf("%s %v: %q, want %q", c.name, c.x, got.Found(), c.want)
		}
	}
	if c := newCriterion(Kappa, Default[Kappa], one(0.75-1e-16, 0, 1), "part", 50, 0.95); c.Met != Accept {
		t.Errorf("kappa on its level but for the last digit: %v", c.Met)
	}
}

// For people one word in sentence and table: a rejection that the data show is
// shown. What is open has what would settle it, or why nothing would.
func TestShownAndToSettle(t *testing.T) {
	unbounded := one(0.5, 0, 0)
	unbounded.Unbounded = errors.New("a single part")
	for _, c := range []struct {
		name          string
		e             agreement.Estimate
		more          int
		shows, settle string
	}{
		{Miss, one(0.07, 0.051, 0.08), 0, "shown", ""},
		{Miss, one(0, 0, 0.02), 0, "shown", ""},
		{Effectiveness, one(0.85, 0.81, 0.9), 0, "shown", ""},
		{Miss, one(0.07, 0.04, 0.08), 12, "open", "12 parts more"},
		{Miss, one(0.05, 0.04, 0.08), 0, "open", "on its level: more parts cannot"},
		{Miss, one(0.0501, 0.04, 0.08), 0, "open", "not even 1\u00a0000 times the parts"},
		{Kappa, unbounded, 0, "open", "a single part"},
		{Miss, agreement.Estimate{Absent: errors.New("no bad part")}, 0, "", ""},
	} {
		got := newCriterion(c.name, Default[c.name], c.e, "part", 50, 0.95)
		got.More = c.more
		if got.Shows() != c.shows || got.ToSettle() != c.settle {
			t.Errorf("%s %v: %q, %q; want %q, %q", c.name, c.e.Value, got.Shows(), got.ToSettle(), c.shows, c.settle)
		}
		if told := strings.HasPrefix(got.EvidenceText(), "The data show"); told != (c.shows == "shown") {
			t.Errorf("%s %v: the table says %q, the sentence %q", c.name, c.e.Value, got.Shows(), got.EvidenceText())
		}
	}
	// A level that leaves no room for an error.
	got := newCriterion(Miss, Levels{0, 0.05}, one(0, 0, 0.06), "bad part", 50, 0.95)
	if got.ToSettle() != "no number of parts can" {
		t.Error(got.ToSettle())
	}
}

func TestAbsentAndUnbounded(t *testing.T) {
	why := errors.New("no bad part was called")
	c := newCriterion(Miss, Default[Miss], agreement.Estimate{Absent: why}, "bad part", 0, 0.95)
	if c.Met != NotShown || c.EvidenceText() != "" || c.Text() != "miss rate not known: no bad part was called" {
		t.Errorf("%v, %q, %q", c.Met, c.EvidenceText(), c.Text())
	}
	e := one(0.5, 0, 0)
	e.Unbounded = errors.New("a single part")
	c = newCriterion(Kappa, Default[Kappa], e, "part", 1, 0.95)
	c.settle(coefficient(e, 1))
	if c.Evidence != Open || c.More != 0 || c.EvidenceText() != "Open: a single part." {
		t.Errorf("%v, %d more, %q", c.Evidence, c.More, c.EvidenceText())
	}
}

// rates reads numbers out of "rate 0.10, confidence 0.95".
var rates = regexp.MustCompile(`rate ([\d.]+), confidence ([\d.]+)`)

// How many parts without an error show a rate: sizes by R (expected-r.json,
// zero_failure) and by scipy (expected-py.json, demonstration).
func TestPartsWithoutError(t *testing.T) {
	var r struct {
		Sizes map[string]int `json:"zero_failure"`
	}
	var py struct {
		Sizes []struct {
			Rate, Confidence float64
			Allowed          int `json:"failures_allowed"`
			N                int
		} `json:"demonstration"`
	}
	for name, into := range map[string]any{"expected-r.json": &r, "expected-py.json": &py} {
		data, err := os.ReadFile("../../../../testdata/reference/" + name)
		if err != nil {
			t.Fatal(err)
		}
		if err := json.Unmarshal(data, into); err != nil {
			t.Fatal(err)
		}
	}
	check := func(rate, confidence float64, want int) {
		t.Helper()
		if got := withoutError(rate, confidence); got != want {
			t.Errorf("rate %v at %v: %d parts, want %d", rate, confidence, got, want)
		}
		// The same from a study with ten parts and no miss.
		c := newCriterion(Miss, Levels{rate, 2 * rate}, one(0, 0, interval.UpperLimit(0, 10, confidence)), "bad part", 10, confidence)
		c.settle(rateOverCalls([]interval.Cluster{{Events: 0, Calls: 3, Parts: 10}}, confidence))
		if 10+c.More != want {
			t.Errorf("rate %v at %v: %d more than 10, want %d in all", rate, confidence, c.More, want)
		}
		if say := fmt.Sprintf("%d bad parts more without an error would settle it", c.More); !strings.Contains(c.open(), say) {
			t.Errorf("%q lacks %q", c.open(), say)
		}
	}
	n := 0
	for key, want := range r.Sizes {
		var rate, confidence float64
		m := rates.FindStringSubmatch(key)
		if _, err := fmt.Sscan(m[1]+" "+m[2], &rate, &confidence); err != nil {
			t.Fatal(err)
		}
		check(rate, confidence, want)
		n++
	}
	for _, s := range py.Sizes {
		if s.Allowed == 0 {
			check(s.Rate, s.Confidence, s.N)
			n++
		}
	}
	if n < 12 {
		t.Errorf("only %d sizes were checked", n)
	}
	if withoutError(0, 0.95) != 0 || withoutError(1, 0.95) != 0 {
		t.Error("a rate of 0 or 1 is shown by some number of parts")
	}
}
