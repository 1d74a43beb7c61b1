package example

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"

	"samecall/cmd/samecall/internal/output"
)

// WriteTo writes the files of one example into a folder, which it makes if it
// is not there, and returns their paths. Either all files are written or
// none: a file that stands there already is not overwritten, but named in the
// error.
func WriteTo(dir, name string) ([]string, error) {
	files, err := FS(name)
	if err != nil {
		return nil, err
	}
	return writeAll(dir, files)
}

func writeAll(dir string, files fs.FS) (paths []string, err error) {
	entries, err := fs.ReadDir(files, ".")
	if err != nil {
		return nil, err
	}
	var standing []error
	for _, e := range entries {
		path := filepath.Join(dir, e.Name())
		if _, err := os.Lstat(path); err == nil { // Lstat: a link that leads nowhere stands there too
			standing = append(standing, fmt.Errorf("%s exists already and is not overwritten; choose another folder, or move it away", path))
		}
	}
	if len(standing) > 0 {
		return nil, errors.Join(standing...)
	}
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return nil, err
	}
	for _, e := range entries {
		path := filepath.Join(dir, e.Name())
		if err := copyFile(files, e.Name(), path); err != nil {
			for _, written := range paths {
				_ = os.Remove(written)
			}
			return nil, err
		}
		paths = append(paths, path)
	}
	return paths, nil
}

func copyFile(files fs.FS, name, to string) error {
	data, err := fs.ReadFile(files, name)
	if err != nil {
		return err
	}
	return output.File(to, func(w io.Writer) error {
		_, err := w.Write(data)
		return err
	})
}
