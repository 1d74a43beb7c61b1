package verdict

import (
	"fmt"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"samecall/cmd/samecall/internal/judge"
)

// table is a small pass/fail study: calls[part][appraiser][trial].
type table struct {
	reference []int
	calls     [][][]int // −1: missing
	values    []float64 // nil: none
}

func drawTable(t *rapid.T) table {
	var b table
	people := rapid.IntRange(1, 3).Draw(t, "appraisers")
	trials := rapid.IntRange(1, 3).Draw(t, "trials")
	errors := rapid.IntRange(1, 6).Draw(t, "one call in so many is wrong")
	valued := rapid.Bool().Draw(t, "values")
	for part := range rapid.IntRange(4, 16).Draw(t, "parts") {
		ref := rapid.IntRange(0, 1).Draw(t, "reference")
		b.reference = append(b.reference, ref)
		if valued { // 0 … 8 inside, 11 … 19 outside, no two alike
			b.values = append(b.values, float64(part)/2+11*float64(1-ref))
		}
		row := make([][]int, people)
		for a := range row {
			for trial := range trials {
				call := ref
				switch k := rapid.IntRange(0, 4*errors).Draw(t, "call"); {
				case k < 4:
					call = 1 - ref
				case k == 4 && trial > 0:
					call = -1
				}
				row[a] = append(row[a], call)
			}
		}
		b.calls = append(b.calls, row)
	}
	return b
}

// decide names parts and appraisers by the permutations given.
func (b table) decide(t testing.TB, parts, people []int) (*judge.Result, *Verdict) {
	var csv strings.Builder
	csv.WriteString("part,appraiser,trial,call,reference")
	toml := ""
	if b.values != nil {
		csv.WriteString(",value")
		toml = "upper = 10\n"
	}
	csv.WriteByte('\n')
	for part, row := range b.calls {
		for a, trials := range row {
			for trial, call := range trials {
				if call < 0 {
					continue
				}
				fmt.Fprintf(&csv, "%d,person %d,%d,%d,%d", parts[part], people[a], trial+1, call, b.reference[part])
				if b.values != nil {
					fmt.Fprintf(&csv, ",%g", b.values[part])
				}
				csv.WriteByte('\n')
			}
		}
	}
	return decide(t, calls(csv.String(), toml+"accept = [\"1\"]\nreject = [\"0\"]\n"))
}

func upTo(n int) []int {
	out := make([]int, n)
	for i := range out {
		out[i] = i
	}
	return out
}

// The verdict is the same whatever the order of the parts and the appraisers.
func TestOrderDoesNotMatter(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		b := drawTable(rt)
		parts, people := upTo(len(b.calls)), upTo(len(b.calls[0]))
		_, one := b.decide(t, parts, people)
		mixedParts, mixedPeople := rapid.Permutation(parts).Draw(rt, "order of parts"), rapid.Permutation(people).Draw(rt, "order of appraisers")
		_, two := b.decide(t, mixedParts, mixedPeople)
		if one.Overall != two.Overall {
			rt.Fatalf("overall %v and %v", one.Overall, two.Overall)
		}
		var codesOne, codesTwo []string
		for _, c := range one.Causes {
			who := slices.Clone(c.Appraisers)
			for i, a := range who {
				who[i] = mixedPeople[a]
			}
			slices.Sort(who)
			codesOne = append(codesOne, fmt.Sprint(c.Code, who))
		}
		for _, c := range two.Causes {
			codesTwo = append(codesTwo, fmt.Sprint(c.Code, c.Appraisers))
		}
		slices.Sort(codesOne)
		slices.Sort(codesTwo)
		if !slices.Equal(codesOne, codesTwo) {
			rt.Fatalf("causes %v and %v", codesOne, codesTwo)
		}
		for a, x := range one.Appraisers {
			y := two.Appraisers[mixedPeople[a]]
			for k, c := range x.Criteria {
				d := y.Criteria[k]
				if c.Met != d.Met || c.Evidence != d.Evidence || c.Parts != d.Parts || max(c.More-d.More, d.More-c.More) > 1 {
					rt.Fatalf("%s of %s: %+v and %+v", c.Name, x.Name, c, d)
				}
			}
		}
	})
}

// Worse data never gives a better verdict on an appraiser: one right call on
// a bad part turned into a miss leaves no figure at a better level. (What the
// data show may move either way: misses on more parts say more than the same
// number on one. And two appraisers may come to agree by one more error.)
func TestAMissNeverHelps(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		b := drawTable(rt)
		var rights [][3]int
		for part, row := range b.calls {
			for a, trials := range row {
				for trial, call := range trials {
					if b.reference[part] == 0 && call == 0 {
						rights = append(rights, [3]int{part, a, trial})
					}
				}
			}
		}
		if len(rights) == 0 {
			rt.Skip("no call on a bad part is right")
		}
		parts, people := upTo(len(b.calls)), upTo(len(b.calls[0]))
		_, before := b.decide(t, parts, people)
		at := rapid.SampledFrom(rights).Draw(rt, "call")
		b.calls[at[0]][at[1]][at[2]] = 1
		_, after := b.decide(t, parts, people)
		was, is := before.Appraisers[at[1]], after.Appraisers[at[1]]
		if is.Verdict < was.Verdict {
			rt.Fatalf("verdict on %s: %v, and with one more miss %v", was.Name, was.Verdict, is.Verdict)
		}
		for k, c := range was.Criteria {
			d := is.Criteria[k]
			if c.Met != NotShown && d.Met < c.Met {
				rt.Fatalf("%s: %v, and with one more miss %v", c.Name, c.Met, d.Met)
			}
			if c.Name == Miss && d.Estimate.Value <= c.Estimate.Value {
				rt.Fatalf("miss rate %v, and with one more %v", c.Estimate.Value, d.Estimate.Value)
			}
		}
	})
}

// Whatever the study, the verdict is told in whole sentences and without
// numbers that are none.
func TestAnyStudyIsTold(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		b := drawTable(rt)
		_, v := b.decide(t, upTo(len(b.calls)), upTo(len(b.calls[0])))
		if faults := v.faults(); len(faults) > 0 {
			rt.Fatal(strings.Join(faults, "\n"))
		}
		for _, a := range v.Appraisers {
			for _, c := range a.Criteria {
				if c.Best != c.Best || c.More < 0 || c.Evidence != Open && c.More != 0 {
					rt.Fatalf("%s: %+v", a.Name, c)
				}
			}
		}
	})
}
