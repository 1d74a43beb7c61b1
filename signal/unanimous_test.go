package signal

import (
	"testing"
)

// The manual's own figures: Measurement Systems Analysis, 4th ed. (2010),
// chapter III C: d of 0.024135 and 0.023448, mean 0.0237915, 29 % of the
// tolerance 0.095. The table is from memory; see the reference README.
func TestUnanimousAgainstManual(t *testing.T) {
	u, err := Unanimous(study(t), studyLimits, 0)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "lower d", u.Lower.Width, 0.024135, 1e-9)
	near(t, "upper d", u.Upper.Width, 0.023448, 1e-9)
	near(t, "mean d", u.MeanWidth, 0.0237915, 1e-9)
	near(t, "percent GRR", u.PercentGRR, 29, 0.5)
	if BandGRR(u.PercentGRR) != GRRConditional {
		t.Errorf("band %v", BandGRR(u.PercentGRR))
	}
	if u.Lower.RejectPart != 49 || u.Lower.AcceptPart != 43 {
		t.Errorf("lower zone between parts %d and %d, want 49 and 43", u.Lower.RejectPart, u.Lower.AcceptPart)
	}
	six, err := Unanimous(study(t), studyLimits, 6)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "percent GRR with 6", six.PercentGRR, 100*0.0237915/0.095, 1e-9)
}

func TestUnanimousHardCases(t *testing.T) {
	p := func(v float64, accepted int) Part { return Part{Value: v, Accepted: accepted, Calls: 4} }
	for _, c := range []struct {
		name         string
		parts        []Part
		limits       Limits
		lower, upper bool
	}{
		{"no parts", nil, Between(0, 10), false, false},
		{"inside only", []Part{p(4, 4), p(6, 4)}, Between(0, 10), false, false},
		{"one side", []Part{p(-1, 0), p(1, 4), p(4, 4), p(6, 4)}, Between(0, 10), true, false},
		{"no mixed part", []Part{p(-1, 0), p(1, 4), p(9, 4), p(11, 0)}, Between(0, 10), true, true},
		{"outermost mixed", []Part{p(-2, 1), p(-1, 0), p(1, 4), p(9, 4), p(11, 0)}, Between(0, 10), false, true},
		{"one limit", []Part{p(-2, 0), p(0, 3), p(1, 4)}, AtLeast(0), true, false},
		{"upper limit only", []Part{p(-2, 4), p(0, 3), p(1, 0)}, AtMost(0), false, true},
		{"equal values differ", []Part{p(-2, 0), p(0, 0), p(0, 4), p(1, 4)}, AtLeast(0), true, false},
	} {
		t.Run(c.name, func(t *testing.T) {
			u, err := Unanimous(c.parts, c.limits, 0)
			if err != nil {
				t.Fatal(err)
			}
			for _, z := range []struct {
				z    *Zone
				want bool
				has  bool
			}{{u.Lower, c.lower, c.limits.HasLower}, {u.Upper, c.upper, c.limits.HasUpper}} {
				if (z.z != nil) != z.has {
					t.Fatalf("zone %+v", z.z)
				}
				if z.z == nil {
					continue
				}
				if z.z.Found != z.want || z.z.Found == (z.z.Why != "") || z.z.Width < 0 {
					t.Errorf("%+v", z.z)
				}
			}
			if u.Found != (c.lower || c.upper) {
				t.Errorf("%+v", u)
			}
		})
	}
	u, err := Unanimous([]Part{p(-2, 0), p(0, 0), p(0, 4), p(1, 4)}, AtLeast(0), 0)
	if err != nil {
		t.Fatal(err)
	}
	if u.Lower.Reject != -2 || u.Lower.Accept != 1 || u.Lower.Between != 2 || u.Lower.Mixed != 0 || u.HasGRR {
		t.Errorf("%+v", u.Lower)
	}
}
