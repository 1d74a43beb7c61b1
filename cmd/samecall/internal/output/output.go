// Package output writes files whole or not at all.
package output

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
)

// File writes what write produces to the file named. A regular file appears,
// or is replaced, only when all of it has been written; a failure leaves
// what was there. A special file (a device, a pipe) is written to, never
// replaced, and a symbolic link is followed.
func File(name string, write func(io.Writer) error) error {
	target, descriptor := follow(name)
	info, err := os.Stat(target)
	switch {
	case err == nil && info.IsDir():
		return fmt.Errorf("%s is a folder; name a file to write", name)
	case descriptor && own(target) != nil:
		// Opened anew it would have a place of its own to write at, and what
		// the program writes to the descriptor itself would lie over it.
		return buffered(own(target), write)
	case err == nil && (descriptor || !info.Mode().IsRegular()):
		// Behind a descriptor may be a file that somebody else is writing
		// to, as with /dev/stdout and a redirection: go on at its end.
		f, err := os.OpenFile(target, os.O_WRONLY|os.O_APPEND, 0)
		if err != nil {
			return err
		}
		return closeAfter(f, write)
	case err == nil:
		mode := info.Mode().Perm()
		return replace(target, &mode, write)
	case errors.Is(err, fs.ErrNotExist):
		return replace(target, nil, write)
	}
	return err
}

// follow returns the file that a name leads to through symbolic links, or
// the link itself where it stands for an open descriptor of a process.
func follow(name string) (target string, descriptor bool) {
	const manyLinks = 40
	for range manyLinks {
		dir, err := filepath.EvalSymlinks(filepath.Dir(name))
		if err == nil && strings.HasPrefix(dir, "/proc/") {
			return name, true
		}
		next, err := os.Readlink(name)
		if err != nil { // no link, or not there
			return name, false
		}
		if !filepath.IsAbs(next) {
			next = filepath.Join(filepath.Dir(name), next)
		}
		name = next
	}
	return name, false
}

// own returns the standard output or error of this process if the path leads
// to it, else nil.
func own(path string) *os.File {
	dir, err := filepath.EvalSymlinks(filepath.Dir(path))
	if err != nil || dir != fmt.Sprintf("/proc/%d/fd", os.Getpid()) {
		return nil
	}
	switch filepath.Base(path) {
	case "1":
		return os.Stdout
	case "2":
		return os.Stderr
	}
	return nil
}

// replace writes beside the target and renames. keep is the mode of the file
// that is replaced; nil for a new file, which gets the mode that the system
// gives to any new file.
func replace(target string, keep *fs.FileMode, write func(io.Writer) error) error {
	dir, base := filepath.Split(target)
	temporary := filepath.Join(dir, fmt.Sprintf(".%s.%d", base, os.Getpid()))
	f, err := os.OpenFile(temporary, os.O_CREATE|os.O_EXCL|os.O_WRONLY, 0o666)
	if err != nil {
		return err
	}
	if keep != nil {
		err = f.Chmod(*keep)
	}
	if err == nil {
		err = closeAfter(f, write)
	} else {
		_ = f.Close()
	}
	if err == nil {
		err = os.Rename(temporary, target)
	}
	if err != nil {
		_ = os.Remove(temporary)
	}
	return err
}

func buffered(f io.Writer, write func(io.Writer) error) error {
	w := bufio.NewWriter(f)
	if err := write(w); err != nil {
		return err
	}
	return w.Flush()
}

func closeAfter(f *os.File, write func(io.Writer) error) error {
	err := buffered(f, write)
	if c := f.Close(); err == nil {
		err = c
	}
	return err
}
