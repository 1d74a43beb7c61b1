package verdict

import (
	"fmt"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
)

// Nearly every call is wrong when so many are, and this share of all. Our own
// choice, no source.
const (
	reversedCalls = 6
	reversedShare = 0.9
)

// uniform: the calls are all alike, or nearly all wrong. Neither says
// anything of a person, a gauge or a reference, so it ends the search.
func uniform(f *finder) []Cause {
	if f.patterns == nil || f.together.wrong == 0 {
		return nil
	}
	byCall := make([]int, len(f.Study.Categories))
	calls, wrong, missed, rejected := 0, 0, 0, 0
	for _, g := range f.Agreement.Against {
		for call := range g.Table {
			for ref, n := range g.Table[call] {
				byCall[call] += n
				calls += n
				if call == ref {
					continue
				}
				wrong += n
				switch accepted, good := f.accepts(call), f.accepts(ref); {
				case accepted && !good:
					missed += n
				case good && !accepted:
					rejected += n
				}
			}
		}
	}
	for call, n := range byCall {
		if n == calls && n > 1 {
			return []Cause{f.allAlike(call, calls)}
		}
	}
	if calls < reversedCalls || float64(wrong) < reversedShare*float64(calls) {
		return nil
	}
	way := ""
	if missed > 0 && rejected > 0 {
		way = ", bad parts accepted and good ones rejected"
	}
	return []Cause{{
		Code: codeReversed,
		Text: fmt.Sprintf("Nearly every call is wrong: %s of %s%s. That looks like words or a reference the wrong way round, not like bad calls.",
			format.Count(wrong), format.Counted(calls, "call"), way),
		Do: "Check first whether the words of the calls (accept, reject) or those of the reference column are swapped. Then read the study again.",
	}}
}

// allAlike tells of calls that are all of one category.
func (f *finder) allAlike(call, calls int) Cause {
	c := Cause{
		Code: codeAlike,
		Text: fmt.Sprintf("All %s are the same, %s. They tell nothing of whether one part can be told from another.", format.Counted(calls, "call"), f.Study.Categories[call]),
		Do:   "Ask first whether the calls were written down as made. If they were, have all show, on a part of each kind, how it is told.",
	}
	if !f.Study.Ratings.HasAccept() {
		return c
	}
	if f.accepts(call) {
		c.Text = fmt.Sprintf("Nobody rejected any part: all %s are the same, %s.", format.Counted(calls, "call"), f.Study.Categories[call])
		c.Do = "Ask first whether the calls were written down as made. If they were, have all show, on a bad part, how it is found."
	} else {
		c.Text = fmt.Sprintf("Nobody accepted any part: all %s are the same, %s.", format.Counted(calls, "call"), f.Study.Categories[call])
		c.Do = "Ask first whether the calls were written down as made. If they were, have all show, on a good part, what they reject it for."
	}
	return c
}

func (f *finder) accepts(category int) bool {
	return f.Study.Ratings.HasAccept() && f.Study.Ratings.Accepts(agreement.Category(category))
}
