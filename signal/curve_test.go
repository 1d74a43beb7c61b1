package signal

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// study is the manual's attribute study, with its calls added by part, for
// all appraisers or for one.
func study(t testing.TB, appraisers ...int) []Part {
	if len(appraisers) == 0 {
		appraisers = []int{0, 1, 2}
	}
	var parts []Part
	for _, row := range table(t, "msa-manual-50x3x3.csv") {
		p := Part{Value: row[2]}
		for _, a := range appraisers {
			for _, call := range row[3+3*a : 6+3*a] {
				p.Calls++
				p.Accepted += int(call)
			}
		}
		parts = append(parts, p)
	}
	return parts
}

var studyLimits = Between(0.450, 0.545)

func mustFit(t testing.TB, parts []Part, limits Limits, o Options) *Curve {
	t.Helper()
	c, err := Fit(parts, limits, o)
	if err != nil {
		t.Fatal(err)
	}
	return c
}

// R's optim on the same likelihood: expected-r.json, curve_common_sigma.
func TestCurveCommonSigmaAgainstR(t *testing.T) {
	var want struct {
		LowerCut float64 `json:"lower_cut"`
		UpperCut float64 `json:"upper_cut"`
		Sigma    float64 `json:"sigma"`
		LogLik   float64 `json:"loglik"`
		SE       struct {
			LowerCut float64 `json:"lower_cut"`
			UpperCut float64 `json:"upper_cut"`
			LogSigma float64 `json:"log_sigma"`
		} `json:"se"`
	}
	reference(t, "msa_manual.curve_common_sigma", &want)
	c := mustFit(t, study(t), studyLimits, Options{})
	nearRel(t, "lower cut", c.Lower.Cut.Value, want.LowerCut, 1e-5)
	nearRel(t, "upper cut", c.Upper.Cut.Value, want.UpperCut, 1e-5)
	nearRel(t, "sigma", c.Lower.Sigma.Value, want.Sigma, 1e-5)
	nearRel(t, "sigma", c.Upper.Sigma.Value, want.Sigma, 1e-5)
	nearRel(t, "log-likelihood", c.LogLikelihood, want.LogLik, 1e-5)
	// R's optim takes its Hessian by differences of 1e-3, a seventh of σ here.
	// Like is compared with like: the same differences of the same likelihood
	// give R's standard errors, and differences of 1e-6 give ours.
	theta := []float64{c.Params[0].Value, c.Params[2].Value, c.Params[1].Value}
	r := differenceSE(theta, 1e-3, bruteStudy(t))
	nearRel(t, "R's se lower cut", r[0], want.SE.LowerCut, 1e-5)
	nearRel(t, "R's se upper cut", r[1], want.SE.UpperCut, 1e-5)
	nearRel(t, "R's se log sigma", r[2], want.SE.LogSigma, 1e-5)
	fine := differenceSE(theta, 1e-5, bruteStudy(t))
	nearRel(t, "se lower cut", c.Params[0].SE, fine[0], 1e-5)
	nearRel(t, "se upper cut", c.Params[2].SE, fine[1], 1e-5)
	nearRel(t, "se log sigma", c.Params[1].SE, fine[2], 1e-5)
	if len(c.Warnings)+len(c.Outliers) > 0 {
		t.Errorf("warnings %v, outliers %v", c.Warnings, c.Outliers)
	}
}

// bruteStudy is the log-likelihood of the study as expected-r.json's script
// writes it, in lower cut, upper cut and log σ.
func bruteStudy(t testing.TB) func([]float64) float64 {
	parts := study(t)
	return func(th []float64) float64 {
		var l float64
		for _, p := range parts {
			s := math.Exp(th[2])
			pr := normalCDF((p.Value-th[0])/s) - normalCDF((p.Value-th[1])/s)
			pr = math.Min(math.Max(pr, 1e-15), 1-1e-15)
			l += float64(p.Accepted)*math.Log(pr) + float64(p.Calls-p.Accepted)*math.Log(1-pr)
		}
		return l
	}
}

// differenceSE returns standard errors from central differences of central
// differences with step h, as R's optimhess takes them.
func differenceSE(theta []float64, h float64, f func([]float64) float64) []float64 {
	n := len(theta)
	grad := func(x []float64) []float64 {
		g := make([]float64, n)
		for i := range x {
			y := append([]float64(nil), x...)
			y[i] = x[i] + h
			up := f(y)
			y[i] = x[i] - h
			g[i] = (up - f(y)) / (2 * h)
		}
		return g
	}
	a := mat.NewDense(n, n, nil)
	for i := range n {
		y := append([]float64(nil), theta...)
		y[i] += h
		up := grad(y)
		y[i] -= 2 * h
		down := grad(y)
		for j := range n {
			v := -(up[j] - down[j]) / (4 * h)
			a.Set(i, j, a.At(i, j)+v)
			a.Set(j, i, a.At(j, i)+v)
		}
	}
	var inv mat.Dense
	if err := inv.Inverse(a); err != nil {
		return make([]float64, n)
	}
	se := make([]float64, n)
	for i := range se {
		se[i] = math.Sqrt(inv.At(i, i))
	}
	return se
}

// expected-r.json, curve_two_sigmas.
func TestCurveTwoSigmasAgainstR(t *testing.T) {
	var want struct {
		LowerCut   float64 `json:"lower_cut"`
		UpperCut   float64 `json:"upper_cut"`
		SigmaLower float64 `json:"sigma_lower"`
		SigmaUpper float64 `json:"sigma_upper"`
		LogLik     float64 `json:"loglik"`
	}
	reference(t, "msa_manual.curve_two_sigmas", &want)
	c := mustFit(t, study(t), studyLimits, Options{TwoSigmas: true})
	nearRel(t, "lower cut", c.Lower.Cut.Value, want.LowerCut, 1e-5)
	nearRel(t, "upper cut", c.Upper.Cut.Value, want.UpperCut, 1e-5)
	nearRel(t, "lower sigma", c.Lower.Sigma.Value, want.SigmaLower, 1e-5)
	nearRel(t, "upper sigma", c.Upper.Sigma.Value, want.SigmaUpper, 1e-5)
	nearRel(t, "log-likelihood", c.LogLikelihood, want.LogLik, 1e-5)
	var common struct {
		LogLik float64 `json:"loglik"`
	}
	reference(t, "msa_manual.curve_common_sigma", &common)
	near(t, "likelihood ratio of one σ", c.SameSigma.Statistic, 2*(want.LogLik-common.LogLik), 1e-5)
}

// glm is R's generalised linear model: intercept and slope with standard
// errors by the expected information.
type glm struct {
	Intercept   float64 `json:"intercept"`
	Slope       float64 `json:"slope"`
	SEIntercept float64 `json:"se_intercept"`
	SESlope     float64 `json:"se_slope"`
	Cut         float64 `json:"cut"`
	LD50        float64 `json:"ld50"`
	Deviance    float64 `json:"deviance"`
	LogLik      float64 `json:"loglik"`
}

func checkGLM(t *testing.T, c *Curve, want glm) {
	t.Helper()
	line, err := c.Line(Lower)
	if err != nil {
		t.Fatal(err)
	}
	nearRel(t, "intercept", line.Intercept, want.Intercept, 1e-5)
	nearRel(t, "slope", line.Slope, want.Slope, 1e-5)
	nearRel(t, "se intercept", line.InterceptSE, want.SEIntercept, 1e-5)
	nearRel(t, "se slope", line.SlopeSE, want.SESlope, 1e-5)
	nearRel(t, "cut", c.Lower.Cut.Value, want.Cut+want.LD50, 1e-5)
	nearRel(t, "deviance", c.LackOfFit.Deviance, want.Deviance, 1e-5)
	if want.LogLik != 0 {
		nearRel(t, "log-likelihood", c.LogLikelihood, want.LogLik, 1e-5)
	}
}

// R's glm on the parts below 0.50: expected-r.json, lower_limit_*.
func TestCurveLowerLimitAgainstR(t *testing.T) {
	var parts []Part
	for _, p := range study(t) {
		if p.Value < 0.50 {
			parts = append(parts, p)
		}
	}
	for link, name := range map[Link]string{Probit: "probit", Logit: "logit"} {
		t.Run(name, func(t *testing.T) {
			var want glm
			reference(t, "msa_manual.lower_limit_"+name, &want)
			checkGLM(t, mustFit(t, parts, AtLeast(0.450), Options{Link: link}), want)
		})
	}
}

// beetles is Bliss's data (1935): dose, and killed out of exposed.
func beetles(t testing.TB) []Part {
	var parts []Part
	for _, row := range table(t, "beetles-1935.csv") {
		parts = append(parts, Part{Value: row[0], Calls: int(row[1]), Accepted: int(row[2])})
	}
	return parts
}

// R's glm on Bliss's beetles, and the profile-likelihood limits of the 50 %
// point by R's uniroot and optimize: expected-r.json, beetles.
func TestCurveBeetlesAgainstR(t *testing.T) {
	for link, name := range map[Link]string{Probit: "probit", Logit: "logit"} {
		t.Run(name, func(t *testing.T) {
			var want glm
			reference(t, "beetles."+name, &want)
			c := mustFit(t, beetles(t), AtLeast(1.77), Options{Link: link, LackOfFit: WidenNever})
			checkGLM(t, c, want)
			if link == Probit {
				var limits [2]float64
				reference(t, "beetles.probit.ld50_profile95", &limits)
				nearRel(t, "lower limit", c.Lower.Cut.Lower, limits[0], 1e-8)
				nearRel(t, "upper limit", c.Lower.Cut.Upper, limits[1], 1e-8)
			}
		})
	}
}

// brglm2 (AS_mean) on eight parts without a mixed one: expected-r.json,
// separated.
func TestCurveSeparatedAgainstR(t *testing.T) {
	var data struct {
		Value    []float64
		Accepted []int
		Calls    int
	}
	reference(t, "separated.data", &data)
	var parts, mirrored []Part
	for i, v := range data.Value {
		parts = append(parts, Part{Value: v, Accepted: data.Accepted[i], Calls: data.Calls})
		mirrored = append(mirrored, Part{Value: 20 - v, Accepted: data.Accepted[i], Calls: data.Calls})
	}
	for link, name := range map[Link]string{Probit: "probit", Logit: "logit"} {
		t.Run(name, func(t *testing.T) {
			var want glm
			reference(t, "separated."+name, &want)
			// The standard deviation of the standard logistic is π/√3.
			sigma := map[Link]float64{Probit: 1, Logit: math.Pi / math.Sqrt(3)}[link] / want.Slope
			c := mustFit(t, parts, AtLeast(10), Options{Link: link})
			if c.Lower.Status != Separated {
				t.Fatalf("status %v", c.Lower.Status)
			}
			nearRel(t, "cut", c.Lower.Cut.Value, want.Cut, 1e-5)
			nearRel(t, "sigma", c.Lower.Sigma.Value, sigma, 1e-5)
			if g := c.Lower.Gap; !g.HasReject || !g.HasAccept || g.Reject != 10 || g.Accept != 10.02 || g.HasMixed {
				t.Errorf("gap %+v", g)
			}
			near(t, "cut from", c.Lower.Cut.Lower, 10, 1e-9)
			near(t, "cut to", c.Lower.Cut.Upper, 10.02, 1e-9)
			if c.Lower.Sigma.HasLower || !c.Lower.Sigma.HasUpper {
				t.Errorf("σ %+v", c.Lower.Sigma)
			}
			m := mustFit(t, mirrored, AtMost(10), Options{Link: link})
			nearRel(t, "mirrored cut", m.Upper.Cut.Value, 20-want.Cut, 1e-5)
			nearRel(t, "mirrored sigma", m.Upper.Sigma.Value, sigma, 1e-5)
			if math.IsNaN(c.LogLikelihood) {
				t.Error("NaN")
			}
		})
	}
}
