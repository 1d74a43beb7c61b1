package main

import (
	"os"
	"path/filepath"
	"slices"
	"strings"

	"samecall/cmd/samecall/internal/output"
	"samecall/cmd/samecall/internal/study"
)

// filedNames are what the files that are read are called in what is written.
// A record is filed beside them and computed again from there, on another
// machine perhaps: they are named from the folder that holds them all, however
// they were named on the command line.
type filedNames struct {
	of    map[string]string // by the name on the command line
	runIn string            // that folder, in words; empty where there is none
}

func newFiledNames(read []namedFile) filedNames {
	n := filedNames{of: make(map[string]string)}
	var places []string
	at := make(map[string]int) // the place of each name
	for _, r := range read {
		// A pipe, a device or what stands for an open file is filed nowhere.
		if info, err := os.Stat(r.file); err != nil || !info.Mode().IsRegular() || output.IsDescriptor(r.file) {
			continue
		}
		place := placeOf(r.file)
		i := slices.Index(places, place)
		if i < 0 {
			i, places = len(places), append(places, place)
		}
		at[r.file] = i
	}
	if len(places) == 0 {
		return n
	}
	names, together := namesBelow(commonFolder(places), places)
	where := "the folder that holds "
	switch {
	case !together:
		where = "a folder that holds "
		names = endings(places)
	case !slices.ContainsFunc(names, func(s string) bool { return strings.Contains(s, "/") }):
		where = "the folder of "
	}
	n.runIn = where + strings.Join(names, " and ")
	for typed, i := range at {
		n.of[typed] = names[i]
	}
	return n
}

// name is what a file of the command line is called in what is written.
func (n filedNames) name(file string) string {
	if name, ok := n.of[file]; ok {
		return name
	}
	return file
}

// word is the same as it is typed on a command line, where - is standard input.
func (n filedNames) word(file string) string {
	if name := n.name(file); name != "-" || file == "-" {
		return name
	}
	return "./-"
}

// input names a file that was read. One that a study file names is called as it
// is there, but for the folders of a machine.
func (n filedNames) input(in study.Input) study.Input {
	if name, ok := n.of[in.File]; ok {
		in.File = name
	} else if filepath.IsAbs(in.File) && !strings.HasPrefix(in.File, "/dev/") {
		in.File = filepath.Base(in.File)
	}
	return in
}

// where says in what folder the line is run that computes a record again.
func (n filedNames) where(inputs []study.Input) string {
	switch read := slices.ContainsFunc(inputs, func(in study.Input) bool { return in.File == study.StdinName }); {
	case !read:
		return n.runIn
	case n.runIn == "":
		return "any folder, with the same standard input"
	}
	return n.runIn + ", with the same standard input"
}

// placeOf is where a file lies, in folders that are no links: two ways to one
// folder are one.
func placeOf(file string) string {
	if absolute, err := filepath.Abs(file); err == nil {
		file = absolute
	}
	dir := filepath.Dir(file)
	if real, err := filepath.EvalSymlinks(dir); err == nil {
		dir = real
	}
	return filepath.Join(dir, filepath.Base(file))
}

// commonFolder is the innermost folder that holds all files, or a root.
func commonFolder(places []string) string {
	folder := filepath.Dir(places[0])
	for _, p := range places {
		for up := filepath.Dir(folder); !holds(folder, p) && up != folder; up = filepath.Dir(folder) {
			folder = up
		}
	}
	return folder
}

func holds(folder, place string) bool {
	name, err := filepath.Rel(folder, place)
	return err == nil && filepath.IsLocal(name)
}

// namesBelow names files from a folder. Those that have but a root in common are
// not together: their names would be all of their paths.
func namesBelow(folder string, places []string) (names []string, together bool) {
	root := filepath.Dir(folder) == folder
	for _, p := range places {
		name, err := filepath.Rel(folder, p)
		if err != nil || root && filepath.Dir(p) != folder {
			return nil, false
		}
		names = append(names, filepath.ToSlash(name))
	}
	return names, true
}

// endings are the shortest ends of paths that tell different files apart.
func endings(places []string) []string {
	for n := 1; ; n++ {
		var names []string
		longest, alike := 0, false
		for _, p := range places {
			parts := strings.Split(strings.Trim(filepath.ToSlash(p), "/"), "/")
			longest = max(longest, len(parts))
			name := strings.Join(parts[max(0, len(parts)-n):], "/")
			alike = alike || slices.Contains(names, name)
			names = append(names, name)
		}
		if !alike || n >= longest {
			return names
		}
	}
}
