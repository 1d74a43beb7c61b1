package report

import (
	"samecall/cmd/samecall/internal/judge"
	"samecall/cmd/samecall/internal/verdict"
)

// Record is what is reported: the result of a study, the verdict on it, and
// how it came about.
type Record struct {
	*judge.Result
	Verdict *verdict.Verdict
	Version string // of the program
	Command string // line that computes the record again
	RunIn   string // where that line is run, in words; empty where it is all the same
	// FlagLevels holds the names of the criteria whose levels the command line
	// gave.
	FlagLevels map[string]bool
}
