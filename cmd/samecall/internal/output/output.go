// Package output writes files whole or not at all.
package output

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"sync"
)

// File writes what write produces to the file named. A regular file appears,
// or is replaced, only when all of it has been written; a failure leaves
// what was there. A special file (a device, a pipe) is written to, never
// replaced, and a symbolic link is followed. Errors name the file as it is
// named here.
func File(name string, write func(io.Writer) error) error {
	if err := Check(name); err != nil {
		return err
	}
	target, descriptor := follow(name)
	info, err := os.Stat(target)
	switch {
	case descriptor && own(target) != nil:
		// Opened anew it would have a place of its own to write at, and what
		// the program writes to the descriptor itself would lie over it.
		err = buffered(own(target), write)
	case err == nil && (descriptor || !info.Mode().IsRegular()):
		// Behind a descriptor may be a file that somebody else is writing
		// to, as with /dev/stdout and a redirection: go on at its end.
		var f *os.File
		if f, err = os.OpenFile(target, os.O_WRONLY|os.O_APPEND, 0); err == nil {
			err = closeAfter(f, write)
		}
	case err == nil:
		mode := info.Mode().Perm()
		err = replace(target, &mode, write)
	case errors.Is(err, fs.ErrNotExist):
		err = replace(target, nil, write)
	}
	return named(name, err)
}

// Check finds, without writing anything, why a file could not be written or
// should not be replaced.
func Check(name string) error {
	target, descriptor := follow(name)
	info, err := os.Stat(target)
	switch {
	case descriptor:
	case err == nil && info.IsDir(), name != "" && os.IsPathSeparator(name[len(name)-1]):
		return fmt.Errorf("%s is a folder; name a file to write", name)
	case err == nil && info.Mode().IsRegular():
		return writable(name, target, info)
	case errors.Is(err, fs.ErrNotExist):
		if _, err := os.Stat(filepath.Dir(target)); errors.Is(err, fs.ErrNotExist) {
			return fmt.Errorf("%s: there is no folder %s; make it, or name another", name, filepath.Dir(target))
		}
	case err != nil:
		return named(name, err)
	}
	return nil
}

// Remove removes a regular file that could be replaced, and reports whether
// there was one. Anything else of that name is left, and is an error.
func Remove(name string) (bool, error) {
	info, err := os.Lstat(name)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return false, nil
	case err == nil && !info.Mode().IsRegular():
		err = fmt.Errorf("%s is no plain file; remove it, or name another folder", name)
	case err == nil:
		err = Check(name)
	}
	if err == nil {
		err = os.Remove(name)
	}
	return err == nil, named(name, err)
}

// writable refuses a file that its owner has closed to writing: to replace it
// takes a right to its folder only.
func writable(name, target string, info fs.FileInfo) error {
	err := fs.ErrPermission
	if info.Mode().Perm()&0o222 != 0 { // to the superuser every file opens
		f, e := os.OpenFile(target, os.O_WRONLY, 0)
		if err = e; e == nil {
			return f.Close()
		}
	}
	if errors.Is(err, fs.ErrPermission) {
		return fmt.Errorf("%s is read-only; make it writable, or name another file", name)
	}
	return named(name, err)
}

// named puts the name that the user knows in place of the one in an error of
// the system.
func named(name string, err error) error {
	var path *fs.PathError
	var link *os.LinkError
	switch {
	case errors.As(err, &path):
		err = path.Err
	case errors.As(err, &link):
		err = link.Err
	default:
		return err
	}
	return fmt.Errorf("%s: %w", name, err)
}

// Same reports whether two names lead to one file that would be lost, now or
// once it is written. Devices and pipes take any number of writers.
func Same(a, b string) bool {
	x, errX := os.Stat(a)
	y, errY := os.Stat(b)
	if errX == nil && errY == nil && os.SameFile(x, y) {
		return x.Mode().IsRegular() || x.IsDir()
	}
	return errX != nil && errY != nil && Place(a) == Place(b)
}

// Place is where a name leads to, through links, whether there is a file or not.
func Place(name string) string {
	target, _ := follow(filepath.Clean(name))
	if absolute, err := filepath.Abs(target); err == nil {
		target = absolute
	}
	dir := filepath.Dir(target)
	if real, err := filepath.EvalSymlinks(dir); err == nil {
		dir = real
	}
	return filepath.Join(dir, filepath.Base(target))
}

// IsDescriptor reports whether a name stands for a file that a process has
// open, such as /dev/stdin or /dev/fd/3.
func IsDescriptor(name string) bool {
	_, descriptor := follow(name)
	return descriptor
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
	f, err := temporary(filepath.Dir(target))
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
	unfinished.Lock()
	defer unfinished.Unlock()
	delete(unfinished.files, f.Name())
	if err == nil {
		err = os.Rename(f.Name(), target)
	}
	if err != nil {
		_ = os.Remove(f.Name())
	}
	return err
}

// unfinished are the files that are being written beside their targets.
var unfinished = struct {
	sync.Mutex
	files map[string]bool
}{files: make(map[string]bool)}

// Abandon removes what is unfinished, for a program that is about to end. No
// file can be written any more.
func Abandon() {
	unfinished.Lock() // for good
	for name := range unfinished.files {
		_ = os.Remove(name)
	}
}

// temporary makes a file in a folder, with the mode of any new file (that of
// os.CreateTemp is closed to others) and a short name, whatever the target's.
func temporary(dir string) (*os.File, error) {
	unfinished.Lock()
	defer unfinished.Unlock()
	const attempts = 100
	for i := 0; ; i++ {
		name := filepath.Join(dir, fmt.Sprintf(".samecall-%016x", rand.Uint64()))
		f, err := os.OpenFile(name, os.O_CREATE|os.O_EXCL|os.O_WRONLY, 0o666)
		if errors.Is(err, fs.ErrExist) && i < attempts {
			continue
		}
		if err == nil {
			unfinished.files[name] = true
		}
		return f, err
	}
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
