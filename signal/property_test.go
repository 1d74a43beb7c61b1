package signal

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// drawStudy draws a study with a turn at one limit or both, by simulation from
// a drawn seed.
func drawStudy(t *rapid.T) ([]Part, Limits) {
	rng := rand.New(rand.NewPCG(uint64(rapid.IntRange(0, 1<<30).Draw(t, "seed")), 9))
	n, calls := rapid.IntRange(12, 50).Draw(t, "parts"), rapid.IntRange(2, 12).Draw(t, "calls")
	sigma := rapid.Float64Range(0.05, 1.2).Draw(t, "sigma")
	parts := simulate(rng, n, calls, 0, 10, sigma, -3, 13)
	limits := Between(0.1, 9.8)
	switch rapid.IntRange(0, 2).Draw(t, "limits") {
	case 1:
		limits = AtLeast(0.1)
		parts = slices.DeleteFunc(parts, func(p Part) bool { return p.Value > 5 })
	case 2:
		limits = AtMost(9.8)
		parts = slices.DeleteFunc(parts, func(p Part) bool { return p.Value < 5 })
	}
	return parts, limits
}

func drawOptions(t *rapid.T) Options {
	return Options{
		Link: Link(rapid.IntRange(0, 1).Draw(t, "link")), TwoSigmas: rapid.Bool().Draw(t, "two sigmas"),
		LackOfFit: LackOfFitRule(rapid.IntRange(0, 2).Draw(t, "rule")),
	}
}

// sameCurve checks that b is a with every value x turned into to(x), a change
// of unit by scale (negative: mirrored, lower and upper change places).
func sameCurve(t *rapid.T, a, b *Curve, to func(float64) float64, scale float64) {
	t.Helper()
	size := math.Abs(scale)
	eq := func(what string, got, want, unit float64) {
		if math.Abs(got-want) > 1e-5*unit {
			t.Fatalf("%s: %v, want %v", what, got, want)
		}
	}
	eq("log-likelihood", b.LogLikelihood, a.LogLikelihood, 1+math.Abs(a.LogLikelihood))
	for k := range 2 {
		l := a.side(k)
		m := b.side(k)
		if scale < 0 {
			m = b.side(1 - k)
		}
		if (l == nil) != (m == nil) {
			t.Fatal("limits differ")
		}
		if l == nil {
			continue
		}
		if l.Status != m.Status {
			t.Fatalf("status %v, want %v", m.Status, l.Status)
		}
		if !l.Known() {
			continue
		}
		sigma := l.Sigma.Value
		cut, offset := l.Cut, l.Offset
		if scale < 0 {
			cut, offset = l.Cut.flip(), l.Offset.flip()
		}
		cutTo := func(x float64) float64 {
			if scale < 0 {
				return to(-x)
			}
			return to(x)
		}
		for _, e := range []struct {
			what      string
			got, want Estimate
			to        func(float64) float64
			unit      float64
		}{
			{"cut", m.Cut, cut, cutTo, size * sigma},
			{"offset", m.Offset, offset, func(x float64) float64 { return x * size }, size * sigma},
			{"sigma", m.Sigma, l.Sigma, func(x float64) float64 { return x * size }, size * sigma},
			{"acceptance at the limit", m.AtLimit, l.AtLimit, func(x float64) float64 { return x }, 1},
		} {
			eq(e.what, e.got.Value, e.to(e.want.Value), e.unit)
			if e.got.HasLower != e.want.HasLower || e.got.HasUpper != e.want.HasUpper {
				t.Fatalf("%s: bounds %+v, want %+v", e.what, e.got, e.want)
			}
			// Far from the estimate the likelihood is flat: its signed root
			// nears a bound like 1/distance, so that what is left open in it
			// moves a limit with the square of the distance.
			flat := func(limit float64) float64 {
				away := math.Abs(limit-e.want.Value) / (e.unit / size)
				if e.unit == 1 {
					away = 0 // a probability
				}
				return 1 + away + away*away
			}
			if e.want.HasLower {
				eq(e.what+" lower", e.got.Lower, e.to(e.want.Lower), e.unit*flat(e.want.Lower))
			}
			if e.want.HasUpper {
				eq(e.what+" upper", e.got.Upper, e.to(e.want.Upper), e.unit*flat(e.want.Upper))
			}
		}
	}
	for i, p := range a.Parts {
		eq("fitted", b.Parts[i].Fitted, p.Fitted, 1)
	}
	if !slices.Equal(a.Outliers, b.Outliers) {
		t.Fatalf("outliers %v, want %v", b.Outliers, a.Outliers)
	}
}

func (l Limits) transformed(to func(float64) float64) Limits {
	a, b := to(l.Lower), to(l.Upper)
	if to(1) < to(0) {
		return Limits{Lower: b, Upper: a, HasLower: l.HasUpper, HasUpper: l.HasLower}
	}
	return Limits{Lower: a, Upper: b, HasLower: l.HasLower, HasUpper: l.HasUpper}
}

// Shifting and scaling values shifts and scales cuts, offsets and σ and leaves
// probabilities; mirroring values swaps the limits.
func TestFitTransforms(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		parts, limits := drawStudy(t)
		o := drawOptions(t)
		a, errA := Fit(parts, limits, o)
		scale := math.Pow(10, rapid.Float64Range(-4, 4).Draw(t, "log scale"))
		if rapid.Bool().Draw(t, "mirror") {
			scale = -scale
		}
		shift := rapid.Float64Range(-100, 100).Draw(t, "shift") * math.Abs(scale)
		to := func(x float64) float64 { return shift + scale*x }
		moved := slices.Clone(parts)
		for i := range moved {
			moved[i].Value = to(moved[i].Value)
		}
		b, errB := Fit(moved, limits.transformed(to), o)
		if (errA == nil) != (errB == nil) {
			t.Fatalf("%v, moved %v", errA, errB)
		}
		if errA != nil {
			return
		}
		if bad := nonFinite(a); bad != nil {
			t.Fatal(bad)
		}
		sameCurve(t, a, b, to, scale)
	})
}

// The order of parts never matters, and a part's calls may come in two rows of
// its name.
func TestFitOrderAndSplit(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		parts, limits := drawStudy(t)
		o := drawOptions(t)
		for i := range parts {
			parts[i].Name = fmt.Sprint("part ", i)
		}
		a, err := Fit(parts, limits, o)
		if err != nil {
			t.Skip(err)
		}
		var rows []Part
		for i, p := range parts {
			if p.Calls < 2 || i%2 == 0 {
				rows = append(rows, p)
				continue
			}
			one := Part{Name: p.Name, Value: p.Value, Calls: p.Calls / 2, Accepted: min(p.Accepted, p.Calls/2)}
			two := Part{Name: p.Name, Value: p.Value, Calls: p.Calls - one.Calls, Accepted: p.Accepted - one.Accepted}
			rows = append(rows, one, two)
		}
		rng := rand.New(rand.NewPCG(uint64(rapid.IntRange(0, 1000).Draw(t, "shuffle")), 1))
		rng.Shuffle(len(rows), func(i, j int) { rows[i], rows[j] = rows[j], rows[i] })
		b, err := Fit(rows, limits, o)
		if err != nil {
			t.Fatal(err)
		}
		for k := range 2 {
			l, m := a.side(k), b.side(k)
			if l == nil {
				continue
			}
			if l.Cut != m.Cut || l.Sigma != m.Sigma || l.AtLimit != m.AtLimit || l.Status != m.Status {
				t.Fatalf("%+v\n%+v", l, m)
			}
		}
		if a.LogLikelihood != b.LogLikelihood || a.LackOfFit != b.LackOfFit || len(a.Outliers) != len(b.Outliers) {
			t.Fatalf("%+v\n%+v", a.LackOfFit, b.LackOfFit)
		}
		// Without names the rows are parts of their own; the estimates are the
		// same all the same.
		for i := range rows {
			rows[i].Name = ""
		}
		o.LackOfFit = WidenNever
		c, err := Fit(rows, limits, o)
		if err != nil {
			t.Fatal(err)
		}
		for k := range 2 {
			if l, m := a.side(k), c.side(k); l.Known() {
				if math.Abs(l.Cut.Value-m.Cut.Value) > 1e-6*l.Sigma.Value || math.Abs(l.Sigma.Value-m.Sigma.Value) > 1e-6*l.Sigma.Value {
					t.Fatalf("%+v\n%+v", l, m)
				}
			}
		}
	})
}

// whatever checks that nothing that is not a number, and no panic, comes of
// any data.
func whatever(t interface{ Fatalf(string, ...any) }, parts []Part, limits Limits, o Options) {
	c, err := Fit(parts, limits, o)
	if err == nil {
		if bad := nonFinite(c); bad != nil {
			t.Fatalf("%v of %+v, %+v, %+v", bad, parts, limits, o)
		}
		if len(parts) > 0 {
			if r, err := Assess(Process{Mean: parts[0].Value, SD: 1}, c, 0); err == nil {
				for _, e := range r.fields() {
					if !finite(e.Value, e.Lower, e.Upper, e.SE) {
						t.Fatalf("risk %+v of %+v, %+v, %+v", e, parts, limits, o)
					}
				}
			}
		}
	}
	if _, err := Unanimous(parts, limits, 0); err != nil && len(parts) > 0 && limits.check() == nil && checkParts(parts) == nil {
		if _, _, mergeErr := merge(parts); mergeErr == nil {
			t.Fatalf("%v", err)
		}
	}
	if s, err := Short(parts, Lower, limits.Lower, o); err == nil && !finite(s.Cut, s.Bias, s.Repeatability, s.T) {
		t.Fatalf("short study %+v of %+v", s, parts)
	}
	if r, err := FitAppraisers([][]Part{parts, parts}, limits, o); err == nil {
		for _, test := range []Test{r.SameCut, r.SameSigma, r.SameCurve} {
			if !finite(test.Statistic, test.P) {
				t.Fatalf("%+v of %+v", test, parts)
			}
		}
	}
}

func TestFitAnything(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var parts []Part
		for range rapid.IntRange(0, 12).Draw(t, "parts") {
			calls := rapid.IntRange(0, 6).Draw(t, "calls")
			parts = append(parts, Part{Value: float64(rapid.IntRange(-6, 6).Draw(t, "value")), Calls: calls, Accepted: rapid.IntRange(0, calls).Draw(t, "accepted")})
		}
		limits := Limits{Lower: -2, Upper: 2, HasLower: rapid.Bool().Draw(t, "lower"), HasUpper: rapid.Bool().Draw(t, "upper")}
		o := drawOptions(t)
		o.Lapse = rapid.Bool().Draw(t, "lapse")
		whatever(t, parts, limits, o)
	})
}

func FuzzFit(f *testing.F) {
	f.Add([]byte{0, 0, 9, 1, 3, 9, 2, 9, 9}, -1.0, 1.0, byte(3), 1.0)
	f.Add([]byte{0, 9, 9, 1, 0, 9, 2, 9, 9, 3, 4, 9}, 0.0, 5.0, byte(7), 1e-9)
	f.Fuzz(func(t *testing.T, data []byte, lower, upper float64, flags byte, unit float64) {
		var parts []Part
		for i := 0; i+2 < len(data) && i < 3*40; i += 3 {
			calls := int(data[i+2] % 20)
			parts = append(parts, Part{Value: float64(int8(data[i])) * unit, Calls: calls, Accepted: int(data[i+1]) % (calls + 1)})
		}
		limits := Limits{Lower: lower, Upper: upper, HasLower: flags&1 != 0, HasUpper: flags&2 != 0}
		whatever(t, parts, limits, Options{Link: Link(flags >> 2 & 1), TwoSigmas: flags&8 != 0, Lapse: flags&16 != 0, LackOfFit: LackOfFitRule(flags >> 5 & 1)})
	})
}

func BenchmarkFitParts(b *testing.B) {
	for _, n := range []int{50, 500, 5000, 50000} {
		parts := simulate(rand.New(rand.NewPCG(1, 1)), n, 9, 0, 10, 0.5, -3, 13)
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			for b.Loop() {
				if _, err := Fit(parts, Between(0, 10), Options{}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// flip returns the estimate of minus the quantity.
func (e Estimate) flip() Estimate {
	e.Value = -e.Value
	e.Lower, e.Upper = -e.Upper, -e.Lower
	e.HasLower, e.HasUpper = e.HasUpper, e.HasLower
	if !e.HasLower {
		e.Lower = 0
	}
	if !e.HasUpper {
		e.Upper = 0
	}
	return e
}
