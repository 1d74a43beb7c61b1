package main

import (
	"bytes"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"slices"
	"strings"
	"testing"

	"golang.org/x/net/html"
)

// The line that a record prints computes it again, byte for byte, whatever
// the files and settings are called.
func TestRecompute(t *testing.T) {
	if runtime.GOOS == "windows" {
		t.Skip("the line is written for another shell")
	}
	calls := "part;appraiser;trial;call;value\n"
	for i := range 12 {
		for _, who := range []string{"Ada", "Ben"} {
			for _, trial := range []string{"1", "2"} {
				call := "yes, it's fine"
				if i < 4 || i == 4 && trial == "2" {
					call = "no"
				}
				calls += strings.Join([]string{"p" + string(rune('a'+i)), who, trial, `"` + call + `"`, string(rune('0' + i%10))}, ";") + "\n"
			}
		}
	}
	folder := t.TempDir()
	write := func(name, text string) {
		if err := os.WriteFile(filepath.Join(folder, name), []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	write(`calls of "bore" it's $HOME & co.csv`, calls)
	write("-odd name.csv", calls)
	write("study 1.toml", "title = \"A bore\"\ncalls = \"calls of \\\"bore\\\" it's $HOME & co.csv\"\naccept = [\"yes, it's fine\"]\nreject = [\"no\"]\nlower = 3.5\n")
	for _, args := range [][]string{
		{"judge", "study 1.toml"},
		{"judge", "study 1.toml", "--confidence", "0.9", "--seed", "7", "--resamples", "150", "--pairing", "all", "--kappa", "0.8,0.3"},
		{"judge", "study 1.toml", "--title", `it's "quoted" $x \ %d *`, "--gauge", "", "--upper", "8", "--unit", "µm"},
		{"judge", `calls of "bore" it's $HOME & co.csv`, "--accept", `"yes, it's fine"`, "--reject", "no", "--lower", "3.5"},
		{"judge", "--accept", `"yes, it's fine"`, "--reject", "no", "--lower=-3.5", "--", "-odd name.csv"},
		{"judge", "--example", "bore"},
		{"judge", "--example", "bore", "--require", "accept", "--shown"}, // status 1
	} {
		record := func(name string, command *exec.Cmd) []byte {
			command.Dir = folder
			// A verdict that is not the required one has its record, too.
			if out, err := command.CombinedOutput(); err != nil && command.ProcessState.ExitCode() != exitShort {
				t.Fatalf("%q: %v\n%s", command.Args, err, out)
			}
			page, err := os.ReadFile(filepath.Join(folder, name))
			if err != nil {
				t.Fatal(err)
			}
			return page
		}
		// TestMain has put the program on the path.
		first := record("first.html", exec.Command("samecall", append([]string{args[0], "--html", "first.html"}, args[1:]...)...))
		line := printedCommand(t, first)
		if slices.Contains(args, "--kappa") && !strings.Contains(line, " --kappa=0.8,0.3") {
			t.Errorf("the levels are not printed as they were given: %s", line)
		}
		// The line ends where a shell would go on with more words.
		again := record("again.html", exec.Command("sh", "-c", strings.Replace(line, "samecall judge", "samecall judge --html again.html", 1)))
		if !bytes.Equal(first, again) {
			t.Errorf("%q: the line\n%s\ncomputes another record: %s", args, line, firstDifference(string(first), string(again)))
		}
	}
}

// printedCommand finds the line in a record.
func printedCommand(t *testing.T, page []byte) string {
	t.Helper()
	root, err := html.Parse(bytes.NewReader(page))
	if err != nil {
		t.Fatal(err)
	}
	found := ""
	var walk func(*html.Node)
	walk = func(n *html.Node) {
		if n.Data == "th" && n.FirstChild != nil && n.FirstChild.Data == "computed by" {
			for c := n.NextSibling; c != nil; c = c.NextSibling {
				if c.Data == "td" {
					found = c.FirstChild.Data
				}
			}
		}
		for c := n.FirstChild; c != nil; c = c.NextSibling {
			walk(c)
		}
	}
	walk(root)
	if found == "" {
		t.Fatal("the record prints no line that computes it again")
	}
	return found
}
