package agreement

import (
	"cmp"
	"errors"
	"math"
	"math/rand/v2"
	"slices"

	"samecall/agreement/interval"
)

const (
	// manyParts is where resampling stops to pay: with more parts than this
	// the linearised interval covers as well (docs/coverage.md) and costs
	// nothing.
	manyParts = 1000
	// fewestResamples is how many resamples must have a value for limits to
	// be read from them.
	fewestResamples = 100
	// hardlyAny is the chance of a resampled study without two parts outside the
	// commonest category above which there is no resampling: about seven
	// such parts in a study. Our own choice, no source.
	hardlyAny = 0.005
	// mostDrawn bounds what is kept of the resampled studies, two bytes each: a
	// hundred thousand of a study of manyParts.
	mostDrawn = 100_000 * (manyParts + 1)
	// fewestBeyond is how many resampled values should lie beyond a limit: of
	// fewer, the limit hardly goes further however high the confidence. Our own
	// choice, no source.
	fewestBeyond = 5
	// resamplingBudget bounds the additions spent on resampling one study.
	// A group of coefficients that would go beyond it, those of all pairs of
	// two hundred appraisers, say, is linearised.
	resamplingBudget = 2e9
)

var errOnePart = errors.New("only one part counts: an interval wants two or more")

// resampler draws whole parts by their place in a row of all parts, once for
// all coefficients of a study; each has the parts in a row of its own
// (canonical).
type resampler struct {
	opt         Options
	parts       int
	drawn       []uint16 // resample after resample, how many of the parts drawn stand before each place, and before the end; nil: linearise
	budget      float64
	wanted      bool      // asked for, of no more parts than are resampled
	affordable  bool      // the group of coefficients that was begun
	dear        int       // coefficients that were not resampled since they were not affordable
	additions   int       // of all groups that were begun, for each resample
	resampled   []float64 // reused
	intervals   Intervals // of the coefficients that were estimated
	done, total int       // coefficients, for Options.Progress
}

func newResampler(p patterns, opt Options, coefficients int) *resampler {
	parts := len(p.pattern)
	r := &resampler{opt: opt, parts: parts, budget: resamplingBudget, total: coefficients}
	r.wanted = opt.Resamples > 0 && parts >= 2 && parts <= manyParts
	if !r.wanted || opt.Resamples*(parts+1) > mostDrawn {
		return r
	}
	rng := rand.New(rand.NewPCG(opt.Seed, 0))
	r.drawn = make([]uint16, opt.Resamples*(parts+1))
	r.resampled = make([]float64, 0, opt.Resamples)
	for b := range opt.Resamples {
		drawn := r.of(b)
		for range parts {
			drawn[1+rng.IntN(parts)]++
		}
		for place := range parts {
			drawn[place+1] += drawn[place]
		}
	}
	return r
}

// of returns how many of the parts drawn stand before each place in one resample.
func (r *resampler) of(resample int) []uint16 {
	n := r.parts + 1
	return r.drawn[resample*n : (resample+1)*n : (resample+1)*n]
}

// estimate returns a coefficient with its interval. undefined is the reason
// why it is absent when no disagreement is to be expected.
func (r *resampler) estimate(c coefficient, z contributions, nothing, undefined error) Estimate {
	defer r.progress()
	sums := z.sums()
	if sums[compared] <= 0 {
		return absent(nothing)
	}
	value, ok := evaluate(c, sums)
	if !ok {
		return absent(undefined)
	}
	e := Estimate{Value: value}
	e.Prevailing, e.Prevalent = prevailing(c, sums, value)
	parts, disagreeing := z.disagreeing()
	if parts == 1 {
		e.Unbounded = errOnePart
		return e
	}
	e.StandardError = standardError(c, z, sums)
	b := basis{c, sums, value, e.StandardError, parts, disagreeing, nil, nil}
	switch {
	case disagreeing == 0 || lopsided(c.shares(sums), parts):
	case !r.affordable:
		r.dear++
	default:
		row := z.canonical(c)
		if values := r.resample(c, row); len(values) >= min(fewestResamples, r.opt.Resamples) {
			b.resampled, b.leftOut = values, leaveOneOut(c, row, row.sums())
		}
	}
	switch {
	case disagreeing == 0:
	case b.resampled != nil:
		r.intervals.Resampled++
	default:
		r.intervals.Linearised++
	}
	two, method, err := b.interval(r.opt.Confidence)
	each, _, errEach := b.interval(interval.EachSide(r.opt.Confidence))
	if err := cmp.Or(err, errEach); err != nil {
		return Estimate{Value: value, Unbounded: err, Prevailing: e.Prevailing, Prevalent: e.Prevalent}
	}
	e.Interval, e.OneSided, e.Method = two, each, method
	return e
}

// lopsided reports whether so few parts lie outside the commonest category that
// resampled studies often hold next to none of them: what disagreement is to
// be expected then, and with it the limits, hangs on a handful of resamples
// and on the seed. Linearised limits cover as well there (docs/coverage.md).
func lopsided(shares []float64, parts int) bool {
	if len(shares) == 0 {
		return false
	}
	n, outside := float64(parts), 1-slices.Max(shares)
	// The chance that a resampled study holds one such part at most.
	atMostOne := math.Pow(1-outside, n) + n*outside*math.Pow(1-outside, n-1)
	return atMostOne > hardlyAny
}

// basis is what the interval of a coefficient is made from.
type basis struct {
	coefficient
	sums               []float64
	value, se          float64
	parts, disagreeing int
	resampled          []float64 // nil: linearise
	leftOut            []interval.LeftOut
}

// interval returns the interval at a confidence, and its method. However many
// parts there are, it is never narrower than the share of parts that disagree
// is certain: where few do, resampling sees too little of what could have
// been.
func (b basis) interval(confidence float64) (interval.Interval, string, error) {
	const exact = "exact on the share of disagreeing parts"
	i := byShareOfParts(b, b.sums, b.disagreeing, b.parts, confidence)
	method := exact
	if b.disagreeing > 0 {
		var other interval.Interval
		var err error
		if b.resampled != nil {
			method = "BCa over parts"
			other, err = interval.BCa(b.value, b.resampled, b.leftOut, interval.Expanded(confidence, b.parts))
		} else {
			method = "linearised over parts"
			other, err = interval.Linearised(b.value, b.se, b.parts, confidence)
		}
		if err != nil {
			return interval.Interval{}, "", err
		}
		method += ", no narrower than " + exact
		i = interval.Interval{Lower: min(i.Lower, other.Lower), Upper: max(i.Upper, other.Upper)}
	}
	return interval.Interval{Lower: max(i.Lower, min(-1, b.value)), Upper: min(i.Upper, 1)}, method, nil
}

// begin begins a group of coefficients that take so many additions for each
// resample. All of the group are resampled or, beyond the budget, none: which
// of two hundred appraisers comes first must not decide how it is treated.
func (r *resampler) begin(additions int) {
	r.additions += additions
	cost := float64(additions) * float64(r.opt.Resamples)
	r.affordable = r.drawn != nil && cost <= r.budget
	if r.affordable {
		r.budget -= cost
	}
}

// most returns how many resamples of the study are within the bounds, so that
// every coefficient could be resampled. All groups have been begun.
func (r *resampler) most() int {
	return int(min(mostDrawn/float64(r.parts+1), resamplingBudget/float64(max(1, r.additions)), MaxResamples))
}

// resample returns the coefficient of each resampled study that has one, given
// the contributions of the parts in their row.
func (r *resampler) resample(c coefficient, z contributions) []float64 {
	values := r.resampled[:0]
	sums := make([]float64, z.size)
	for b := range r.opt.Resamples {
		clear(sums)
		drawn, place := r.of(b), 0
		for i, parts := range z.parts {
			before := drawn[place]
			place += parts
			if drawn[place] == before {
				continue
			}
			n := float64(drawn[place] - before)
			v := z.vectors[i*z.size : (i+1)*z.size]
			for j := range sums {
				sums[j] += n * v[j]
			}
		}
		if k, ok := evaluate(c, sums); ok {
			values = append(values, k)
		}
	}
	return values
}

func (r *resampler) progress() {
	r.done++
	if r.opt.Progress != nil {
		r.opt.Progress(r.done, r.total)
	}
}

// disagreeing returns the number of parts that count and of those on which
// something disagreed.
func (c contributions) disagreeing() (parts, disagreeing int) {
	for i, n := range c.parts {
		v := c.of(i)
		if v[compared] > 0 {
			parts += n
			if v[disagreed] > 0 {
				disagreeing += n
			}
		}
	}
	return parts, disagreeing
}

// leaveOneOut returns the coefficient with each part left out.
func leaveOneOut(c coefficient, z contributions, sums []float64) []interval.LeftOut {
	left := make([]interval.LeftOut, 0, len(z.parts))
	rest := make([]float64, z.size)
	for i, n := range z.parts {
		if !z.contributes(i) {
			continue
		}
		for j, v := range z.of(i) {
			rest[j] = sums[j] - v
		}
		if k, ok := evaluate(c, rest); ok {
			left = append(left, interval.LeftOut{Value: k, Parts: n})
		}
	}
	return left
}

// standardError returns the standard error of a coefficient linearised over
// parts: its derivative by the sums, times what each part contributes. Parts
// with a single call count where they bear on chance.
func standardError(c coefficient, z contributions, sums []float64) float64 {
	g := make([]float64, z.size)
	c.gradient(sums, g)
	influence := make([]float64, len(z.parts))
	var sum, largest, N float64
	for i, n := range z.parts {
		if !z.contributes(i) {
			continue
		}
		for j, v := range z.of(i) {
			influence[i] += g[j] * v
			largest = max(largest, math.Abs(g[j]*v))
		}
		sum += float64(n) * influence[i]
		N += float64(n)
	}
	var squares float64
	for i, n := range z.parts {
		if z.contributes(i) {
			d := influence[i] - sum/N
			squares += float64(n) * d * d
		}
	}
	// What rounding alone leaves is no variance: its root would not be small.
	if rounding := 1e-13 * largest; squares <= N*rounding*rounding {
		return 0
	}
	return math.Sqrt(squares * N / (N - 1))
}

// byShareOfParts carries the exact interval of the share of parts that
// disagree over to the coefficient, at the disagreement that was found on such
// a part and was expected by chance. The lower limit is never above that of
// parts of which none disagreed, where any part might disagree throughout: a
// single slight disagreement says little of how much others would disagree, and
// must not show more than none.
func byShareOfParts(c coefficient, sums []float64, disagreeing, parts int, confidence float64) interval.Interval {
	observed, expected, _ := c.disagreements(sums)
	none := interval.ClopperPearson(0, parts, confidence)
	i := interval.Interval{Lower: 1 - none.Upper/expected, Upper: 1}
	if disagreeing > 0 {
		share := interval.ClopperPearson(disagreeing, parts, confidence)
		severity := observed * float64(parts) / float64(disagreeing) / expected
		i = interval.Interval{Lower: min(i.Lower, 1-share.Upper*severity), Upper: 1 - share.Lower*severity}
	}
	return i
}
