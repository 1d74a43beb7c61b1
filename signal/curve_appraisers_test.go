package signal

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/optimize"
)

func studyByAppraiser(t testing.TB) [][]Part {
	return [][]Part{study(t, 0), study(t, 1), study(t, 2)}
}

// The likelihood-ratio statistics of the manual's study, by an independent
// maximisation: the likelihood as it is written, clipped like R's, by
// Nelder–Mead from several starts.
func TestAppraisersAgainstBruteForce(t *testing.T) {
	by := studyByAppraiser(t)
	r, err := FitAppraisers(by, studyLimits, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if len(r.Compared) != 3 {
		t.Fatalf("compared %v: %v", r.Compared, r.Warnings)
	}
	loglik := func(cuts [][2]float64, logSigma []float64) float64 {
		var l float64
		for a, parts := range by {
			s := math.Exp(logSigma[a])
			for _, p := range parts {
				pr := normalCDF((p.Value-cuts[a][0])/s) - normalCDF((p.Value-cuts[a][1])/s)
				pr = math.Min(math.Max(pr, 1e-15), 1-1e-15)
				l += float64(p.Accepted)*math.Log(pr) + float64(p.Calls-p.Accepted)*math.Log1p(-pr)
			}
		}
		return l
	}
	// Parameters in units of 0.01 about 0.45 and 0.55; log σ about log 0.0077.
	cut := func(a, b float64) [2]float64 { return [2]float64{0.45 + 0.01*a, 0.55 + 0.01*b} }
	ls := func(v float64) float64 { return math.Log(0.0077) + v }
	best := func(n int, f func(x []float64) float64) float64 {
		most := math.Inf(-1)
		for _, start := range []float64{0, 0.3} {
			x := make([]float64, n)
			for i := range x {
				x[i] = start
			}
			for range 6 { // restarts, so that the simplex does not stall
				res, err := optimize.Minimize(optimize.Problem{Func: func(x []float64) float64 { return -f(x) }}, x,
					&optimize.Settings{Converger: &optimize.FunctionConverge{Absolute: 1e-13, Iterations: 400}, MajorIterations: 20000}, &optimize.NelderMead{})
				if err != nil {
					t.Fatal(err)
				}
				x = res.X
				most = math.Max(most, -res.F)
			}
		}
		return most
	}
	var full float64
	for a := range by {
		full += best(3, func(x []float64) float64 {
			c := make([][2]float64, 3)
			s := make([]float64, 3)
			c[a], s[a] = cut(x[0], x[1]), ls(x[2])
			keep := by
			by = [][]Part{nil, nil, nil}
			by[a] = keep[a]
			defer func() { by = keep }()
			return loglik(c, s)
		})
	}
	curve := best(3, func(x []float64) float64 {
		c, s := cut(x[0], x[1]), ls(x[2])
		return loglik([][2]float64{c, c, c}, []float64{s, s, s})
	})
	sameCut := best(5, func(x []float64) float64 {
		c := cut(x[0], x[1])
		return loglik([][2]float64{c, c, c}, []float64{ls(x[2]), ls(x[3]), ls(x[4])})
	})
	near(t, "same curve", r.SameCurve.Statistic, 2*(full-curve), 1e-4)
	near(t, "same cut", r.SameCut.Statistic, 2*(full-sameCut), 1e-4)
	if r.SameCurve.DF != 6 || r.SameCut.DF != 4 || r.SameSigma.DF != 2 {
		t.Errorf("degrees of freedom %d, %d, %d; want 6, 4, 2", r.SameCurve.DF, r.SameCut.DF, r.SameSigma.DF)
	}
	if r.SameSigma.Statistic > r.SameCurve.Statistic {
		t.Error("a smaller restriction costs more")
	}
}

// Two appraisers who cut 3 σ apart are told apart; their σs are not.
func TestAppraisersWithDifferentCuts(t *testing.T) {
	mk := func(cut float64) []Part {
		var parts []Part
		for i := range 60 {
			x := 9.97 + 0.001*float64(i)
			p := normalCDF((x - cut) / 0.005)
			parts = append(parts, Part{Value: x, Calls: 30, Accepted: int(math.Round(30 * p))})
		}
		return parts
	}
	r, err := FitAppraisers([][]Part{mk(9.995), mk(10.010)}, AtLeast(10), Options{})
	if err != nil {
		t.Fatal(err)
	}
	if !(r.SameCut.P < 1e-6) || !(r.SameCurve.P < 1e-6) || !(r.SameSigma.P > 0.5) {
		t.Errorf("%+v %+v %+v", r.SameCut, r.SameCurve, r.SameSigma)
	}
	near(t, "first cut", r.Each[0].Lower.Cut.Value, 9.995, 1e-4)
	near(t, "second cut", r.Each[1].Lower.Cut.Value, 10.010, 1e-4)
}

func TestAppraisersPartly(t *testing.T) {
	good := study(t, 0)
	all := study(t, 1)
	for i := range all {
		all[i].Accepted = all[i].Calls // accepts everything
	}
	r, err := FitAppraisers([][]Part{good, all, study(t, 2)}, studyLimits, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if r.Each[1] != nil || r.Errors[1] == nil || len(r.Compared) != 2 {
		t.Errorf("compared %v, errors %v", r.Compared, r.Errors)
	}
	if _, err := FitAppraisers(nil, studyLimits, Options{}); err == nil {
		t.Error("no appraiser: no error")
	}
}

func BenchmarkFitStudy(b *testing.B) {
	parts := study(b)
	b.ReportAllocs()
	for b.Loop() {
		if _, err := Fit(parts, studyLimits, Options{}); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkFitAppraisers(b *testing.B) {
	by := studyByAppraiser(b)
	b.ReportAllocs()
	for b.Loop() {
		if _, err := FitAppraisers(by, studyLimits, Options{}); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkLikelihood(b *testing.B) {
	d, err := prepare(study(b), Options{})
	if err != nil {
		b.Fatal(err)
	}
	d.limits, d.has = studyLimits, [2]bool{true, true}
	m := d.model(0, len(d.x), d.has)
	theta := []float64{d.sc.in(0.4536), d.sc.in(0.5476), math.Log(0.0077 / d.sc.scale)}
	g, h := make([]float64, 3), make([]float64, 9)
	b.ReportAllocs()
	for b.Loop() {
		m.eval(theta, g, h)
	}
}
