package agreement

import (
	"math/rand/v2"
	"testing"
)

// Row three of the speed table: every kappa of the 50 × 3 × 3 study.
func BenchmarkTenThousandResamples(b *testing.B) {
	r := msaStudy(b)
	opt := DefaultOptions()
	opt.Resamples = 10000
	for b.Loop() {
		if _, err := Analyse(r, opt); err != nil {
			b.Fatal(err)
		}
	}
}

// The computing share of row two: a million parts, five appraisers, two trials.
func BenchmarkTenMillionCalls(b *testing.B) {
	r := simulated(b, 1_000_000, []int{2, 2, 2, 2, 2})
	b.SetBytes(10_000_000)
	for b.Loop() {
		if _, err := Analyse(r, DefaultOptions()); err != nil {
			b.Fatal(err)
		}
	}
}

// simulated returns a study in which one part in three is bad and one call
// in twenty wrong.
func simulated(t testing.TB, parts int, trials []int) *Ratings {
	t.Helper()
	r, err := New(parts, 2, trials)
	if err != nil {
		t.Fatal(err)
	}
	rng := rand.New(rand.NewPCG(3, 4))
	ref := make([]Category, parts)
	for part := range ref {
		if rng.IntN(3) > 0 {
			ref[part] = 1
		}
		row := r.Row(part)
		for i := range row {
			row[i] = ref[part]
			if rng.IntN(20) == 0 {
				row[i] = 1 - row[i]
			}
		}
	}
	if err := r.SetReference(ref); err != nil {
		t.Fatal(err)
	}
	if err := r.SetAccept([]bool{false, true}); err != nil {
		t.Fatal(err)
	}
	return r
}
