package example

import (
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"testing/fstest"

	"github.com/BurntSushi/toml"
)

func TestNamesAreTheFolders(t *testing.T) {
	folders, err := fs.ReadDir(studies, "studies")
	if err != nil {
		t.Fatal(err)
	}
	have := make(map[string]bool)
	for _, f := range folders {
		have[f.Name()] = true
	}
	for _, e := range Names() {
		if !have[e.Name] {
			t.Errorf("%s is listed twice, or has no folder", e.Name)
		}
		delete(have, e.Name)
		for _, line := range []string{e.Title, e.About} { // a listing fits 100 columns
			if line == "" || len(line) > 90 || strings.Contains(line, "\n") {
				t.Errorf("%s: %q is not one line of at most 90", e.Name, line)
			}
		}
	}
	for name := range have {
		t.Errorf("the folder %s is not listed", name)
	}
}

func TestNamesAreACopy(t *testing.T) {
	Names()[0].Name = "changed"
	if Names()[0].Name == "changed" {
		t.Error("a caller can change the list")
	}
}

// Each study says of itself, in every file and in its title, that it is
// invented, and the list shows the title that the study file has.
func TestToldAsInvented(t *testing.T) {
	for _, e := range Names() {
		files, err := FS(e.Name)
		if err != nil {
			t.Fatal(err)
		}
		var settings struct{ Title, Calls string }
		if _, err := toml.DecodeFS(files, StudyFile, &settings); err != nil {
			t.Fatal(e.Name, err)
		}
		if settings.Title != e.Title {
			t.Errorf("%s: listed as %q, its study file says %q", e.Name, e.Title, settings.Title)
		}
		if !strings.HasSuffix(e.Title, "(invented data)") {
			t.Errorf("%s: the title does not say that the data is invented: %q", e.Name, e.Title)
		}
		if err := fstest.TestFS(files, StudyFile, settings.Calls); err != nil {
			t.Error(e.Name, err)
		}
		for _, name := range []string{StudyFile, settings.Calls} {
			data, err := fs.ReadFile(files, name)
			if err != nil {
				t.Fatal(err)
			}
			if !strings.HasPrefix(string(data), "# Invented data: ") {
				t.Errorf("%s/%s does not begin with a comment that the data is invented", e.Name, name)
			}
		}
	}
}

func TestUnknownNameTellsTheKnown(t *testing.T) {
	for _, name := range []string{"", "bores", "../bore", "bore/", "Bore"} {
		_, err := FS(name)
		if err == nil {
			t.Errorf("%q is taken", name)
			continue
		}
		for _, e := range Names() {
			if !strings.Contains(err.Error(), e.Name) {
				t.Errorf("%q: the error does not name %s: %v", name, e.Name, err)
			}
		}
		dir := filepath.Join(t.TempDir(), "new")
		if _, err := WriteTo(dir, name); err == nil || exists(dir) {
			t.Errorf("WriteTo %q: error %v, folder made: %v", name, err, exists(dir))
		}
	}
}

func TestWriteTo(t *testing.T) {
	for _, e := range Names() {
		dir := filepath.Join(t.TempDir(), "a", "b")
		paths, err := WriteTo(dir, e.Name)
		if err != nil {
			t.Fatal(err)
		}
		files, err := FS(e.Name)
		if err != nil {
			t.Fatal(err)
		}
		if n := len(list(t, dir)); n != len(paths) || n < 2 {
			t.Errorf("%s: %d paths returned, %d files in the folder", e.Name, len(paths), n)
		}
		for _, path := range paths {
			got, err := os.ReadFile(path)
			if err != nil {
				t.Fatal(err)
			}
			want, err := fs.ReadFile(files, filepath.Base(path))
			if err != nil {
				t.Fatal(err)
			}
			if string(got) != string(want) {
				t.Errorf("%s is not the file of the example", path)
			}
		}
	}
}

func TestWriteToOverwritesNothing(t *testing.T) {
	for _, name := range []string{StudyFile, "calls.csv"} {
		for kind, put := range map[string]func(string) error{
			"file":          func(p string) error { return os.WriteFile(p, []byte("mine"), 0o666) },
			"folder":        func(p string) error { return os.Mkdir(p, 0o777) },
			"dangling link": func(p string) error { return os.Symlink("nowhere", p) },
		} {
			t.Run(name+"/"+kind, func(t *testing.T) {
				dir := t.TempDir()
				path := filepath.Join(dir, name)
				if err := put(path); err != nil {
					t.Fatal(err)
				}
				_, err := WriteTo(dir, "bore")
				if err == nil || !strings.Contains(err.Error(), path) {
					t.Errorf("error does not name %s: %v", path, err)
				}
				if left := list(t, dir); len(left) != 1 {
					t.Errorf("the folder holds %v", left)
				}
				if kind == "file" {
					if got, _ := os.ReadFile(path); string(got) != "mine" {
						t.Errorf("the file now holds %q", got)
					}
				}
			})
		}
	}
}

func TestWriteToNamesEveryFileInTheWay(t *testing.T) {
	dir := t.TempDir()
	paths, err := WriteTo(dir, "bore")
	if err != nil {
		t.Fatal(err)
	}
	_, err = WriteTo(dir, "weld")
	for _, path := range paths {
		if err == nil || !strings.Contains(err.Error(), path) {
			t.Errorf("error does not name %s: %v", path, err)
		}
	}
}

func TestWriteToAFile(t *testing.T) {
	path := filepath.Join(t.TempDir(), "file")
	if err := os.WriteFile(path, []byte("mine"), 0o666); err != nil {
		t.Fatal(err)
	}
	if _, err := WriteTo(path, "bore"); err == nil || !strings.Contains(err.Error(), path) {
		t.Errorf("error does not name %s: %v", path, err)
	}
}

// A file that fails takes the ones written before it along.
func TestWriteAllOrNothing(t *testing.T) {
	files, err := FS("bore")
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	if paths, err := writeAll(dir, failing{files, StudyFile}); !errors.Is(err, errBroken) || paths != nil {
		t.Fatalf("wrote %v, error %v", paths, err)
	}
	if left := list(t, dir); len(left) != 0 {
		t.Errorf("the folder holds %v", left)
	}
}

// failing is a file system with one file that cannot be read.
type failing struct {
	fs.FS
	name string
}

var errBroken = errors.New("broken")

func (f failing) Open(name string) (fs.File, error) {
	if name == f.name {
		return nil, errBroken
	}
	return f.FS.Open(name)
}

func exists(path string) bool {
	_, err := os.Lstat(path)
	return err == nil
}

func list(t *testing.T, dir string) []string {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, e := range entries {
		names = append(names, e.Name())
	}
	return names
}
