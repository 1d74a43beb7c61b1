package signal

import (
	"math"
	"testing"
)

func shortStudy(t testing.TB, mirror bool) []Part {
	var parts []Part
	for _, row := range table(t, "short-study-one-limit.csv") {
		v := row[0]
		if mirror {
			v = -v
		}
		parts = append(parts, Part{Value: v, Accepted: int(row[1]), Calls: int(row[2])})
	}
	return parts
}

// The manual's data (Measurement Systems Analysis, 4th ed. 2010, from memory;
// see the reference README). Read off probability paper there: cut about
// −0.0123, bias about 0.0023, repeatability about 0.0073; by a least-squares
// line −0.0124, 0.0024, 0.0079; to be compared with a tolerance of 0.0007.
func TestShortAgainstManual(t *testing.T) {
	const tolerance = 0.0007
	for _, side := range []Side{Lower, Upper} {
		sign := 1.0
		if side == Upper {
			sign = -1
		}
		s, err := Short(shortStudy(t, side == Upper), side, sign*-0.010, Options{})
		if err != nil {
			t.Fatal(err)
		}
		if !s.HasLine {
			t.Fatal(s.Why)
		}
		for _, c := range []struct {
			what             string
			got, line, paper float64
		}{
			{"cut", sign * s.Cut, -0.0124, -0.0123},
			{"bias", s.Bias, 0.0024, 0.0023},
			{"repeatability", s.Repeatability, 0.0079, 0.0073},
		} {
			if math.Abs(c.got-c.line) > 0.00005 {
				t.Errorf("%v %s: %v, by a least-squares line %v", side, c.what, c.got, c.line)
			}
			if math.Abs(c.got-c.paper) > tolerance {
				t.Errorf("%v %s: %v, on paper %v", side, c.what, c.got, c.paper)
			}
		}
		near(t, "critical t", s.Critical, 2.093, 0.0005) // t(0.975, 19), in any table
		if !s.Significant {
			t.Error("the manual's bias is significant")
		}
		for _, p := range s.Preconditions {
			if !p.Met {
				t.Errorf("precondition %q not met: %d of %d", p.Name, p.Have, p.Need)
			}
		}
		if s.Fit == nil {
			t.Fatal(s.FitError)
		}
		l := s.Fit.Lower
		if side == Upper {
			l = s.Fit.Upper
		}
		if math.Abs(l.Cut.Value-s.Cut) > 0.0005 {
			t.Errorf("maximum likelihood cuts at %v, the line at %v", l.Cut.Value, s.Cut)
		}
	}
}

func TestShortNamesFailedPreconditions(t *testing.T) {
	parts := []Part{{Value: 1, Accepted: 2, Calls: 20}, {Value: 2, Accepted: 10, Calls: 20}, {Value: 3, Accepted: 17, Calls: 10 + 9}}
	s, err := Short(parts, Lower, 2, Options{})
	if err != nil {
		t.Fatal(err)
	}
	for _, p := range s.Preconditions {
		if p.Met {
			t.Errorf("%q met", p.Name)
		}
	}
	if !s.HasLine {
		t.Error(s.Why)
	}
	near(t, "half", s.Points[1].Adjusted, 0.5, 0)
	near(t, "below half", s.Points[0].Adjusted, 2.5/20, 1e-15)
	near(t, "above half", s.Points[2].Adjusted, 16.5/19, 1e-15)
}

func TestShortWithoutLine(t *testing.T) {
	for _, parts := range [][]Part{
		{{Value: 1, Accepted: 3, Calls: 20}},
		{{Value: 1, Accepted: 18, Calls: 20}, {Value: 2, Accepted: 2, Calls: 20}},
	} {
		s, err := Short(parts, Lower, 2, Options{})
		if err != nil {
			t.Fatal(err)
		}
		if s.HasLine || s.Why == "" || s.FitError == nil {
			t.Errorf("%+v", s)
		}
	}
	if _, err := Short(nil, Lower, 2, Options{}); err == nil {
		t.Error("no parts: no error")
	}
	if _, err := Short(shortStudy(t, false), Lower, math.Inf(1), Options{}); err == nil {
		t.Error("infinite limit: no error")
	}
}
