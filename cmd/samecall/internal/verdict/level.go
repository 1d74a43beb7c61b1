package verdict

import "fmt"

// Level is how far a criterion, an appraiser or an inspection is good enough.
type Level int

// The levels, from best to worst. NotShown: what the criterion asks for was
// not observed at all, so that nothing can be said.
const (
	Accept Level = iota
	Conditional
	NotShown
	Reject
)

func (l Level) String() string {
	return word("Level", int(l), "accept", "conditional", "not shown", "reject")
}

// Evidence is what the data say of the level that an estimate reaches.
type Evidence int

// Shown: at the stated confidence the truth reaches the level too.
// Contradicted: it does not reach even the conditional level. Open: the data
// leave both possible.
const (
	Open Evidence = iota
	Shown
	Contradicted
)

func (e Evidence) String() string {
	return word("Evidence", int(e), "open", "shown", "contradicted")
}

// word is one of several or, of a value that is none, its type and number.
func word(kind string, i int, words ...string) string {
	if i < 0 || i >= len(words) {
		return fmt.Sprintf("%s(%d)", kind, i)
	}
	return words[i]
}
