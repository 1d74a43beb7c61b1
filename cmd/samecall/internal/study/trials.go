package study

import (
	"fmt"
	"strconv"
	"strings"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
)

// TrialNumbers writes trial numbers, a run of them as its ends.
func TrialNumbers(numbers []int) string {
	if n := len(numbers); n > 2 && numbers[n-1]-numbers[0] == n-1 {
		return fmt.Sprintf("%d–%d", numbers[0], numbers[n-1])
	}
	var out []string
	for _, n := range numbers {
		out = append(out, strconv.Itoa(n))
	}
	return strings.Join(out, ", ")
}

// UnmatchedTrials notes that pairs of calls by two appraisers are lost, since
// appraisers number their trials differently: pairs that trials in the same
// place would make, and trials of the same number do not.
func (s *Study) UnmatchedTrials() (Note, bool) {
	if !s.numberedApart() {
		return Note{}, false
	}
	byNumber, byPlace := 0, 0
	for b := range s.Appraisers {
		for a := range b {
			inPlace := make([][2]int, s.fewerTrials(a, b))
			for t := range inPlace {
				inPlace[t] = [2]int{t, t}
			}
			byPlace += s.pairsOfCalls(a, b, inPlace)
			byNumber += s.pairsOfCalls(a, b, s.Ratings.TrialPairs(a, b, agreement.Matched))
		}
	}
	if byNumber >= byPlace { // for all the calls that are missing
		return Note{}, false
	}
	return Note{"unmatched_trials", fmt.Sprintf(
		"Appraisers number their trials differently: %s. The trials of two are matched by number, and so %s of %s pairs of calls are lost to the kappas of each two. "+
			"Number the trials of every appraiser alike, or compare each trial with each: judge --pairing all.",
		strings.Join(s.trialGroups(), "; "), format.Count(byPlace-byNumber), format.Count(byPlace))}, true
}

// numberedApart reports whether two appraisers have fewer trials of the same
// number than the one with fewer trials made.
func (s *Study) numberedApart() bool {
	for b := range s.Appraisers {
		for a := range b {
			if len(s.Ratings.TrialPairs(a, b, agreement.Matched)) < s.fewerTrials(a, b) {
				return true
			}
		}
	}
	return false
}

func (s *Study) fewerTrials(a, b int) int {
	return min(s.Ratings.Trials(a), s.Ratings.Trials(b))
}

// pairsOfCalls counts the pairs that two appraisers made in trials that are
// put side by side.
func (s *Study) pairsOfCalls(a, b int, trials [][2]int) int {
	n := 0
	for p := range s.Parts {
		x, y := s.Ratings.Calls(p, a), s.Ratings.Calls(p, b)
		for _, t := range trials {
			n += btoi(x[t[0]] != agreement.Missing && y[t[1]] != agreement.Missing)
		}
	}
	return n
}

// trialGroups names appraisers with their trial numbers, those with the same
// ones together; of many, the first few.
func (s *Study) trialGroups() []string {
	names := make(map[string][]string)
	var order []string
	for a, name := range s.Appraisers {
		numbers := TrialNumbers(s.TrialNames[a])
		if names[numbers] == nil {
			order = append(order, numbers)
		}
		names[numbers] = append(names[numbers], shown(name))
	}
	var out []string
	for _, numbers := range order {
		out = append(out, listOf(firstFew(names[numbers]), "and")+" "+numbers)
	}
	return firstFew(out)
}
