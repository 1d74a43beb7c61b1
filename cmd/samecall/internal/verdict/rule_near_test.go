package verdict

import (
	"fmt"
	"strings"
	"testing"
	"testing/fstest"

	"samecall/cmd/samecall/internal/judge"
	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

// limitAt is a fit at a limit whose grey zone is from and to.
func limitAt(side signal.Side, limit, offset, sigma, from, to, share float64) *signal.LimitFit {
	return &signal.LimitFit{
		Side: side, Limit: limit, HasLimit: true,
		Cut: signal.Estimate{Value: limit + offset}, Offset: signal.Estimate{Value: offset},
		Sigma: signal.Estimate{Value: sigma, Upper: 2 * sigma, HasUpper: true},
		From:  from, To: to, Width: signal.Estimate{Value: to - from},
		Share: signal.Estimate{Value: share}, HasShare: share > 0,
	}
}

// nearFinder is a finder of one lower limit, 10, with a grey zone from 9 to 11.
// Of each appraiser's wrong calls some lie in the zone, the others elsewhere.
func nearFinder(appraisers, withWrong, inside, elsewhere int, offset, share float64) *finder {
	limits := signal.Limits{Lower: 10, HasLower: true}
	c := &signal.Curve{Limits: limits, Lower: limitAt(signal.Lower, 10, offset, 1, 9, 11, share), Parts: []signal.PartFit{
		{Name: "in", Value: 9.5, Calls: inside + 9, Accepted: inside},
		{Name: "out", Value: 12, Calls: elsewhere + 9, Accepted: 9},
	}}
	f := &finder{
		Result: &judge.Result{
			Study: &study.Study{Appraisers: names[:appraisers]},
			Zone:  &judge.Zone{Limits: limits, Curves: &signal.Appraisers{Pooled: c, Each: make([]*signal.Curve, appraisers)}},
		},
		levels: Default, missed: true, together: pattern{wrong: inside + elsewhere}, patterns: make([]pattern, appraisers),
	}
	for a := range withWrong {
		f.patterns[a].wrong = 1
	}
	return f
}

// The grey zone is what is behind the wrong calls only if they lie in it, and
// if they are not those of one or two of several appraisers.
func TestThresholdsOfTheGreyZone(t *testing.T) {
	for _, c := range []struct {
		appraisers, withWrong, inside, elsewhere int
		share                                    float64
		want                                     string
	}{
		{1, 1, 20, 0, 0.31, codeWide}, {1, 1, 20, 0, 0.30, codeNear},
		{1, 1, 20, 0, 0, codeNear}, // no tolerance: nothing tells whether it is wide
		{1, 1, 19, 1, 0.5, codeWide}, {1, 1, 18, 1, 0.5, ""},
		{3, 3, 20, 0, 0.5, codeWide}, {3, 2, 20, 0, 0.5, ""}, {4, 3, 20, 0, 0.5, codeWide},
	} {
		got := ""
		for _, cause := range nearLimits(nearFinder(c.appraisers, c.withWrong, c.inside, c.elsewhere, 0, c.share)) {
			got = cause.Code
			if wide := strings.Contains(cause.Text, "wide for this tolerance"); wide != (c.share > 0) {
				t.Errorf("%+v: %s", c, cause.Text)
			}
		}
		if got != c.want {
			t.Errorf("%+v: %q", c, got)
		}
	}
}

// A cut that lies half a σ or more beside its limit is told, though it is no
// cause of its own.
func TestGreyZoneTellsAnUnsureShift(t *testing.T) {
	for offset, want := range map[float64]string{
		0.49: "The grey zone is 2.0 wide (50 % of the tolerance) at the lower limit. That is wide for this tolerance.",
		-0.5: "That is wide for this tolerance. The cut lies 0.5 below the lower limit; whether it is shifted is not certain.",
	} {
		causes := nearLimits(nearFinder(1, 1, 20, 0, offset, 0.5))
		if len(causes) != 1 || !strings.HasPrefix(causes[0].Text, "All wrong calls lie in the grey zone of a limit. ") || !strings.HasSuffix(causes[0].Text, want) {
			t.Errorf("%v: %+v", offset, causes)
		}
	}
	if causes := nearLimits(nearFinder(1, 1, 39, 1, 0, 0.5)); !strings.HasPrefix(causes[0].Text, "39 of 40 wrong calls lie in the grey zone of a limit.") {
		t.Errorf("%+v", causes)
	}
}

// With the calls at random taken out, the rest may leave σ open: the zone is
// then what lies next to the cuts.
func TestNextToCuts(t *testing.T) {
	c := &signal.Curve{Lower: limitAt(signal.Lower, 10, 0.2, 1, 0, 0, 0), Upper: limitAt(signal.Upper, 20, 9, 1, 0, 0, 0)}
	for _, x := range []float64{9, 10, 10.1, 10.5, 11, 19, 21} {
		c.Parts = append(c.Parts, signal.PartFit{Value: x})
	}
	near := nextToCuts(c)
	for x, want := range map[float64]bool{10: false, 10.1: true, 10.5: true, 11: false, 19: false, 21: true} {
		if near(x) != want {
			t.Errorf("%v is next to a cut: %v", x, !want)
		}
	}
}

// Wrong calls far from the limits are those of somebody if there are five parts
// of them.
func TestThresholdOfScatteredParts(t *testing.T) {
	for parts, want := range map[int]string{5: "scattered:a", 4: "far_errors:everyone"} {
		var b strings.Builder
		b.WriteString("part,value,a-1,a-2,a-3,a-4,a-5,a-6,a-7,a-8,a-9\n")
		for i := range 80 {
			x := 9.6 + 0.01*float64(i) + 0.005
			wrong := 0
			if i%8 == 3 && i/8 < parts {
				wrong = 3
			}
			fmt.Fprintf(&b, "P%02d,%.4f%s%s\n", i+1, x, strings.Repeat(fmt.Sprint(",", btoi(x < 10)), wrong), strings.Repeat(fmt.Sprint(",", btoi(x > 10)), 9-wrong))
		}
		_, v := decide(t, fstest.MapFS{"calls.csv": {Data: []byte(b.String())}, "study.toml": {Data: []byte("calls = \"calls.csv\"\nlower = 10\n")}})
		if got := found(v); got != want {
			t.Errorf("%d parts: %s", parts, got)
		}
		if text := v.Causes[0].Text; parts == 5 && !strings.HasPrefix(text, "Some calls of a go without regard to the value: outside the grey zone 15 of 720 calls are wrong, up to 0.365 from the nearest limit.") {
			t.Error(text)
		}
	}
}

// Calls that are wrong every time are an idea of a good part only where they go
// one way: 80 % of them.
func TestThresholdOfOneWay(t *testing.T) {
	for _, c := range []struct {
		w    ways
		want string
	}{
		{ways{misses: 8, falseAlarms: 2}, "the idea of a good part that is shifted"},
		{ways{falseAlarms: 10}, "the idea of a good part that is shifted"},
		{ways{misses: 7, falseAlarms: 2}, "Check the labels and the records of parts P1 and P2 first"},
		{ways{others: 9}, "Check the labels and the records"},
	} {
		f := &finder{Result: &judge.Result{Study: &study.Study{Parts: []string{"P1", "P2"}}}}
		if got := f.steadyStep(pattern{steady: []int{0, 1}, steadyCalls: c.w}, "Ash"); !strings.Contains(got, c.want) || !strings.Contains(got, "Ash") {
			t.Errorf("%+v: %s", c.w, got)
		}
	}
}
