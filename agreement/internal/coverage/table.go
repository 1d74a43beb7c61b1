package main

import (
	"fmt"
	"io"
	"math/rand/v2"
	"runtime"
	"sync"

	"samecall/agreement"
	"samecall/agreement/interval"
)

// figure is one that a study estimates: its interval, and beside it the one
// that treats calls as independent, where there is one.
type figure struct {
	name string
	of   func(a *agreement.Analysis, t truth) (e agreement.Estimate, truth float64)
}

var figures = []figure{
	{"within, share", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.Within[0].Share.Estimate, t.within
	}},
	{"between, share", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.Between.Share.Estimate, t.between
	}},
	{"effectiveness", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.Against[0].Effectiveness.Estimate, t.effective
	}},
	{"miss rate", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.Against[0].Miss.Estimate, t.miss
	}},
	{"false-alarm rate", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.Against[0].FalseAlarm.Estimate, t.falseAlarm
	}},
	{"miss rate, all", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.All.Miss.Estimate, t.miss
	}},
	{"kappa within", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.Within[0].Kappa, t.kappaWithin
	}},
	{"kappa of a pair", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.Between.Pairs[0].Kappa, t.kappaPair
	}},
	{"kappa against reference", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.Against[0].Kappa, t.against
	}},
	{"Fleiss' kappa", func(a *agreement.Analysis, t truth) (agreement.Estimate, float64) {
		return a.Between.Fleiss, t.kappaPair
	}},
}

// tally counts, for one figure, the studies that have it and whose interval
// holds the truth.
type tally struct {
	have, hold                       int
	haveIndependent, holdIndependent int
}

func (t *tally) add(e agreement.Estimate, truth float64) {
	if e.Absent != nil || e.Unbounded != nil {
		return
	}
	const rounding = 1e-12
	holds := func(i interval.Interval) bool { return i.Lower <= truth+rounding && truth <= i.Upper+rounding }
	t.have++
	if holds(e.Interval) {
		t.hold++
	}
	if e.Independent != nil {
		t.haveIndependent++
		if holds(*e.Independent) {
			t.holdIndependent++
		}
	}
}

// cover simulates studies of one scenario, split over the processors; the
// result depends on the seed alone.
func (s scenario) cover(studies, resamples int, seed uint64) ([]tally, error) {
	t := s.truth()
	workers := runtime.GOMAXPROCS(0)
	results := make([][]tally, workers)
	errs := make([]error, workers)
	var wg sync.WaitGroup
	for w := range workers {
		wg.Go(func() {
			sums := make([]tally, len(figures))
			results[w] = sums
			for i := w; i < studies; i += workers {
				r, err := s.simulate(rand.New(rand.NewPCG(seed, uint64(i))))
				if err != nil {
					errs[w] = err
					return
				}
				opt := agreement.DefaultOptions()
				opt.Resamples, opt.Independent = resamples, true
				a, err := agreement.Analyse(r, opt)
				if err != nil {
					errs[w] = err
					return
				}
				for f, figure := range figures {
					e, truth := figure.of(a, t)
					sums[f].add(e, truth)
				}
			}
		})
	}
	wg.Wait()
	total := make([]tally, len(figures))
	for w, sums := range results {
		if errs[w] != nil {
			return nil, errs[w]
		}
		for f, s := range sums {
			total[f].have += s.have
			total[f].hold += s.hold
			total[f].haveIndependent += s.haveIndependent
			total[f].holdIndependent += s.holdIndependent
		}
	}
	return total, nil
}

func scenarios(quick bool) []scenario {
	var all []scenario
	// With 2000 parts kappas are linearised instead of resampled.
	for _, parts := range []int{20, 50, 200, 2000} {
		// 10 and 25 trials: many calls on few parts, as of a camera or a fixture.
		for _, at := range [][2]int{{2, 2}, {3, 3}, {5, 3}, {2, 10}, {2, 25}} {
			if (quick || parts == 2000) && at[0] != 3 || at[1] >= 10 && parts > 50 {
				continue
			}
			for _, miss := range []float64{0.01, 0.05, 0.15} {
				for _, correlation := range []float64{0, 0.3} {
					all = append(all, scenario{parts: parts, appraisers: at[0], trials: at[1], miss: miss, falseAlarm: miss, correlation: correlation})
				}
			}
		}
	}
	// Few bad parts: one category prevails.
	for _, size := range [][2]int{{60, 6}, {200, 6}} {
		for _, miss := range []float64{0.01, 0.05, 0.15} {
			all = append(all, scenario{parts: size[0], few: size[1], appraisers: 3, trials: 3, miss: miss, falseAlarm: miss, correlation: 0.3})
		}
	}
	return all
}

// row is one scenario and how often each figure's interval held the truth.
type row struct {
	scenario
	figures []tally
}

func simulate(studies, resamples int, quick bool) ([]row, error) {
	var rows []row
	for i, s := range scenarios(quick) {
		figures, err := s.cover(studies, resamples, uint64(i))
		if err != nil {
			return nil, err
		}
		rows = append(rows, row{s, figures})
	}
	return rows, nil
}

// write prints the figures chosen as a Markdown table, coverage below the
// floor in bold.
func write(w io.Writer, rows []row, chosen []int) {
	fmt.Fprint(w, "| parts | appraisers × trials | wrong calls | correlation |")
	for _, f := range chosen {
		fmt.Fprintf(w, " %s |", figures[f].name)
	}
	fmt.Fprint(w, "\n|---|---|---|---|")
	for range chosen {
		fmt.Fprint(w, "---|")
	}
	fmt.Fprintln(w)
	for _, r := range rows {
		parts := fmt.Sprint(r.parts)
		if r.few > 0 {
			parts += fmt.Sprintf(", %d bad", r.few)
		}
		fmt.Fprintf(w, "| %s | %d × %d | %g %% | %g |", parts, r.appraisers, r.trials, 100*r.miss, r.correlation)
		for _, f := range chosen {
			t := r.figures[f]
			fmt.Fprintf(w, " %s", mark(t.hold, t.have))
			if t.haveIndependent > 0 {
				fmt.Fprintf(w, " (%.1f)", percent(t.holdIndependent, t.haveIndependent))
			}
			fmt.Fprint(w, " |")
		}
		fmt.Fprintln(w)
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

func percent(n, of int) float64 { return 100 * float64(n) / float64(of) }
