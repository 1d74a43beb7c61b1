package agreement

import (
	"errors"
	"fmt"
	"math"
)

// Category numbers what a call can be: 0 … categories−1, in the order the
// caller chose. It is a byte, so that ten million calls take ten megabytes.
type Category = uint8

// Missing stands where no call was made, and where a part has no reference.
const Missing Category = 255

// MaxCategories is the largest number of categories that Ratings can hold.
const MaxCategories = 254

// maxCells bounds the dense table. A study beyond it is not large but sparse:
// nearly every cell would be Missing.
const maxCells = math.MaxInt32

// Ratings holds the calls of one study densely: a row for each part and, in
// it, a column for each trial of each appraiser, appraiser by appraiser.
// Appraisers may have different numbers of trials and any call may be
// Missing. Parts, appraisers, trials and categories are numbered from 0; a
// number out of range panics, as an index does. New makes them; the zero value
// is no study.
type Ratings struct {
	parts      int
	categories int
	first      []int // first[a] is appraiser a's first column; the last entry is the number of columns
	calls      []Category
	reference  []Category // nil: the study has none
	accept     []bool     // nil: the categories are not split into accept and reject
	numbers    [][]int    // of each appraiser's trials; nil: counted from 0
}

// New returns Ratings in which every call is Missing, for so many parts and
// categories and, for each appraiser, the number of trials given. It returns
// an error if a number is out of range or the table would be larger than
// 2³¹−1 cells.
func New(parts, categories int, trials []int) (*Ratings, error) {
	if parts < 0 {
		return nil, fmt.Errorf("agreement: %d parts", parts)
	}
	if categories < 1 || categories > MaxCategories {
		return nil, fmt.Errorf("agreement: %d categories, want 1 to %d", categories, MaxCategories)
	}
	r := &Ratings{parts: parts, categories: categories, first: make([]int, len(trials)+1)}
	for a, n := range trials {
		if n < 1 {
			return nil, fmt.Errorf("agreement: appraiser %d has %d trials, want 1 or more", a, n)
		}
		if n > maxCells-r.first[a] {
			return nil, fmt.Errorf("agreement: the trials of appraisers 0 to %d are more than %d together", a, maxCells)
		}
		r.first[a+1] = r.first[a] + n
	}
	cells := float64(parts) * float64(r.columns())
	if cells > maxCells {
		return nil, fmt.Errorf("agreement: %d parts × %d trials of all appraisers make %.3g cells, more than %d", parts, r.columns(), cells, maxCells)
	}
	r.calls = make([]Category, int(cells))
	for i := range r.calls {
		r.calls[i] = Missing
	}
	return r, nil
}

// Parts returns the number of parts.
func (r *Ratings) Parts() int { return r.parts }

// Appraisers returns the number of appraisers.
func (r *Ratings) Appraisers() int { return max(0, len(r.first)-1) }

// Categories returns the number of categories, used or not.
func (r *Ratings) Categories() int { return r.categories }

// Trials returns the number of trials of one appraiser.
func (r *Ratings) Trials(appraiser int) int { return r.first[appraiser+1] - r.first[appraiser] }

func (r *Ratings) columns() int { return r.first[len(r.first)-1] }

// Row returns the calls on one part, shared with r: all trials of the first
// appraiser, then of the second, and so on. Writing to it sets calls.
func (r *Ratings) Row(part int) []Category {
	n := r.columns()
	return r.calls[part*n : (part+1)*n : (part+1)*n]
}

// Column returns where in a Row the call of one appraiser in one trial stands.
func (r *Ratings) Column(appraiser, trial int) int {
	if n := r.Trials(appraiser); uint(trial) >= uint(n) {
		panic(fmt.Sprintf("agreement: trial %d of appraiser %d, who has %d", trial, appraiser, n))
	}
	return r.first[appraiser] + trial
}

// Calls returns the calls of one appraiser on one part, a trial each, shared
// with r. Appending to them copies.
func (r *Ratings) Calls(part, appraiser int) []Category { return r.CallsIn(r.Row(part), appraiser) }

// CallsIn returns the calls of one appraiser in a Row, shared with it.
// Appending to them copies.
func (r *Ratings) CallsIn(row []Category, appraiser int) []Category {
	from, to := r.first[appraiser], r.first[appraiser+1]
	return row[from:to:to]
}

// SetReference gives each part the category that it truly belongs to, or
// Missing. The slice, one entry a part, is kept. It returns an error if there
// are more or fewer, or if an entry is no category.
func (r *Ratings) SetReference(reference []Category) error {
	if len(reference) != r.parts {
		return fmt.Errorf("agreement: %d references for %d parts", len(reference), r.parts)
	}
	if err := r.checkReference(reference); err != nil {
		return err
	}
	r.reference = reference
	return nil
}

// HasReference reports whether a reference was set.
func (r *Ratings) HasReference() bool { return r.reference != nil }

// Reference returns the category that a part truly belongs to, or Missing.
func (r *Ratings) Reference(part int) Category {
	if r.reference == nil {
		if uint(part) >= uint(r.parts) {
			panic(fmt.Sprintf("agreement: part %d of %d", part, r.parts))
		}
		return Missing
	}
	return r.reference[part]
}

// SetAccept splits the categories into those of a part that may be used
// (true) and of one that may not (false). Without it there are no bad parts
// and no good ones, hence no miss and no false alarm. The slice, one entry a
// category, is kept. It returns an error if there are more or fewer.
func (r *Ratings) SetAccept(accept []bool) error {
	if len(accept) != r.categories {
		return fmt.Errorf("agreement: accept has %d entries for %d categories", len(accept), r.categories)
	}
	r.accept = accept
	return nil
}

// SetTrialNumbers gives the trials of each appraiser their numbers, for
// studies in which appraisers took part in different trials: trials of the
// same number are then matched (Options.Pairing). Without it the first trial
// of each appraiser is matched, the second, and so on. It wants as many
// numbers for each appraiser as trials, no number twice; the slices are kept.
func (r *Ratings) SetTrialNumbers(numbers [][]int) error {
	if len(numbers) != r.Appraisers() {
		return fmt.Errorf("agreement: trial numbers of %d appraisers, want %d", len(numbers), r.Appraisers())
	}
	for a, own := range numbers {
		if len(own) != r.Trials(a) {
			return fmt.Errorf("agreement: appraiser %d has %d trials and %d trial numbers", a, r.Trials(a), len(own))
		}
		seen := make(map[int]bool, len(own))
		for _, n := range own {
			if seen[n] {
				return fmt.Errorf("agreement: appraiser %d has trial number %d twice", a, n)
			}
			seen[n] = true
		}
	}
	r.numbers = numbers
	return nil
}

// trialNumber returns the number of a trial.
func (r *Ratings) trialNumber(appraiser, trial int) int {
	if r.numbers == nil {
		return trial
	}
	return r.numbers[appraiser][trial]
}

// HasAccept reports whether the categories are split into accept and reject.
func (r *Ratings) HasAccept() bool { return r.accept != nil }

// Accepts reports whether a category is one of a part that may be used.
func (r *Ratings) Accepts(c Category) bool { return r.accept != nil && c != Missing && r.accept[c] }

// Count returns the number of calls made and of cells left Missing.
func (r *Ratings) Count() (made, missing int) {
	for _, c := range r.calls {
		if c == Missing {
			missing++
		}
	}
	return len(r.calls) - missing, missing
}

// unknown returns where the first entry stands that is no category, and -1 if
// there is none.
func (r *Ratings) unknown(calls []Category) int {
	for i, c := range calls {
		if int(c) >= r.categories && c != Missing {
			return i
		}
	}
	return -1
}

func (r *Ratings) checkReference(reference []Category) error {
	if part := r.unknown(reference); part >= 0 {
		return fmt.Errorf("agreement: the reference of part %d is %s", part, r.noCategory(reference[part]))
	}
	return nil
}

func (r *Ratings) noCategory(c Category) string {
	return fmt.Sprintf("%d, no category of the study: want 0 to %d, or Missing", c, r.categories-1)
}

var errNoRatings = errors.New("agreement: there are no ratings: make them with New")

// validate checks what Row and the slices that are kept let a caller break.
func (r *Ratings) validate() error {
	if r == nil || r.first == nil {
		return errNoRatings
	}
	if cell := r.unknown(r.calls); cell >= 0 {
		part, column := cell/r.columns(), cell%r.columns()
		appraiser := 0
		for column >= r.first[appraiser+1] {
			appraiser++
		}
		return fmt.Errorf("agreement: the call of appraiser %d in trial %d on part %d is %s",
			appraiser, column-r.first[appraiser], part, r.noCategory(r.calls[cell]))
	}
	return r.checkReference(r.reference)
}
