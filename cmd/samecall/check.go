package main

import (
	"io"

	"github.com/spf13/cobra"

	"samecall/cmd/samecall/internal/report"
)

func newCheck(s streams) *cobra.Command {
	var src source
	cmd := &cobra.Command{
		Use:   "check [FILE]",
		Short: "Is the study read as it is meant, and what can it show?",
		Long: `check reads a study as judge does and says either what is wrong with it, with
file, line and column, or what it holds: parts good and bad, appraisers,
trials, missing calls, values and how many parts lie near each limit; and what
a study of this size can and cannot show. It computes no agreement.

Exit status: 0 the study can be judged, 2 the command line is wrong or a file
cannot be opened, 3 the data is wrong.`,
		Example: `  samecall check calls.csv
  samecall check study.toml
  samecall check - < calls.csv
  samecall check --example bore`,
		Args: oneFile,
		RunE: func(cmd *cobra.Command, args []string) error {
			st, err := src.read(cmd, args, s)
			if err != nil {
				return err
			}
			return buffered(s.out, func(w io.Writer) error { return report.Check(w, st, terminal(s.out)) })
		},
	}
	src.addFlags(cmd)
	return cmd
}
