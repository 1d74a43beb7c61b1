package study

import (
	"io"
	"io/fs"

	"samecall/agreement"
)

// Source says where a study is to be read from.
type Source struct {
	Path  string    // calls file, .toml study file, or "-" for standard input; may be empty if Study is set
	Study string    // study file beside Path; may be empty
	Stdin io.Reader // read where a path is "-"
	FS    fs.FS     // nil: the files of the machine; else paths are names in it

	chunk int // bytes of text parsed at a time; 0: chunkSize
}

// Study is what was read, checked and in canonical order: parts and
// appraisers in natural order, trials in the order of their numbers.
type Study struct {
	Settings Settings // of the study file and of the flags, merged

	Ratings    *agreement.Ratings
	Parts      []string // names, by their index in Ratings
	Appraisers []string
	Categories []string
	TrialNames [][]int // of each appraiser, the trial numbers of its columns, ascending

	Values   []float64 // reference value of each part; nil: the study has no values
	HasValue []bool    // which parts have one; nil with Values

	Reference ReferenceKind
	// DerivedParts counts the parts of a given reference of which the table
	// leaves it blank: theirs follows from value and limits.
	DerivedParts int

	PassFail bool // two categories, the first of a bad part, the second of a good one

	Inputs []Input
	Notes  []Note
}

// ReferenceKind tells where the reference comes from.
type ReferenceKind int

// A reference is given by the calls file, of some parts at least, derived from
// values and limits alone, or the study has none.
const (
	None ReferenceKind = iota
	Derived
	Given
)

// String returns given, derived or none.
func (k ReferenceKind) String() string {
	switch k {
	case Given:
		return "given"
	case Derived:
		return "derived"
	default:
		return "none"
	}
}

// Input is a file that was read: its name as the user gave it, and the
// SHA-256 of its bytes in hexadecimal.
type Input struct {
	File   string
	SHA256 string
	Sheet  string // of a workbook: the one that was read; else empty
}

// Note is something to say that is no error.
type Note struct {
	Code string // one or two words joined by an underscore, for programs
	Text string // a sentence
}
