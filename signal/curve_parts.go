package signal

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/mathext"
)

// PartFit is one part beside the fitted curve.
type PartFit struct {
	Row      int // index of the part's first row among the parts given
	Name     string
	Value    float64
	Accepted int
	Calls    int
	// NoCut marks a part that lies at a limit where rejected calls give no cut:
	// nothing is fitted there, the figures below are 0, and its calls are not in
	// the log-likelihoods.
	NoCut bool
	// Fitted is the fitted probability of acceptance, by the curve of all parts;
	// of an outlier, see Curve.ExpectedByOthers.
	Fitted   float64
	Residual float64 // deviance residual: its square is the part's share of the deviance
	// Tail is the chance of calls at least as far from the fitted share, in
	// either direction.
	Tail float64
	// Leverage is the pull of the part on its own fitted share, 0 to 1.
	Leverage float64
	// Change of each cut, and of each log σ, if the part were left out (one
	// Newton step from the fit); 0 where there is no maximum-likelihood fit.
	CutChange      [2]float64
	LogSigmaChange [2]float64
	Outlier        bool
}

// ExpectedByOthers returns the probability of acceptance that the other parts make
// expected of c.Parts[i]: of an outlier, by the curve without the outliers, which
// it cannot bend towards itself; of any other part, Fitted.
func (c *Curve) ExpectedByOthers(i int) float64 {
	if p := c.Parts[i]; !p.Outlier || c.Without == nil {
		return p.Fitted
	}
	return c.Without.Accept(c.Parts[i].Value)
}

// summarise fills log-likelihoods and parts from the estimates.
func (c *Curve) summarise(d *dataset, hs [2]half) {
	at := c.at()
	eps := c.epsilon()
	link := c.Options.Link
	c.Parts = make([]PartFit, len(d.parts))
	var tm term
	for i, p := range d.parts {
		a, r := d.accepted[i], d.rejected[i]
		n := a + r
		t := d.x[i]
		z := at.z(t)
		tm.at(link, z, at.has, a, r, eps)
		c.Calls += p.Calls
		pf := PartFit{Row: d.row[i], Name: p.Name, Value: p.Value, Accepted: p.Accepted, Calls: p.Calls, NoCut: d.noCut(hs, i)}
		if pf.NoCut {
			c.Parts[i] = pf
			continue
		}
		c.CallLogLikelihood += tm.loglik
		choose := logChoose(n, a)
		c.LogLikelihood += tm.loglik + choose
		pr, q := math.Min(1, math.Max(0, tm.p)), math.Min(1, math.Max(0, tm.q))
		pf.Fitted = pr
		deviance := 2 * (saturated(a, r) - tm.loglik)
		pf.Residual = math.Sqrt(math.Max(0, deviance))
		if a < n*pr {
			pf.Residual = -pf.Residual
		}
		pf.Tail = tail(a, n, pr, q, tm.loglik+choose)
		if pr > 1e-150 && q > 1e-150 {
			g, _ := c.probabilityGradient(t)
			h := n / (pr * q) * c.quadratic(g)
			pf.Leverage = math.Min(1, math.Max(0, h))
		}
		c.influence(&pf, &tm, at, z, a, r, eps)
		c.Parts[i] = pf
	}
}

// quadratic is gᵀ C g over the parameters with a covariance.
func (c *Curve) quadratic(g [locals]float64) float64 {
	var v float64
	for i := range g {
		for j := range g {
			v += g[i] * c.cov[i][j] * g[j]
		}
	}
	return v
}

// influence fills the one-step change of the estimates without the part.
func (c *Curve) influence(pf *PartFit, tm *term, at curveAt, z [2]float64, a, r, eps float64) {
	var score [locals]float64
	u := [2]float64{a*tm.overP[0] - r*tm.overQ[0], r*tm.overQ[1] - a*tm.overP[1]}
	for k := range 2 {
		if at.has[k] {
			score[2*k], score[2*k+1] = -u[k]*at.inverse[k], -u[k]*z[k]
		}
	}
	if c.known[logitE] {
		score[logitE] = tm.epsilonGradient * (a/tm.p - r/tm.q) * eps * (1 - eps)
	}
	keep := math.Max(1-pf.Leverage, 0.05)
	for k := range 2 {
		if !c.hasCov[2*k] {
			continue
		}
		var cut, logSigma float64
		for j := range score {
			cut -= c.cov[2*k][j] * score[j]
			logSigma -= c.cov[2*k+1][j] * score[j]
		}
		pf.CutChange[k], pf.LogSigmaChange[k] = c.sc.size(cut/keep), logSigma/keep
	}
	if !finite(pf.CutChange[0], pf.CutChange[1], pf.LogSigmaChange[0], pf.LogSigmaChange[1]) {
		pf.CutChange, pf.LogSigmaChange = [2]float64{}, [2]float64{}
	}
}

// logChoose is the logarithm of the binomial coefficient.
func logChoose(n, k float64) float64 {
	a, _ := math.Lgamma(n + 1)
	b, _ := math.Lgamma(k + 1)
	c, _ := math.Lgamma(n - k + 1)
	return a - b - c
}

// saturated is the log-likelihood of a part fitted by its own share.
func saturated(a, r float64) float64 {
	var l float64
	if a > 0 {
		l += a * math.Log(a/(a+r))
	}
	if r > 0 {
		l += r * math.Log(r/(a+r))
	}
	return l
}

// tail is the two-sided binomial tail of a out of n, twice the smaller side.
// logP is the log-probability of the count, used where p or q is too small.
func tail(a, n, p, q, logP float64) float64 {
	if p <= 1e-250 || q <= 1e-250 {
		return math.Min(1, 2*math.Exp(logP))
	}
	lower, upper := 1.0, 1.0
	if a < n {
		lower = mathext.RegIncBeta(n-a, a+1, q)
	}
	if a > 0 {
		upper = mathext.RegIncBeta(a, n-a+1, p)
	}
	return math.Min(1, 2*math.Min(lower, upper))
}

// order puts the parts in the order in which they were given.
func (c *Curve) order(d *dataset) {
	slices.SortFunc(c.Parts, func(a, b PartFit) int { return a.Row - b.Row })
	c.Outliers = nil
	for i, p := range c.Parts {
		if p.Outlier {
			c.Outliers = append(c.Outliers, i)
		}
	}
}

// params fills the parameter table, with the expected information beside the
// observed.
func (c *Curve) params(d *dataset) {
	names := [locals]string{"lower cut", "log lower sigma", "upper cut", "log upper sigma", "logit lapse"}
	c.spreadExpected(d)
	for i := range names {
		p := Param{Name: names[i], Has: c.known[i], Value: c.local[i]}
		unit := 1.0
		switch i {
		case cutL, cutU:
			p.Value, unit = c.sc.out(c.local[i]), c.sc.scale
		case logSigmaL, logSigmaU:
			p.Value += math.Log(c.sc.scale)
		}
		if !p.Has {
			p.Value = 0
		}
		if c.hasCov[i] {
			p.SE = unit * math.Sqrt(c.cov[i][i])
			p.ExpectedSE = unit * math.Sqrt(math.Max(0, c.expected[i][i]))
		}
		c.Params[i] = p
	}
}

// spreadExpected copies the inverse of the expected information to the local
// parameters.
func (c *Curve) spreadExpected(d *dataset) {
	inv, at, ok := c.expectedCovariance(d)
	if !ok {
		return
	}
	for i, p := range at {
		for j, q := range at {
			if p != absent && q != absent {
				c.expected[i][j] = inv.At(p, q)
			}
		}
	}
}

// expectedCovariance inverts the expected information of the parameters that
// have a covariance; at says where each local parameter stands in it.
func (c *Curve) expectedCovariance(d *dataset) (inv *mat.SymDense, at [locals]int, ok bool) {
	n := 0
	for i := range at {
		at[i] = absent
		if !c.hasCov[i] {
			continue
		}
		if i == logSigmaU && c.hasCov[logSigmaL] && c.sharedSigma() {
			at[i] = at[logSigmaL]
			continue
		}
		at[i] = n
		n++
	}
	if n == 0 {
		return nil, at, false
	}
	info := mat.NewSymDense(n, nil)
	for i := range d.x {
		p, q := c.probability(d.x[i])
		if p < 1e-150 || q < 1e-150 {
			continue
		}
		local, _ := c.probabilityGradient(d.x[i])
		var g [locals]float64
		for k, j := range at {
			if j != absent {
				g[j] += local[k]
			}
		}
		w := (d.accepted[i] + d.rejected[i]) / (p * q)
		for r := range n {
			for s := r; s < n; s++ {
				info.SetSym(r, s, info.At(r, s)+w*g[r]*g[s])
			}
		}
	}
	var chol mat.Cholesky
	if !chol.Factorize(info) {
		return nil, at, false
	}
	inv = new(mat.SymDense)
	if err := chol.InverseTo(inv); err != nil {
		return nil, at, false
	}
	return inv, at, true
}

// sharedSigma tells whether both limits were fitted with one σ.
func (c *Curve) sharedSigma() bool {
	return !c.Options.TwoSigmas && c.Lower != nil && c.Upper != nil && c.Lower.Status == Fitted && c.Upper.Status == Fitted
}
