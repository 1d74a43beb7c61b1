package main

import (
	"errors"
	"fmt"
	"io"

	"github.com/spf13/cobra"

	"samecall/cmd/samecall/internal/judge"
	"samecall/cmd/samecall/internal/output"
	"samecall/cmd/samecall/internal/report"
	"samecall/cmd/samecall/internal/study"
)

func newZone(s streams) *cobra.Command {
	var src source
	var shape curve
	var spread float64
	var jsonFile string
	var every bool
	cmd := &cobra.Command{
		Use:   "zone [FILE]",
		Short: "Where each limit really cuts, and how wide the band of doubt is",
		Long: `zone tells at which value each limit really cuts and how wide the band of doubt
around it is, in full: the unanimous zone and the acceptance curve side by side
and why they differ, each appraiser's own cut, each part beside the curve and
which parts drive it. Where the gauge's calibrated sizes are known (gauge_sizes
in the study file) it says whether they explain where the cuts lie: this tells
a worn or mis-set gauge from a careless appraiser.

It needs a measured value for each part and at least one limit. FILE is as in
judge. docs/zone-and-risk.md tells the methods.

Exit status: 0 done, 2 the command line is wrong or a file cannot be opened or
written, 3 the data is wrong or holds no values or limits.`,
		Example: `  samecall zone --example bore
  samecall zone study.toml
  samecall zone calls.csv --lower 12.000 --upper 12.018 --unit mm
  samecall zone study.toml --link logit --two-sigmas --spread 6
  samecall zone study.toml --gauge-sizes-lower size=11.998,uncertainty=0.001`,
		Args: oneFile,
		RunE: func(cmd *cobra.Command, args []string) error {
			if spread != 5.15 && spread != 6 {
				return fmt.Errorf("--spread is %v; expected 5.15 or 6", spread)
			}
			opt, err := shape.options(0)
			if err != nil {
				return err
			}
			at := newProgress(s.err)
			defer at.end()
			at.at("reading the calls")
			st, err := src.readFiled(cmd, args, s)
			if err != nil {
				return err
			}
			if err := needValues(st); err != nil {
				return statusError{exitWrongData, err}
			}
			opt.Confidence = st.Settings.Confidence
			at.at("fitting the acceptance curves")
			g, err := judge.NewGrey(st, opt, spread)
			at.end()
			if err != nil {
				return statusError{exitWrongData, err}
			}
			return jsonOrText(s, jsonFile,
				func(w io.Writer) error { return report.GreyJSON(w, g, opt) },
				func(w io.Writer) error { return report.Grey(w, g, terminal(s.out), every) })
		},
	}
	f := cmd.Flags()
	f.SortFlags = false
	f.BoolVar(&every, "every-part", false, "list every part beside the curve, not only those near the limits")
	addJSON(cmd, &jsonFile)
	shape.addFlags(cmd)
	f.Float64Var(&spread, "spread", 5.15, "number of σ that the unanimous zone is taken to span")
	describe(f, "spread", "5.15|6", "5.15 or 6")
	src.addFlags(cmd)
	return cmd
}

// needValues says what a study lacks for an acceptance curve, and what to do.
func needValues(st *study.Study) error {
	const (
		values = "add a column value with the measured value of each part"
		limits = "give lower or upper, in the study file or as --lower or --upper"
	)
	limited := st.Settings.Lower != nil || st.Settings.Upper != nil
	switch {
	case st.Values == nil && !limited:
		return errors.New("the parts have no values and no limit is given: " + values + ", and " + limits)
	case st.Values == nil:
		return errors.New("the parts have no values: " + values)
	case !limited:
		return errors.New("no limit is given: " + limits)
	}
	return nil
}

func addJSON(cmd *cobra.Command, file *string) {
	addText(cmd.Flags(), file, "json", "file", jsonUsage)
}

// jsonOrText writes the JSON to the file, if one is named, and the text to
// standard output unless the JSON went there.
func jsonOrText(s streams, file string, json, text func(io.Writer) error) error {
	var failed error
	switch file {
	case "":
	case "-":
		return buffered(s.out, json)
	default:
		if err := output.File(file, json); err != nil {
			failed = fmt.Errorf("--json: %w", err)
		}
	}
	return errors.Join(failed, buffered(s.out, text))
}
