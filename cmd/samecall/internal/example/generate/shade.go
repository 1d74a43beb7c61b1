package main

// shade draws 54 drawer fronts graded by three people, three trials each. A
// front has a distance from the master panel, 0 to 4, a grade for each whole
// step. Sorting and assembly grade it with some noise; dispatch is as steady,
// but stricter by three tenths of a grade.
func shade() []byte {
	grades := []string{"same", "near", "off", "far"}
	people := []struct {
		name        string
		bias, sigma float64 // grades
	}{{"sorting", 0, 0.06}, {"assembly", -0.03, 0.10}, {"dispatch", 0.3, 0.07}}
	grade := func(distance float64) string {
		return grades[min(max(int(distance), 0), len(grades)-1)]
	}

	r := newDraw(3)
	var distances []float64
	for step, n := range []int{16, 16, 13, 9} {
		distances = append(distances, spread(r, n, float64(step), float64(step+1))...)
	}
	shuffle(r, distances)
	l := long{sep: ",", head: "# Invented data: drawer fronts, one line a call.\n", prefix: "D", trials: 3}
	for _, d := range distances {
		l.reference = append(l.reference, grade(d))
	}
	for _, p := range people {
		l.appraisers = append(l.appraisers, p.name)
	}
	return l.write(r, func(part, person int) string {
		p := people[person]
		return grade(distances[part] + p.bias + p.sigma*r.NormFloat64())
	})
}
