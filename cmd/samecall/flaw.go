package main

import (
	"errors"
	"fmt"
	"io"
	"math"

	"github.com/spf13/cobra"

	"samecall/cmd/samecall/internal/report"
	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

func newFlaw(s streams) *cobra.Command {
	var src smallSource
	var shape curve
	var jsonFile string
	cmd := &cobra.Command{
		Use:   "flaw FILE",
		Short: "The flaw size that is found: a50, a90 and a90/95 from hits and misses",
		Long: `flaw fits the chance that a flaw is found against its size, from a study in
which flaws of known size were looked for, by eye or by any other
non-destructive test, and each look was a hit or a miss: the probability of
detection (POD). It gives the sizes found half of the time (a50) and nine times
in ten (a90), and a90/95, the size that holds nine in ten with 95 % confidence.
The method is the hit/miss model of MIL-HDBK-1823A.

FILE is a table, CSV or .xlsx, or - for standard input: the column size and
either found and looks, or hit with one look a row (1 or 0, hit or miss); and
flaw if flaws have names:

  size,found,looks          size,hit
  0.4,1,3                   0.4,0
  0.9,3,3                   0.9,1

docs/zone-and-risk.md tells the method.

Exit status: 0 done, 2 the command line is wrong or a file cannot be opened or
written, 3 the data is wrong or gives no curve.`,
		Example: `  samecall flaw cracks.csv --unit mm
  samecall flaw cracks.xlsx --link logit --json cracks.json`,
		Args: oneTable,
		RunE: func(cmd *cobra.Command, args []string) error {
			opt, err := shape.options(src.confidence)
			if err != nil {
				return err
			}
			t, st, err := src.read(cmd, args, s, study.ReadFlaws)
			if err != nil {
				return err
			}
			var flaws []signal.Flaw
			for _, r := range t.Rows {
				flaws = append(flaws, signal.Flaw{Name: r.Name, Size: r.Value, Found: r.Count, Looked: r.Of})
			}
			h, err := signal.FitHitMiss(flaws, opt)
			if err != nil {
				return statusError{exitWrongData, fmt.Errorf("%s: %w", t.Input.File, whyNoFlawCurve(flaws, err))}
			}
			return jsonOrText(s, jsonFile,
				func(w io.Writer) error { return report.FlawJSON(w, st, t.Rows, h) },
				func(w io.Writer) error { return report.Flaw(w, st, t.Rows, h, terminal(s.out)) })
		},
	}
	f := cmd.Flags()
	f.SortFlags = false
	addJSON(cmd, &jsonFile)
	shape.addLink(cmd)
	src.addFlags(cmd)
	return cmd
}

// whyNoFlawCurve says in words of flaws why they give no curve; err is what
// the fit says.
func whyNoFlawCurve(flaws []signal.Flaw, err error) error {
	var looks, found int
	oneSize := true
	for _, f := range flaws {
		looks, found = looks+f.Looked, found+f.Found
		oneSize = oneSize && f.Size == flaws[0].Size
	}
	switch {
	case looks == 0:
		return err
	case found == looks:
		return errors.New("every look found its flaw: the study needs smaller flaws")
	case found == 0:
		return errors.New("no look found its flaw: the study needs larger flaws")
	case oneSize:
		return fmt.Errorf("every flaw has the size %v: the study needs flaws of different size", flaws[0].Size)
	case errors.Is(err, signal.ErrNoTurn):
		return whyNotRising(flaws)
	}
	return err
}

// whyNotRising tells a chance that falls with size from one that stays.
func whyNotRising(flaws []signal.Flaw) error {
	var looks, found, all, hits float64 // and the sums of sizes over them
	for _, f := range flaws {
		n, k := float64(f.Looked), float64(f.Found)
		looks, found = looks+n, found+k
		all, hits = all+n*math.Log(f.Size), hits+k*math.Log(f.Size)
	}
	// The mean log size of the hits against that of all looks.
	if d := hits/found - all/looks; math.Abs(d) < 1e-9 {
		return errors.New("larger flaws were found no more often than smaller ones: the study needs flaws of other sizes, or more looks")
	}
	return errors.New("larger flaws were found less often than smaller ones: are hit and miss swapped?")
}
