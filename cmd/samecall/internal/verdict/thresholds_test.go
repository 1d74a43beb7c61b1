package verdict

import (
	"math"
	"strings"
	"testing"

	"samecall/cmd/samecall/internal/judge"
	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

// Each threshold of docs/verdict.md with a study on either side of it.

func TestThresholdsOfReversed(t *testing.T) {
	for _, c := range []struct {
		right, wrong int
		want         bool
	}{
		{2, 18, true}, {3, 17, false}, {1, 9, true},
		{0, 6, true}, {0, 5, false},
	} {
		half := c.wrong / 2
		_, v := decide(t, calls(repeated("reference,A-1", c.right, "1,1", half, "1,0", c.wrong-half, "0,1"), ""))
		if got := has(v.Causes, Everyone, codeReversed); got != c.want {
			t.Errorf("%d right, %d wrong: %+v", c.right, c.wrong, v.Causes)
		}
	}
}

func TestThresholdsOfKinds(t *testing.T) {
	for _, c := range []struct {
		confused, otherWrong, onKinds int
		want                          bool
	}{
		{4, 4, 20, true}, {4, 5, 20, false}, // half of the wrong calls
		{4, 0, 20, true}, {4, 0, 21, false}, // 20 % of the calls on both kinds
		{3, 0, 15, false}, // 4 calls
	} {
		csv := repeated("reference,A-1", c.confused, "run,pinhole", 5, "run,run", c.onKinds-5-c.confused, "pinhole,pinhole", c.otherWrong, "good,run", 40, "good,good")
		_, v := decide(t, calls(csv, "categories = [\"good\", \"run\", \"pinhole\"]\naccept = [\"good\"]\n"))
		if got := has(v.Causes, 0, codeKinds); got != c.want {
			t.Errorf("%+v: %+v", c, v.Causes)
		}
	}
}

func TestThresholdsOfGrades(t *testing.T) {
	for _, c := range []struct {
		strict, lenient, right int
		want                   bool
	}{
		{8, 2, 40, true}, {7, 2, 40, false}, // 80 % of the wrong calls
		{4, 0, 36, true}, {4, 0, 37, false}, // 10 % of all calls
		{3, 0, 20, false}, // 4 calls
	} {
		csv := repeated("reference,A-1", c.strict, "b,c", c.lenient, "b,a", c.right, "b,b")
		_, v := decide(t, calls(csv, "order = [\"a\", \"b\", \"c\"]\naccept = [\"a\", \"b\"]\n"))
		if got := has(v.Causes, 0, codeGrades); got != c.want {
			t.Errorf("%+v: %+v", c, v.Causes)
		}
	}
}

// An offset counts from half a σ on, and with two parts between limit and cut, or
// three called wrong the way it makes: good ones rejected inside the limit, bad
// ones accepted outside.
func TestThresholdsOfAShift(t *testing.T) {
	rejected := func(x float64) signal.PartFit { return signal.PartFit{Value: x, Calls: 9, Accepted: 8} }
	accepted := func(x float64) signal.PartFit { return signal.PartFit{Value: x, Calls: 9, Accepted: 1} }
	never := func(x float64) signal.PartFit { return signal.PartFit{Value: x, Calls: 9} }
	always := func(x float64) signal.PartFit { return signal.PartFit{Value: x, Calls: 9, Accepted: 9} }
	for i, c := range []struct {
		side   signal.Side
		offset float64
		parts  []signal.PartFit
		want   bool
	}{
		{signal.Lower, 0.50, []signal.PartFit{rejected(10.1), rejected(10.2)}, true}, // between
		{signal.Lower, 0.49, []signal.PartFit{rejected(10.1), rejected(10.2)}, false},
		{signal.Lower, 0.50, []signal.PartFit{rejected(10.1), rejected(10.6)}, false},
		{signal.Lower, 1.10, []signal.PartFit{rejected(10.1), rejected(11.6)}, true}, // twice what makes it certain
		{signal.Lower, 1.10, []signal.PartFit{rejected(10.1), always(11.6)}, false},
		{signal.Lower, 0.50, []signal.PartFit{rejected(10.1), rejected(10.6), rejected(10.7)}, true},
		{signal.Lower, 0.50, []signal.PartFit{rejected(10.1), rejected(10.6), rejected(19)}, false}, // near the upper limit
		{signal.Lower, 0.50, []signal.PartFit{rejected(10.1), rejected(10.6), always(10.7), accepted(9.9), accepted(9.8)}, false},
		{signal.Lower, -0.50, []signal.PartFit{accepted(9.9), accepted(9.6)}, true},
		{signal.Lower, -0.49, []signal.PartFit{accepted(9.9), accepted(9.6)}, false},
		{signal.Lower, -0.50, []signal.PartFit{accepted(9.6), accepted(9.4), accepted(9.3)}, true},
		{signal.Lower, -0.50, []signal.PartFit{accepted(9.6), accepted(9.4), never(9.3), rejected(10.1), rejected(10.2)}, false},
		{signal.Upper, 0.50, []signal.PartFit{accepted(20.1), accepted(20.6), accepted(20.9)}, true},
		{signal.Upper, 0.50, []signal.PartFit{accepted(20.1), accepted(20.6), rejected(19), rejected(19.9)}, false},
		{signal.Upper, -0.50, []signal.PartFit{rejected(19.9), rejected(19.4), rejected(19.1)}, true},
		{signal.Upper, -0.50, []signal.PartFit{rejected(19.9), rejected(19.4), rejected(11)}, false},
	} {
		limits := signal.Between(10, 20)
		l := &signal.LimitFit{Side: c.side, HasLimit: true, Limit: limits.Lower,
			Offset: signal.Estimate{Value: c.offset, SE: 0.19}, Sigma: signal.Estimate{Value: 1}}
		if c.side == signal.Upper {
			l.Limit = limits.Upper
		}
		l.Cut.Value = l.Limit + c.offset
		if got := shifted(&signal.Curve{Limits: limits, Parts: c.parts}, l, 1); got != c.want {
			t.Errorf("%d: offset %v at the %s limit: %v", i+1, c.offset, c.side, got)
		}
	}
}

// Three times the parts may be asked for, and no more.
func TestThresholdOfALargerStudy(t *testing.T) {
	r := &judge.Result{Study: &study.Study{}}
	for _, c := range []struct {
		share float64
		more  int
		want  string
	}{
		{0.95, 60, "To show that the effectiveness of A is at least 90 %, add 60 parts like those of the study."},
		{0.95, 61, "To show that the effectiveness of A is at least 90 % would take 61 parts more: rather than enlarge the study, bring the errors down."},
		{0.75, 60, "To settle the rejection, which is open, add 60 parts like those of the study (effectiveness of A)."},
		{0.75, 61, "After the correction, repeat the study."},
	} {
		e := newCriterion(Effectiveness, Default[Effectiveness], one(c.share, 0.5, 0.99), "part", 20, 0.95)
		e.More = c.more
		v := &Verdict{Overall: e.Met, Appraisers: []Appraiser{{Name: "A", Criteria: []Criterion{e}}}}
		if got := moreParts(r, v); !strings.HasPrefix(got, c.want) {
			t.Errorf("%v, %d more: %q, want %q", c.share, c.more, got, c.want)
		}
	}
}

// How far a figure is from its level, in parts of what the level leaves.
func TestDistance(t *testing.T) {
	for _, c := range []struct {
		name  string
		x     float64
		level Levels
		want  float64
	}{
		{Miss, 0.10, Default[Miss], 1},   // twice the 5 % allowed
		{Miss, 0.06, Default[Miss], 0.2}, //
		{FalseAlarm, 0.15, Default[FalseAlarm], 0.5},
		{Effectiveness, 0.60, Default[Effectiveness], 1}, // 40 % wrong, 20 % allowed
		{Kappa, 0.10, Default[Kappa], 0.5},
		{Effectiveness, 0.85, Default[Effectiveness], -0.25}, // of the conditional level that it meets
		{Miss, 0.004, Levels{0, 0}, 0.4},                     // a level without room: in parts of 1 %
		{Effectiveness, 0.997, Levels{1, 1}, 0.3},
	} {
		got := newCriterion(c.name, c.level, one(c.x, 0, 1), "part", 50, 0.95).distance()
		if math.Abs(got-c.want) > 1e-12 {
			t.Errorf("%s %v against %v: %v, want %v", c.name, c.x, c.level, got, c.want)
		}
	}
	if got := (Criterion{Met: NotShown, Against: 0.5}).distance(); got != 0 {
		t.Errorf("of what is not known: %v", got)
	}
}
