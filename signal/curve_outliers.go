package signal

import (
	"fmt"
	"math"
	"strings"
)

// Outliers are looked for with a curve that they cannot bend: one in which a
// fixed share of calls is made at random, so that no part's log-likelihood can
// outweigh the rest. Parts whose calls have next to no chance under it are left
// out, and the plain curve is fitted to the rest; those that have next to no
// chance under that, too, even with σ and cuts at the ends of their intervals that
// favour them, are outliers. A part that the curve of all parts expects is none:
// without it, and few others that tell where calls turn, a curve is too steep.
const (
	robustLapse    = 0.05
	outlierAlpha   = 1e-3 // over all parts (Bonferroni)
	outlierScreen  = 0.05
	outlierTail    = 0.3 // most that the chance of its calls may be under the curve of all
	mostOutliers   = 0.2 // of the parts: more are no outliers but another pattern
	outlierMinimum = 5   // parts
)

func (d *dataset) outliers(c *Curve, hs [2]half) {
	n := len(d.parts)
	if n < outlierMinimum {
		return
	}
	suspects := map[int]bool{}
	// Where limits are separated there is nothing that contradicts the curve,
	// unless in the other half.
	screen := c
	if r := d.robust(hs); r != nil {
		screen = r
	}
	for i := range d.parts {
		if !c.Parts[i].NoCut && d.tailUnder(screen, i, false)*float64(n) < outlierScreen {
			suspects[i] = true
		}
	}
	if len(suspects) == 0 || float64(len(suspects)) > math.Max(1, mostOutliers*float64(n)) {
		return
	}
	without, err := d.drop(suspects).refit()
	if err != nil {
		return
	}
	for i := range suspects {
		if c.Parts[i].Tail > outlierTail || d.tailUnder(without, i, true)*float64(n) >= outlierAlpha {
			delete(suspects, i)
		}
	}
	if len(suspects) == 0 {
		return
	}
	if without, err = d.drop(suspects).refit(); err != nil {
		return
	}
	c.Without = without
	var names []string
	for i := range d.parts {
		if !suspects[i] {
			continue
		}
		c.Parts[i].Outlier = true
		name := d.parts[i].Name
		if name == "" {
			name = fmt.Sprintf("#%d", d.row[i]+1)
		}
		names = append(names, fmt.Sprintf("%s (value %.10g, %d of %d accepted)", name, d.parts[i].Value, d.parts[i].Accepted, d.parts[i].Calls))
	}
	c.warn(WarnOutliers, "called against all the others: %s; the fit is given with and without", strings.Join(names, ", "))
}

// refit fits the data anew, scaled to what is left.
func (d *dataset) refit() (*Curve, error) {
	e := *d
	var err error
	if len(e.parts) == 0 {
		return nil, ErrNoTurn
	}
	if e.sc, err = scale(e.parts); err != nil {
		return nil, err
	}
	e.order()
	return e.fit(false)
}

// robust is the curve with a fixed lapse rate, as a bare Curve; nil if it
// cannot be fitted.
func (d *dataset) robust(hs [2]half) *Curve {
	var has [2]bool
	from, to := 0, len(d.x)
	for k := range 2 {
		has[k] = d.has[k] && hs[k].status != OneSided
	}
	m := d.model(from, to, has)
	m.epsilon = robustLapse
	b := &block{m: m, s: newSolver(m), has: has, loglik: math.Inf(-1)}
	// A step is as good as any width where the rest is separated; keep σ from
	// running off.
	b.s.low = math.Log(d.smallestGap())
	for try := range 2 {
		d.startAt(b, hs, try)
		out := b.s.maximise(absent, 1e-5)
		if out.converged {
			b.theta, b.loglik = append(b.theta[:0], b.s.theta...), out.loglik
			break
		}
	}
	if b.theta == nil {
		return nil
	}
	c := &Curve{Options: d.options, sc: d.sc}
	for i, pi := range m.places(0) {
		if pi != absent {
			c.local[i], c.known[i] = b.theta[pi], true
		}
	}
	return c
}

// smallestGap is the smallest distance between two values, but no less than a
// millionth of the range.
func (d *dataset) smallestGap() float64 {
	least := 2.0
	for i := 1; i < len(d.x); i++ {
		if g := d.x[i] - d.x[i-1]; g > 0 && g < least {
			least = g
		}
	}
	return math.Max(least, 1e-6)
}

// tailUnder is the two-sided tail of part i's calls under curve c. With lenient
// every σ is taken at the upper end of its interval, and every cut at the end
// that favours the calls: a curve of few mixed parts is itself uncertain, and
// an outlier must be one under all that it may be.
func (d *dataset) tailUnder(c *Curve, i int, lenient bool) float64 {
	w := *c
	a, r := d.accepted[i], d.rejected[i]
	t := w.sc.in(d.parts[i].Value)
	if lenient {
		p, _ := c.probability(t)
		fewer := a < (a+r)*p
		for k := range 2 {
			l := c.side(k)
			if !l.Known() {
				continue
			}
			if l.Sigma.HasUpper {
				w.local[2*k+1] = math.Log(l.Sigma.Upper / w.sc.scale)
			}
			if up := fewer == (k == 0); up && l.Cut.HasUpper {
				w.local[2*k] = w.sc.in(l.Cut.Upper)
			} else if !up && l.Cut.HasLower {
				w.local[2*k] = w.sc.in(l.Cut.Lower)
			}
		}
	}
	at := w.at()
	var tm term
	tm.at(w.Options.Link, at.z(t), at.has, a, r, 0)
	if !tm.possible {
		return 0
	}
	p, q := math.Min(1, math.Max(0, tm.p)), math.Min(1, math.Max(0, tm.q))
	return tail(a, a+r, p, q, tm.loglik+logChoose(a+r, a))
}
