package agreement

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// Warning is something to be said with the result, not a failure.
type Warning struct {
	Code string // fixed, for programs: "prevalence"
	Text string // for people
}

// Error returns the text.
func (w Warning) Error() string { return w.Text }

const (
	// Kappa is called misleading when one category holds at least this share
	// of the calls and AC1, which does not suffer from that, is higher by at
	// least prevalenceGap. Our own choice, no source; the paradox itself is
	// Feinstein & Cicchetti's (Journal of Clinical Epidemiology 43 (1990) 543–549).
	prevalentShare = 0.8
	prevalenceGap  = 0.1
)

// prevailing returns the share of the commonest category of what a coefficient
// compares, and whether it is so large that the coefficient is pulled down by
// it: AC1 of the same calls, which is not, is higher by far. The share is 0
// where it is not.
func prevailing(c coefficient, sums []float64, value float64) (float64, bool) {
	shares := c.shares(sums)
	if len(shares) < 2 || slices.Max(shares) < prevalentShare {
		return 0, false
	}
	observed, _, _ := c.disagreements(sums)
	var S float64
	for _, p := range shares {
		S += p * p
	}
	ac1 := 1 - observed/(1-(1-S)/float64(len(shares)-1))
	if ac1-value < prevalenceGap {
		return 0, false
	}
	return slices.Max(shares), true
}

func (s *study) warnings(a *Analysis) []Warning {
	return slices.Concat(s.prevalence(a), s.fewResamples(), s.notResampled())
}

// enough is how many resamples the confidence asks for. The last digits of a
// confidence such as 0.9999 are not to ask for one more.
func (s *study) enough() int {
	tail := (1 - s.opt.Confidence) / 2
	return int(math.Ceil(fewestBeyond / tail * (1 - 1e-9)))
}

// fewResamples warns where the confidence asks for quantiles that so few
// resamples do not have.
func (s *study) fewResamples() []Warning {
	if s.intervals.Resampled == 0 || s.opt.Resamples >= s.enough() {
		return nil
	}
	do := fmt.Sprintf("Ask for %d or more.", s.enough())
	if s.enough() > s.most() {
		do = fmt.Sprintf("%d would be enough, but take too long: ask for none, for linearised intervals, or for less confidence.", s.enough())
	}
	return []Warning{{"few_resamples", fmt.Sprintf(
		"%d resamples are too few for limits of kappas at %.10g %%: fewer than %d lie beyond each. %s",
		s.opt.Resamples, 100*s.opt.Confidence, fewestBeyond, do)}}
}

// notResampled warns where resamples were asked for and are beyond the bounds.
func (s *study) notResampled() []Warning {
	most, n := s.most(), s.dear
	if !s.wanted || n == 0 || s.opt.Resamples <= most {
		return nil
	}
	text := fmt.Sprintf("The intervals of %d of the %d kappas and coefficients that were to be resampled are linearised: %d resamples of this study would take too much time or memory.",
		n, n+s.intervals.Resampled, s.opt.Resamples)
	if most >= max(s.enough(), fewestResamples) {
		text += fmt.Sprintf(" Ask for %d or fewer.", most)
	}
	return []Warning{{"not_resampled", text}}
}

// prevalence warns of the kappas that are pulled down, each by the calls that
// it compares itself.
func (s *study) prevalence(a *Analysis) []Warning {
	var within, pairs, against affected
	for i, w := range a.Within {
		within.add(w.Kappa, s.name(i))
	}
	for _, p := range a.Between.Pairs {
		pairs.add(p.Kappa, s.name(p.A)+" with "+s.name(p.B))
	}
	for i, g := range a.Against {
		against.add(g.Kappa, s.name(i))
	}
	var together affected
	if s.Appraisers() > 1 { // else these are the same again
		together.add(a.Between.DifferentAppraisers, "")
		together.add(a.Between.SameAppraiser, "")
		together.add(a.Between.Fleiss, "")
		if a.All != nil {
			together.add(a.All.Kappa, "")
		}
	}
	var kappas []string
	for _, g := range []struct {
		affected
		of              int
		each, kind, all string
	}{
		{within, len(a.Within), "within ", "appraisers", "within appraisers"},
		{pairs, len(a.Between.Pairs), "of ", "pairs of appraisers", "of each two appraisers"},
		{against, len(a.Against), "against the reference of ", "appraisers", "against the reference"},
		{together, len(together.names), "", "", "of all appraisers together"},
	} {
		switch n := len(g.names); {
		case n == 0:
		case n == g.of && (n > 1 || g.each == ""):
			kappas = append(kappas, g.all)
		default:
			kappas = append(kappas, g.each+g.who(g.kind))
		}
	}
	if len(kappas) == 0 {
		return nil
	}
	beside := "the shares of parts"
	if ac1 := a.Between.AC1; a.Between.Fleiss.Prevalent && ac1.Absent == nil {
		beside += fmt.Sprintf(" and AC1 (%.2f)", ac1.Value)
	}
	shares := affected{shares: slices.Concat(within.shares, pairs.shares, against.shares, together.shares)}
	return []Warning{{"prevalence", fmt.Sprintf(
		"One category holds %s of the calls compared and pulls down kappa %s: it understates the agreement. Read it beside %s.", shares.extent(), list(kappas), beside)}}
}

// affected are kappas of one kind that are pulled down.
type affected struct {
	names  []string
	shares []float64 // of the commonest category
}

func (g *affected) add(e Estimate, name string) {
	if e.Prevalent {
		g.names = append(g.names, name)
		g.shares = append(g.shares, e.Prevailing)
	}
}

// who names those affected, or says how many there are.
func (g affected) who(kind string) string {
	const most = 4
	if len(g.names) > most {
		return fmt.Sprintf("%d %s", len(g.names), kind)
	}
	return list(g.names)
}

// extent is the share of the commonest category, or from where to where it
// goes, cut down to a tenth of a percent: 99.96 % are not all.
func (g affected) extent() string {
	percent := func(x float64) float64 { return math.Floor(1000*x+1e-9) / 10 }
	least, largest := percent(slices.Min(g.shares)), percent(slices.Max(g.shares))
	if least == largest {
		return fmt.Sprintf("%.3g %%", least)
	}
	return fmt.Sprintf("%.3g to %.3g %%", least, largest)
}

// name is an appraiser's name, or number where it has none.
func (s *study) name(appraiser int) string {
	if len(s.opt.Names) > 0 {
		return s.opt.Names[appraiser]
	}
	return fmt.Sprintf("appraiser %d", appraiser+1)
}

func list(names []string) string {
	if len(names) < 2 {
		return strings.Join(names, "")
	}
	last := len(names) - 1
	return strings.Join(names[:last], ", ") + " and " + names[last]
}
