package main

import (
	"bufio"
	"errors"
	"fmt"
	"io"

	"github.com/spf13/cobra"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/judge"
	"samecall/cmd/samecall/internal/report"
	"samecall/cmd/samecall/internal/study"
	"samecall/cmd/samecall/internal/verdict"
	"samecall/signal"
)

// fewestResamples is how many resamples limits are read from at least.
const fewestResamples = 100

func newJudge(s streams) *cobra.Command {
	var src source
	opt := agreement.DefaultOptions()
	var pairing, require string
	var full, shown bool
	var out outputs
	cmd := &cobra.Command{
		Use:   "judge [FILE]",
		Short: "Calls in, agreement and error rates out",
		Long: `judge reads a study and tells how far its calls can be trusted: each appraiser
with itself, appraisers with each other, all against the reference; miss and
false-alarm rates; kappas; each with an interval for which the part, not the
call, is the sampled unit.

FILE is a calls file (CSV or .xlsx, long or wide), a study file (TOML) that
names one, or - for a CSV on standard input. docs/files.md tells the formats.

Exit status: 0 done, 1 done but --require was not reached, 2 the command line
is wrong or a file cannot be opened or written, 3 the data is wrong.`,
		Example: `  samecall judge --example bore
  samecall judge calls.csv
  samecall judge study.toml --full
  samecall judge calls.xlsx --sheet "March" --accept go --reject nogo
  samecall judge calls.csv --lower 12.000 --upper 12.018 --unit mm --json result.json
  samecall judge study.toml --html record.html --require conditional`,
		Args: oneFile,
		RunE: func(cmd *cobra.Command, args []string) error {
			switch pairing {
			case "matched":
				opt.Pairing = agreement.Matched
			case "all":
				opt.Pairing = agreement.All
			default:
				return fmt.Errorf("--pairing is %q; expected matched or all", pairing)
			}
			if opt.Resamples != 0 && opt.Resamples < fewestResamples || opt.Resamples > agreement.MaxResamples {
				return fmt.Errorf("--resamples is %d; expected 0, or %d to %d", opt.Resamples, fewestResamples, agreement.MaxResamples)
			}
			required, err := parseRequirement(require, shown)
			if err != nil {
				return err
			}
			if err := out.check(); err != nil {
				return err
			}
			at := newProgress(s.err)
			at.at("reading the calls")
			st, err := src.readFiled(cmd, args, s)
			if err != nil {
				at.end()
				return err
			}
			opt.Progress = func(done, of int) {
				if at.at(fmt.Sprintf("resampling, %d of %d figures", done, of)); done == of {
					at.at("fitting the acceptance curves")
				}
			}
			result, err := judgeStudy(st, opt)
			at.end()
			if err != nil {
				return err
			}
			result.Command = commandLine(cmd, args, src.filed)
			result.RunIn = src.filed.where(result.Study.Inputs)
			result.FlagLevels = src.flagLevels(cmd)
			failed := out.write(s, result)
			if !out.toStandardOutput() {
				err := buffered(s.out, func(w io.Writer) error { return report.Text(w, result, terminal(s.out), full) })
				failed = errors.Join(failed, err)
			}
			if failed != nil {
				return failed
			}
			return required.check(result.Verdict, result.Options.Confidence)
		},
	}
	f := cmd.Flags()
	f.SortFlags = false
	f.BoolVar(&full, "full", false, "every table, not the one screen")
	out.addFlags(f)
	addChoice(cmd, &require, "require", "", "end with status 1 unless the verdict is at least this good", "accept", "conditional")
	f.BoolVar(&shown, "shown", false, "with --require: hold the one-sided limit of every figure to that level, not the estimate")
	addChoice(cmd, &pairing, "pairing", "matched", "calls of two appraisers side by side: matched, of trials with the same number, or all trials with all", "matched", "all")
	f.IntVar(&opt.Resamples, "resamples", opt.Resamples, "resamples of whole parts for the intervals of kappas; 0 for linearised ones")
	describe(f, "resamples", "number", "a whole number such as 2000, or 0")
	f.Uint64Var(&opt.Seed, "seed", opt.Seed, "of the resampling; the same seed gives the same answer")
	describe(f, "seed", "number", "a whole number of 0 or more")
	f.BoolVar(&opt.Independent, "independent", false, "in the JSON, also the intervals that treat calls as independent, which they are not")
	src.addFlags(cmd)
	return cmd
}

func judgeStudy(s *study.Study, opt agreement.Options) (*report.Record, error) {
	opt.Confidence = s.Settings.Confidence
	result, err := judge.Run(s, opt, signal.Options{})
	if err != nil {
		return nil, err
	}
	return &report.Record{Result: result, Verdict: verdict.Decide(result), Version: version()}, nil
}

func buffered(w io.Writer, write func(io.Writer) error) error {
	b := bufio.NewWriter(w)
	if err := write(b); err != nil {
		return err
	}
	return b.Flush()
}
