package main

import (
	"io"

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
non-destructive test, and each look was a hit or a miss. It gives the sizes
found half of the time (a50) and nine times in ten (a90), and a90/95, the size
that holds nine in ten with 95 % confidence. The method is the hit/miss model of
MIL-HDBK-1823A.

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
			t, st, err := src.read(args, s, study.ReadFlaws)
			if err != nil {
				return err
			}
			var flaws []signal.Flaw
			for _, r := range t.Rows {
				flaws = append(flaws, signal.Flaw{Name: r.Name, Size: r.Value, Found: r.Count, Looked: r.Of})
			}
			h, err := signal.FitHitMiss(flaws, opt)
			if err != nil {
				return statusError{exitWrongData, err}
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
