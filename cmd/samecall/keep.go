package main

import (
	"fmt"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"samecall/cmd/samecall/internal/study"
)

// keep refuses a command line on which an output would replace a file that is
// read, or another output.
func keep(cmd *cobra.Command, args []string) error {
	type named struct{ what, file string }
	var read, written []named
	flag := func(list *[]named, name string) {
		if f := cmd.Flags().Lookup(name); f != nil && f.Value.String() != "" && f.Value.String() != "-" {
			*list = append(*list, named{"--" + name, f.Value.String()})
		}
	}
	for _, a := range args {
		read = append(read, named{"the file read", a})
	}
	for _, name := range []string{"study", "calls", "process-values"} {
		flag(&read, name)
	}
	for _, r := range read {
		if !strings.EqualFold(filepath.Ext(r.file), ".toml") {
			continue
		}
		// What is wrong with a study file is told when it is read.
		if s, err := study.ReadSettings(r.file); err == nil && s.Calls != "" {
			calls := s.Calls
			if !filepath.IsAbs(calls) {
				calls = filepath.Join(filepath.Dir(r.file), calls)
			}
			read = append(read, named{"the calls file of " + r.file, calls})
		}
	}
	for _, name := range []string{"html", "json", "markdown", "csv", "xlsx"} {
		flag(&written, name)
	}
	for i, w := range written {
		for _, r := range read {
			if sameFile(w.file, r.file) {
				return fmt.Errorf("%s would replace %s, %s; name another file", w.what, r.what, r.file)
			}
		}
		for _, other := range written[:i] {
			if sameFile(w.file, other.file) {
				return fmt.Errorf("%s and %s name the same file, %s; give each its own", other.what, w.what, w.file)
			}
		}
	}
	return nil
}

// sameFile reports whether two names lead to one file that would be lost.
// Devices and pipes take any number of writers.
func sameFile(a, b string) bool {
	x, errX := os.Stat(a)
	y, errY := os.Stat(b)
	if errX == nil && errY == nil {
		return x.Mode().IsRegular() && os.SameFile(x, y)
	}
	if errX == nil || errY == nil { // one is there, the other not
		return false
	}
	p, errP := filepath.Abs(a)
	q, errQ := filepath.Abs(b)
	return errP == nil && errQ == nil && p == q
}
