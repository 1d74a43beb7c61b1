package agreement

import (
	"errors"
	"math"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/mathext"
	"gonum.org/v1/gonum/stat/distuv"
)

// Test is the result of a test of direction: do two sides disagree one way
// more than the other? The tests take pairs of calls as independent.
type Test struct {
	Statistic float64 // chi-square; for the exact test, the smaller of the two counts
	DF        int     // degrees of freedom; 0 for the exact test
	P         float64 // probability of so much or more direction if there were none
}

var (
	errTwoByTwo    = errors.New("agreement: McNemar's test wants two categories")
	errNoDirection = errors.New("no call disagrees: there is no direction to test")
)

// McNemar returns the exact test of direction in a table of two categories:
// whether the two kinds of disagreement are equally frequent (McNemar,
// Psychometrika 12 (1947) 153–157; exact by the binomial, up to a million
// disagreements). It returns an error if there are not two categories or
// nothing disagrees.
func (t Table) McNemar() (Test, error) {
	if err := t.check(); err != nil {
		return Test{}, err
	}
	if len(t) != 2 {
		return Test{}, errTwoByTwo
	}
	x, y := t[0][1], t[1][0]
	if x > y {
		x, y = y, x
	}
	if y == 0 {
		return Test{}, errNoDirection
	}
	return Test{Statistic: float64(x), P: min(1, 2*halfTail(float64(x), float64(y)))}, nil
}

// halfTail returns P(X ≤ x) for X binomial of x + y at one half. Beyond a
// million the incomplete beta function loses its digits about the middle, and
// the normal with its correction for continuity is right to 3e-5 of p.
func halfTail(x, y float64) float64 {
	if n := x + y; n > 1e6 {
		return distuv.UnitNormal.CDF((x + 0.5 - n/2) / (math.Sqrt(n) / 2))
	}
	return mathext.RegIncBeta(y, x+1, 0.5)
}

// Bowker returns the test of symmetry of a table of any size (Bowker,
// Journal of the American Statistical Association 43 (1948) 572–574): is
// each confusion of two categories as frequent one way as the other? Pairs
// of categories that were never confused do not count. It returns an error
// if nothing disagrees.
func (t Table) Bowker() (Test, error) {
	if err := t.check(); err != nil {
		return Test{}, err
	}
	var r Test
	for j := range t {
		for k := range j {
			if n := t[j][k] + t[k][j]; n > 0 {
				d := float64(t[j][k] - t[k][j])
				r.Statistic += d * d / float64(n)
				r.DF++
			}
		}
	}
	if r.DF == 0 {
		return Test{}, errNoDirection
	}
	r.P = chiSquareTail(r.Statistic, r.DF)
	return r, nil
}

// StuartMaxwell returns the test of marginal homogeneity (Stuart, Biometrika
// 42 (1955) 412–416; Maxwell, British Journal of Psychiatry 116 (1970)
// 651–655): do both sides use each category equally often? Categories that
// are confused only among themselves are tested as a group of their own. It
// returns an error if nothing disagrees.
func (t Table) StuartMaxwell() (Test, error) {
	if err := t.check(); err != nil {
		return Test{}, err
	}
	var r Test
	for _, group := range t.confused() {
		m := len(group) - 1 // the last difference follows from the others
		d := mat.NewVecDense(m, nil)
		v := mat.NewSymDense(m, nil)
		for a, j := range group[:m] {
			var margins int
			for k := range t {
				margins += t[j][k] + t[k][j]
				d.SetVec(a, d.AtVec(a)+float64(t[j][k]-t[k][j]))
			}
			v.SetSym(a, a, float64(margins-2*t[j][j]))
			for b, k := range group[:a] {
				v.SetSym(a, b, -float64(t[j][k]+t[k][j]))
			}
		}
		var chol mat.Cholesky
		if !chol.Factorize(v) {
			return Test{}, errors.New("agreement: the margins' covariance is singular")
		}
		var solved mat.VecDense
		if err := chol.SolveVecTo(&solved, d); err != nil {
			return Test{}, errors.New("agreement: the margins' covariance is nearly singular")
		}
		r.Statistic += mat.Dot(d, &solved)
		r.DF += m
	}
	if r.DF == 0 {
		return Test{}, errNoDirection
	}
	r.P = chiSquareTail(r.Statistic, r.DF)
	return r, nil
}

// confused returns the groups, of two or more, of categories that were
// confused with each other, directly or through others.
func (t Table) confused() [][]int {
	var groups [][]int
	done := make([]bool, len(t))
	for first := range t {
		if done[first] {
			continue
		}
		done[first] = true
		group := []int{first}
		for i := 0; i < len(group); i++ {
			for k := range t {
				if !done[k] && t[group[i]][k]+t[k][group[i]] > 0 {
					done[k] = true
					group = append(group, k)
				}
			}
		}
		if len(group) > 1 {
			groups = append(groups, group)
		}
	}
	return groups
}

func chiSquareTail(x float64, df int) float64 {
	return distuv.ChiSquared{K: float64(df)}.Survival(x)
}
