package interval

import (
	"encoding/json"
	"os"
	"testing"
)

// Source: R's qbeta, qt and pnorm (testdata/reference-extra): limits of few
// events in millions, relative to 1e-8, which is where the library's inverse
// of the incomplete beta function stops, and the confidence expanded for few
// parts, to 1e-9.
func TestQuantilesFarOut(t *testing.T) {
	var want struct {
		ClopperPearson []struct{ X, N, Lower, Upper float64 } `json:"clopper_pearson_99"`
		Expanded       []struct {
			Parts      int
			Confidence float64
		} `json:"expanded_95"`
	}
	b, err := os.ReadFile("../../testdata/reference-extra/expected-r-extra.json")
	if err == nil {
		err = json.Unmarshal(b, &want)
	}
	if err != nil {
		t.Fatal(err)
	}
	if len(want.ClopperPearson) != 6 || len(want.Expanded) != 5 {
		t.Fatal("a case is missing")
	}
	for _, c := range want.ClopperPearson {
		got := ClopperPearson(int(c.X), int(c.N), 0.99)
		near(t, "upper, relative", got.Upper/c.Upper, 1, 1e-8)
		if c.Lower > 0 {
			near(t, "lower, relative", got.Lower/c.Lower, 1, 1e-8)
		} else if got.Lower != 0 {
			t.Errorf("no event of %g: lower limit %g", c.N, got.Lower)
		}
	}
	for _, c := range want.Expanded {
		near(t, "expanded", Expanded(0.95, c.Parts), c.Confidence, 1e-9)
	}
}
