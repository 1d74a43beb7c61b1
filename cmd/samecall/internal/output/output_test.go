package output

import (
	"errors"
	"fmt"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"strings"
	"testing"
)

func text(s string) func(io.Writer) error {
	return func(w io.Writer) error {
		_, err := io.WriteString(w, s)
		return err
	}
}

func read(t *testing.T, name string) string {
	t.Helper()
	b, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	return string(b)
}

func TestFileIsWrittenWholeOrNotAtAll(t *testing.T) {
	dir := t.TempDir()
	name := filepath.Join(dir, "out.json")
	if err := File(name, text("one")); err != nil || read(t, name) != "one" {
		t.Fatalf("new file: %v", err)
	}
	if err := File(name, text("two")); err != nil || read(t, name) != "two" {
		t.Fatalf("replaced: %v", err)
	}
	failed := errors.New("disk full")
	err := File(name, func(w io.Writer) error {
		if err := text("half")(w); err != nil {
			return err
		}
		return failed
	})
	if !errors.Is(err, failed) || read(t, name) != "two" {
		t.Errorf("after a failure: %v, file holds %q", err, read(t, name))
	}
	left, err := os.ReadDir(dir)
	if err != nil || len(left) != 1 {
		t.Errorf("left behind: %v, %v", left, err)
	}
}

func TestModeAndLinkStay(t *testing.T) {
	if runtime.GOOS == "windows" {
		t.Skip("no modes or links to speak of")
	}
	dir := t.TempDir()
	real, link := filepath.Join(dir, "real"), filepath.Join(dir, "link")
	if err := os.WriteFile(real, nil, 0o600); err != nil {
		t.Fatal(err)
	}
	if err := os.Symlink(real, link); err != nil {
		t.Fatal(err)
	}
	if err := File(link, text("x")); err != nil {
		t.Fatal(err)
	}
	if info, err := os.Lstat(link); err != nil || info.Mode()&os.ModeSymlink == 0 {
		t.Errorf("the link was replaced: %v %v", info, err)
	}
	if info, err := os.Stat(real); err != nil || info.Mode().Perm() != 0o600 || read(t, real) != "x" {
		t.Errorf("the file behind the link: %v %v", info, err)
	}
}

func TestSpecialFileIsNotReplaced(t *testing.T) {
	const device = "/dev/null"
	before, err := os.Stat(device)
	if err != nil {
		t.Skip("no " + device)
	}
	if err := File(device, text("gone")); err != nil {
		t.Fatal(err)
	}
	after, err := os.Stat(device)
	if err != nil || !os.SameFile(before, after) || after.Mode().IsRegular() {
		t.Errorf("%s was replaced: %v %v", device, after, err)
	}
}

// A descriptor that leads to a regular file: what was written through it
// stays, and the file is the same.
func TestDescriptorIsAppendedTo(t *testing.T) {
	f, err := os.Create(filepath.Join(t.TempDir(), "redirected"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	name := fmt.Sprintf("/dev/fd/%d", f.Fd())
	if _, err := os.Stat(name); err != nil {
		t.Skip("no " + name)
	}
	if _, err := f.WriteString("first "); err != nil {
		t.Fatal(err)
	}
	if err := File(name, text("second")); err != nil {
		t.Fatal(err)
	}
	if got := read(t, f.Name()); got != "first second" {
		t.Errorf("the file holds %q", got)
	}
	before, _ := f.Stat()
	if after, err := os.Stat(f.Name()); err != nil || !os.SameFile(before, after) {
		t.Errorf("the file was replaced: %v", err)
	}
}

// A program that ends in the middle leaves nothing behind. What Abandon does
// is for good, so it is done in a process of its own.
func TestAbandon(t *testing.T) {
	if dir := os.Getenv("ABANDON"); dir != "" {
		_ = File(filepath.Join(dir, "x"), func(io.Writer) error {
			if entries, err := os.ReadDir(dir); err != nil || len(entries) != 1 {
				t.Errorf("while it is written: %v, %v", entries, err)
			}
			Abandon()
			os.Exit(7)
			return nil
		})
	}
	dir := t.TempDir()
	again := exec.Command(os.Args[0], "-test.run=^TestAbandon$")
	again.Env = append(os.Environ(), "ABANDON="+dir)
	err := again.Run()
	if code := again.ProcessState.ExitCode(); code != 7 {
		t.Fatalf("exit status %d: %v", code, err)
	}
	if entries, err := os.ReadDir(dir); err != nil || len(entries) != 0 {
		t.Errorf("left behind: %v, %v", entries, err)
	}
}

func TestLongName(t *testing.T) {
	name := filepath.Join(t.TempDir(), strings.Repeat("n", 250))
	if err := File(name, text("x")); err != nil || read(t, name) != "x" {
		t.Error(err)
	}
}

func TestReadOnlyIsNotReplaced(t *testing.T) {
	name := filepath.Join(t.TempDir(), "x")
	if err := os.WriteFile(name, []byte("kept"), 0o444); err != nil {
		t.Fatal(err)
	}
	if err := File(name, text("x")); err == nil || !strings.Contains(err.Error(), name+" is read-only") || read(t, name) != "kept" {
		t.Errorf("error %v", err)
	}
}

func TestErrorsSayWhere(t *testing.T) {
	dir := t.TempDir()
	if err := File(dir, text("x")); err == nil {
		t.Error("a folder was written to")
	}
	if err := File(filepath.Join(dir, "none", "x"), text("x")); err == nil {
		t.Error("a folder that does not exist was written in")
	}
}
