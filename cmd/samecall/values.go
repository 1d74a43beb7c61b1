package main

import (
	"encoding/csv"
	"errors"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"samecall/cmd/samecall/internal/study"
)

// checkLine refuses, before anything is read, what cannot be on a command line.
func checkLine(cmd *cobra.Command, args []string) error {
	var err error
	cmd.Flags().Visit(func(f *pflag.Flag) {
		if err == nil {
			err = checkValue(f)
		}
	})
	if err != nil {
		return err
	}
	return keep(cmd, args)
}

// mayBeEmpty are the flags of texts that an answer can do without.
var mayBeEmpty = []string{"title", "characteristic", "gauge", "unit"}

func checkValue(f *pflag.Flag) error {
	var numbers []float64
	switch f.Value.Type() {
	case "string":
		if f.Value.String() == "" && !slices.Contains(mayBeEmpty, f.Name) {
			return fmt.Errorf("--%s is empty; give it a value, or leave the flag out", f.Name)
		}
	case "float64":
		x, _ := strconv.ParseFloat(f.Value.String(), 64)
		if numbers = []float64{x}; f.Name == "confidence" {
			if err := study.CheckConfidence(x); err != nil {
				return fmt.Errorf("--%w", err)
			}
		}
	default:
		if list, ok := f.Value.(interface{ numbers() []float64 }); ok {
			numbers = list.numbers()
		}
	}
	for _, x := range numbers {
		if err := study.CheckNumber(x); err != nil {
			return fmt.Errorf("--%s is %v: %w", f.Name, x, err)
		}
	}
	return nil
}

// numberList is a flag of numbers with commas between them. The error names the
// one that is none.
type numberList []float64

func (n *numberList) numbers() []float64 { return *n }

func (n *numberList) String() string {
	var out []string
	for _, x := range *n {
		out = append(out, strconv.FormatFloat(x, 'g', -1, 64))
	}
	return strings.Join(out, ",")
}

func (n *numberList) Type() string { return "floats" }

func (n *numberList) Set(text string) error {
	var out []float64
	for _, field := range strings.Split(text, ",") {
		x, err := strconv.ParseFloat(strings.TrimSpace(field), 64)
		if err != nil || math.IsNaN(x) || math.IsInf(x, 0) {
			return fmt.Errorf("%q is not a number; expected numbers with commas between them, such as 0.002,0.004", field)
		}
		out = append(out, x)
	}
	*n = append(*n, out...)
	return nil
}

// levels is a flag of the accept and the conditional level of a criterion.
type levels struct{ numberList }

func (l *levels) Type() string { return "float64Slice" }

var errTwice = errors.New("given twice")

// Set takes both levels at once: of two flags the second one is meant to win,
// not to be the conditional level.
func (l *levels) Set(text string) error {
	if len(l.numberList) > 0 {
		return errTwice
	}
	return l.numberList.Set(text)
}

// words is a flag of words with commas between them, a row of CSV. pflag's own
// type reads the first row and drops what comes after a line break.
type words struct {
	pflag.Value
	pflag.SliceValue
}

func (w words) Set(text string) error {
	if rows, err := csv.NewReader(strings.NewReader(text)).ReadAll(); err != nil || len(rows) > 1 {
		return errors.New("more than one line")
	}
	return w.Value.Set(text)
}

// addWords gives a command a flag of words.
func addWords(f *pflag.FlagSet, to *[]string, name, usage string) {
	f.StringSliceVar(to, name, nil, usage)
	flag := f.Lookup(name)
	list, _ := flag.Value.(pflag.SliceValue)
	flag.Value = words{flag.Value, list}
}
