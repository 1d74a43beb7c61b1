package study

import (
	"bytes"
	"cmp"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"hash"
	"io"
	"io/fs"
	"os"
	"path"
	"path/filepath"
	"strings"
)

// StdinName is how standard input is named in messages and inputs.
const StdinName = "standard input"

// Read reads a study: the study file if there is one, the calls, and flags,
// which win over the study file key by key. The calls are those of src.Path,
// else of flags.Calls, else those that the study file names beside itself.
// The error is a *Problems where the data is wrong, and another error where a
// file cannot be read.
func Read(src Source, flags Settings) (*Study, error) {
	studyFile, calls := src.Study, src.Path
	if strings.EqualFold(filepath.Ext(calls), ".toml") {
		if studyFile != "" {
			return nil, fmt.Errorf("two study files are named: %s and %s", studyFile, calls)
		}
		studyFile, calls = calls, ""
	}
	var settings Settings
	var inputs []Input
	if studyFile != "" {
		data, err := src.readFile(studyFile)
		if err != nil {
			return nil, err
		}
		if settings, err = parseSettings(studyFile, data); err != nil {
			return nil, err
		}
		sum := sha256.Sum256(data)
		inputs = append(inputs, Input{File: studyFile, SHA256: hex.EncodeToString(sum[:])})
	}
	name := calls
	switch {
	case calls != "" && flags.Calls != "":
		return nil, fmt.Errorf("two calls files are named: %s and, by --calls, %s; leave one out", calls, flags.Calls)
	case name == "":
		calls, name = flags.Calls, flags.Calls
	}
	if name == "" && settings.Calls != "" {
		name = settings.Calls
		calls = src.beside(studyFile, name)
	}
	if name == "" {
		if studyFile == "" {
			return nil, errors.New("no calls file is named")
		}
		return nil, problemsOf([]Problem{{File: studyFile, Text: `the file names no calls: add calls = "FILE" to it, or name the calls file too`}}, 0)
	}
	merged := settings.Merge(flags)
	if merged.Confidence == 0 {
		merged.Confidence = DefaultConfidence
	}
	if faults := merged.faults(); len(faults) > 0 {
		var list []Problem
		for _, f := range faults {
			list = append(list, Problem{Text: "setting " + f.key + ": " + f.text})
		}
		return nil, problemsOf(list, 0)
	}
	s, input, err := src.readCalls(calls, name, merged)
	if err != nil {
		return nil, err
	}
	s.Inputs = append(inputs, input)
	return s, nil
}

// beside returns the path of a file that a study file names.
func (src Source) beside(studyFile, name string) string {
	switch {
	case src.FS != nil:
		return path.Join(path.Dir(studyFile), name)
	case filepath.IsAbs(name) || name == "-":
		return name
	default:
		return filepath.Join(filepath.Dir(studyFile), filepath.FromSlash(name))
	}
}

func (src Source) open(name string) (io.ReadCloser, error) {
	switch {
	case name == "-" && src.Stdin != nil:
		return io.NopCloser(src.Stdin), nil
	case name == "-":
		return nil, errors.New("there is no standard input")
	case src.FS != nil:
		return src.FS.Open(name)
	}
	f, err := os.Open(name)
	if err != nil {
		return nil, err
	}
	if info, err := f.Stat(); err == nil && info.IsDir() {
		f.Close()
		return nil, &fs.PathError{Op: "read", Path: name, Err: errors.New("is a folder, not a file")}
	}
	return f, nil
}

func (src Source) readFile(name string) ([]byte, error) {
	f, err := src.open(name)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	data, err := io.ReadAll(io.LimitReader(f, maxStudyFile+1))
	if err != nil {
		return nil, err
	}
	return data, nil
}

// hashed is a file whose bytes are hashed as they are read.
type hashed struct {
	in  io.Reader
	sum hash.Hash
}

func (h *hashed) Read(p []byte) (int, error) {
	n, err := h.in.Read(p)
	h.sum.Write(p[:n])
	return n, err
}

// readCalls reads the calls of a file; name is what the user calls it.
func (src Source) readCalls(file, name string, s Settings) (*Study, Input, error) {
	if file == "-" {
		name = StdinName
	}
	f, err := src.open(file)
	if err != nil {
		return nil, Input{}, err
	}
	defer f.Close()
	in := &hashed{f, sha256.New()}

	magic := make([]byte, 4)
	n, err := io.ReadFull(in, magic)
	if err != nil && err != io.EOF && err != io.ErrUnexpectedEOF {
		return nil, Input{}, err
	}
	whole := io.MultiReader(bytes.NewReader(magic[:n]), in)
	var t *table
	if string(magic[:n]) == "PK\x03\x04" {
		t, err = readWorkbook(whole, s)
	} else {
		t, err = readText(whole, s, cmp.Or(src.chunk, chunkSize))
	}
	if p, ok := problemOf(err); ok {
		t, err = &table{problems: []Problem{p}}, nil
	}
	if err != nil {
		return nil, Input{}, fmt.Errorf("%s: %w", name, err)
	}
	var study *Study
	list, more := t.problems, 0
	if t.layout != nil && len(t.builders) > 0 {
		study, list, more = t.study(s)
	}
	if len(list) > 0 {
		for i := range list {
			list[i] = t.placed(list[i], name)
		}
		return nil, Input{}, problemsOf(list, more)
	}
	if _, err := io.Copy(io.Discard, whole); err != nil { // what a reader may have left, for the sum
		return nil, Input{}, fmt.Errorf("%s: %w", name, err)
	}
	return study, Input{File: name, SHA256: hex.EncodeToString(in.sum.Sum(nil)), Sheet: t.sheet}, nil
}

// placed adds the file, and the cell of a workbook, to a problem.
func (t *table) placed(p Problem, file string) Problem {
	p.File = file
	if t.sheet != "" && p.Line > 0 {
		p.Cell = cellName(t.sheet, max(p.Column, 1), p.Line)
	}
	return p
}
