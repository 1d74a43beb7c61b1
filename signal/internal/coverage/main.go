// Coverage simulates studies from known cuts and σ, fits each, and prints a
// markdown table of how the estimates and the nominal 95 % intervals do:
//
//	go run ./signal/internal/coverage -studies 2000 > docs/coverage-signal.md
//
// The simulated truth shares nothing with the package but the model.
package main

import (
	"flag"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"os"

	"samecall/signal"
)

func main() {
	studies := flag.Int("studies", 2000, "studies simulated for each row")
	flag.Parse()
	if *studies < 2 {
		fmt.Fprintln(os.Stderr, "coverage: -studies must be 2 or more")
		os.Exit(2)
	}
	run(os.Stdout, *studies)
}

// The limits are 0 and 1, so that σ is the share of the tolerance; the true
// cuts lie off the limits.
const (
	cutLower = 0.02
	cutUpper = 0.97
	calls    = 9
)

type scenario struct {
	parts      int
	sigma      float64
	appraisers float64 // standard deviation of the appraisers' own cuts, in σ; 0: all calls alike
	layout     string
}

// score gathers one quantity over the studies.
type score struct {
	n, covered, below, above, open int
	sum, squares                   float64
}

func (s *score) add(e signal.Estimate, truth float64) {
	s.n++
	d := e.Value - truth
	s.sum += d
	s.squares += d * d
	switch {
	case e.HasLower && truth < e.Lower:
		s.below++
	case e.HasUpper && truth > e.Upper:
		s.above++
	default:
		s.covered++
	}
	if !e.HasLower || !e.HasUpper {
		s.open++
	}
}

// bias is the mean error over its standard deviation (a share of the standard
// error of one study) and its simulation error.
func (s *score) bias() (bias, simulation float64) {
	n := float64(s.n)
	mean := s.sum / n
	sd := math.Sqrt(math.Max(0, s.squares/n-mean*mean))
	if sd == 0 {
		return 0, 0
	}
	return mean / sd, 1 / math.Sqrt(n)
}

func (s *score) coverage() float64 { return 100 * float64(s.covered) / float64(max(1, s.n)) }

// draw returns a study of parts placed as the layout says.
func draw(rng *rand.Rand, s scenario) []signal.Part {
	parts := make([]signal.Part, s.parts)
	for i := range parts {
		u := (float64(i) + rng.Float64()) / float64(s.parts)
		x := -0.25 + 1.5*u // spread over the tolerance and a quarter beyond each limit
		if s.layout == "near the limits" {
			// A quarter of the parts spread out, the others within 2.5 σ of a limit.
			if i%4 != 0 {
				x = 2.5 * s.sigma * (2*rng.Float64() - 1)
				if i%2 == 1 {
					x++
				}
			}
		}
		parts[i] = signal.Part{Value: x, Calls: calls}
	}
	shift := [3]float64{}
	for a := range shift {
		shift[a] = s.appraisers * s.sigma * rng.NormFloat64()
	}
	if s.appraisers > 0 { // the truth is the mean cut of these three appraisers
		mean := (shift[0] + shift[1] + shift[2]) / 3
		for a := range shift {
			shift[a] -= mean
		}
	}
	for i := range parts {
		for c := range calls {
			e := shift[c%3] + s.sigma*rng.NormFloat64()
			if x := parts[i].Value; x-cutLower+e > 0 && x-cutUpper+e < 0 {
				parts[i].Accepted++
			}
		}
	}
	return parts
}

func run(w io.Writer, studies int) {
	fmt.Fprint(w, `# Coverage of the acceptance curve's intervals

Simulated studies with known cuts and σ. Limits 0 and 1, true cuts 0.02 and 0.97, nine calls a part, probit,
one σ, nominal 95 % intervals, lack of fit widening them where it is found (the default). "σ" is the true
σ as a share of the tolerance. "Spread": parts spread evenly from a quarter of the tolerance below to a quarter
above; "near the limits": three quarters of the parts lie within 2.5 σ of a limit. Bias is the mean error as a
share of the standard error of one study. "Fitted" is the share of studies in which both limits were fitted by
maximum likelihood; in the others a limit had no mixed part, or a single one, and its bias-reduced fit counts. Coverage
is that of all limits together, fitted or separated; that of separated ones alone is in the second table.

`)
	fmt.Fprintf(w, "Made by `go run ./signal/internal/coverage -studies %d > docs/coverage-signal.md`; %d studies a row, so that a\ncoverage of 95 %% has a simulation error of ±%.1f points and a bias one of ±%.2f.\n\n", studies, studies, 196*math.Sqrt(0.95*0.05/float64(studies)), 2/math.Sqrt(float64(studies)))
	fmt.Fprintln(w, "| parts | placed | σ | fitted | bias of cut | bias of log σ | cut covered | σ covered | acceptance at the limit covered | lack of fit found | escapes covered |")
	fmt.Fprintln(w, "|---|---|---|---|---|---|---|---|---|---|---|")
	var separated []string
	for _, layout := range []string{"spread", "near the limits"} {
		for _, parts := range []int{30, 45, 60} {
			for _, sigma := range []float64{0.03, 0.06, 0.12} {
				s := scenario{parts: parts, sigma: sigma, layout: layout}
				line, sep := row(s, studies)
				fmt.Fprintln(w, line)
				if sep != "" {
					separated = append(separated, sep)
				}
			}
		}
	}
	fmt.Fprint(w, "\n## Limits without two mixed values\n\nOf the limits that were separated or quasi-separated: how often the interval of the cut (the gap, or more) held\nthe true cut, and how often the upper bound of σ held the true σ.\n\n| parts | placed | σ | limits | cut covered | σ covered |\n|---|---|---|---|---|---|\n")
	for _, line := range separated {
		fmt.Fprintln(w, line)
	}
	fmt.Fprint(w, "\n## Three appraisers with cuts of their own\n\nThe appraisers' cuts differ by a standard deviation of half a σ. Pooled: the mean of the three cuts against the\npooled interval. Own: each appraiser's cut and σ, from three calls a part, against its own interval (limits fitted by\nmaximum likelihood). Rejected: how often \"same cut\" is rejected at 5 %, with these cuts and with equal ones.\n\n| parts | placed | σ | pooled cut covered | own cut covered | own σ covered | same cut rejected | rejected though equal | same σ rejected though equal |\n|---|---|---|---|---|---|---|---|---|\n")
	for _, parts := range []int{30, 60} {
		for _, sigma := range []float64{0.06, 0.12} {
			fmt.Fprintln(w, appraisers(scenario{parts: parts, sigma: sigma, layout: "near the limits", appraisers: 0.5}, max(2, studies/4)))
		}
	}
	fmt.Fprint(w, "\n## Outliers\n\nStudies without an outlier, and the same with one part more than 4 σ from both cuts called wrong every time.\n\n| parts | σ | flagged though none | found | others flagged beside it |\n|---|---|---|---|---|\n")
	for _, parts := range []int{20, 30, 60} {
		for _, sigma := range []float64{0.03, 0.06} {
			fmt.Fprintln(w, outliers(scenario{parts: parts, sigma: sigma, layout: "spread"}, max(2, studies/4)))
		}
	}
	fmt.Fprint(w, `
## What the tables say

An interval is right when it covers. Cut and σ are held at or near the nominal 95 % from 30 parts on, whether the
parts are spread out or placed near the limits. Cuts are unbiased. σ is low by up to two fifths of its standard error
in small studies, as maximum likelihood is; the profile interval, which is longer upwards, makes up for it.

With few parts near a narrow zone (30 parts, σ of 3 % of the tolerance) half of the studies have a limit with no mixed
value or a single one. The likelihood-ratio interval with chi-square's cut-off at one degree of freedom then covers
less than it claims in those studies (about 91 % for the cut and 87 % for σ), so there the cut-off is that of two
degrees of freedom: cut and σ are not determined apart.

The first table's coverages are over all studies, which is what an interval promises. Looked at alone, the few studies of 45 parts
in which a limit happens to be separated are the ones whose calls came out sharper than the truth, and the upper bound
of σ is too low in about a third of them.

The pooled interval takes the nine calls of a part as independent given its value. Appraisers with different cuts
make the pooled σ larger than any one's, and its interval is that of the pooled curve.
`)
}

func row(s scenario, studies int) (line, separated string) {
	rng := rand.New(rand.NewPCG(uint64(s.parts), uint64(1e6*s.sigma)+uint64(len(s.layout))))
	var cut, logSigma, atLimit, escape, sepCut, sepSigma score
	fitted, lack, failed, unknown := 0, 0, 0, 0
	truth := signal.Gauge{LowerCut: cutLower, UpperCut: cutUpper, LowerSigma: s.sigma, UpperSigma: s.sigma, HasLower: true, HasUpper: true}
	process := signal.Process{Mean: 0.5, SD: 0.2}
	limits := signal.Between(0, 1)
	known, err := signal.Assess(process, signal.Known{Gauge: truth, Limits: limits}, 0)
	if err != nil {
		fmt.Fprintln(os.Stderr, "coverage:", err)
		os.Exit(1)
	}
	for range studies {
		c, err := signal.Fit(draw(rng, s), limits, signal.Options{})
		if err != nil {
			failed++
			continue
		}
		both := c.Lower.Status == signal.Fitted && c.Upper.Status == signal.Fitted
		for _, l := range []*signal.LimitFit{c.Lower, c.Upper} {
			at := cutLower
			if l.Side == signal.Upper {
				at = cutUpper
			}
			if !l.Known() {
				unknown++
				continue
			}
			cut.add(l.Cut, at)
			logSigma.add(logOf(l.Sigma), math.Log(s.sigma))
			if l.Status == signal.Fitted {
				p, _ := truth.Accept(l.Limit)
				atLimit.add(l.AtLimit, p)
			} else {
				sepCut.add(l.Cut, at)
				sepSigma.add(l.Sigma, s.sigma)
			}
		}
		if r, err := signal.Assess(process, c, 0); err == nil {
			escape.add(r.Escape, known.Escape.Value)
		}
		if !both {
			continue
		}
		fitted++
		if c.LackOfFit.Tested && c.LackOfFit.P < 0.10 {
			lack++
		}
	}
	b1, _ := cut.bias()
	b2, _ := logSigma.bias()
	share := func(n int) float64 { return 100 * float64(n) / float64(studies) }
	line = fmt.Sprintf("| %d | %s | %.2f | %.1f %% | %+.2f | %+.2f | %.1f %% | %.1f %% | %.1f %% | %.1f %% | %.1f %% |", s.parts, s.layout, s.sigma,
		share(fitted), b1, b2, cut.coverage(), logSigma.coverage(), atLimit.coverage(), 100*float64(lack)/float64(max(1, fitted)), escape.coverage())
	if failed+unknown > 0 {
		line += fmt.Sprintf(" %d studies failed, %d limits without a turn |", failed, unknown)
	}
	if sepCut.n >= 50 {
		separated = fmt.Sprintf("| %d | %s | %.2f | %d | %.1f %% | %.1f %% |", s.parts, s.layout, s.sigma, sepCut.n, sepCut.coverage(), sepSigma.coverage())
	}
	return line, separated
}

// outliers tells how often a part that is called wrong every time is found.
func outliers(s scenario, studies int) string {
	rng := rand.New(rand.NewPCG(uint64(s.parts), uint64(1e6*s.sigma)+29))
	limits := signal.Between(0, 1)
	var clean, flagged, planted, found, others int
	for range studies {
		parts := draw(rng, s)
		if c, err := signal.Fit(parts, limits, signal.Options{}); err == nil {
			clean++
			if len(c.Outliers) > 0 {
				flagged++
			}
		}
		var far []int
		for i, p := range parts {
			if math.Abs(p.Value-cutLower) > 4*s.sigma && math.Abs(p.Value-cutUpper) > 4*s.sigma {
				far = append(far, i)
			}
		}
		if len(far) == 0 {
			continue
		}
		i := far[rng.IntN(len(far))]
		parts[i].Accepted = parts[i].Calls - parts[i].Accepted
		c, err := signal.Fit(parts, limits, signal.Options{})
		if err != nil {
			continue
		}
		planted++
		for _, o := range c.Outliers {
			if o == i {
				found++
			} else {
				others++
			}
		}
	}
	pc := func(a, b int) float64 { return 100 * float64(a) / float64(max(1, b)) }
	return fmt.Sprintf("| %d | %.2f | %.1f %% | %.1f %% | %.1f %% |", s.parts, s.sigma, pc(flagged, clean), pc(found, planted), pc(others, planted))
}

func logOf(e signal.Estimate) signal.Estimate {
	e.Value = math.Log(e.Value)
	if e.HasLower {
		e.Lower = math.Log(e.Lower)
	}
	if e.HasUpper {
		e.Upper = math.Log(e.Upper)
	}
	return e
}

// appraisers simulates three appraisers, each with a cut of its own at each
// limit (shifted alike).
func appraisers(s scenario, studies int) string {
	rng := rand.New(rand.NewPCG(uint64(s.parts), uint64(1e6*s.sigma)+17))
	limits := signal.Between(0, 1)
	var pooled, own, ownSigma score
	var rejected, tested, rejectedEqual, testedEqual, sigmaRejected int
	for i := range 2 * studies {
		equal := i%2 == 1
		base := draw(rng, scenario{parts: s.parts, sigma: s.sigma, layout: s.layout})
		by := make([][]signal.Part, 3)
		var shift [3]float64
		for a := range by {
			if !equal {
				shift[a] = s.appraisers * s.sigma * rng.NormFloat64()
			}
			for _, p := range base {
				q := signal.Part{Value: p.Value, Calls: 3}
				for range 3 {
					e := s.sigma * rng.NormFloat64()
					if x := p.Value - shift[a] + e; x > cutLower && x < cutUpper {
						q.Accepted++
					}
				}
				by[a] = append(by[a], q)
			}
		}
		r, err := signal.FitAppraisers(by, limits, signal.Options{})
		if err != nil {
			continue
		}
		if equal {
			if r.SameCut.Done && len(r.Compared) == 3 {
				testedEqual++
				if r.SameCut.P < 0.05 {
					rejectedEqual++
				}
				if r.SameSigma.P < 0.05 {
					sigmaRejected++
				}
			}
			continue
		}
		if r.SameCut.Done {
			tested++
			if r.SameCut.P < 0.05 {
				rejected++
			}
		}
		mean := (shift[0] + shift[1] + shift[2]) / 3
		if r.Pooled.Lower.Status == signal.Fitted {
			pooled.add(r.Pooled.Lower.Cut, cutLower+mean)
		}
		if r.Pooled.Upper.Status == signal.Fitted {
			pooled.add(r.Pooled.Upper.Cut, cutUpper+mean)
		}
		for a, c := range r.Each {
			if c == nil || c.Lower.Status != signal.Fitted || c.Upper.Status != signal.Fitted {
				continue
			}
			own.add(c.Lower.Cut, cutLower+shift[a])
			own.add(c.Upper.Cut, cutUpper+shift[a])
			ownSigma.add(c.Lower.Sigma, s.sigma)
		}
	}
	pc := func(a, b int) float64 { return 100 * float64(a) / float64(max(1, b)) }
	return fmt.Sprintf("| %d | %s | %.2f | %.1f %% | %.1f %% | %.1f %% | %.0f %% | %.1f %% | %.1f %% |", s.parts, s.layout, s.sigma,
		pooled.coverage(), own.coverage(), ownSigma.coverage(), pc(rejected, tested), pc(rejectedEqual, testedEqual), pc(sigmaRejected, testedEqual))
}
