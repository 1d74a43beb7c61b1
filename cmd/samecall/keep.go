package main

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"samecall/cmd/samecall/internal/output"
)

// namedFile is a file of the command line, and what it is there.
type namedFile struct{ what, file string }

// namedBy returns the files that flags name; - is none.
func namedBy(cmd *cobra.Command, flags ...string) []namedFile {
	var out []namedFile
	for _, name := range flags {
		if f := cmd.Flags().Lookup(name); f != nil && f.Value.String() != "" && f.Value.String() != "-" {
			out = append(out, namedFile{"--" + name, f.Value.String()})
		}
	}
	return out
}

// written returns the files that a command is to write.
func written(cmd *cobra.Command) []namedFile {
	return namedBy(cmd, "html", "json", "markdown", "csv", "xlsx")
}

// readBy returns the files that a command line names to be read.
func readBy(cmd *cobra.Command, args []string) []namedFile {
	read := namedBy(cmd, "study", "calls", "process-values")
	for _, a := range args {
		if a != "-" {
			read = append(read, namedFile{"the file read", a})
		}
	}
	return read
}

// keep refuses a command line on which an output would replace a file that is
// read, or another output, or cannot be written. No file is opened to be
// read: some can be read once only. What a study file names, keepRead looks at.
func keep(cmd *cobra.Command, args []string) error {
	read := readBy(cmd, args)
	for _, r := range read {
		if err := keepRead(cmd, r); err != nil {
			return err
		}
	}
	outputs := written(cmd)
	for i, w := range outputs {
		if isStandardInput(cmd, w.file) {
			return fmt.Errorf("%s would replace %s, which is read as standard input; name another file", w.what, w.file)
		}
		for _, other := range outputs[:i] {
			if output.Same(w.file, other.file) {
				return fmt.Errorf("%s and %s name the same file, %s; give each its own", other.what, w.what, w.file)
			}
		}
		if err := output.Check(w.file); err != nil {
			return fmt.Errorf("%s: %w", w.what, err)
		}
	}
	return keepFigures(cmd, slices.Concat(read, outputs))
}

// keepRead refuses an output that would replace a file that is read.
func keepRead(cmd *cobra.Command, read namedFile) error {
	for _, w := range written(cmd) {
		if output.Same(w.file, read.file) {
			return fmt.Errorf("%s would replace %s, %s; name another file", w.what, read.what, read.file)
		}
	}
	return nil
}

// keepFigures refuses a folder of figures that is no folder, or in which a
// figure could replace one of the files.
func keepFigures(cmd *cobra.Command, files []namedFile) error {
	for _, figures := range namedBy(cmd, "figures") {
		if info, err := os.Stat(figures.file); err == nil && !info.IsDir() {
			return fmt.Errorf("--figures: %s is a file; name a folder", figures.file)
		}
		folder := output.Place(figures.file)
		for _, f := range files {
			place := output.Place(f.file)
			if place == folder {
				return fmt.Errorf("%s and --figures name the same, %s; give each its own", f.what, f.file)
			}
			ending := strings.ToLower(filepath.Ext(place))
			if filepath.Dir(place) == folder && (ending == ".svg" || ending == ".png") {
				return fmt.Errorf("--figures could replace %s, %s, with a picture; name another folder", f.what, f.file)
			}
		}
	}
	return nil
}

// isStandardInput reports whether a name leads to the file that standard
// input comes from.
func isStandardInput(cmd *cobra.Command, name string) bool {
	in, ok := cmd.InOrStdin().(*os.File)
	if !ok {
		return false
	}
	a, errA := in.Stat()
	b, errB := os.Stat(name)
	return errA == nil && errB == nil && a.Mode().IsRegular() && os.SameFile(a, b)
}
