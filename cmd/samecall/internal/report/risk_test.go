package report

import (
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"samecall/signal"
)

// A share is written with the digits that tell it from the ends of its
// interval, none and all for none and all only, and never off by more than the
// last digit.
func TestPercentCellTellsEndsApart(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		value := rapid.Float64Range(0.001, 0.999).Draw(t, "value")
		half := value * (1 - value) * rapid.Float64Range(1e-4, 0.9).Draw(t, "half")
		e := signal.Estimate{Value: value, Lower: value - half, Upper: value + half, HasLower: true, HasUpper: true}
		text := percentCell(e).Text
		fields := strings.Fields(strings.NewReplacer("%", "", "(", "", ")", "", "to", "", "<", "").Replace(text))
		if len(fields) != 3 || strings.Count(text, "%") != 1 {
			t.Fatalf("%v is written %q", e, text)
		}
		if fields[0] == fields[1] || fields[0] == fields[2] {
			t.Fatalf("%v is written %q", e, text)
		}
		for i, want := range []float64{e.Value, e.Lower, e.Upper} {
			got, err := strconv.ParseFloat(fields[i], 64)
			if err != nil || got >= 100 || got <= 0 || got-100*want > 0.5 || 100*want-got > 0.5 {
				t.Fatalf("%v is written %q", want, text)
			}
		}
	})
}

func TestPercentCellAlone(t *testing.T) {
	for _, c := range []struct {
		e    signal.Estimate
		want string
	}{
		{signal.Estimate{Value: 1, Lower: 1, Upper: 1, HasLower: true, HasUpper: true}, "100 %"},
		{signal.Estimate{Value: 0.5}, "50 %"},
		{signal.Estimate{Value: 0.5, Upper: 0.75, HasUpper: true}, "50 % (… to 75)"},
		{signal.Estimate{Absent: true}, "–"},
	} {
		if got := percentCell(c.e).Text; got != c.want {
			t.Errorf("%+v is written %q; want %q", c.e, got, c.want)
		}
	}
}
