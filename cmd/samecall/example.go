package main

import (
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"

	"samecall/cmd/samecall/internal/example"
	"samecall/cmd/samecall/internal/report"
)

func newExample(s streams) *cobra.Command {
	var to string
	cmd := &cobra.Command{
		Use:   "example [NAME]",
		Short: "Built-in studies, invented, to look at and to start from",
		Long: `example lists the built-in studies or, with a name and --to, writes the files
of one into a folder: a study file and the calls that it names, to start from.
All of them are invented. Files that are there already are not overwritten.`,
		Example: `  samecall example
  samecall example bore --to bore-study
  samecall judge --example bore`,
		Args: func(cmd *cobra.Command, args []string) error {
			if len(args) > 1 {
				return fmt.Errorf("%d examples are named; expected one", len(args))
			}
			return nil
		},
		ValidArgsFunction: completeExamples,
		RunE: func(cmd *cobra.Command, args []string) error {
			if len(args) == 0 {
				if to != "" {
					return fmt.Errorf("--to wants the name of an example before it, as in: samecall example bore --to %s", to)
				}
				return listExamples(s)
			}
			if to == "" {
				return showExample(s, args[0])
			}
			files, err := example.WriteTo(to, args[0])
			if err != nil {
				return err
			}
			for _, f := range files {
				fmt.Fprintln(s.out, f)
			}
			return nil
		},
	}
	addText(cmd.Flags(), &to, "to", "folder", "write the example's files into this folder")
	return cmd
}

func listExamples(s streams) error {
	const column = "          " // where titles begin
	width := terminal(s.out).Width
	var out strings.Builder
	for _, e := range example.Names() {
		text := report.Lines(e.Title, width, column) + "\n" + report.Lines(e.About, width, column)
		fmt.Fprintln(&out, e.Name+text[len(e.Name):])
	}
	fmt.Fprintln(&out)
	fmt.Fprintln(&out, report.Lines("samecall judge --example NAME runs on one; samecall example NAME --to FOLDER writes its files.", width, ""))
	_, err := io.WriteString(s.out, out.String())
	return err
}

func showExample(s streams, name string) error {
	if _, err := example.FS(name); err != nil {
		return err
	}
	width := terminal(s.out).Width
	for _, e := range example.Names() {
		if e.Name == name {
			fmt.Fprintf(s.out, "%s\n%s\n", report.Lines(e.Title, width, ""), report.Lines(e.About, width, ""))
		}
	}
	_, err := fmt.Fprintf(s.out, "\n  samecall judge --example %s           the answer\n  samecall example %s --to FOLDER      its files\n", name, name)
	return err
}
