package signal

import (
	"cmp"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"
	"pgregory.net/rapid"
)

// simulate draws parts around known cuts: the truth is outside the program.
func simulate(rng *rand.Rand, n, calls int, lower, upper, sigma, from, to float64) []Part {
	parts := make([]Part, n)
	for i := range parts {
		x := from + (to-from)*(float64(i)+rng.Float64())/float64(n)
		p := normalCDF((x-lower)/sigma) - normalCDF((x-upper)/sigma)
		parts[i] = Part{Value: x, Calls: calls}
		for range calls {
			if rng.Float64() < p {
				parts[i].Accepted++
			}
		}
	}
	return parts
}

// nonFinite lists what is not a finite number in a curve.
func nonFinite(c *Curve) (bad []string) {
	check := func(name string, xs ...float64) {
		if !finite(xs...) {
			bad = append(bad, name)
		}
	}
	estimate := func(name string, e Estimate) {
		check(name, e.Value, e.Lower, e.Upper, e.SE)
		if e.HasLower && e.Lower > e.Value || e.HasUpper && e.Upper < e.Value {
			if !e.Absent && e.Method != "the outermost part, which was always accepted" && !(name == "cut" || name == "offset") {
				bad = append(bad, name+" outside its interval")
			}
		}
		if (!e.HasLower || !e.HasUpper) && e.Why == "" && e.Method != "" {
			bad = append(bad, name+" has no bound and no reason")
		}
	}
	c.each(func(l *LimitFit) {
		if l.Known() {
			estimate("cut ", l.Cut)
			estimate("offset ", l.Offset)
		}
		estimate("sigma", l.Sigma)
		estimate("width", l.Width)
		estimate("share", l.Share)
		estimate("at limit", l.AtLimit)
		check("zone", l.From, l.To)
		if l.Status != Fitted && l.Why == "" {
			bad = append(bad, "status without reason")
		}
	})
	check("likelihood", c.LogLikelihood, c.CallLogLikelihood)
	f := c.LackOfFit
	check("lack of fit", f.Deviance, f.X2, f.P, f.Factor)
	if c.SameSigma != nil {
		check("same sigma", c.SameSigma.Statistic, c.SameSigma.P)
	}
	for _, p := range c.Parts {
		check("part", p.Fitted, p.Residual, p.Tail, p.Leverage, p.CutChange[0], p.CutChange[1], p.LogSigmaChange[0], p.LogSigmaChange[1])
		estimate("band", c.Band(p.Value))
	}
	for _, p := range c.Params {
		check(p.Name, p.Value, p.SE, p.ExpectedSE)
	}
	estimate("lapse", c.Lapse)
	if c.Without != nil {
		bad = append(bad, nonFinite(c.Without)...)
	}
	return bad
}

// Any unit and any offset: a micrometre's band around 250 mm, microns, inches.
func TestFitAnyUnit(t *testing.T) {
	base := mustFit(t, study(t), studyLimits, Options{})
	for _, u := range []struct {
		name         string
		scale, shift float64
	}{
		{"0.0004 mm around 250 mm", 0.0004 / 0.095, 250}, {"microns", 1000, -5e4}, {"inches", 1 / 25.4, 0}, {"tiny", 1e-12, 0}, {"huge", 1e12, 3e13},
	} {
		t.Run(u.name, func(t *testing.T) {
			to := func(x float64) float64 { return u.shift + u.scale*x }
			parts := study(t)
			for i := range parts {
				parts[i].Value = to(parts[i].Value)
			}
			c := mustFit(t, parts, Between(to(0.450), to(0.545)), Options{})
			resolution := 1e-6 + 1e-14*math.Abs(u.shift)/u.scale/0.0077
			for _, x := range [][2]float64{
				{c.Lower.Offset.Value / u.scale, base.Lower.Offset.Value}, {c.Upper.Offset.Value / u.scale, base.Upper.Offset.Value},
				{c.Lower.Offset.Lower / u.scale, base.Lower.Offset.Lower}, {c.Upper.Offset.Upper / u.scale, base.Upper.Offset.Upper},
				{c.Lower.Sigma.Value / u.scale, base.Lower.Sigma.Value}, {c.Lower.Sigma.Upper / u.scale, base.Lower.Sigma.Upper},
				{c.Lower.AtLimit.Value * 0.0077, base.Lower.AtLimit.Value * 0.0077}, {c.Upper.AtLimit.Lower * 0.0077, base.Upper.AtLimit.Lower * 0.0077},
			} {
				if math.Abs(x[0]-x[1]) > 0.0077*resolution {
					t.Errorf("%v, in the study's own unit %v", x[0], x[1])
				}
			}
		})
	}
}

func TestFitHardCases(t *testing.T) {
	p := func(v float64, accepted int) Part { return Part{Value: v, Accepted: accepted, Calls: 9} }
	lower := []Part{p(-4, 0), p(-3, 0), p(-2, 1), p(-1, 3), p(0, 5), p(1, 8), p(2, 9), p(3, 9)}
	inside := []Part{p(10, 9), p(15, 9), p(20, 9)}
	upper := []Part{p(27, 9), p(28, 8), p(29, 6), p(30, 4), p(31, 1), p(32, 0), p(33, 0)}
	sharp := []Part{p(27, 9), p(28, 9), p(29, 9), p(31, 0), p(32, 0)}
	join := func(ps ...[]Part) []Part { return slices.Concat(ps...) }
	limits := Between(0, 30)
	for _, c := range []struct {
		name         string
		parts        []Part
		limits       Limits
		lower, upper Status
	}{
		{"both", join(lower, inside, upper), limits, Fitted, Fitted},
		{"upper separated", join(lower, inside, sharp), limits, Fitted, Separated},
		{"no part beyond the upper limit", join(lower, inside), limits, Fitted, OneSided},
		{"no part inside at the upper side", join(lower, inside[:1]), limits, Fitted, OneSided},
		{"one mixed part", []Part{p(-2, 0), p(-1, 0), p(0, 4), p(1, 9), p(2, 9)}, AtLeast(0), QuasiSeparated, OneSided},
		{"one mixed part at each", []Part{p(-2, 0), p(-1, 0), p(0, 4), p(1, 9), p(2, 9), p(28, 9), p(29, 5), p(30, 0)}, limits, QuasiSeparated, QuasiSeparated},
		{"no mixed part", []Part{p(-2, 0), p(-1, 0), p(1, 9), p(2, 9), p(28, 9), p(31, 0)}, limits, Separated, Separated},
		{"fewer than five values", []Part{p(-1, 1), p(0, 3), p(1, 8)}, AtLeast(0), Fitted, OneSided},
		{"two values", []Part{p(0, 3), p(1, 6)}, AtLeast(0), Fitted, OneSided},
		{"all inside on one side of the middle", []Part{p(-2, 0), p(-1, 2), p(0, 4), p(1, 8), p(2, 9), p(32, 0), p(33, 0)}, limits, Fitted, Separated},
	} {
		t.Run(c.name, func(t *testing.T) {
			for _, o := range []Options{{}, {Link: Logit}, {TwoSigmas: true}, {Lapse: true}, {LackOfFit: WidenAlways}} {
				f, err := Fit(c.parts, c.limits, o)
				if err != nil {
					t.Fatal(err)
				}
				if bad := nonFinite(f); bad != nil {
					t.Errorf("%+v: %v", o, bad)
				}
				for k, want := range [2]Status{c.lower, c.upper} {
					if l := f.side(k); l != nil && l.Status != want {
						t.Errorf("%s limit %v, want %v", l.Side, l.Status, want)
					}
				}
			}
		})
	}
}

// Where only one limit is separated each limit is fitted by itself: the other
// limit's fit is that of its own half.
func TestFitOneLimitSeparated(t *testing.T) {
	p := func(v float64, accepted int) Part { return Part{Value: v, Accepted: accepted, Calls: 9} }
	lower := []Part{p(-4, 0), p(-3, 0), p(-2, 1), p(-1, 3), p(0, 5), p(1, 8), p(2, 9), p(3, 9)}
	both := append(slices.Clone(lower), p(27, 9), p(29, 9), p(31, 0), p(32, 0))
	a, b := mustFit(t, lower, AtLeast(0), Options{}), mustFit(t, both, Between(0, 30), Options{})
	near(t, "cut", b.Lower.Cut.Value, a.Lower.Cut.Value, 1e-9)
	near(t, "cut from", b.Lower.Cut.Lower, a.Lower.Cut.Lower, 1e-6)
	near(t, "sigma", b.Lower.Sigma.Value, a.Lower.Sigma.Value, 1e-9)
	if g := b.Upper.Gap; g == nil || g.Accept != 29 || g.Reject != 31 {
		t.Errorf("gap %+v", g)
	}
}

// A good part far from the limits that was always rejected is named, and the
// fit without it is near the truth; the fit with it is shown all the same.
func TestFitOutlier(t *testing.T) {
	parts := study(t)
	clean := mustFit(t, parts, studyLimits, Options{})
	i := slices.IndexFunc(parts, func(p Part) bool { return p.Value == 0.498698 })
	parts[i].Accepted = 0
	c := mustFit(t, parts, studyLimits, Options{})
	if !slices.Equal(c.Outliers, []int{i}) || !c.Parts[i].Outlier {
		t.Fatalf("outliers %v, want part %d", c.Outliers, i)
	}
	if c.Without == nil {
		t.Fatal("no fit without it")
	}
	// What the others make expected is not what the curve that it bends does.
	if e := c.ExpectedByOthers(i); e < 0.999 || c.Parts[i].Fitted > 0.99 {
		t.Errorf("%v expected by the others, %v with it", e, c.Parts[i].Fitted)
	}
	if c.ExpectedByOthers(i+1) != c.Parts[i+1].Fitted {
		t.Error("a part that is no outlier")
	}
	near(t, "cut without", c.Without.Lower.Cut.Value, clean.Lower.Cut.Value, 1e-4)
	if !(c.Lower.Sigma.Value > 1.5*c.Without.Lower.Sigma.Value) {
		t.Errorf("σ %v with, %v without", c.Lower.Sigma.Value, c.Without.Lower.Sigma.Value)
	}
	// The same where no other part is mixed.
	sharp := study(t)
	for j, p := range sharp {
		sharp[j].Accepted = 0
		if studyLimits.Inside(p.Value) {
			sharp[j].Accepted = p.Calls
		}
	}
	sharp[i].Accepted = 0
	c = mustFit(t, sharp, studyLimits, Options{})
	if !slices.Equal(c.Outliers, []int{i}) || c.Without == nil || c.Without.Lower.Status != Separated {
		t.Errorf("outliers %v, want part %d", c.Outliers, i)
	}
}

// σ comparable to the tolerance: the grey zones overlap.
func TestFitOverlappingZones(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	parts := simulate(rng, 60, 60, 0, 3, 1, -4, 7)
	c := mustFit(t, parts, Between(0, 3), Options{})
	near(t, "lower cut", c.Lower.Cut.Value, 0, 4*c.Lower.Cut.SE)
	near(t, "upper cut", c.Upper.Cut.Value/3, 1, 4*c.Upper.Cut.SE/3)
	near(t, "sigma", c.Lower.Sigma.Value, 1, 4*c.Lower.Sigma.SE)
	if len(c.Warnings) == 0 {
		t.Error("overlapping zones without a word")
	}
	if bad := nonFinite(c); bad != nil {
		t.Error(bad)
	}
}

func TestFitLapse(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	parts := simulate(rng, 200, 9, 0, 10, 0.3, -3, 13)
	for i := range parts {
		for range 9 {
			if rng.Float64() < 0.06 { // made at random; the call it replaces is forgotten
				parts[i].Accepted += rng.IntN(2)
				parts[i].Calls++
			}
		}
	}
	c := mustFit(t, parts, Between(0, 10), Options{Lapse: true})
	if !c.HasLapse || math.Abs(c.Lapse.Value-0.057) > 0.025 || !(c.Lapse.Lower > 0) || !c.Lapse.HasUpper {
		t.Errorf("lapse %+v, want about 0.06/1.06", c.Lapse)
	}
	near(t, "sigma", c.Lower.Sigma.Value, 0.3, 4*c.Lower.Sigma.SE)
	plain := mustFit(t, parts, Between(0, 10), Options{})
	if plain.Lower.Sigma.Value < c.Lower.Sigma.Value {
		t.Error("random calls must widen the plain curve")
	}
	// Calls without lapses: the rate is none, with an upper bound.
	none := mustFit(t, simulate(rng, 100, 9, 0, 10, 0.3, -3, 13), Between(0, 10), Options{Lapse: true})
	if none.Lapse.Value > 0.01 || !none.Lapse.HasUpper || none.Lapse.Upper > 0.1 {
		t.Errorf("lapse %+v", none.Lapse)
	}
}

// Parts that differ by more than their value widen the intervals.
func TestFitLackOfFitWidens(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 8))
	parts := make([]Part, 60)
	for i := range parts {
		x := -3 + 0.1*float64(i)
		form := rng.NormFloat64() // form error of its own
		parts[i] = Part{Value: x, Calls: 30}
		for range 30 {
			if rng.Float64() < normalCDF((x+form)/0.5) {
				parts[i].Accepted++
			}
		}
	}
	wide := mustFit(t, parts, AtLeast(0), Options{})
	plain := mustFit(t, parts, AtLeast(0), Options{LackOfFit: WidenNever})
	f := wide.LackOfFit
	if !f.Tested || !(f.P < 1e-6) || !f.Applied || plain.LackOfFit.Applied {
		t.Fatalf("%+v", f)
	}
	ratio := (wide.Lower.Cut.Upper - wide.Lower.Cut.Lower) / (plain.Lower.Cut.Upper - plain.Lower.Cut.Lower)
	if math.Abs(ratio/math.Sqrt(f.Factor)-1) > 0.1 {
		t.Errorf("intervals %v times as wide, factor √%v", ratio, f.Factor)
	}
}

func TestFitRefuses(t *testing.T) {
	good := []Part{{Value: 0, Accepted: 1, Calls: 3}, {Value: 1, Accepted: 2, Calls: 3}}
	for name, c := range map[string]struct {
		parts  []Part
		limits Limits
		o      Options
	}{
		"no limit":       {good, Limits{}, Options{}},
		"limits swapped": {good, Between(2, 1), Options{}},
		"NaN limit":      {good, AtLeast(math.NaN()), Options{}},
		"no parts":       {nil, AtLeast(0), Options{}},
		"no calls":       {[]Part{{Value: 1}}, AtLeast(0), Options{}},
		"one value":      {[]Part{{Value: 1, Calls: 2, Accepted: 1}, {Value: 1, Calls: 1}}, AtLeast(0), Options{}},
		"NaN value":      {[]Part{{Value: math.NaN(), Calls: 2}}, AtLeast(0), Options{}},
		"too many":       {[]Part{{Value: 1, Calls: 2, Accepted: 3}}, AtLeast(0), Options{}},
		"two values":     {[]Part{{Name: "a", Value: 1, Calls: 2}, {Name: "a", Value: 2, Calls: 2}}, AtLeast(0), Options{}},
		"confidence":     {good, AtLeast(0), Options{Confidence: 95}},
		"link":           {good, AtLeast(0), Options{Link: 7}},
	} {
		if _, err := Fit(c.parts, c.limits, c.o); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
	swapped := []Part{{Value: 0, Accepted: 3, Calls: 3}, {Value: 1, Accepted: 2, Calls: 3}, {Value: 2, Accepted: 1, Calls: 3}}
	if _, err := Fit(swapped, AtLeast(1), Options{}); !errors.Is(err, ErrNoTurn) {
		t.Errorf("accept and reject swapped: %v", err)
	}
	all := []Part{{Value: 0, Accepted: 3, Calls: 3}, {Value: 1, Accepted: 3, Calls: 3}}
	if _, err := Fit(all, Between(0, 1), Options{}); !errors.Is(err, ErrNoTurn) {
		t.Errorf("all accepted: %v", err)
	}
}

// The gradient and Hessian are those of the log-likelihood.
func TestLikelihoodDerivatives(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		m := &model{link: Link(rapid.IntRange(0, 1).Draw(t, "link")), lapse: absent, first: []int{0, 6}}
		in := indices{cut: [2]int{0, 1}, logSigma: [2]int{2, 3}}
		m.n = 4
		theta := []float64{rapid.Float64Range(-1, -0.2).Draw(t, "mL"), rapid.Float64Range(0.2, 1).Draw(t, "mU"), rapid.Float64Range(-3, 0).Draw(t, "sL"), rapid.Float64Range(-3, 0).Draw(t, "sU")}
		switch rapid.IntRange(0, 3).Draw(t, "limits") {
		case 0:
			in = indices{cut: [2]int{0, absent}, logSigma: [2]int{1, absent}}
			m.n, theta = 2, []float64{theta[0], theta[2]}
		case 1:
			in = indices{cut: [2]int{absent, 0}, logSigma: [2]int{absent, 1}}
			m.n, theta = 2, []float64{theta[1], theta[3]}
		case 2:
			in.logSigma[1] = 2
			m.n, theta = 3, theta[:3]
		}
		if rapid.Bool().Draw(t, "lapse") {
			m.lapse = m.n
			m.n++
			theta = append(theta, rapid.Float64Range(-5, 0).Draw(t, "logit lapse"))
		}
		if in.logSigma == [2]int{2, 3} && m.lapse == absent && rapid.Bool().Draw(t, "rounded kink") {
			m.soft = 0.05
		}
		m.shift = [2]float64{rapid.Float64Range(-1, 1).Draw(t, "shift"), 0}
		m.groups = []indices{in}
		for range 6 {
			m.x = append(m.x, rapid.Float64Range(-1.5, 1.5).Draw(t, "x"))
			m.accepted = append(m.accepted, float64(rapid.IntRange(0, 3).Draw(t, "accepted")))
			m.rejected = append(m.rejected, float64(rapid.IntRange(0, 3).Draw(t, "rejected")))
		}
		n := m.n
		g, h := make([]float64, n), make([]float64, n*n)
		gu, gd, scratch := make([]float64, n), make([]float64, n), make([]float64, n*n)
		l := m.eval(theta, g, h)
		if math.IsInf(l, -1) || l < -1e4 {
			t.Skip("impossible or extreme")
		}
		const step = 1e-5
		for i := range n {
			up, down := slices.Clone(theta), slices.Clone(theta)
			up[i] += step
			down[i] -= step
			lu, ld := m.eval(up, gu, scratch), m.eval(down, gd, scratch)
			if math.IsInf(lu, -1) || math.IsInf(ld, -1) {
				t.Skip("at the edge")
			}
			size := 1.0
			for j := range n {
				size += math.Abs(g[j]) + math.Abs(h[i*n+j])
			}
			if d := (lu - ld) / (2 * step); math.Abs(d-g[i]) > 1e-4*size {
				t.Fatalf("gradient %d: %v, by differences %v", i, g[i], d)
			}
			for j := range n {
				if d := (gu[j] - gd[j]) / (2 * step); math.Abs(d-h[i*n+j]) > 1e-3*size {
					t.Fatalf("hessian %d,%d: %v, by differences %v", i, j, h[i*n+j], d)
				}
			}
		}
	})
}

// A σ for each limit leaves more room for lapses than one σ for both: their
// upper bound cannot be the smaller one.
func TestLapseBoundWithTwoSigmas(t *testing.T) {
	bound := func(two bool) float64 {
		c, err := Fit(study(t), Between(0.45, 0.545), Options{Lapse: true, TwoSigmas: two})
		if err != nil {
			t.Fatal(err)
		}
		if !c.HasLapse || !c.Lapse.HasUpper {
			t.Fatalf("no bound: %+v", c.Lapse)
		}
		return c.Lapse.Upper
	}
	if one, two := bound(false), bound(true); two < 0.99*one {
		t.Errorf("bound %v with two σ, %v with one", two, one)
	}
}

// A limit whose calls do not turn is no reason to judge its parts by the other
// limit's curve: they are left out of the fit's figures, and the part that
// stands against the turn is named.
func TestPartsWithoutCut(t *testing.T) {
	parts := []Part{
		{Name: "a", Value: 9.7, Calls: 6}, {Name: "b", Value: 9.9, Calls: 6, Accepted: 2}, {Name: "c", Value: 10, Calls: 6, Accepted: 3},
		{Name: "d", Value: 10.1, Calls: 6, Accepted: 4}, {Name: "e", Value: 10.4, Calls: 6, Accepted: 6},
		{Name: "f", Value: 11.9, Calls: 6, Accepted: 4}, {Name: "g", Value: 12.1, Calls: 6, Accepted: 1}, {Name: "h", Value: 12.4, Calls: 6},
	}
	clean := mustFit(t, parts[:5], AtLeast(10), Options{})
	c := mustFit(t, append(parts, Part{Name: "typed", Value: 120, Calls: 6, Accepted: 6}), Between(10, 12), Options{})
	if c.Upper.Known() || c.Upper.Why != "calls do not turn towards acceptance from the upper limit inwards: part typed at 120, the farthest out, was always accepted; check its value" {
		t.Errorf("upper limit: %q", c.Upper.Why)
	}
	for i, p := range c.Parts {
		if p.NoCut != (i >= 5) || p.NoCut && (p.Residual != 0 || p.Outlier) {
			t.Errorf("%+v", p)
		}
	}
	near(t, "log-likelihood", c.LogLikelihood, clean.LogLikelihood, 1e-6)
	if c.LackOfFit.DevianceDF != clean.LackOfFit.DevianceDF {
		t.Errorf("%d degrees of freedom, %d without the other limit", c.LackOfFit.DevianceDF, clean.LackOfFit.DevianceDF)
	}
	for _, w := range []struct {
		parts  []Part
		limits Limits
		why    string
	}{
		{parts, AtLeast(10), "part h at 12.4, the farthest in, was always rejected; is there another limit?"},
		{[]Part{{Value: 0, Accepted: 3, Calls: 3}, {Value: 1, Accepted: 1, Calls: 3}, {Value: 2, Calls: 3}}, AtLeast(1), "; check that accept and reject are not swapped"},
	} {
		if _, err := Fit(w.parts, w.limits, Options{}); err == nil || !strings.HasSuffix(err.Error(), w.why) {
			t.Errorf("%v", err)
		}
	}
}

// A part called once shows no scatter: its term of X² is its odds, whatever the
// curve. With the curve true, the test found lack of fit in a third of such
// studies.
func TestNoLackOfFitOfSingleCalls(t *testing.T) {
	parts := simulate(rand.New(rand.NewPCG(5, 5)), 60, 1, 0, 1, 0.12, -0.3, 1.3)
	c := mustFit(t, parts, Between(0, 1), Options{LackOfFit: WidenAlways})
	if f := c.LackOfFit; f.Tested || f.Applied || !strings.Contains(f.Why, "called more than once") {
		t.Errorf("%+v", f)
	}
}

// With two σs and few parts the likelihood can have several maxima; the one
// returned is hardly ever beaten from forty random starts: in one study of a
// hundred at most.
func TestMaximumOfTwoSigmas(t *testing.T) {
	rng := rand.New(rand.NewPCG(6, 6))
	fitted, beaten := 0, 0
	for range 300 {
		parts := simulate(rng, 24, 3, 0, 1, 0.05+0.2*rng.Float64(), -0.5, 1.5)
		c, err := Fit(parts, Between(0, 1), Options{TwoSigmas: true, LackOfFit: WidenNever})
		if err != nil || len(c.blocks) != 1 || c.separatedAnywhere() || !c.Lower.Known() || !c.Upper.Known() {
			continue
		}
		fitted++
		b := c.blocks[0]
		s := newSolver(b.m)
		for range 40 {
			for i := range s.theta {
				s.theta[i] = b.theta[i] + rng.NormFloat64()*math.Min(2, 4*math.Sqrt(b.cov(i, i)))
			}
			if out := s.maximise(absent, convergence); out.converged && !out.atBound && out.loglik > b.loglik+1e-3 {
				beaten++
				break
			}
		}
	}
	if fitted < 200 || beaten > fitted/100 {
		t.Errorf("%d of %d maxima are beaten", beaten, fitted)
	}
}

// Where the curve is true, lack of fit is found at its level: in 10 % of the
// studies, give or take what so few calls a part and 400 studies leave. By the
// chi-square tail, which such calls do not have, it is found in 17 %.
func TestLackOfFitKeepsItsLevel(t *testing.T) {
	rng := rand.New(rand.NewPCG(9, 9))
	tested, found := 0, 0
	for range 400 {
		parts := simulate(rng, 40, 3, 0, 1, 0.08, -0.25, 1.25)
		c, err := Fit(parts, Between(0, 1), Options{SkipIntervals: true})
		if err != nil || !c.LackOfFit.Tested {
			continue
		}
		tested++
		if c.LackOfFit.P < 0.10 {
			found++
		}
	}
	if share := float64(found) / float64(tested); tested < 300 || share < 0.06 || share > 0.14 {
		t.Errorf("found in %d of %d", found, tested)
	}
}

// With lack of fit the cut-off is the factor times the quantile of F(1, df), by
// distuv's F, and the intervals end there.
func TestLackOfFitCutOff(t *testing.T) {
	parts := []Part{{Value: -3, Calls: 20}, {Value: -2, Calls: 20, Accepted: 2}, {Value: -1, Calls: 20, Accepted: 2}, {Value: 0, Calls: 20, Accepted: 13},
		{Value: 0.5, Calls: 20, Accepted: 9}, {Value: 1, Calls: 20, Accepted: 18}, {Value: 2, Calls: 20, Accepted: 17}, {Value: 3, Calls: 20, Accepted: 20}}
	c := mustFit(t, parts, AtLeast(0), Options{LackOfFit: WidenAlways})
	f := c.LackOfFit
	if !f.Applied {
		t.Fatalf("%+v", f)
	}
	cutoff := f.Factor * distuv.F{D1: 1, D2: float64(f.DF)}.Quantile(0.95)
	nearRel(t, "cut-off", c.crit, cutoff, 1e-9)
	b := c.blocks[0]
	p := newProfiler(newSolver(b.m), b.theta, b.loglik, b.cov, b.m.groups[0].cut[0])
	nearRel(t, "lost at the upper end of the cut", sq(p.root(c.sc.in(c.Lower.Cut.Upper))), cutoff, 1e-5)
}

func TestNamesOfNothing(t *testing.T) {
	for _, name := range []string{Status(9).String(), Status(-1).String(), Finding(9).String(), GRRBand(9).String()} {
		if !strings.HasPrefix(name, "signal.") {
			t.Errorf("%q", name)
		}
	}
	if s := QuasiSeparated.String(); s != "quasi-separated" {
		t.Errorf("%q", s)
	}
}

// The few parts that tell where calls turn are no outliers, though a curve
// without them is steeper: the curve of all expects them.
func TestMixedPartsAreNoOutliers(t *testing.T) {
	var parts []Part
	for x, accepted := range map[float64]int{ // of 36; invented, σ 0.001
		9.99092: 0, 9.99501: 1, 9.99530: 1, 9.99616: 1, 9.99621: 9, 9.99810: 30,
		10.04167: 1, 10.04384: 0, 10.04735: 0, 10.04748: 0,
	} {
		parts = append(parts, Part{Name: fmt.Sprint(x), Value: x, Calls: 36, Accepted: accepted})
	}
	for i := range 20 {
		x := 10.0068 + 0.0011*float64(i)
		parts = append(parts, Part{Name: fmt.Sprint(x), Value: x, Calls: 36, Accepted: 36})
	}
	slices.SortFunc(parts, func(a, b Part) int { return cmp.Compare(a.Value, b.Value) })
	c := mustFit(t, parts, Between(10, 10.04), Options{})
	if len(c.Outliers) != 0 {
		t.Errorf("outliers %v of %+v", c.Outliers, c.Parts)
	}
}

// The fit with lapses is at least as likely as the truth that calls were drawn
// from, though the curve without them is flat; where σ is not determined besides
// them, the gain is still told.
func TestLapseReachesTheTruth(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 5))
	const sigma, lapse = 0.03, 0.12
	accept := func(x float64) float64 {
		p := distuv.UnitNormal.CDF((x-10)/sigma) - distuv.UnitNormal.CDF((x-11)/sigma)
		return lapse/2 + (1-lapse)*p
	}
	determined := 0
	for range 40 {
		var parts []Part
		truth := 0.0 // log-likelihood of single calls
		for i := range 100 {
			x := 9.6 + 0.018*(float64(i)+rng.Float64())
			p := Part{Value: x, Calls: 3}
			for range p.Calls {
				if rng.Float64() < accept(x) {
					p.Accepted++
				}
			}
			truth += float64(p.Accepted)*math.Log(accept(x)) + float64(p.Calls-p.Accepted)*math.Log1p(-accept(x))
			parts = append(parts, p)
		}
		plain := mustFit(t, parts, Between(10, 11), Options{SkipIntervals: true})
		c := mustFit(t, parts, Between(10, 11), Options{SkipIntervals: true, Lapse: true})
		if reached := plain.CallLogLikelihood + c.LapseGain; reached < truth {
			t.Errorf("reached %v, the truth has %v", reached, truth)
		}
		if c.HasLapse {
			determined++
			near(t, "gain of the fit", c.CallLogLikelihood-plain.CallLogLikelihood, c.LapseGain, 1e-6)
		}
	}
	if determined < 20 {
		t.Errorf("a rate was told in %d of 40 studies", determined)
	}
}
