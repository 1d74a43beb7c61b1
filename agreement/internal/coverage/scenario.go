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
	miss, falseAlarm          float64 // true rates
	correlation               float64 // of two calls on one part being wrong
	few                       int     // bad parts
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

// disagree returns the probability that two calls on a part disagree.
func (d difficulty) disagree() float64 {
	return 2 * d.mean * (1 - d.mean) * (1 - d.correlation)
}

// truth holds what the figures of a study estimate.
type truth struct {
	within, between, effective      float64 // shares of parts
	miss, falseAlarm                float64
	kappaWithin, kappaPair, against float64
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
	calls := s.appraisers * s.trials
	t := truth{
		within:     mix(bad.none(s.trials)+bad.all(s.trials), good.none(s.trials)+good.all(s.trials)),
		between:    mix(bad.none(calls)+bad.all(calls), good.none(calls)+good.all(calls)),
		effective:  mix(bad.none(s.trials), good.none(s.trials)),
		miss:       s.miss,
		falseAlarm: s.falseAlarm,
	}
	accepted := mix(s.miss, 1-s.falseAlarm)
	chance := 2 * accepted * (1 - accepted)
	t.kappaWithin = 1 - mix(bad.disagree(), good.disagree())/chance
	t.kappaPair = t.kappaWithin // appraisers are alike
	t.against = 1 - mix(s.miss, s.falseAlarm)/(accepted*f+(1-accepted)*(1-f))
	return t
}

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
			if rng.Float64() < p {
				row[i] = 1 - ref[part]
			}
		}
	}
	if err := r.SetReference(ref); err != nil {
		return nil, err
	}
	return r, r.SetAccept([]bool{false, true})
}
