package main

import (
	"bytes"
	"encoding/csv"
	"errors"
	"flag"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
	"github.com/xuri/excelize/v2"
	"golang.org/x/text/encoding"
	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"
)

var update = flag.Bool("update", false, "write golden files, expected outputs in scripts and outputs in documents anew")

// TestMain makes the program a command of scripts, and of the shell that the
// blocks of documents run in.
func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"samecall": main})
}

const (
	scripts   = "../../testdata/script"
	golden    = "../../testdata/golden"
	reference = "../../testdata/reference"
)

// TestScripts runs the program as a user does: whole processes, files, exit
// statuses, every byte that is written.
func TestScripts(t *testing.T) {
	testscript.Run(t, testscript.Params{
		Dir:                 scripts,
		UpdateScripts:       *update,
		RequireExplicitExec: true,
		RequireUniqueNames:  true,
		Setup: func(env *testscript.Env) error {
			folder, err := filepath.Abs(reference)
			env.Setenv("REFERENCE", folder)
			env.Setenv("COLUMNS", "")
			return err
		},
		Condition: func(cond string) (bool, error) {
			if cond == "root" { // to whom no folder is closed
				return os.Geteuid() == 0, nil
			}
			return false, errors.New("unknown condition " + cond)
		},
		Cmds: map[string]func(*testscript.TestScript, bool, []string){
			"status":   scriptStatus,
			"golden":   scriptGolden,
			"encode":   scriptEncode,
			"workbook": scriptWorkbook,
		},
	})
}

// scriptStatus runs a command that must end with the exit status given:
//
//	status 3 samecall check wrong.csv
func scriptStatus(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: status NUMBER COMMAND [ARGUMENT...]")
	}
	want, err := strconv.Atoi(args[0])
	ts.Check(err)
	got := 0
	if err := ts.Exec(args[1], args[2:]...); err != nil {
		var exit *exec.ExitError
		if !errors.As(err, &exit) {
			ts.Fatalf("%v", err)
		}
		got = exit.ExitCode()
	}
	if got != want {
		ts.Fatalf("exit status is %d; expected %d", got, want)
	}
}

// scriptGolden compares the last standard output with a golden file:
//
//	golden judge-bore-100.txt
func scriptGolden(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 1 {
		ts.Fatalf("usage: golden FILE")
	}
	got, name := ts.ReadFile("stdout"), filepath.Join(golden, args[0])
	if *update {
		ts.Check(os.WriteFile(name, []byte(got), 0o666))
		return
	}
	want, err := os.ReadFile(name)
	ts.Check(err)
	if got != string(want) {
		ts.Fatalf("the output differs from %s (go test ./cmd/samecall -update writes it anew):\n%s", name, got)
	}
}

// scriptEncode writes a file of UTF-8 in another encoding or with other line
// ends:
//
//	encode utf-16le calls.csv out.csv
func scriptEncode(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 3 {
		ts.Fatalf("usage: encode utf-16le|utf-16be|utf-16le-no-bom|latin-1|bom|crlf|cr FILE OUT")
	}
	text := []byte(ts.ReadFile(args[1]))
	encodings := map[string]encoding.Encoding{
		"utf-16le":        unicode.UTF16(unicode.LittleEndian, unicode.UseBOM),
		"utf-16be":        unicode.UTF16(unicode.BigEndian, unicode.UseBOM),
		"utf-16le-no-bom": unicode.UTF16(unicode.LittleEndian, unicode.IgnoreBOM),
		"latin-1":         charmap.ISO8859_1,
	}
	switch enc := encodings[args[0]]; {
	case enc != nil:
		var err error
		text, err = enc.NewEncoder().Bytes(text)
		ts.Check(err)
	case args[0] == "bom":
		text = append([]byte("\xef\xbb\xbf"), text...)
	case args[0] == "crlf":
		text = bytes.ReplaceAll(text, []byte("\n"), []byte("\r\n"))
	case args[0] == "cr":
		text = bytes.ReplaceAll(text, []byte("\n"), []byte("\r"))
	default:
		ts.Fatalf("unknown encoding %s", args[0])
	}
	ts.Check(os.WriteFile(ts.MkAbs(args[2]), text, 0o666))
}

// scriptWorkbook makes a workbook of CSV files, a sheet of each:
//
//	workbook out.xlsx March=march.csv April=april.csv
func scriptWorkbook(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: workbook OUT SHEET=FILE...")
	}
	f := excelize.NewFile()
	for i, arg := range args[1:] {
		sheet, file, _ := strings.Cut(arg, "=")
		if i == 0 {
			ts.Check(f.SetSheetName("Sheet1", sheet))
		} else {
			_, err := f.NewSheet(sheet)
			ts.Check(err)
		}
		ts.Check(fillSheet(f, sheet, ts.ReadFile(file)))
	}
	ts.Check(f.SaveAs(ts.MkAbs(args[0])))
}

// fillSheet writes the rows of a CSV, numbers as numbers.
func fillSheet(f *excelize.File, sheet, text string) error {
	r := csv.NewReader(strings.NewReader(text))
	r.FieldsPerRecord, r.Comment = -1, '#'
	rows, err := r.ReadAll()
	if err != nil {
		return err
	}
	for i, row := range rows {
		for j, field := range row {
			cell, err := excelize.CoordinatesToCellName(j+1, i+1)
			if err != nil {
				return err
			}
			var value any = field
			if x, err := strconv.ParseFloat(field, 64); err == nil {
				value = x
			}
			if field == "" {
				continue
			}
			if err := f.SetCellValue(sheet, cell, value); err != nil {
				return err
			}
		}
	}
	return nil
}
