package signal

import (
	"errors"
	"math"
	"strings"
	"testing"
)

// With a σ for each limit the likelihood of these studies, simulated with one σ
// of about half the tolerance and limits 0 and 1, is highest where the curve
// falls to 0 at a part that was only rejected.

var kinkedStudy14 = []Part{
	{Value: -0.5202841337, Accepted: 0, Calls: 9}, {Value: -0.4753484714, Accepted: 0, Calls: 9}, {Value: -0.0561537997, Accepted: 1, Calls: 9},
	{Value: 0.2925857467, Accepted: 4, Calls: 9}, {Value: 0.4125270223, Accepted: 4, Calls: 9}, {Value: 0.4544815853, Accepted: 3, Calls: 9},
	{Value: 0.5126565341, Accepted: 4, Calls: 9}, {Value: 0.5874574425, Accepted: 5, Calls: 9}, {Value: 0.6215573678, Accepted: 3, Calls: 9},
	{Value: 0.7332304761, Accepted: 3, Calls: 9}, {Value: 1.2412764068, Accepted: 4, Calls: 9}, {Value: 1.2718375917, Accepted: 1, Calls: 9},
	{Value: 1.4805302823, Accepted: 1, Calls: 9}, {Value: 1.4815274125, Accepted: 0, Calls: 9},
}

var kinkedStudy29 = []Part{
	{Value: -0.4333858634, Accepted: 0, Calls: 9}, {Value: -0.4049845203, Accepted: 0, Calls: 9}, {Value: -0.1934994963, Accepted: 1, Calls: 9},
	{Value: 0.1088749287, Accepted: 4, Calls: 9}, {Value: 0.1467941624, Accepted: 4, Calls: 9}, {Value: 0.1860395770, Accepted: 1, Calls: 9},
	{Value: 0.1938733953, Accepted: 4, Calls: 9}, {Value: 0.3382103242, Accepted: 1, Calls: 9}, {Value: 0.3392800506, Accepted: 3, Calls: 9},
	{Value: 0.3502623655, Accepted: 6, Calls: 9}, {Value: 0.4071887869, Accepted: 4, Calls: 9}, {Value: 0.4620902041, Accepted: 6, Calls: 9},
	{Value: 0.4891090217, Accepted: 2, Calls: 9}, {Value: 0.6744165698, Accepted: 4, Calls: 9}, {Value: 0.7347068498, Accepted: 2, Calls: 9},
	{Value: 0.7605864321, Accepted: 3, Calls: 9}, {Value: 0.8046068977, Accepted: 4, Calls: 9}, {Value: 0.9306998944, Accepted: 3, Calls: 9},
	{Value: 0.9611666059, Accepted: 4, Calls: 9}, {Value: 1.0138716955, Accepted: 4, Calls: 9}, {Value: 1.0303049693, Accepted: 3, Calls: 9},
	{Value: 1.0705547703, Accepted: 4, Calls: 9}, {Value: 1.2498958567, Accepted: 2, Calls: 9}, {Value: 1.3398107758, Accepted: 0, Calls: 9},
	{Value: 1.3448408053, Accepted: 0, Calls: 9}, {Value: 1.3683998366, Accepted: 0, Calls: 9}, {Value: 1.3763080192, Accepted: 0, Calls: 9},
	{Value: 1.3796567596, Accepted: 4, Calls: 9}, {Value: 1.4665869273, Accepted: 0, Calls: 9},
}

// R 4.2.2 (optim over both cuts and both σs from 150 starts) ends on the kink in
// both: acceptance at the part named is 0 within 1e-8, and the derivatives do not
// vanish. In the second there is a maximum elsewhere, but lower: −139.2653
// against −139.2505.
func TestTwoSigmasOnAKink(t *testing.T) {
	for name, study := range map[string]struct {
		parts []Part
		at    string
	}{"no maximum": {kinkedStudy14, "-0.47534847"}, "a lower maximum elsewhere": {kinkedStudy29, "-0.433385"}} {
		_, err := Fit(study.parts, Between(0, 1), Options{TwoSigmas: true})
		var not *NotConvergedError
		if !errors.As(err, &not) || !not.TwoSigmas || !strings.Contains(err.Error(), "the curve falls to 0 at the part at "+study.at) || !strings.Contains(err.Error(), "one σ for both limits may fit") {
			t.Errorf("%s: %v", name, err)
		}
		if c := mustFit(t, study.parts, Between(0, 1), Options{}); c.Lower.Status != Fitted || c.Upper.Status != Fitted {
			t.Errorf("%s: with one σ %v and %v", name, c.Lower.Status, c.Upper.Status)
		}
	}
}

// The point found with the kink rounded less and less is the one on the kink.
func TestClimbEndsOnAKink(t *testing.T) {
	d, err := prepare(kinkedStudy29, Options{TwoSigmas: true})
	if err != nil {
		t.Fatal(err)
	}
	m := d.model(0, len(d.x), [2]bool{true, true})
	s := newSolver(m)
	// The R fit above, in the scale of the fit.
	s.theta[0], s.theta[1] = d.sc.in(0.1016783), d.sc.in(0.6264825)
	for i, logSigma := range []float64{-1.081713, -0.3982001} {
		s.theta[2+i] = logSigma - math.Log(d.sc.scale)
	}
	out := s.climb(absent, convergence)
	if !out.converged || out.kink == absent {
		t.Fatalf("%+v: want to end on a kink", out)
	}
	near(t, "log-likelihood", out.loglik, -139.25054334, 1e-6)
}
