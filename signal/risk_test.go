package signal

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"
)

type riskRow struct {
	Mu                float64 `json:"mu"`
	SigmaProcess      float64 `json:"sigma_process"`
	SigmaGauge        float64 `json:"sigma_gauge"`
	Lower             float64 `json:"lower"`
	Upper             float64 `json:"upper"`
	CutLower          float64 `json:"cut_lower"`
	CutUpper          float64 `json:"cut_upper"`
	BadShare          float64 `json:"bad_share"`
	AcceptedShare     float64 `json:"accepted_share"`
	EscapeShare       float64 `json:"escape_share"`
	FalseRejectShare  float64 `json:"false_reject_share"`
	BadAmongAccepted  float64 `json:"bad_among_accepted"`
	GoodAmongRejected float64 `json:"good_among_rejected"`
}

// R's integrate and pnorm: expected-r.json, risk.
func TestRiskAgainstR(t *testing.T) {
	var rows []riskRow
	reference(t, "risk", &rows)
	if len(rows) == 0 {
		t.Fatal("no rows")
	}
	for _, w := range rows {
		p, err := NormalProcess(w.Mu, w.SigmaProcess)
		if err != nil {
			t.Fatal(err)
		}
		g := Gauge{LowerCut: w.CutLower, UpperCut: w.CutUpper, LowerSigma: w.SigmaGauge, UpperSigma: w.SigmaGauge, HasLower: true, HasUpper: true}
		r, err := Assess(p, Known{g, Between(w.Lower, w.Upper)}, 0)
		if err != nil {
			t.Fatal(err)
		}
		nearRel(t, "bad", r.Bad.Value, w.BadShare, 1e-8)
		nearRel(t, "accepted", r.Accepted.Value, w.AcceptedShare, 1e-8)
		nearRel(t, "escape", r.Escape.Value, w.EscapeShare, 1e-8)
		nearRel(t, "false reject", r.FalseReject.Value, w.FalseRejectShare, 1e-8)
		nearRel(t, "bad among accepted", r.BadAmongAccepted.Value, w.BadAmongAccepted, 1e-8)
		nearRel(t, "good among rejected", r.GoodAmongRejected.Value, w.GoodAmongRejected, 1e-8)
		near(t, "escapes add up", r.EscapeLower.Value+r.EscapeUpper.Value, r.Escape.Value, 1e-15)
		near(t, "false rejects add up", r.FalseRejectLower.Value+r.FalseRejectUpper.Value, r.FalseReject.Value, 1e-15)
	}
}

// With normal process and probit gauge the accepted share is Φ of the two
// scaled distances (the sum of two normal variables is normal), and with a cut
// on a limit at the mean, the escape share is arctan(σ_g/σ_p)/2π (the orthant
// probability of a bivariate normal, Sheppard 1899). Any ratio of σs.
func TestRiskClosedForms(t *testing.T) {
	for _, ratio := range []float64{1e-9, 1e-6, 1e-3, 0.03, 0.5, 1, 3, 100} {
		p := Process{Mean: 250, SD: 0.02}
		sg := ratio * p.SD
		g := Gauge{LowerCut: 249.97, UpperCut: 250.05, LowerSigma: sg, UpperSigma: sg, HasLower: true, HasUpper: true}
		r, err := Assess(p, Known{g, Between(249.96, 250.04)}, 0)
		if err != nil {
			t.Fatal(err)
		}
		s := math.Hypot(p.SD, sg)
		want := normalCDF(0.05/s) - normalCDF(-0.03/s)
		near(t, "accepted", r.Accepted.Value, want, 1e-10)
		one, err := Assess(p, Known{Gauge{LowerCut: 250, LowerSigma: sg, HasLower: true}, AtLeast(250)}, 0)
		if err != nil {
			t.Fatal(err)
		}
		want = math.Atan(ratio) / (2 * math.Pi)
		nearRel(t, "orthant escape", one.Escape.Value, want, 1e-8)
		nearRel(t, "orthant false reject", one.FalseReject.Value, want, 1e-8)
	}
}

// A logit gauge against Monte Carlo, roughly, and the sample form against a
// direct average.
func TestRiskOtherForms(t *testing.T) {
	g := Gauge{Link: Logit, LowerCut: 9.96, UpperCut: 10.04, LowerSigma: 0.004, UpperSigma: 0.006, HasLower: true, HasUpper: true, Lapse: 0.02}
	limits := Between(9.95, 10.05)
	rng := rand.New(rand.NewPCG(1, 2))
	const n = 400000
	perSD := math.Pi / math.Sqrt(3) // of the standard logistic
	values := make([]float64, n)
	var escape, falseReject float64
	for i := range values {
		values[i] = 10 + 0.03*rng.NormFloat64()
		x := values[i]
		f := 1/(1+math.Exp(-perSD*(x-9.96)/0.004)) - 1/(1+math.Exp(-perSD*(x-10.04)/0.006))
		f = 0.01 + 0.98*f
		if limits.Inside(x) {
			falseReject += (1 - f) / n
		} else {
			escape += f / n
		}
	}
	s, err := SampledProcess(values)
	if err != nil {
		t.Fatal(err)
	}
	a, err := Assess(s, Known{g, limits}, 0)
	if err != nil {
		t.Fatal(err)
	}
	nearRel(t, "escape", a.Escape.Value, escape, 1e-9)
	nearRel(t, "false reject", a.FalseReject.Value, falseReject, 1e-9)
	b, err := Assess(Process{Mean: 10, SD: 0.03}, Known{g, limits}, 0)
	if err != nil {
		t.Fatal(err)
	}
	nearRel(t, "escape, normal", b.Escape.Value, escape, 0.03)
	nearRel(t, "false reject, normal", b.FalseReject.Value, falseReject, 0.03)
}

func TestCapableProcess(t *testing.T) {
	p, err := CapableProcess(Between(9.9, 10.1), 1.25, 1, Upper)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "sd", p.SD, 0.2/7.5, 1e-12)
	near(t, "mean", p.Mean, 10.1-3*0.2/7.5, 1e-12)
	for _, c := range []struct {
		limits  Limits
		cp, cpk float64
	}{{AtLeast(1), 1, 1}, {Between(0, 1), 1, 1.2}, {Between(0, 1), 0, 0}, {Between(0, 1), math.NaN(), 0}} {
		if _, err := CapableProcess(c.limits, c.cp, c.cpk, Lower); err == nil {
			t.Errorf("%+v: no error", c)
		}
	}
	if _, err := SampledProcess(nil); err == nil {
		t.Error("no values: no error")
	}
	if _, err := NormalProcess(0, 0); err == nil {
		t.Error("no spread: no error")
	}
}

func TestGuardBands(t *testing.T) {
	c := mustFit(t, study(t), studyLimits, Options{})
	p := Process{Mean: 0.4975, SD: 0.02}
	var rows []Risk
	for i, band := range []float64{0, 0.005, 0.01, 0.02} {
		r, err := Assess(p, c, band)
		if err != nil {
			t.Fatal(err)
		}
		rows = append(rows, r)
		if i > 0 && (r.Escape.Value >= rows[i-1].Escape.Value || r.FalseReject.Value <= rows[i-1].FalseReject.Value) {
			t.Errorf("row %d: escapes must fall and false rejects rise", i)
		}
		if !(r.Escape.Lower < r.Escape.Value && r.Escape.Value < r.Escape.Upper) {
			t.Errorf("%+v", r.Escape)
		}
	}
	const target = 50e-6
	for _, shown := range []bool{false, true} {
		r, err := GuardForEscapes(p, c, target, shown)
		if err != nil {
			t.Fatal(err)
		}
		held := r.Escape.Value
		if shown {
			held = r.Escape.Upper
		}
		if held > target || held < target*(1-1e-6) {
			t.Errorf("escapes %v at %v", held, r.GuardBand)
		}
	}
	if r, err := GuardForEscapes(p, c, 0.5, false); err != nil || r.GuardBand != 0 {
		t.Errorf("a target already met: band %v, %v", r.GuardBand, err)
	}
	// The least cost, by a fine grid over the exact gauge.
	got, err := GuardForCost(p, c, 100, 1)
	if err != nil {
		t.Fatal(err)
	}
	g, err := c.Gauge()
	if err != nil {
		t.Fatal(err)
	}
	known := Known{g, studyLimits}
	best, at := math.Inf(1), 0.0
	for i := range 2001 {
		b := -0.02 + 0.00002*float64(i)
		r, err := Assess(p, known, b)
		if err != nil {
			t.Fatal(err)
		}
		if v := 100*r.Escape.Value + r.FalseReject.Value; v < best {
			best, at = v, b
		}
	}
	if math.Abs(got.Risk.GuardBand-at) > 0.00004 || got.PerPart > best+1e-12 || got.PerPart > got.PerPartNow {
		t.Errorf("band %v, cost %v; by the grid %v, %v", got.Risk.GuardBand, got.PerPart, at, best)
	}
	// The same cuts taken as known: the same estimates, no intervals, nothing
	// to be shown.
	of, err := GuardForCost(p, known, 100, 1)
	if err != nil || of.Risk.GuardBand != got.Risk.GuardBand || of.PerPart != got.PerPart || of.Risk.Escape.HasUpper {
		t.Errorf("known cuts: %+v, %v", of, err)
	}
	held, err := GuardForEscapes(p, known, target, false)
	if err != nil || held.Escape.Value > target || held.Escape.Value < target*(1-1e-6) || held.Escape.HasUpper {
		t.Errorf("known cuts: escapes %+v at %v, %v", held.Escape, held.GuardBand, err)
	}
	if _, err := GuardForEscapes(p, known, target, true); err == nil || !strings.Contains(err.Error(), "taken as known") {
		t.Errorf("shown with known cuts: %v", err)
	}
}

// However small σ is, the search for the cheapest band ends.
func TestGuardForCostOfAStep(t *testing.T) {
	known := Known{Gauge{LowerCut: 0, LowerSigma: 1e-300, HasLower: true}, AtLeast(0)}
	got, err := GuardForCost(Process{Mean: 1, SD: 1}, known, 10, 1)
	if err != nil || math.Abs(got.Risk.GuardBand) > 1e-3 {
		t.Errorf("band %v, %v", got.Risk.GuardBand, err)
	}
	if _, err := Assess(Process{Values: []float64{1, math.NaN()}}, known, 0); err == nil {
		t.Error("a value that is no number: no error")
	}
}

// The cuts may have to move out farther than half the distance between them. By
// a grid of 0.01, costs from the values of Assess: least 0.2198 a part at −0.69;
// 0.2303 where the search ended once, at −0.5; 0.2279 with every part accepted.
func TestGuardForCostFarOut(t *testing.T) {
	known := Known{Gauge{LowerCut: 0, UpperCut: 1, LowerSigma: 0.02, UpperSigma: 0.5, HasLower: true, HasUpper: true}, Between(0, 1)}
	p := Process{Mean: 0.6, SD: 0.3}
	got, err := GuardForCost(p, known, 2, 1)
	if err != nil || got.Edge != NoEdge {
		t.Fatalf("%+v, %v", got, err)
	}
	least, at := math.Inf(1), 0.0
	for i := range 400 {
		b := -4 + 0.01*float64(i)
		r, err := Assess(p, known, b)
		if err != nil {
			t.Fatal(err)
		}
		if v := 2*r.Escape.Value + r.FalseReject.Value; v < least {
			least, at = v, b
		}
	}
	if math.Abs(got.Risk.GuardBand-at) > 0.011 || got.PerPart > least {
		t.Errorf("band %v costs %v; by the grid %v costs %v", got.Risk.GuardBand, got.PerPart, at, least)
	}
	// Twice the share made bad: of a normal distribution, z = −2 and 4/3.
	near(t, "cost of accepting all", got.PerPartAcceptAll, 2*(normalCDF(-2)+normalCDF(-4.0/3)), 1e-12)
}

// Where the least cost is no guard band's, it says which end of all it is.
func TestGuardForCostEdges(t *testing.T) {
	both := Known{Gauge{LowerCut: 0, UpperCut: 1, LowerSigma: 0.1, UpperSigma: 0.1, HasLower: true, HasUpper: true}, Between(0, 1)}
	lower := Known{Gauge{LowerCut: 0, LowerSigma: 0.1, HasLower: true}, AtLeast(0)}
	random := both
	random.Gauge.Lapse = 0.2
	for name, c := range map[string]struct {
		in             Known
		p              Process
		escape, reject float64
		want           Edge
	}{
		"escapes are free":              {both, Process{Mean: 0.5, SD: 0.3}, 0, 1, AcceptAll},
		"escapes are free, one limit":   {lower, Process{Mean: 0.5, SD: 0.3}, 0, 1, AcceptAll},
		"rejects are free":              {both, Process{Mean: 0.5, SD: 0.3}, 1, 0, InwardEdge},
		"rejects are free, values":      {lower, Process{Values: []float64{-1, 0.5, 1}}, 1, 0, InwardEdge},
		"calls at random cost more":     {random, Process{Mean: 0.5, SD: 0.2}, 1, 1, AcceptAll},
		"an escape costs some":          {both, Process{Mean: 0.5, SD: 0.3}, 5, 1, NoEdge},
		"an escape costs some, a limit": {lower, Process{Mean: 0.5, SD: 0.3}, 5, 1, NoEdge},
	} {
		got, err := GuardForCost(c.p, c.in, c.escape, c.reject)
		if err != nil || got.Edge != c.want {
			t.Errorf("%s: %+v, %v", name, got, err)
		}
	}
}

func TestNoInspection(t *testing.T) {
	p := Process{Mean: 0.5, SD: 0.02}
	for _, in := range []Inspection{nil, (*Curve)(nil), Known{}} {
		if _, err := Assess(p, in, 0); err == nil {
			t.Errorf("%T: no error of Assess", in)
		}
		if _, err := GuardForEscapes(p, in, 0.1, false); err == nil {
			t.Errorf("%T: no error of GuardForEscapes", in)
		}
		if _, err := GuardForCost(p, in, 1, 1); err == nil {
			t.Errorf("%T: no error of GuardForCost", in)
		}
	}
	lower := Gauge{LowerCut: 0.4, LowerSigma: 0.01, HasLower: true}
	for name, in := range map[string]Known{
		"a limit without a cut": {lower, Between(0.4, 0.6)},
		"a cut without a limit": {lower, AtMost(0.6)},
		"a link of no name":     {Gauge{Link: 7, LowerCut: 0.4, LowerSigma: 0.01, HasLower: true}, AtLeast(0.4)},
	} {
		if _, err := Assess(p, in, 0); err == nil {
			t.Errorf("%s: no error of Assess", name)
		}
		if _, err := GuardForCost(p, in, 1, 1); err == nil {
			t.Errorf("%s: no error of GuardForCost", name)
		}
	}
}

func TestGuardBandOutOfReach(t *testing.T) {
	c := mustFit(t, study(t), studyLimits, Options{})
	c.known[logitE], c.local[logitE] = true, logit(0.1) // one call in ten at random
	_, err := GuardForEscapes(Process{Mean: 0.4975, SD: 0.03}, c, 1e-6, false)
	if err == nil || !strings.Contains(err.Error(), "no guard band holds escapes under 1 ppm") {
		t.Errorf("%v", err)
	}
}

func BenchmarkAssess(b *testing.B) {
	c := mustFit(b, study(b), studyLimits, Options{})
	p := Process{Mean: 0.4975, SD: 0.02}
	for b.Loop() {
		if _, err := Assess(p, c, 0); err != nil {
			b.Fatal(err)
		}
	}
}
