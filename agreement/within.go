package agreement

import "errors"

// Within is the agreement of one appraiser with itself.
type Within struct {
	Share Share    // parts whose calls are all alike, of parts with two calls or more
	Kappa Estimate // Fleiss' kappa over the appraiser's trials, generalised for missing calls
	Mixed []int    // the parts whose calls differ, in order
}

var (
	errOneTrial    = errors.New("no part has two calls by the appraiser: repeat the trial to see whether the calls repeat")
	errWithinAlike = errors.New("the appraiser called every part alike: kappa has nothing to measure")
)

func (s *study) within(appraiser int) Within {
	counts := s.counts(func(row []Category) []Category { return s.of(row, appraiser) })
	alike, parts := s.alike(counts)
	w := Within{
		Share: shareOfParts(alike, parts, s.opt.Confidence, errOneTrial),
		Mixed: s.mixed(counts),
	}
	m, z := fleiss(counts, s.times)
	w.Kappa = s.estimate(m, z, errOneTrial, errWithinAlike)
	return w
}

// alike returns the number of parts with two calls or more, and of those
// whose calls are all alike.
func (s *study) alike(counts [][]int) (alike, parts int) {
	for i, row := range counts {
		if calls, _ := total(row); calls < 2 {
			continue
		}
		parts += s.times[i]
		if oneCategory(row) {
			alike += s.times[i]
		}
	}
	return alike, parts
}

// oneCategory reports whether no two calls of a row of counts differ.
func oneCategory(counts []int) bool {
	_, disagree := total(counts)
	return disagree == 0
}
