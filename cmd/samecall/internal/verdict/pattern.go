package verdict

import (
	"samecall/agreement"
	"samecall/cmd/samecall/internal/judge"
)

// pattern is how the wrong calls of one appraiser, or of all, fall.
type pattern struct {
	wrong int // wrong calls
	// repeats is how many wrong calls one would find if, for each wrong call,
	// one more call on the same part were looked at: the sum over parts with
	// n ≥ 2 calls, w of them wrong, of w(w−1)/(n−1). repeatable is the sum of
	// w over the same parts.
	repeats, repeatable float64
	steady              []int // parts called twice or more and wrong every time
	steadyCalls         ways  // the calls on those
}

// ways counts wrong calls by the way they go.
type ways struct {
	misses, falseAlarms, others int // others: the wrong kind or grade, on the right side
}

func (w ways) total() int { return w.misses + w.falseAlarms + w.others }

func (w ways) String() string {
	switch w.total() {
	case w.misses:
		return "bad parts accepted"
	case w.falseAlarms:
		return "good parts rejected"
	case w.misses + w.falseAlarms:
		return "bad parts accepted and good ones rejected"
	}
	return "given the wrong category"
}

// repeat is the share of wrong calls that another call on the same part
// repeats.
func (p pattern) repeat() float64 {
	if p.repeatable == 0 {
		return 0
	}
	return p.repeats / p.repeatable
}

// patterns returns the pattern of each appraiser and that of all calls
// together, leaving out parts that have a cause of their own.
func patterns(r *judge.Result, without []farPart) (each []pattern, together pattern) {
	s := r.Study.Ratings
	if r.Agreement.All == nil {
		return nil, together
	}
	rows := r.Agreement.Patterns
	parts := make([]int, len(rows.List)) // how many have each row
	for i, p := range rows.List {
		parts[i] = p.Parts
	}
	leave := make(map[int]bool)
	for _, f := range without {
		if !leave[f.part] {
			leave[f.part] = true
			parts[rows.Of[f.part]]--
		}
	}
	each = make([]pattern, s.Appraisers())
	// By appraiser, and last all together: the rows that are wrong every time.
	steady := make([][]bool, len(each)+1)
	for a := range steady {
		steady[a] = make([]bool, len(rows.List))
	}
	for i, row := range rows.List {
		if row.Reference == agreement.Missing || parts[i] == 0 {
			continue
		}
		var all tally
		for a := range each {
			t := count(s, s.CallsIn(row.Row, a), row.Reference)
			steady[a][i] = each[a].add(t, parts[i])
			all.calls += t.calls
			all.wrong += t.wrong
			all.ways.add(t.ways)
		}
		steady[len(each)][i] = together.add(all, parts[i])
	}
	for part, i := range rows.Of {
		if leave[part] {
			continue
		}
		for a := range each {
			if steady[a][i] {
				each[a].steady = append(each[a].steady, part)
			}
		}
		if steady[len(each)][i] {
			together.steady = append(together.steady, part)
		}
	}
	return each, together
}

// tally counts the calls on one part, and the wrong ones.
type tally struct {
	calls, wrong int
	ways         ways
}

func count(s *agreement.Ratings, calls []agreement.Category, ref agreement.Category) (t tally) {
	for _, c := range calls {
		if c == agreement.Missing {
			continue
		}
		t.calls++
		if c == ref {
			continue
		}
		t.wrong++
		switch accepted, good := s.Accepts(c), s.Accepts(ref); {
		case accepted && !good:
			t.ways.misses++
		case good && !accepted:
			t.ways.falseAlarms++
		default:
			t.ways.others++
		}
	}
	return t
}

func (w *ways) add(o ways) {
	w.misses += o.misses
	w.falseAlarms += o.falseAlarms
	w.others += o.others
}

// times is w for so many parts.
func (w ways) times(parts int) ways {
	return ways{w.misses * parts, w.falseAlarms * parts, w.others * parts}
}

// add counts the calls on parts that are alike, and reports whether they are
// wrong every time.
func (p *pattern) add(t tally, parts int) (steady bool) {
	p.wrong += t.wrong * parts
	if t.calls < 2 || t.wrong == 0 {
		return false
	}
	p.repeats += float64(parts) * float64(t.wrong*(t.wrong-1)) / float64(t.calls-1)
	p.repeatable += float64(t.wrong * parts)
	if t.wrong < t.calls {
		return false
	}
	p.steadyCalls.add(t.ways.times(parts))
	return true
}
