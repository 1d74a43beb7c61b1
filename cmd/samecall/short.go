package main

import (
	"errors"
	"fmt"
	"io"

	"github.com/spf13/cobra"

	"samecall/cmd/samecall/internal/report"
	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

// smallSource is a small table to read, and what it is called.
type smallSource struct {
	sheet, title, unit string
	ignore             []string
	confidence         float64
}

func (s *smallSource) addFlags(cmd *cobra.Command) {
	f := cmd.Flags()
	addText(f, &s.title, "title", "text", "what the study is called in the answer")
	addText(f, &s.unit, "unit", "text", "unit of the values")
	addText(f, &s.sheet, "sheet", "name", "sheet of a workbook; the first if not given")
	addWords(f, &s.ignore, "ignore", "date,remark", "columns of the file to leave out, such as date,remark")
	addConfidence(f, &s.confidence, study.DefaultConfidence)
}

// read reads the table that the command line names.
func (s *smallSource) read(cmd *cobra.Command, args []string, in streams, read func(study.Source, string, []string) (*study.Tallies, error)) (*study.Tallies, report.SmallStudy, error) {
	t, err := read(study.Source{Path: args[0], Stdin: in.in}, s.sheet, s.ignore)
	if err != nil {
		return nil, report.SmallStudy{}, err
	}
	return t, report.SmallStudy{Title: s.title, Unit: s.unit, Input: newFiledNames(readBy(cmd, args)).input(t.Input)}, nil
}

// oneTable is the arguments of a command that reads a small table.
func oneTable(cmd *cobra.Command, args []string) error {
	if len(args) != 1 {
		return fmt.Errorf("%d files are named; expected one table, or - for standard input (%s --help)", len(args), cmd.CommandPath())
	}
	return nil
}

func newShort(s streams) *cobra.Command {
	var src smallSource
	var shape curve
	var limit float64
	var sideName, jsonFile string
	cmd := &cobra.Command{
		Use:   "short FILE",
		Short: "Bias and repeatability from a short study at one limit",
		Long: `short analyses a short study at one limit: eight parts or more of known value
around it, each tried twenty times. It is the analytic method of the
measurement systems analysis manual (4th ed., chapter III C), with its
preconditions checked one by one; beside it the same data fitted by maximum
likelihood.

FILE is a table, CSV or .xlsx, or - for standard input, with the columns value,
accepted (how often the part was accepted) and trials, and part if parts have
names:

  value,accepted,trials
  -0.0160,0,20
  -0.0150,1,20
  ...

docs/zone-and-risk.md tells the method.

Exit status: 0 done, 2 the command line is wrong or a file cannot be opened or
written, 3 the data is wrong.`,
		Example: `  samecall short tries.csv --limit -0.010 --side lower --unit mm
  samecall short tries.xlsx --sheet "go end" --limit 12.018 --side upper`,
		Args: oneTable,
		RunE: func(cmd *cobra.Command, args []string) error {
			side := signal.Lower
			switch {
			case !given(cmd, "limit"):
				return errors.New("--limit is missing: the specification limit that the study was made at")
			case sideName == "":
				return errors.New("--side is missing: is the limit the lower or the upper one?")
			case sideName == "upper":
				side = signal.Upper
			case sideName != "lower":
				return fmt.Errorf("--side is %q; expected lower or upper", sideName)
			}
			opt, err := shape.options(src.confidence)
			if err != nil {
				return err
			}
			t, st, err := src.read(cmd, args, s, study.ReadShort)
			if err != nil {
				return err
			}
			var parts []signal.Part
			for _, r := range t.Rows {
				parts = append(parts, signal.Part{Name: r.Name, Value: r.Value, Accepted: r.Count, Calls: r.Of})
			}
			short, err := signal.Short(parts, side, limit, opt)
			if err != nil {
				return statusError{exitWrongData, err}
			}
			if !short.HasLine && short.FitError != nil {
				return statusError{exitWrongData, fmt.Errorf("%s gives no figures: %s", t.Input.File, short.Why)}
			}
			return jsonOrText(s, jsonFile,
				func(w io.Writer) error { return report.ShortJSON(w, st, short) },
				func(w io.Writer) error { return report.Short(w, st, short, terminal(s.out)) })
		},
	}
	f := cmd.Flags()
	f.SortFlags = false
	addNumber(f, &limit, "limit", "-0.010", "the specification limit that the study was made at")
	addChoice(cmd, &sideName, "side", "", "whether it is the lower or the upper one", "lower", "upper")
	addJSON(cmd, &jsonFile)
	shape.addLink(cmd)
	src.addFlags(cmd)
	return cmd
}
