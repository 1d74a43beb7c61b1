package main

import (
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"samecall/cmd/samecall/internal/figure"
	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/output"
	"samecall/cmd/samecall/internal/report"
	"samecall/cmd/samecall/internal/shell"
)

// outputs are the files that a record is written to beside the terminal.
type outputs struct {
	json, html, markdown, csv, xlsx string
	figures                         string
}

const jsonUsage = "write everything as JSON to this file, for programs; - for standard output"

func (o *outputs) addFlags(f *pflag.FlagSet) {
	addText(f, &o.html, "html", "file", "write the record as one page to this file, for the auditor; - for standard output")
	addText(f, &o.json, "json", "file", jsonUsage)
	addText(f, &o.markdown, "markdown", "file", "write the record as Markdown to this file; - for standard output")
	addText(f, &o.csv, "csv", "file", "write every table as CSV to this file; - for standard output")
	addText(f, &o.xlsx, "xlsx", "file", "write every table to a workbook, this file, a sheet each")
	addText(f, &o.figures, "figures", "folder", "write every figure as SVG and PNG into this folder, in place of those of an earlier study")
}

type writer struct {
	flag, file string
	write      func(io.Writer, *report.Record) error
}

func (o *outputs) writers() []writer {
	return []writer{
		{"--html", o.html, report.HTML},
		{"--json", o.json, report.JSON},
		{"--markdown", o.markdown, report.Markdown},
		{"--csv", o.csv, report.CSV},
		{"--xlsx", o.xlsx, report.XLSX},
	}
}

// toStandardOutput reports whether a file goes to standard output, which
// then holds nothing else.
func (o *outputs) toStandardOutput() bool {
	for _, w := range o.writers() {
		if w.file == "-" {
			return true
		}
	}
	return false
}

// check finds what cannot be before any work is done.
func (o *outputs) check() error {
	var to []string
	for _, w := range o.writers() {
		if w.file == "-" {
			to = append(to, w.flag)
		}
	}
	if len(to) > 1 {
		return fmt.Errorf("%s both go to standard output; give all but one a file", strings.Join(to, " and "))
	}
	switch {
	case o.xlsx == "-":
		return errors.New("--xlsx writes a workbook, not text; give it a file")
	case o.figures == "-":
		return errors.New("--figures writes several pictures; give it a folder")
	}
	return nil
}

// write writes every file that was asked for; one that fails does not keep
// the others from being written.
func (o *outputs) write(s streams, r *report.Record) error {
	var failed []error
	for _, w := range o.writers() {
		write := func(to io.Writer) error { return w.write(to, r) }
		var err error
		switch w.file {
		case "":
		case "-":
			err = buffered(s.out, write)
		default:
			err = output.File(w.file, write)
		}
		if err != nil {
			failed = append(failed, fmt.Errorf("%s: %w", w.flag, err))
		}
	}
	if o.figures != "" {
		failed = append(failed, writeFigures(s, o.figures, r))
	}
	return errors.Join(failed...)
}

// writeFigures writes the figures that a study has. Those that it has not are
// not to be taken for its own: where an earlier study left them, they are
// removed, and nothing else is.
func writeFigures(s streams, dir string, r *report.Record) error {
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return fmt.Errorf("--figures: %w", err)
	}
	var failed []error
	drawn := make(map[string]bool)
	for _, f := range report.Figures(r) {
		drawn[f.Name] = true
		for ending, write := range map[string]func(io.Writer) error{".svg": f.SVG, ".png": f.PNG} {
			if err := output.File(filepath.Join(dir, f.Name+ending), write); err != nil {
				failed = append(failed, fmt.Errorf("--figures: %w", err))
			}
		}
	}
	for _, name := range figure.Names() {
		if drawn[name] || len(failed) > 0 { // what could not be replaced, stays whole
			continue
		}
		for _, ending := range []string{".svg", ".png"} {
			file := filepath.Join(dir, name+ending)
			switch removed, err := output.Remove(file); {
			case err != nil:
				failed = append(failed, fmt.Errorf("--figures: this study has no such figure, and one is there: %w", err))
			case removed:
				fmt.Fprintln(s.err, "samecall: removed", format.Plain(file)+", a figure of an earlier study: this one has no such figure")
			}
		}
	}
	return errors.Join(failed...)
}

// commandLine is the line that computes a record again, in the folder where it
// is filed: the command with every flag that bears on the figures.
func commandLine(cmd *cobra.Command, args []string, filed filedNames) string {
	words := strings.Fields(cmd.CommandPath())
	args = slices.Clone(args)
	for i, a := range args {
		args[i] = filed.word(a)
	}
	// Files come first, as people write them, unless one looks like a flag.
	last := slices.ContainsFunc(args, func(a string) bool { return a != "-" && strings.HasPrefix(a, "-") })
	if !last {
		words = append(words, args...)
	}
	cmd.Flags().Visit(func(f *pflag.Flag) {
		switch f.Name {
		case "html", "json", "markdown", "csv", "xlsx", "figures", "full", "require", "shown": // what is written, and the status
			return
		}
		value := f.Value.String()
		if list, ok := inner(f).(pflag.SliceValue); ok {
			value = shell.List(list.GetSlice())
		}
		switch f.Name {
		case "study", "calls":
			value = filed.word(value)
		}
		words = append(words, "--"+f.Name+"="+value)
	})
	if last {
		words = append(append(words, "--"), args...)
	}
	for i, w := range words {
		words[i] = shell.Word(w)
	}
	return strings.Join(words, " ")
}
