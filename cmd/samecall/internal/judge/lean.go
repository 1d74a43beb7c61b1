package judge

import "samecall/agreement"

// Lean is which of two appraisers rejects more, by the pairs of their calls
// that are put side by side.
type Lean struct {
	A, B  int             // the two appraisers, A before B
	Table agreement.Table // reject, accept: rows A, columns B
	// Test is the exact test of McNemar, which takes pairs of calls as
	// independent; nil where they never part.
	Test   *agreement.Test
	NoTest error // why
}

// Places in the Table of a Lean.
const (
	rejects = iota
	accepts
)

// leans returns the lean of each pair of an analysis; nil where no category is
// acceptable.
func leans(r *agreement.Ratings, a *agreement.Analysis) []Lean {
	if !r.HasAccept() {
		return nil
	}
	var out []Lean
	for _, p := range a.Between.Pairs {
		l := Lean{A: p.A, B: p.B, Table: agreement.Table{{0, 0}, {0, 0}}}
		for x, row := range p.Table {
			for y, n := range row {
				l.Table[side(r, agreement.Category(x))][side(r, agreement.Category(y))] += n
			}
		}
		switch t, err := l.Table.McNemar(); {
		case err == nil:
			l.Test = &t
		case p.Pairs == 0:
			l.NoTest = p.Kappa.Absent
		default:
			l.NoTest = err
		}
		out = append(out, l)
	}
	return out
}

func side(r *agreement.Ratings, c agreement.Category) int {
	if r.Accepts(c) {
		return accepts
	}
	return rejects
}

// Pairs is how many pairs of calls there are.
func (l Lean) Pairs() int { n, _ := l.Table.Total(); return n }

// Rejected is how many of the paired calls of each are rejects.
func (l Lean) Rejected() (byA, byB int) {
	return l.Table[rejects][rejects] + l.OnlyA(), l.Table[rejects][rejects] + l.OnlyB()
}

// OnlyA is how many pairs A rejects and B accepts.
func (l Lean) OnlyA() int { return l.Table[rejects][accepts] }

// OnlyB is how many pairs B rejects and A accepts.
func (l Lean) OnlyB() int { return l.Table[accepts][rejects] }

// Parted returns the parts on which A rejects and B accepts in some pair of
// calls, and those on which it is the other way round.
func (r *Result) Parted(l Lean) (onlyA, onlyB []int) {
	s := r.Study.Ratings
	trials := s.TrialPairs(l.A, l.B, r.Options.Pairing)
	where := func(byA, byB int) []int {
		return r.Agreement.Patterns.Where(func(p agreement.Pattern) bool {
			for _, t := range trials {
				x, y := p.Row[s.Column(l.A, t[0])], p.Row[s.Column(l.B, t[1])]
				if x != agreement.Missing && y != agreement.Missing && side(s, x) == byA && side(s, y) == byB {
					return true
				}
			}
			return false
		})
	}
	return where(rejects, accepts), where(accepts, rejects)
}
