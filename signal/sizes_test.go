package signal

import (
	"math"
	"testing"
)

// A lower limit of 12.000 whose cut was found at 11.996 (11.994 to 11.998).
// The scenario and its figures are invented; the findings follow from the
// definition.
func TestExplain(t *testing.T) {
	l := &LimitFit{Side: Lower, Limit: 12, HasLimit: true, Cut: Estimate{Value: 11.996},
		Offset: Estimate{Value: -0.004, Lower: -0.006, Upper: -0.002, HasLower: true, HasUpper: true, Confidence: 0.95}}
	for _, c := range []struct {
		name          string
		m             Member
		want          Finding
		worn, perhaps bool
	}{
		{"worn plug", Member{Size: 11.9955, Uncertainty: 0.001, WearLimit: 11.997, HasWear: true}, Explained, true, false},
		{"right size", Member{Size: 12.0005, Uncertainty: 0.001, WearLimit: 11.997, HasWear: true}, Unexplained, false, false},
		{"part of it", Member{Size: 11.9985, Uncertainty: 0.001, WearLimit: 11.998, HasWear: true}, PartlyExplained, false, true},
		{"grows with wear", Member{Size: 11.996, Uncertainty: 0.0005, WearLimit: 11.9950, HasWear: true, WearsUp: true}, Explained, true, false},
		{"no wear limit", Member{Size: 11.996, Uncertainty: 1e-6}, Explained, false, false},
	} {
		t.Run(c.name, func(t *testing.T) {
			e, err := Explain(l, c.m)
			if err != nil {
				t.Fatal(err)
			}
			if e.Finding != c.want || e.Worn != c.worn || e.PerhapsWorn != c.perhaps {
				t.Errorf("%v, worn %v, perhaps %v", e.Finding, e.Worn, e.PerhapsWorn)
			}
			near(t, "remainder", e.Remainder.Value, -0.004-(c.m.Size-12), 1e-12)
			// Offset (±0.002) and calibration, independent: their squares add.
			half := math.Sqrt(0.002*0.002 + c.m.Uncertainty*c.m.Uncertainty)
			near(t, "remainder, upper", e.Remainder.Upper-e.Remainder.Value, half, 1e-12)
			near(t, "remainder, lower", e.Remainder.Value-e.Remainder.Lower, half, 1e-12)
		})
	}
	bare := *l
	bare.Offset = Estimate{Value: -0.004, Why: whySkipped}
	if _, err := Explain(&bare, Member{Size: 11}); err == nil {
		t.Error("no interval: no error")
	}
	if _, err := Explain(nil, Member{}); err == nil {
		t.Error("no fit: no error")
	}
	if _, err := Explain(l, Member{Side: Upper}); err == nil {
		t.Error("other limit: no error")
	}
	if _, err := Explain(l, Member{Size: 12, Uncertainty: -1}); err == nil {
		t.Error("negative uncertainty: no error")
	}
}
