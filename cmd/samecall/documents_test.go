package main

import (
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"strings"
	"testing"
)

// TestDocuments runs what the documents show, so that they say what the
// program does. In README.md and docs/*.md,
//
//   - a block that opens with ```console holds commands behind "$ ", each
//     followed by what it prints, standard output and error, byte for byte;
//   - a block that opens with ```LANGUAGE FILE is a file for the commands.
//
// The commands of a document run one after the other in a folder of its own,
// which begins empty.
func TestDocuments(t *testing.T) {
	if runtime.GOOS == "windows" {
		t.Skip("the documents show the commands of another shell")
	}
	const top = "../.."
	documents, err := filepath.Glob(filepath.Join(top, "docs", "*.md"))
	if err != nil {
		t.Fatal(err)
	}
	commands := 0
	for _, name := range append(documents, filepath.Join(top, "README.md")) {
		t.Run(filepath.Base(name), func(t *testing.T) {
			data, err := os.ReadFile(name)
			if err != nil {
				t.Fatal(err)
			}
			d := document{t: t, folder: t.TempDir()}
			out := d.run(string(data))
			commands += d.commands
			switch {
			case out == string(data):
			case *update:
				if err := os.WriteFile(name, []byte(out), 0o666); err != nil {
					t.Fatal(err)
				}
			default:
				t.Errorf("%s does not show what the program prints (go test ./cmd/samecall -update writes it anew):\n%s", name, firstDifference(string(data), out))
			}
		})
	}
	if commands == 0 {
		t.Error("no document shows a command")
	}
}

type document struct {
	t        *testing.T
	folder   string
	commands int
}

// run returns the document with the outputs of its commands as they are.
func (d *document) run(text string) string {
	var out strings.Builder
	lines := strings.SplitAfter(text, "\n")
	for i := 0; i < len(lines); i++ {
		out.WriteString(lines[i])
		info, opens := strings.CutPrefix(strings.TrimSpace(lines[i]), "```")
		if !opens {
			continue
		}
		end := i + 1
		for end < len(lines) && strings.TrimSpace(lines[end]) != "```" {
			end++
		}
		if end == len(lines) {
			d.t.Fatalf("the block on line %d does not end", i+1)
		}
		block := strings.Join(lines[i+1:end], "")
		language, file, isFile := strings.Cut(info, " ")
		switch {
		case language == "console":
			block = d.console(block)
		case isFile:
			if err := os.WriteFile(filepath.Join(d.folder, file), []byte(block), 0o666); err != nil {
				d.t.Fatal(err)
			}
		}
		out.WriteString(block + lines[end])
		i = end
	}
	return out.String()
}

func (d *document) console(block string) string {
	var out strings.Builder
	for line := range strings.Lines(block) {
		command, ok := strings.CutPrefix(line, "$ ")
		if !ok {
			continue // what was printed once
		}
		d.commands++
		// TestMain has put the program on the path.
		shell := exec.Command("sh", "-c", command)
		shell.Dir = d.folder
		shell.Env = append(os.Environ(), "COLUMNS=100")
		printed, err := shell.CombinedOutput()
		if _, failed := err.(*exec.ExitError); err != nil && !failed {
			d.t.Fatal(err)
		}
		out.WriteString(line)
		out.Write(printed)
	}
	return out.String()
}

// firstDifference shows where two texts begin to differ.
func firstDifference(want, got string) string {
	a, b := strings.Split(want, "\n"), strings.Split(got, "\n")
	for i := range min(len(a), len(b)) {
		if a[i] != b[i] {
			return "document: " + a[i] + "\nprogram:  " + b[i]
		}
	}
	return "one goes on where the other ends"
}
