package agreement

import (
	"fmt"
	"testing"
)

// One error more never shows what none cannot: neither the limits of the rates
// nor those of the kappas come nearer to perfection when a call goes wrong.
func TestAnErrorShowsNoMore(t *testing.T) {
	for _, size := range []struct{ parts, trials int }{{16, 25}, {16, 3}, {100, 3}, {50, 2}, {20, 10}} {
		t.Run(fmt.Sprintf("%d parts, %d trials", size.parts, size.trials), func(t *testing.T) {
			analyse := func(wrong int) *Analysis {
				r, err := New(2*size.parts, 2, []int{size.trials})
				if err != nil {
					t.Fatal(err)
				}
				if err := r.SetAccept([]bool{false, true}); err != nil {
					t.Fatal(err)
				}
				truths := make([]Category, 2*size.parts)
				for p := range truths {
					truth := Category(p % 2)
					truths[p] = truth
					for trial := range size.trials {
						call := truth
						if p == 0 && trial < wrong { // part 0 is bad: misses
							call = 1
						}
						r.Row(p)[trial] = call
					}
				}
				if err := r.SetReference(truths); err != nil {
					t.Fatal(err)
				}
				a, err := Analyse(r, DefaultOptions())
				if err != nil {
					t.Fatal(err)
				}
				return a
			}
			none, one := analyse(0).Against[0], analyse(1).Against[0]
			for name, pair := range map[string][2]float64{
				"miss, interval":   {one.Miss.Interval.Upper, none.Miss.Interval.Upper},
				"miss, one-sided":  {one.Miss.OneSided.Upper, none.Miss.OneSided.Upper},
				"kappa, interval":  {-one.Kappa.Interval.Lower, -none.Kappa.Interval.Lower},
				"kappa, one-sided": {-one.Kappa.OneSided.Lower, -none.Kappa.OneSided.Lower},
			} {
				if pair[0] < pair[1] {
					t.Errorf("%s: limit %v with one error, %v with none", name, pair[0], pair[1])
				}
			}
		})
	}
}
