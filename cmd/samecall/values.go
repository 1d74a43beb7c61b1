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
	"samecall/cmd/samecall/internal/verdict"
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
	switch v := inner(f); v.Type() {
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
		if list, ok := v.(interface{ numbers() []float64 }); ok {
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

// value is the value of a flag as people are told of it.
type value struct {
	pflag.Value
	kind     string // stands behind the flag in its help
	expected string // what is told where it is something else
}

func (v value) Type() string { return v.kind }

// inner is the value of a flag as the program knows it.
func inner(f *pflag.Flag) pflag.Value {
	if v, ok := f.Value.(value); ok {
		return v.Value
	}
	return f.Value
}

// describe says of a flag what its value is.
func describe(f *pflag.FlagSet, name, kind, expected string) {
	flag := f.Lookup(name)
	flag.Value = value{flag.Value, kind, expected}
}

// addText gives a command a flag of a text, such as a file or a name.
func addText(f *pflag.FlagSet, to *string, name, kind, usage string) {
	f.StringVar(to, name, "", usage)
	describe(f, name, kind, "")
}

// addNumber gives a command a flag of a number, told by one that fits.
func addNumber(f *pflag.FlagSet, to *float64, name, such, usage string) {
	f.Float64Var(to, name, 0, usage)
	describe(f, name, "number", "a number such as "+such)
}

// addConfidence gives a command the flag of its confidence; preset may be 0,
// where a study file says it.
func addConfidence(f *pflag.FlagSet, to *float64, preset float64) {
	f.Float64Var(to, "confidence", preset, fmt.Sprintf("of every interval, from 0.5 to 0.9999 (default %v)", study.DefaultConfidence))
	f.Lookup("confidence").DefValue = "" // the usage says it
	describe(f, "confidence", "number", study.Confidences)
}

// addChoice gives a command a flag of one word of several.
func addChoice(cmd *cobra.Command, to *string, name, preset, usage string, choices ...string) {
	f := cmd.Flags()
	f.StringVar(to, name, preset, usage)
	describe(f, name, strings.Join(choices, "|"), strings.Join(choices, " or "))
	_ = cmd.RegisterFlagCompletionFunc(name, cobra.FixedCompletions(choices, cobra.ShellCompDirectiveNoFileComp))
}

// numberList is a flag of numbers with commas between them.
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
			return fmt.Errorf("%q is not a number", field)
		}
		out = append(out, x)
	}
	*n = append(*n, out...)
	return nil
}

// addNumbers gives a command a flag of numbers with commas between them.
func addNumbers(f *pflag.FlagSet, to *numberList, name, expected, usage string) {
	f.Var(to, name, usage)
	describe(f, name, "numbers", expected)
}

// levels is a flag of the accept and the conditional level of a criterion.
type levels struct{ numberList }

// addLevels gives a command a flag of both levels of a criterion, with those
// that hold without it.
func addLevels(f *pflag.FlagSet, to *levels, name, what string, preset verdict.Levels) {
	such := fmt.Sprintf("%v,%v", preset[0], preset[1])
	f.Var(to, name, "accept and conditional level of "+what+" (default "+such+")")
	describe(f, name, "levels", "two numbers with a comma between them, the accept and the conditional level, such as "+such)
}

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

// addWords gives a command a flag of words, told by some that fit.
func addWords(f *pflag.FlagSet, to *[]string, name, such, usage string) {
	f.StringSliceVar(to, name, nil, usage)
	flag := f.Lookup(name)
	list, _ := flag.Value.(pflag.SliceValue)
	flag.Value = words{flag.Value, list}
	flag.DefValue = "" // none is no word, not []
	describe(f, name, "words", "words with commas between them, such as "+such)
}
