package main

import (
	"bytes"
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	pretty "github.com/jedib0t/go-pretty/v6/text"

	"samecall/cmd/samecall/internal/example"
)

// cutWord is a word with its end left out. No name in the examples is so long,
// so that it would be a word of our own.
var cutWord = regexp.MustCompile(`\pL…`)

// TestWidth runs every command on every example it can read, on narrow and
// usual terminals: no line is wider, no word is cut, and no number is broken
// at the space between its digits.
func TestWidth(t *testing.T) {
	short, err := filepath.Abs(filepath.Join(reference, "short-study-one-limit.csv"))
	if err != nil {
		t.Fatal(err)
	}
	flaw := filepath.Join(t.TempDir(), "cracks.csv")
	if err := os.WriteFile(flaw, []byte("size,found,looks\n0.4,0,4\n0.6,1,4\n0.8,2,4\n1.0,2,4\n1.3,4,4\n1.6,4,4\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	commands := []string{
		"example", "example bore",
		"zone --example bore", "zone --example bore --two-sigmas", "zone --example bore --every-part", "zone --example bore --link logit --lapse",
		"risk --example bore --mean 10.018 --sd 0.006",
		"risk --example bore --cp 1 --cpk 0.8 --towards lower --escape-target 10 --cost-escape 1000 --cost-reject 1",
		"risk --lower 9.95 --upper 10.05 --cut-lower 9.95 --cut-upper 10.05 --sigma 0.005 --mean 10 --sd 0.02",
		"short " + short + " --limit -0.010 --side lower",
		"flaw " + flaw + " --unit mm",
	}
	for _, e := range example.Names() {
		for _, c := range []string{"judge --resamples 100 --example ", "judge --resamples 100 --full --example ", "check --example "} {
			commands = append(commands, c+e.Name)
		}
	}
	for _, width := range []int{60, 80, 100} {
		t.Setenv("COLUMNS", fmt.Sprint(width))
		for _, c := range commands {
			var out, errs bytes.Buffer
			if status := run(strings.Fields(c), nil, &out, &errs); status != exitDone {
				t.Fatalf("%s ends with %d: %s", c, status, errs.String())
			}
			for line := range strings.Lines(out.String()) {
				line = strings.TrimSuffix(line, "\n")
				if w := pretty.StringWidthWithoutEscSequences(line); w > width {
					t.Errorf("%s: %d columns in %d: %q", c, w, width, line)
				}
				if cutWord.MatchString(line) {
					t.Errorf("%s: a word is cut in %d columns: %q", c, width, line)
				}
				if strings.HasSuffix(line, "\u00a0") || strings.HasPrefix(line, "\u00a0") {
					t.Errorf("%s: a number is broken in %d columns: %q", c, width, line)
				}
			}
		}
	}
}
