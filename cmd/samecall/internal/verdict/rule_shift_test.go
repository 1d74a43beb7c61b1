package verdict

import (
	"strings"
	"testing"

	"samecall/cmd/samecall/internal/judge"
	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

// own is what one appraiser's curve says of the lower limit.
type own struct {
	offset, se, sigma float64
	unknown           bool
}

// shiftFinder is a finder of a lower limit, 10, with the own cuts of some
// appraisers and the cut of all. Every curve has enough parts called wrong on
// either side.
func shiftFinder(all own, each ...own) *finder {
	limits := signal.Limits{Lower: 10, HasLower: true}
	curve := func(o own) *signal.Curve {
		c := &signal.Curve{Limits: limits, Lower: limitAt(signal.Lower, 10, o.offset, o.sigma, 9, 11, 0)}
		c.Lower.Offset.SE = o.se
		if o.unknown {
			c.Lower.Status = signal.OneSided
		}
		for _, x := range []float64{9.7, 9.8, 9.9, 10.1, 10.2, 10.3} {
			c.Parts = append(c.Parts, signal.PartFit{Name: "P", Value: x, Calls: 9, Accepted: 4})
		}
		return c
	}
	curves := &signal.Appraisers{Pooled: curve(all)}
	for _, o := range each {
		curves.Each = append(curves.Each, curve(o))
	}
	return &finder{
		Result: &judge.Result{Study: &study.Study{Appraisers: names[:len(each)]}, Zone: &judge.Zone{Limits: limits, Curves: curves}},
		levels: Default, missed: true,
	}
}

// Who shares a shift is told only as far as the own cuts tell it.
func TestWhoIsShifted(t *testing.T) {
	low := own{offset: -0.5, se: 0.05, sigma: 0.1}
	none := own{se: 0.05, sigma: 0.1}
	all := own{offset: -0.3, se: 0.05, sigma: 0.1}
	for _, c := range []struct {
		name string
		each []own
		code string
		who  int // how many; 0: everyone
		says string
	}{
		{"all alike", []own{low, low, low}, codeGauge, 0, "All appraisers cut 0.30 below the lower limit, so that bad parts are accepted there. That points to a worn or mis-set gauge, or a shifted standard."},
		{"one", []own{low, none, none}, codeCut, 1, "Ash cuts 0.50 below the lower limit, so that bad parts are accepted there. Others do not, so it is the gauge or the standard of this one."},
		{"two", []own{low, {offset: -0.62, se: 0.05, sigma: 0.1}, none}, codeCut, 2, "Ash and Birch cut 0.50 to 0.62 below the lower limit, so that bad parts are accepted there. Others do not, so it is a gauge or a standard that these share, or each one's own."},
		{"two, written alike", []own{low, low, none}, codeCut, 2, "Ash and Birch cut 0.50 below"},
		{"one, and another half as much, not surely", []own{low, {offset: -0.25, se: 0.2, sigma: 0.1}, none}, codeCut, 1, "Whether that goes for others too the study does not tell."},
		{"one, and another less than half", []own{low, {offset: -0.24, se: 0.2, sigma: 0.1}, none}, codeCut, 1, "Others do not,"},
		{"one, and another the other way", []own{low, {offset: 0.4, se: 0.2, sigma: 0.1}, none}, codeCut, 1, "Others do not,"},
		{"one, and another unknown", []own{low, {unknown: true}, none}, codeCut, 1, "Whether that goes for others too the study does not tell."},
		{"all, by different amounts", []own{{offset: -0.1, se: 0.01, sigma: 0.1}, {offset: -0.9, se: 0.05, sigma: 0.1}}, codeGauge, 0,
			"All appraisers cut 0.10 to 0.90 below the lower limit, so that bad parts are accepted there. By different amounts: the standard that they share comes first, then each one's gauge."},
		// 0.5 is ten of its own standard errors; with the σ of all, sixteen times
		// its own, 2.5 of them: not sure of three in six looks.
		{"an own σ that is small by chance", []own{{offset: -0.5, se: 0.05, sigma: 0.00625}, none, none}, "", 0, ""},
	} {
		f := shiftFinder(all, c.each...)
		got := shiftedCut(f)
		switch {
		case c.code == "" && len(got) == 0:
		case len(got) != 1 || got[0].Code != c.code || len(got[0].Appraisers) != c.who || !strings.Contains(got[0].Text, c.says) || !got[0].outside:
			t.Errorf("%s: %+v", c.name, got)
		}
	}
}

// Both ways at one limit are two causes.
func TestShiftedBothWays(t *testing.T) {
	f := shiftFinder(own{se: 0.05, sigma: 0.1}, own{offset: -0.5, se: 0.05, sigma: 0.1}, own{offset: 0.5, se: 0.05, sigma: 0.1}, own{se: 0.05, sigma: 0.1})
	if got := shiftedCut(f); len(got) != 2 || !strings.HasPrefix(got[0].Text, "Ash cuts 0.50 below") || !strings.HasPrefix(got[1].Text, "Birch cuts 0.50 above") || got[1].outside {
		t.Errorf("%+v", got)
	}
}

// Cuts that the data do not tell apart are one gauge's, whatever the lack of fit
// and unless somebody has hardly a cut.
func TestCutsNotToldApart(t *testing.T) {
	low, none := own{offset: -0.5, se: 0.05, sigma: 0.1}, own{offset: -0.1, se: 0.05, sigma: 0.1}
	for _, c := range []struct {
		statistic float64 // of two degrees of freedom; 1 % lies at 9.21
		compared  int
		hardly    bool
		want      string
	}{
		{9.2, 3, false, codeGauge}, {9.22, 3, false, codeCut},
		{1, 2, false, codeCut}, {1, 3, true, codeCut},
	} {
		f := shiftFinder(own{offset: -0.3, se: 0.05, sigma: 0.1}, low, none, none)
		f.Zone.Curves.SameCut = signal.Test{Done: true, DF: 2, Statistic: c.statistic, P: 0.5, Factor: 9}
		f.Zone.Curves.Compared = []int{0, 1, 2}[:c.compared]
		if c.hardly {
			f.found = []Cause{{Code: codeScattered, Appraisers: []int{1}}}
		}
		got := shiftedCut(f)
		if len(got) != 1 || got[0].Code != c.want || c.want == codeGauge && !strings.HasPrefix(got[0].Text, "All appraisers together cut 0.30 below") {
			t.Errorf("%+v: %+v", c, got)
		}
	}
}

// One whose calls are mixed everywhere is shifted only by a whole σ.
func TestShiftOfOneWhoHardlyCuts(t *testing.T) {
	for _, alone := range []bool{true, false} {
		for offset, want := range map[float64]int{-0.9: 0, -1.1: 1} {
			each := []own{{offset: offset, se: 0.01, sigma: 1}}
			if !alone {
				each = append(each, own{se: 0.05, sigma: 0.1}, own{se: 0.05, sigma: 0.1})
			}
			f := shiftFinder(own{offset: offset, se: 0.01, sigma: 1}, each...)
			f.found = []Cause{{Code: codeInconsistent, Appraisers: []int{0}}}
			if got := shiftedCut(f); len(got) != want {
				t.Errorf("alone %v, offset %v: %+v", alone, offset, got)
			}
		}
	}
}

// The parts left out of the curves are named, of one and of several.
func TestShiftNamesWhatIsLeftOut(t *testing.T) {
	low := own{offset: -0.5, se: 0.05, sigma: 0.1}
	leave := func(c *signal.Curve, name string) {
		without := *c
		c.Without, c.Outliers = &without, []int{0}
		c.Parts[0].Name = name
	}
	f := shiftFinder(own{offset: -0.3, se: 0.05, sigma: 0.1}, low, low, own{se: 0.05, sigma: 0.1})
	leave(f.Zone.Curves.Each[0], "P7")
	leave(f.Zone.Curves.Each[1], "P9")
	if got := shiftedCut(f); len(got) != 1 || !strings.Contains(got[0].Text, " (without P7 and P9, which the curve cannot explain). Others do not") {
		t.Errorf("%+v", got)
	}
	f = shiftFinder(own{offset: -0.5, se: 0.05, sigma: 0.1}, low, low)
	leave(f.Zone.Curves.Pooled, "P8")
	if got := shiftedCut(f); len(got) != 1 || !strings.Contains(got[0].Text, " (without P8, which the curve cannot explain). That points to") {
		t.Errorf("%+v", got)
	}
}
