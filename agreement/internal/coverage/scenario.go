package main

import (
	"math/rand/v2"

	"gonum.org/v1/gonum/stat/distuv"

	"samecall/agreement"
)

// scenario is a kind of study. One part in two is bad, rounded down, unless few
// says how many.
type scenario struct {
	parts, appraisers, trials int
	miss, falseAlarm          float64 // true rates of the first appraiser
	correlation               float64 // of two calls on one part being wrong
	few                       int     // bad parts
	// share is, of appraisers who differ, how often each calls a part wrong for
	// every time that the first one does; nil where they are alike.
	share []float64
}

// of returns an appraiser's share.
func (s scenario) of(appraiser int) float64 {
	if s.share == nil {
		return 1
	}
	return s.share[appraiser]
}

// difficulty is the distribution over parts of the probability that a call
// is wrong: a beta distribution with the mean and correlation given, or that
// one value for every part without correlation.
type difficulty struct {
	mean, correlation float64
}

func (d difficulty) shapes() (a, b float64) {
	n := 1/d.correlation - 1
	return d.mean * n, (1 - d.mean) * n
}

func (d difficulty) draw(rng *rand.Rand) float64 {
	if d.correlation == 0 {
		return d.mean
	}
	a, b := d.shapes()
	return distuv.Beta{Alpha: a, Beta: b, Src: rng}.Rand()
}

// none returns the probability that none of n calls on a part is wrong; all
// that every one is.
func (d difficulty) none(n int) float64 { return power(1-d.mean, d.correlation, n) }
func (d difficulty) all(n int) float64  { return power(d.mean, d.correlation, n) }

// alike returns the probability that no call on a part is wrong, or every one,
// where appraisers differ: the expectation of products of 1 − share · p and of
// share · p, from the powers of p.
func (d difficulty) alike(shares []float64, trials int) float64 {
	none, all := []float64{1}, 1.0 // the polynomial in p; the factor of its highest power
	for _, share := range shares {
		for range trials {
			all *= share
			next := make([]float64, len(none)+1)
			for k, c := range none {
				next[k] += c
				next[k+1] -= share * c
			}
			none = next
		}
	}
	out := all * power(d.mean, d.correlation, len(shares)*trials)
	for k, c := range none {
		out += c * power(d.mean, d.correlation, k)
	}
	return out
}

// power is E[p^n] for p of the mean and correlation given.
func power(mean, correlation float64, n int) float64 {
	out := 1.0
	for i := range n {
		k := float64(i)
		if correlation == 0 {
			out *= mean
			continue
		}
		size := 1/correlation - 1
		out *= (mean*size + k) / (size + k)
	}
	return out
}

// disagree returns the probability that two calls on a part disagree, by
// appraisers with the shares x and y.
func (d difficulty) disagree(x, y float64) float64 {
	return x*d.mean + y*d.mean - 2*x*y*power(d.mean, d.correlation, 2)
}

// truth holds what the figures of a study estimate.
type truth struct {
	within, between, effective          float64 // shares of parts
	miss, missAll, falseAlarm           float64
	kappaWithin, kappaPair, against     float64
	same, different, fleiss, ac1, alpha float64
}

func (s scenario) bad() int {
	if s.few > 0 {
		return s.few
	}
	return s.parts / 2
}

func (s scenario) truth() truth {
	bad := difficulty{s.miss, s.correlation}
	good := difficulty{s.falseAlarm, s.correlation}
	f := float64(s.bad()) / float64(s.parts)
	mix := func(x, y float64) float64 { return f*x + (1-f)*y }
	disagree := func(x, y float64) float64 { return mix(bad.disagree(x, y), good.disagree(x, y)) }
	accepted := func(share float64) float64 { return mix(share*s.miss, 1-share*s.falseAlarm) }
	calls := s.appraisers * s.trials
	t := truth{
		within:     mix(bad.none(s.trials)+bad.all(s.trials), good.none(s.trials)+good.all(s.trials)),
		between:    mix(bad.none(calls)+bad.all(calls), good.none(calls)+good.all(calls)),
		effective:  mix(bad.none(s.trials), good.none(s.trials)),
		miss:       s.miss,
		falseAlarm: s.falseAlarm,
	}
	if s.share != nil {
		t.between = mix(bad.alike(s.share, s.trials), good.alike(s.share, s.trials))
	}
	t.kappaWithin = 1 - disagree(1, 1)/twice(accepted(1), accepted(1))
	t.kappaPair = 1 - disagree(1, s.of(1))/twice(accepted(1), accepted(s.of(1)))
	t.against = 1 - mix(s.miss, s.falseAlarm)/(accepted(1)*f+(1-accepted(1))*(1-f))

	// Of all appraisers: the mean over pairs of calls, and the pooled margins.
	var own, other, all, mean float64
	n, trials := float64(s.appraisers), float64(s.trials)
	for a := range s.appraisers {
		mean += s.of(a) / n
		own += disagree(s.of(a), s.of(a)) / n
		for b := range s.appraisers {
			if a != b {
				other += disagree(s.of(a), s.of(b)) / (n * (n - 1))
			}
		}
	}
	all = (own*(trials-1) + other*(n-1)*trials) / (n*trials - 1)
	t.missAll = mean * s.miss
	chance := twice(accepted(mean), accepted(mean))
	t.same, t.different, t.fleiss = 1-own/chance, 1-other/chance, 1-all/chance
	t.alpha = t.fleiss
	t.ac1 = 1 - all/(1-chance) // of two categories, chance agreement is what disagreement is to kappa
	return t
}

// twice is the probability that one of two calls accepts and the other does not,
// if they accept independently with the probabilities given.
func twice(p, q float64) float64 { return p*(1-q) + q*(1-p) }

func (s scenario) simulate(rng *rand.Rand) (*agreement.Ratings, error) {
	trials := make([]int, s.appraisers)
	for a := range trials {
		trials[a] = s.trials
	}
	r, err := agreement.New(s.parts, 2, trials)
	if err != nil {
		return nil, err
	}
	ref := make([]agreement.Category, s.parts)
	bad, good := difficulty{s.miss, s.correlation}, difficulty{s.falseAlarm, s.correlation}
	for part := range ref {
		d := bad
		if part >= s.bad() {
			ref[part], d = 1, good
		}
		p := d.draw(rng)
		row := r.Row(part)
		for i := range row {
			row[i] = ref[part]
			if rng.Float64() < p*s.of(i/s.trials) {
				row[i] = 1 - ref[part]
			}
		}
	}
	if err := r.SetReference(ref); err != nil {
		return nil, err
	}
	return r, r.SetAccept([]bool{false, true})
}
