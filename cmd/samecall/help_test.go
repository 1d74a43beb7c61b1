package main

import (
	"bytes"
	"strings"
	"testing"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"
)

// Every command says at length what it does, shows how in an example that
// names it, and explains each of its flags.
func TestEveryCommandExplainsItself(t *testing.T) {
	var look func(c *cobra.Command)
	look = func(c *cobra.Command) {
		if c.Name() == "completion" || c.Name() == "help" { // cobra's own
			return
		}
		path := c.CommandPath()
		if c.Short == "" || c.Long == "" {
			t.Errorf("%s: what it does is not said in a line, and at length", path)
		}
		if !strings.Contains(c.Example, path+" ") {
			t.Errorf("%s: its help has no example of it", path)
		}
		for line := range strings.Lines(c.Long + "\n" + c.Example) {
			if len(line) > 101 {
				t.Errorf("%s: a line of its help is longer than 100 columns: %s", path, line)
			}
		}
		c.Flags().VisitAll(func(f *pflag.Flag) {
			if f.Usage == "" {
				t.Errorf("%s: the flag --%s is not explained", path, f.Name)
			}
		})
		for _, sub := range c.Commands() {
			look(sub)
		}
	}
	var none bytes.Buffer
	look(newRoot(streams{&none, &none, &none}))
}
