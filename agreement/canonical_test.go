package agreement

import (
	"slices"
	"testing"
)

// Thirds that are added in another order may differ in their last digit; as
// what a part contributes they must not.
func TestSumsOfWeightsHaveNoOrder(t *testing.T) {
	differ := false
	for K := 3; K <= 12; K++ {
		for _, w := range []Weights{Linear, Quadratic} {
			m := twoMargins{K, w.matrix(K)}
			sorted := slices.Sorted(slices.Values(m.weights))
			var a, b float64
			for i := range sorted {
				a += m.weights[i]
				b += sorted[i]
			}
			differ = differ || a != b
			if m.whole(a) != m.whole(b) {
				t.Errorf("%d categories, weights %d: %v, %v", K, w, m.whole(a), m.whole(b))
			}
		}
	}
	if !differ {
		t.Error("no sum differs: nothing is tested")
	}
}
