package main

import (
	"errors"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"runtime"
	"strings"
	"sync"

	"samecall/agreement"
	"samecall/agreement/interval"
)

// figure is one that a study estimates: its interval, and beside it the one
// that treats calls as independent, where there is one.
type figure struct {
	name string
	of   func(a *agreement.Analysis, t truth) (e agreement.Estimate, truth float64)
	limit
}

// limit is what of a figure is held against the truth.
type limit int

const (
	both  limit = iota // of the interval
	lower              // one-sided
	upper
)

func effectiveness(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
	return a.Against[0].Effectiveness.Estimate, t.effective
}

func missRate(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
	return a.Against[0].Miss.Estimate, t.miss
}

func falseAlarmRate(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
	return a.Against[0].FalseAlarm.Estimate, t.falseAlarm
}

func missRateOfAll(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
	return a.All.Miss.Estimate, t.missAll
}

func kappaAgainst(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
	return a.Against[0].Kappa, t.against
}

func kappaDifferent(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
	return a.Between.DifferentAppraisers, t.different
}

// group is a table of figures.
type group []figure

var rates = group{
	{"within, share", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.Within[0].Share.Estimate, t.within
	}, both},
	{"between, share", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.Between.Share.Estimate, t.between
	}, both},
	{"effectiveness", effectiveness, both},
	{"miss rate", missRate, both},
	{"false-alarm rate", falseAlarmRate, both},
	{"miss rate, all", missRateOfAll, both},
}

var ofOneOrTwo = group{
	{"kappa within", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.Within[0].Kappa, t.kappaWithin
	}, both},
	{"kappa of a pair", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.Between.Pairs[0].Kappa, t.kappaPair
	}, both},
	{"kappa against reference", kappaAgainst, both},
}

var ofAll = group{
	{"Fleiss' kappa", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.Between.Fleiss, t.fleiss
	}, both},
	{"different appraisers", kappaDifferent, both},
	{"same appraiser", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.Between.SameAppraiser, t.same
	}, both},
	{"AC1", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.Between.AC1, t.ac1
	}, both},
	{"alpha", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.Between.Alpha, t.alpha
	}, both},
}

// shown are the limits that decide whether the data show a criterion to be met.
var shown = group{
	{"effectiveness ≥", effectiveness, lower},
	{"miss rate ≤", missRate, upper},
	{"false-alarm rate ≤", falseAlarmRate, upper},
	{"miss rate, all ≤", missRateOfAll, upper},
	{"kappa against reference ≥", kappaAgainst, lower},
	{"different appraisers ≥", kappaDifferent, lower},
}

var groups = []group{rates, ofOneOrTwo, ofAll, shown}

// tally counts, for one figure, the studies that have it and whose interval
// holds the truth.
type tally struct {
	have, hold                       int
	haveIndependent, holdIndependent int
}

func (t *tally) add(l limit, e agreement.Estimate, truth float64) {
	if e.Absent != nil || e.Unbounded != nil {
		return
	}
	const rounding = 1e-12
	holds := func(i interval.Interval) bool { return i.Lower <= truth+rounding && truth <= i.Upper+rounding }
	limits := e.Interval
	switch l {
	case lower:
		limits = interval.Interval{Lower: e.OneSided.Lower, Upper: 1}
	case upper:
		limits = interval.Interval{Lower: 0, Upper: e.OneSided.Upper}
	}
	t.have++
	if holds(limits) {
		t.hold++
	}
	if l == both && e.Independent != nil {
		t.haveIndependent++
		if holds(*e.Independent) {
			t.holdIndependent++
		}
	}
}

func (t *tally) join(u tally) {
	t.have += u.have
	t.hold += u.hold
	t.haveIndependent += u.haveIndependent
	t.holdIndependent += u.holdIndependent
}

// tallies holds those of each figure of each group.
type tallies [][]tally

func newTallies() tallies {
	var t tallies
	for _, g := range groups {
		t = append(t, make([]tally, len(g)))
	}
	return t
}

// cover simulates studies of one scenario, split over the processors; the
// result depends on the seed alone.
func (s scenario) cover(studies, resamples int, seed uint64) (tallies, error) {
	t := s.truth()
	workers := runtime.GOMAXPROCS(0)
	results := make([]tallies, workers)
	errs := make([]error, workers)
	var wg sync.WaitGroup
	for w := range workers {
		wg.Go(func() {
			results[w] = newTallies()
			for i := w; i < studies && errs[w] == nil; i += workers {
				errs[w] = s.once(results[w], t, resamples, rand.New(rand.NewPCG(seed, uint64(i))))
			}
		})
	}
	wg.Wait()
	total := newTallies()
	for _, r := range results {
		for g, figures := range r {
			for f, of := range figures {
				total[g][f].join(of)
			}
		}
	}
	return total, errors.Join(errs...)
}

// once simulates one study and adds what its intervals hold.
func (s scenario) once(to tallies, t truth, resamples int, rng *rand.Rand) error {
	r, err := s.simulate(rng)
	if err != nil {
		return err
	}
	opt := agreement.DefaultOptions()
	opt.Resamples, opt.Independent = resamples, true
	a, err := agreement.Analyse(r, opt)
	if err != nil {
		return err
	}
	for g, figures := range groups {
		for f, figure := range figures {
			e, truth := figure.of(a, t)
			to[g][f].add(figure.limit, e, truth)
		}
	}
	return nil
}

func scenarios(quick bool) []scenario {
	var all []scenario
	add := func(s scenario, misses, correlations []float64) {
		for _, miss := range misses {
			for _, correlation := range correlations {
				s.miss, s.falseAlarm, s.correlation = miss, miss, correlation
				all = append(all, s)
			}
		}
	}
	misses, correlated := []float64{0.01, 0.05, 0.15}, []float64{0.3}
	// With 2000 parts kappas are linearised instead of resampled.
	for _, parts := range []int{20, 50, 200, 2000} {
		for _, at := range [][2]int{{2, 2}, {2, 3}, {3, 2}, {3, 3}, {4, 2}, {4, 3}, {5, 3}} {
			usual := at == [2]int{3, 3}
			if (quick || parts == 2000) && !usual {
				continue
			}
			correlations := correlated
			if usual || at == [2]int{2, 2} || at == [2]int{5, 3} {
				correlations = []float64{0, 0.3}
			}
			add(scenario{parts: parts, appraisers: at[0], trials: at[1]}, misses, correlations)
		}
		if parts <= 50 && !quick { // many calls on few parts, as of a camera or a fixture
			add(scenario{parts: parts, appraisers: 2, trials: 10}, misses, correlated)
			add(scenario{parts: parts, appraisers: 2, trials: 25}, misses, correlated)
		}
		if parts <= 200 {
			add(scenario{parts: parts, appraisers: 3, trials: 3, share: []float64{1, 0.5, 0.25}}, misses[2:], correlated)
		}
	}
	// Few bad parts: one category prevails.
	for _, parts := range []int{60, 200} {
		add(scenario{parts: parts, few: 6, appraisers: 3, trials: 3}, misses, correlated)
	}
	return all
}

// row is one scenario and how often each figure's interval held the truth.
type row struct {
	scenario
	tallies
}

func simulate(studies, resamples int, quick bool) ([]row, error) {
	var rows []row
	for i, s := range scenarios(quick) {
		t, err := s.cover(studies, resamples, uint64(i))
		if err != nil {
			return nil, err
		}
		rows = append(rows, row{s, t})
	}
	return rows, nil
}

// cells are those of the columns that tell which studies a row is of.
func (s scenario) cells() string {
	parts := fmt.Sprint(s.parts)
	if s.few > 0 {
		parts += fmt.Sprintf(", %d bad", s.few)
	}
	appraisers := fmt.Sprintf("%d × %d", s.appraisers, s.trials)
	if s.share != nil {
		appraisers += ", unequal"
	}
	return fmt.Sprintf("| %s | %s | %g %% | %g |", parts, appraisers, 100*s.miss, s.correlation)
}

// write prints the figures of a group as a Markdown table, coverage below the
// floor in bold.
func write(w io.Writer, rows []row, g int) {
	fmt.Fprint(w, "| parts | appraisers × trials | wrong calls | correlation |")
	for _, f := range groups[g] {
		fmt.Fprintf(w, " %s |", f.name)
	}
	fmt.Fprint(w, "\n|---|---|---|---|")
	for range groups[g] {
		fmt.Fprint(w, "---|")
	}
	fmt.Fprintln(w)
	for _, r := range rows {
		fmt.Fprint(w, r.cells())
		for _, t := range r.tallies[g] {
			fmt.Fprintf(w, " %s", mark(t.hold, t.have))
			if t.haveIndependent > 0 {
				fmt.Fprintf(w, " (%.1f)", percent(t.holdIndependent, t.haveIndependent))
			}
			fmt.Fprint(w, " |")
		}
		fmt.Fprintln(w)
	}
}

// summary prints, for each figure, how often its limits hold the truth over all
// rows, and the row where they do so least.
func summary(w io.Writer, rows []row) {
	fmt.Fprintf(w, "| figure | rows | mean | least | where: parts, appraisers × trials, wrong calls, correlation | rows below %d |\n|---|---|---|---|---|---|\n", floor)
	for g, figures := range groups {
		for f, figure := range figures {
			n, below, sum := 0, 0, 0.0
			var least tally
			var where scenario
			for _, r := range rows {
				t := r.tallies[g][f]
				if t.have == 0 {
					continue
				}
				p := percent(t.hold, t.have)
				if n == 0 || p < percent(least.hold, least.have) {
					least, where = t, r.scenario
				}
				if p < floor {
					below++
				}
				n++
				sum += p
			}
			cells := strings.ReplaceAll(strings.Trim(where.cells(), "| "), " |", ";")
			fmt.Fprintf(w, "| %s | %d | %.1f | %s | %s | %d |\n", figure.name, n, sum/float64(n), mark(least.hold, least.have), cells, below)
		}
	}
}

// floor is the coverage, in percent, that intervals should reach.
const floor = 93

func mark(hold, have int) string {
	if have == 0 {
		return "–"
	}
	if p := percent(hold, have); p < floor {
		return fmt.Sprintf("**%.1f**", p)
	}
	return fmt.Sprintf("%.1f", percent(hold, have))
}

// standardError is that of a coverage of 95 %, in percent.
func standardError(studies int) float64 { return 100 * math.Sqrt(0.95*0.05/float64(studies)) }

func percent(n, of int) float64 { return 100 * float64(n) / float64(of) }
