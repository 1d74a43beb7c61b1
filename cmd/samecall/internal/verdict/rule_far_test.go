package verdict

import (
	"testing"

	"samecall/signal"
)

// Far is farther from every cut than the grey zone, at its widest, is wide.
func TestFarFromCuts(t *testing.T) {
	at := func(cut, width, widest float64) *signal.LimitFit {
		return &signal.LimitFit{Cut: signal.Estimate{Value: cut}, Width: signal.Estimate{Value: width, Upper: widest, HasUpper: widest > 0}}
	}
	c := &signal.Curve{Lower: at(10, 0.1, 0.2), Upper: at(11, 0.1, 0)}
	for x, want := range map[float64]bool{9.75: true, 9.85: false, 10: false, 10.15: false, 10.5: true, 10.95: false, 11.05: false, 11.15: true} {
		if got := farFromCuts(c, x); got != want {
			t.Errorf("%v is far from the cuts: %v", x, got)
		}
	}
	// Where calls do not turn at a limit there is no cut to be far from.
	c.Upper = &signal.LimitFit{Status: signal.OneSided}
	if !farFromCuts(c, 11) {
		t.Error("11 is near to a cut that is not known")
	}
}

// With a steep limit fitted to few mixed parts, the part next to it may look
// impossible; it is not told as far.
func TestAnOutlierNearACutIsNotFar(t *testing.T) {
	r, _ := decide(t, causeTest(t, "gauge shifted, upper limit inside").files(9))
	p := r.Zone.Curves.Pooled
	near := -1
	for i := range p.Parts {
		if near < 0 || abs(p.Parts[i].Value-p.Upper.Cut.Value) < abs(p.Parts[near].Value-p.Upper.Cut.Value) {
			near = i
		}
	}
	p.Outliers = []int{near}
	if far := farParts(r); len(far) != 0 {
		t.Errorf("%+v", far)
	}
}

func abs(x float64) float64 { return max(x, -x) }
