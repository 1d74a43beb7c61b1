package signal

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// bruteArea is the definition: all pairs.
func bruteArea(parts []Graded) float64 {
	var s, n float64
	for _, b := range parts {
		for _, g := range parts {
			if !b.Bad || g.Bad {
				continue
			}
			for _, x := range b.Grades {
				for _, y := range g.Grades {
					n++
					if x > y {
						s++
					} else if x == y {
						s += 0.5
					}
				}
			}
		}
	}
	return s / n
}

func drawGraded(t *rapid.T) []Graded {
	parts := []Graded{{Bad: true, Grades: []float64{2}}, {Bad: false, Grades: []float64{1}}}
	for range rapid.IntRange(0, 20).Draw(t, "parts") {
		p := Graded{Bad: rapid.Bool().Draw(t, "bad")}
		for range rapid.IntRange(0, 4).Draw(t, "calls") {
			p.Grades = append(p.Grades, float64(rapid.IntRange(0, 4).Draw(t, "grade")))
		}
		parts = append(parts, p)
	}
	return parts
}

func TestAreaIsMannWhitney(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		parts := drawGraded(t)
		e, err := AreaUnderROC(parts, 0.95)
		if err != nil {
			t.Fatal(err)
		}
		if want := bruteArea(parts); math.Abs(e.Value-want) > 1e-12 {
			t.Fatalf("area %v, want %v", e.Value, want)
		}
		if !finite(e.Value, e.Lower, e.Upper, e.SE) {
			t.Fatalf("%+v", e)
		}
		if e.HasLower && e.HasUpper && (e.Lower > e.Value+1e-12 || e.Upper < e.Value-1e-12) {
			t.Fatalf("%+v", e)
		}
	})
}

// With one call a part, the variance is DeLong's: the sample variances of the
// two sets of structural components, each over its number (DeLong et al. 1988),
// computed here straight from the definition.
func TestAreaVarianceIsDeLong(t *testing.T) {
	bad, good := []float64{3, 5, 4, 2, 5, 4, 3}, []float64{1, 2, 3, 1, 4, 2}
	var parts []Graded
	for _, x := range bad {
		parts = append(parts, Graded{true, []float64{x}})
	}
	for _, x := range good {
		parts = append(parts, Graded{false, []float64{x}})
	}
	psi := func(x, y float64) float64 {
		switch {
		case x > y:
			return 1
		case x == y:
			return 0.5
		}
		return 0
	}
	variance := func(v []float64) float64 {
		var m, s float64
		for _, x := range v {
			m += x / float64(len(v))
		}
		for _, x := range v {
			s += (x - m) * (x - m)
		}
		return s / float64(len(v)-1)
	}
	var v10, v01 []float64
	for _, x := range bad {
		var s float64
		for _, y := range good {
			s += psi(x, y) / float64(len(good))
		}
		v10 = append(v10, s)
	}
	for _, y := range good {
		var s float64
		for _, x := range bad {
			s += psi(x, y) / float64(len(bad))
		}
		v01 = append(v01, s)
	}
	e, err := AreaUnderROC(parts, 0.95)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "se", e.SE, math.Sqrt(variance(v10)/float64(len(bad))+variance(v01)/float64(len(good))), 1e-12)
}

// Repeating each call changes neither area nor, with the part as cluster, its
// standard error.
func TestAreaRepeatedCallsAddNothing(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		parts := drawGraded(t)
		var twice []Graded
		for _, p := range parts {
			twice = append(twice, Graded{p.Bad, append(append([]float64{}, p.Grades...), p.Grades...)})
		}
		a, err := AreaUnderROC(parts, 0.9)
		if err != nil {
			t.Fatal(err)
		}
		b, err := AreaUnderROC(twice, 0.9)
		if err != nil {
			t.Fatal(err)
		}
		if math.Abs(a.Value-b.Value) > 1e-12 || math.Abs(a.SE-b.SE) > 1e-12 {
			t.Fatalf("%+v and %+v", a, b)
		}
	})
}

func TestAreaRefuses(t *testing.T) {
	for _, parts := range [][]Graded{nil, {{Bad: true, Grades: []float64{1}}}, {{true, []float64{math.NaN()}}, {false, []float64{1}}}} {
		if _, err := AreaUnderROC(parts, 0.95); err == nil {
			t.Errorf("%v: no error", parts)
		}
	}
}
