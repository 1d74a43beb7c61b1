package format

import (
	"errors"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"
	"unicode"

	"pgregory.net/rapid"

	"samecall/agreement"
	"samecall/agreement/interval"
	"samecall/signal"
)

func TestPercent(t *testing.T) {
	for _, c := range []struct {
		share float64
		want  string
	}{
		{0, "0 %"},
		{1, "100 %"}, {1.154, "115 %"},
		{0.999, "99.9 %"},
		{0.9989, "99.9 %"},
		{0.99906, "99.91 %"},
		{0.9999, "99.99 %"},
		{0.99999999, ">99.99 %"},
		{0.9901, "99.0 %"},
		{0.995, "99.5 %"},
		{0.99, "99 %"},
		{0.985, "99 %"},
		{0.984, "98 %"},
		{0.5, "50 %"},
		{1. / 3, "33 %"},
		{0.2, "20 %"},
		{0.1995, "20 %"},
		{0.1994, "19.9 %"},
		{0.125, "12.5 %"},
		{0.0625, "6.3 %"},
		{0.02, "2.0 %"},
		{0.00095, "0.1 %"},
		{0.0004, "0.04 %"},
		{0.00005, "0.01 %"},
		{0.000049, "<0.01 %"},
		{1e-12, "<0.01 %"},
	} {
		got := Percent(c.share)
		if got != c.want {
			t.Errorf("Percent(%v) is %q; want %q", c.share, got, c.want)
		}
	}
}

// All and none are written for all and none only, and what is read is near
// what is.
func TestPercentAlways(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		share := rapid.OneOf(rapid.Float64Range(0, 1), rapid.Map(rapid.Float64Range(-14, 0), func(e float64) float64 { return math.Pow(10, e) }),
			rapid.Map(rapid.Float64Range(-14, 0), func(e float64) float64 { return 1 - math.Pow(10, e) })).Draw(t, "share")
		got := Percent(share)
		digits := strings.TrimSuffix(got, " %")
		x, err := strconv.ParseFloat(strings.TrimLeft(digits, "<>"), 64)
		if err != nil {
			t.Fatalf("%q does not read as a number", got)
		}
		if (x == 100) != (share == 1) {
			t.Fatalf("%v is written %q", share, got)
		}
		if (x == 0) != (share == 0) {
			t.Fatalf("%v is written %q", share, got)
		}
		if math.Abs(x-100*share) > 0.5+1e-9 {
			t.Fatalf("%v is written %q", share, got)
		}
	})
}

func TestPercentRange(t *testing.T) {
	for _, c := range []struct {
		lower, upper float64
		want         string
	}{
		{0, 1, "(0–100)"},
		{0.78, 0.991, "(78–99.1)"},
		{0.0003, 0.14, "(0.03–14)"},
		{0.09, 0.0999, "(9.0–10)"},
		{0.00001, 0.99999, "(<0.01 to >99.99)"},
	} {
		if got := PercentRange(interval.Interval{Lower: c.lower, Upper: c.upper}); got != c.want {
			t.Errorf("PercentRange(%v, %v) is %q; want %q", c.lower, c.upper, got, c.want)
		}
	}
}

func TestFigure(t *testing.T) {
	for _, c := range []struct {
		x    float64
		want string
	}{
		{1, "1.00"}, {0.999, "0.99"}, {0.995, "0.99"}, {0.99, "0.99"}, {0.984, "0.98"}, {0, "0.00"}, {math.Copysign(0, -1), "0.00"},
		{-0.001, "0.00"}, {-0.4, "−0.40"}, {-1, "−1.00"}, {0.0004, "0.00"}, {3.28, "3.28"},
	} {
		if got := Figure(c.x); got != c.want {
			t.Errorf("Figure(%v) is %q; want %q", c.x, got, c.want)
		}
	}
	for _, c := range []struct {
		lower, upper float64
		want         string
	}{{0.5, 0.75, "(0.50–0.75)"}, {-0.25, 0.75, "(−0.25 to 0.75)"}, {0.9, 1, "(0.90–1.00)"}} {
		if got := FigureRange(interval.Interval{Lower: c.lower, Upper: c.upper}); got != c.want {
			t.Errorf("FigureRange(%v, %v) is %q; want %q", c.lower, c.upper, got, c.want)
		}
	}
}

func TestShareAndKappa(t *testing.T) {
	e := agreement.Estimate{Value: 0.75, Interval: interval.Interval{Lower: 0.5, Upper: 1}}
	absent := agreement.Estimate{Absent: errors.New("no calls")}
	unbounded := agreement.Estimate{Value: 0.75, Unbounded: errors.New("one part")}
	for _, c := range []struct{ got, want string }{
		{Share(agreement.Share{Estimate: e}), "75 % (50–100)"},
		{Share(agreement.Share{Estimate: absent}), Dash},
		{Kappa(e), "0.75 (0.50–1.00)"},
		{Kappa(absent), Dash},
		{Kappa(unbounded), "0.75"},
	} {
		if c.got != c.want {
			t.Errorf("%q; want %q", c.got, c.want)
		}
	}
}

func TestProbability(t *testing.T) {
	for _, c := range []struct {
		p    float64
		want string
	}{{0, "< 0.001"}, {0.0004, "< 0.001"}, {0.0005, "0.001"}, {0.05, "0.050"}, {1, "1.000"}} {
		if got := Probability(c.p); got != c.want {
			t.Errorf("Probability(%v) is %q; want %q", c.p, got, c.want)
		}
	}
}

func TestNumbers(t *testing.T) {
	for _, c := range []struct{ got, want string }{
		{Number(12), "12"},
		{Number(-0.5), "−0.5"},
		{Number(1e-5), "0.00001"},
		{Number(1e30), "1e30"},
		{Number(-1e-30), "−1e−30"},
		{strings.Join(Alike(12, 12.018), " "), "12.000 12.018"},
		{strings.Join(Alike(-1, 0.5), " "), "−1.0 0.5"},
		{Count(0), "0"},
		{Count(999), "999"},
		{Count(1000), "1\u00a0000"},
		{Count(1234567), "1\u00a0234\u00a0567"},
		{Counted(1, "part"), "1 part"},
		{Counted(0, "part"), "0 parts"},
		{Counted(2, "part"), "2 parts"},
	} {
		if c.got != c.want {
			t.Errorf("%q; want %q", c.got, c.want)
		}
	}
}

func TestPlain(t *testing.T) {
	for _, c := range []struct{ s, want string }{
		{"", ""},
		{"Früh 1 · דנה 検", "Früh 1 · דנה 検"},
		{"a\tb\nc\rd\u2028e", "a b c d e"},
		{"\x1b[31mred", "\ufffd[31mred"},
		{"\u202eback\u202c \u2066x\u2069", "\ufffdback\ufffd \ufffdx\ufffd"},
		{"\x00\x7f\u0085", "\ufffd\ufffd\ufffd"},
		{"\xff", "\ufffd"},
	} {
		if got := Plain(c.s); got != c.want {
			t.Errorf("Plain(%q) is %q; want %q", c.s, got, c.want)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		s := rapid.OneOf(rapid.String(), rapid.Map(rapid.SliceOf(rapid.Byte()), func(b []byte) string { return string(b) })).Draw(t, "s")
		got := Plain(s)
		for _, r := range got {
			if unicode.IsControl(r) || unicode.Is(unicode.Bidi_Control, r) && r != '\u200e' && r != '\u200f' && r != '\u061c' || unicode.In(r, unicode.Zl, unicode.Zp) {
				t.Fatalf("%q leaves %q", s, r)
			}
		}
		if Plain(got) != got {
			t.Fatalf("%q is not left as it is the second time", s)
		}
	})
}

func TestScale(t *testing.T) {
	limit := func(x float64) *float64 { return &x }
	for _, c := range []struct {
		limits  []*float64
		spreads []float64
		want    int
	}{
		{nil, nil, 0},
		{[]*float64{limit(12), nil}, nil, 0},
		{[]*float64{limit(12), limit(12.018)}, nil, 3},
		{[]*float64{limit(12), limit(12.018)}, []float64{0.0015, 0.0125}, 4}, // two digits of the smallest
		{nil, []float64{250}, 0},
		{nil, []float64{0, -1}, 0},
		{nil, []float64{1e-300}, 12},
	} {
		if got := NewScale("mm", c.limits, c.spreads...).Decimals; got != c.want {
			t.Errorf("NewScale(%v, %v) has %d decimals; want %d", c.limits, c.spreads, got, c.want)
		}
	}
	s := Scale{Decimals: 3, Unit: "mm"}
	for _, c := range []struct{ got, want string }{
		{s.Value(12), "12.000"},
		{s.Value(-0.0004), "0.000"},
		{s.Value(-0.0006), "−0.001"},
		{s.Signed(0.0015), "+0.002"},
		{s.Signed(-0.25), "−0.250"},
		{s.Signed(0), "+0.000"},
		{s.Value(s.RoundUp(0.0011)), "0.002"},
		{s.Value(s.RoundUp(0.002)), "0.002"},
		{s.Value(s.RoundUp(10.2999999999)), "10.300"},
		{s.WithUnit("12"), "12 mm"},
		{Scale{}.WithUnit("12"), "12"},
		{s.Estimate(signal.Estimate{Value: 1, Lower: 0.5, HasLower: true}, s.Value), "1.000 (0.500 to …)"},
		{s.Estimate(signal.Estimate{Value: 1, Upper: 2, HasUpper: true}, s.Value), "1.000 (… to 2.000)"},
	} {
		if c.got != c.want {
			t.Errorf("%q; want %q", c.got, c.want)
		}
	}
}

func TestConfidence(t *testing.T) {
	for level, want := range map[float64]string{0.5: "50 %", 0.95: "95 %", 0.975: "97.5 %", 0.9995: "99.95 %", 0.9999: "99.99 %"} {
		if got := Confidence(level); got != want {
			t.Errorf("Confidence(%v) = %q, want %q", level, got, want)
		}
	}
}

// A zero has no sign, whether it is one or rounds to one.
func TestNoNegativeZero(t *testing.T) {
	minus := math.Copysign(0, -1)
	for _, got := range append(Alike(minus, 0.25), Number(minus), Short(minus), decimal(-0.0001, 2)) {
		if strings.ContainsAny(got, "-−") {
			t.Errorf("%q has a sign", got)
		}
	}
}

// An estimate is written between the ends of its interval, whatever they are
// near to.
func TestPercentApart(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		near := rapid.OneOf(rapid.Float64Range(0, 1), rapid.Map(rapid.Float64Range(-12, 0), func(e float64) float64 { return math.Pow(10, e) }),
			rapid.Map(rapid.Float64Range(-12, 0), func(e float64) float64 { return 1 - math.Pow(10, e) }), rapid.SampledFrom([]float64{0, 1}))
		x := []float64{near.Draw(t, "a"), near.Draw(t, "b"), near.Draw(t, "c")}
		slices.Sort(x)
		write := PercentApart(x[1], x[0], x[2])
		read := func(share float64) (low, high float64) { // what the text may stand for
			text := strings.TrimSuffix(write(share), " %")
			v, err := strconv.ParseFloat(strings.TrimLeft(text, "<>"), 64)
			if err != nil {
				t.Fatal(err)
			}
			switch text[0] {
			case '<':
				return 0, v
			case '>':
				return v, 100
			}
			return v, v
		}
		for i := range 2 {
			low, _ := read(x[i])
			_, high := read(x[i+1])
			if low > high {
				t.Fatalf("%v are written %s, %s, %s", x, write(x[0]), write(x[1]), write(x[2]))
			}
		}
	})
	for _, c := range []struct {
		lower, value, upper float64
		want                string
	}{
		{0.9999996, 0.9999999, 0.99999997, "99.99996 % 99.99999 % >99.99999 %"},
		{0.1, 0.2, 0.3, "10.0 % 20 % 30 %"},
		{0, 0.00000002, 0.5, "0 % <0.01 % 50 %"},
	} {
		write := PercentApart(c.value, c.lower, c.upper)
		if got := write(c.lower) + " " + write(c.value) + " " + write(c.upper); got != c.want {
			t.Errorf("%+v: %s", c, got)
		}
	}
}
