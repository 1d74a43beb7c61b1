package main

import (
	"bytes"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"strings"
	"testing"
)

// A record depends on what the files hold and how they lie to each other, not
// on where the program was run or how they were named: anyone computes it
// again, in the folder that it names.
func TestRecordIsOfItsFolder(t *testing.T) {
	if runtime.GOOS == "windows" {
		t.Skip("the line is written for another shell")
	}
	const calls = "part,value,ada-1,ada-2,ben-1,ben-2\na,9.98,no,no,no,no\nb,9.99,no,no,no,yes\nc,10.00,yes,no,yes,yes\nd,10.02,yes,yes,yes,yes\ne,10.03,yes,yes,yes,yes\n"
	plant := func() string {
		root, err := filepath.EvalSymlinks(t.TempDir())
		if err != nil {
			t.Fatal(err)
		}
		for name, text := range map[string]string{
			"a/sub/calls.csv":   calls,
			"a/sub/study.toml":  "calls = \"calls.csv\"\nlower = 10\n",
			"a/sub/-":           calls,
			"a/sub/-x.csv":      calls,
			"a/s/std.toml":      "lower = 10\n",
			"a/s/calls.csv":     "lower = 10\n", // a study file that is called like the calls
			"a/data/study.toml": "calls = \"../sub/calls.csv\"\nlower = 10\n",
			"a/data/far.toml":   "calls = \"" + filepath.Join(root, "a/sub/calls.csv") + "\"\nlower = 10\n",
			"elsewhere/empty":   "",
		} {
			name = filepath.Join(root, name)
			if err := os.MkdirAll(filepath.Dir(name), 0o777); err != nil {
				t.Fatal(err)
			}
			if err := os.WriteFile(name, []byte(text), 0o666); err != nil {
				t.Fatal(err)
			}
		}
		if err := os.Symlink("a/sub", filepath.Join(root, "link")); err != nil {
			t.Fatal(err)
		}
		return root
	}
	one, two := plant(), plant()
	outputs := []string{"record.html", "record.json", "record.md", "record.csv", "record.xlsx"}
	// record runs the program in a folder and returns everything that it writes.
	record := func(root, folder string, line ...string) map[string][]byte {
		t.Helper()
		to := t.TempDir()
		for i, w := range line {
			line[i] = strings.ReplaceAll(w, "ROOT", root)
		}
		for _, o := range outputs {
			flag := map[string]string{".html": "--html", ".json": "--json", ".md": "--markdown", ".csv": "--csv", ".xlsx": "--xlsx"}[filepath.Ext(o)]
			line = append([]string{flag, filepath.Join(to, o)}, line...)
		}
		c := exec.Command("samecall", append([]string{"judge", "--full"}, line...)...)
		c.Dir = filepath.Join(root, folder)
		c.Stdin = strings.NewReader(calls)
		var said strings.Builder
		c.Stderr = &said
		text, err := c.Output()
		if err != nil {
			t.Fatalf("%q in %s: %v\n%s", line, folder, err, &said)
		}
		all := map[string][]byte{"--full": text}
		for _, o := range outputs {
			if all[o], err = os.ReadFile(filepath.Join(to, o)); err != nil {
				t.Fatal(err)
			}
		}
		return all
	}
	for _, c := range []struct {
		folder string   // in which the line is run
		line   string   // as it is printed
		runIn  string   // as it is printed
		lines  []string // FOLDER: ARGUMENTS, with spaces between them
	}{
		{"a/sub", "samecall judge calls.csv --lower=10", "the folder of calls.csv",
			[]string{"a/sub: calls.csv --lower 10", "a/sub: ./calls.csv --lower=10", "a: sub/calls.csv --lower=10", ".: a/sub/calls.csv --lower 10", "elsewhere: ROOT/a/sub/calls.csv --lower 10", "elsewhere: ../link/calls.csv --lower 10"}},
		{"a/sub", "samecall judge --calls=calls.csv --lower=10", "the folder of calls.csv",
			[]string{"a/sub: --calls calls.csv --lower 10", "a: --calls sub/calls.csv --lower=10"}},
		{"a/sub", "samecall judge study.toml", "the folder of study.toml",
			[]string{"a/sub: study.toml", "a: sub/study.toml", "elsewhere: ROOT/a/sub/study.toml"}},
		{"a/sub", "samecall judge calls.csv --study=study.toml", "the folder of study.toml and calls.csv",
			[]string{"a/sub: calls.csv --study study.toml", ".: link/calls.csv --study a/sub/study.toml"}},
		{"a", "samecall judge sub/calls.csv --study=s/std.toml", "the folder that holds s/std.toml and sub/calls.csv",
			[]string{"a: sub/calls.csv --study s/std.toml", "a/s: ../sub/calls.csv --study std.toml", "a/sub: calls.csv --study ../s/std.toml", ".: ROOT/a/sub/calls.csv --study a/s/std.toml"}},
		{"a", "samecall judge --study=s/calls.csv --calls=sub/calls.csv", "the folder that holds s/calls.csv and sub/calls.csv",
			[]string{"a: --study s/calls.csv --calls sub/calls.csv", "a/s: --study calls.csv --calls ../sub/calls.csv"}},
		{"a/data", "samecall judge study.toml", "the folder of study.toml",
			[]string{"a/data: study.toml", ".: a/data/study.toml"}},
		{"a/sub", "samecall judge ./- --lower=10", "the folder of -",
			[]string{"a/sub: ./- --lower 10", "a: sub/- --lower 10"}},
		{"a/sub", "samecall judge --lower=10 -- -x.csv", "the folder of -x.csv",
			[]string{"a: sub/-x.csv --lower 10", "a/sub: --lower 10 -- -x.csv"}},
		{"a/s", "samecall judge - --study=std.toml", "the folder of std.toml, with the same standard input",
			[]string{"a/s: - --study std.toml", "a: --study s/std.toml -"}},
		{"elsewhere", "samecall judge - --lower=10", "any folder, with the same standard input",
			[]string{"a: - --lower 10", ".: - --lower 10"}},
	} {
		printed := strings.Fields(strings.TrimPrefix(c.line, "samecall judge "))
		want := record(one, c.folder, printed...)
		if lines := "Computed by this line, run in " + c.runIn + ":\n" + c.line + "\n"; !bytes.Contains(want["--full"], []byte(lines)) {
			t.Errorf("expected\n%s\nin\n%s", lines, want["--full"])
		}
		for _, root := range []string{one, two} {
			for _, l := range c.lines {
				folder, arguments, _ := strings.Cut(l, ": ")
				for name, got := range record(root, folder, strings.Fields(arguments)...) {
					if !bytes.Equal(got, want[name]) {
						t.Errorf("%s: %s is another one: %s", l, name, firstDifference(string(want[name]), string(got)))
					}
				}
			}
		}
	}
	// A folder of a machine that the study file itself names is in no record.
	for name, got := range record(one, ".", "a/data/far.toml") {
		if bytes.Contains(got, []byte(filepath.Dir(one))) {
			t.Errorf("%s names a folder of this machine", name)
		}
	}
}

// What stands for a file that is open already is filed nowhere: the record keeps
// its name, and names no folder to run in.
func TestDescriptorsAreFiledNowhere(t *testing.T) {
	if _, err := os.Stat("/dev/fd"); err != nil {
		t.Skip("no /dev/fd here")
	}
	f, err := os.Open(filepath.Join("..", "..", "testdata", "reference", "msa-manual-50x3x3.csv"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	name := fmt.Sprintf("/dev/fd/%d", f.Fd())
	n := newFiledNames([]namedFile{{"calls", name}})
	if got := n.name(name); got != name || n.runIn != "" {
		t.Errorf("%s is called %s, run in %q", name, got, n.runIn)
	}
}

// An error names a file as it was named: there it is looked for.
func TestErrorsNameFilesAsTyped(t *testing.T) {
	folder := t.TempDir()
	file := filepath.Join(folder, "bad.csv")
	if err := os.WriteFile(file, []byte("part,appraiser,trial,call,value\na,ada,1,go,x\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	tries := filepath.Join(folder, "tries.csv")
	if err := os.WriteFile(tries, []byte("value,accepted,trials\n1,20,20\n2,10,20\n3,0,20\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	for _, args := range [][]string{{"judge", file}, {"check", file}, {"short", tries, "--limit", "2", "--side", "lower"}} {
		var out, errs bytes.Buffer
		if status := run(args, strings.NewReader(""), &out, &errs); status != exitWrongData || !strings.Contains(errs.String(), args[1]) {
			t.Errorf("%q ends with status %d and says\n%s", args, status, &errs)
		}
	}
}

// Files that have but a root in common are named by as little of their paths as
// tells them apart.
func TestFilesFarApart(t *testing.T) {
	for _, c := range []struct{ places, want []string }{
		{[]string{"/home/ann/calls.csv", "/data/study.toml"}, []string{"calls.csv", "study.toml"}},
		{[]string{"/home/ann/calls", "/data/calls"}, []string{"ann/calls", "data/calls"}},
		{[]string{"/home/x/calls", "/x/calls"}, []string{"home/x/calls", "x/calls"}},
	} {
		if _, together := namesBelow(commonFolder(c.places), c.places); together {
			t.Errorf("%q are told as together", c.places)
		}
		if got := endings(c.places); strings.Join(got, "|") != strings.Join(c.want, "|") {
			t.Errorf("%q are named %q; expected %q", c.places, got, c.want)
		}
	}
}
