package main

import (
	"bytes"
	"strings"
	"testing"
	"unicode/utf8"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"
)

// Every command says at length what it does, shows how in an example that
// names it, and explains each of its flags in words for people.
func TestEveryCommandExplainsItself(t *testing.T) {
	var look func(c *cobra.Command)
	look = func(c *cobra.Command) {
		path := c.CommandPath()
		if c.Short == "" || c.Long == "" {
			t.Errorf("%s: what it does is not said in a line, and at length", path)
		}
		if !strings.Contains(c.Example, path+" ") {
			t.Errorf("%s: its help has no example of it", path)
		}
		for line := range strings.Lines(c.Long + "\n" + c.UsageString()) {
			if strings.Contains(line, "[]") {
				t.Errorf("%s: a default that nobody reads: %s", path, line)
			}
			if utf8.RuneCountInString(line) > 101 {
				t.Errorf("%s: a line of its help is longer than 100 columns: %s", path, line)
			}
		}
		c.Flags().VisitAll(func(f *pflag.Flag) {
			if f.Usage == "" {
				t.Errorf("%s: the flag --%s is not explained", path, f.Name)
			}
			if strings.Contains(f.Usage, "`") { // shells show it as it is
				t.Errorf("%s: the flag --%s is explained with signs that the shell shows: %s", path, f.Name, f.Usage)
			}
			switch kind := f.Value.Type(); kind {
			case "string", "strings", "stringSlice", "float64", "float64Slice", "floats", "int", "uint64":
				t.Errorf("%s: what the flag --%s takes is called %s", path, f.Name, kind)
			}
		})
		for _, sub := range c.Commands() {
			look(sub)
		}
	}
	var none bytes.Buffer
	look(newRoot(streams{&none, &none, &none}))
}
