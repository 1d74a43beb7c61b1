package report

import (
	"errors"
	"strings"
	"testing"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
	"samecall/signal"
)

// between is an estimate with its interval, with the ends that there are.
func between(lower, value, upper float64, ends string) signal.Estimate {
	return signal.Estimate{Value: value, Lower: lower, Upper: upper, HasLower: strings.Contains(ends, "l"), HasUpper: strings.Contains(ends, "u")}
}

// A cell of the grey zone says no more than the calls tell of it.
func TestZoneCells(t *testing.T) {
	s := format.Scale{Decimals: 1}
	fit := func(status signal.Status, ends string) *signal.LimitFit {
		return &signal.LimitFit{
			Side: signal.Lower, HasLimit: true, Limit: 10, Status: status, HasAtLimit: true, HasShare: true,
			Cut: between(9.8, 10.2, 10.6, ends), Offset: between(-0.2, 0.2, 0.6, ends), Sigma: between(0.3, 0.4, 0.5, ends),
			From: 9.2, To: 11.2, Width: between(1.5, 2, 2.5, ends), Share: between(0.15, 0.2, 0.25, ends), AtLimit: between(0.1, 0.3, 0.5, ends),
		}
	}
	separated := fit(signal.Separated, "u")
	separated.Gap = &signal.Gap{Reject: 9.9, Accept: 10.4, HasReject: true, HasAccept: true}
	nowhere := fit(signal.Separated, "")
	for _, c := range []struct {
		name                                     string
		fit                                      *signal.LimitFit
		sigma, from, to, wide, place, at, shares string
	}{
		{"told", fit(signal.Fitted, "lu"), "0.4 (0.3 to 0.5)", "9.2", "11.2", "2.0", "10.2 (9.8 to 10.6)", "30 % (10.0 % to 50 %)", "20 % (15.0 % to 25 %)"},
		{"no lower end", fit(signal.Fitted, "u"), "under 0.5", notKnown, notKnown, "under 2.5", "10.2 (… to 10.6)", "30 % (… to 50 %)", "20 % (… to 25 %)"},
		{"no upper end", fit(signal.Fitted, "l"), notKnown, notKnown, notKnown, notKnown, "10.2 (9.8 to …)", "30 % (10.0 % to …)", notKnown},
		{"separated", separated, notKnown, notKnown, notKnown, "under 0.5", "10.2 (… to 10.6)", "30 % (… to 50 %)", "under 5.0 %"},
		{"nothing bounds it", nowhere, notKnown, notKnown, notKnown, notKnown, notKnown, notKnown, notKnown},
	} {
		cells := zoneCells(s, c.fit)
		cells = append(cells, placeCell(s, c.fit, c.fit.Cut, s.Value), atLimitCell(s, c.fit), zoneShare(c.fit))
		for i, want := range []string{c.sigma, c.from, c.to, c.wide, c.place, c.at, c.shares} {
			if got := cells[i].Text; got != want {
				t.Errorf("%s, cell %d: %q, want %q", c.name, i+1, got, want)
			}
		}
	}
	if end := zoneEnd(s, fit(signal.Fitted, "l"), 9.2); end.Text != notKnown {
		t.Errorf("an end that nothing bounds: %q", end.Text)
	}
	if wide := zoneWidth(s, fit(signal.Fitted, "lu"), true); wide.Text != "2.0 (1.5 to 2.5)" {
		t.Errorf("a width with its interval: %q", wide.Text)
	}
}

// The grade is that of the wider of two grey zones, and none where the calls do
// not tell how wide it is.
func TestGradeIsOfTheWorst(t *testing.T) {
	limits := signal.Between(10, 11)
	at := func(side signal.Side, sigma float64, ends string) *signal.LimitFit {
		return &signal.LimitFit{Side: side, HasLimit: true, Status: signal.Fitted, Sigma: between(sigma/2, sigma, 2*sigma, ends), Width: between(sigma, 5*sigma, 9*sigma, ends)}
	}
	for _, c := range []struct {
		lower, upper *signal.LimitFit
		want         string
	}{
		{at(signal.Lower, 0.04, "lu"), at(signal.Upper, 0.01, "lu"), "is 24 %: conditional"},
		{at(signal.Lower, 0.01, "lu"), at(signal.Upper, 0.06, "lu"), "is 36 %: not acceptable"},
		{at(signal.Lower, 0.06, "u"), at(signal.Upper, 0.01, "lu"), "is 6 %: good"},
		{at(signal.Lower, 0.06, "u"), nil, ""},
	} {
		z := &judge.Zone{Limits: limits, Unanimous: &signal.Unanimity{Why: "there is none"}, Curves: &signal.Appraisers{Pooled: &signal.Curve{Limits: limits, Lower: c.lower, Upper: c.upper}}}
		if got := gradeOfCurve(z); !strings.Contains(got, c.want) || (got == "") != (c.want == "") {
			t.Errorf("%q, want %q", got, c.want)
		}
	}
	z := &judge.Zone{Limits: limits, Unanimous: &signal.Unanimity{}, NoCurve: errors.New("none")}
	if got := gradeOfCurve(z); got != "" {
		t.Errorf("without a curve: %q", got)
	}
}
