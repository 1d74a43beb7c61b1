package main

import "slices"

// surface draws 60 coated covers called by four stations, two trials each. A
// defect is seen or not, which depends on how plain it is on that part, and
// once seen it is named. All stations see about alike and name about alike,
// save booth 2, which calls most inclusions pinholes and some pinholes
// inclusions. Now and then a good cover is called bad, for a blemish that is
// within what the standard allows. Four calls were not made.
func surface() []byte {
	kinds := []string{"run", "pinhole", "inclusion", "scratch"}
	stations := []struct {
		name     string
		eye      float64            // sees a defect if plain + eye + N(0, 0.5) > 0
		confused map[string]float64 // chance of naming the other of pinhole and inclusion
	}{
		{"booth 1", 0.1, map[string]float64{"pinhole": 0.03, "inclusion": 0.03}},
		{"booth 2", 0.1, map[string]float64{"pinhole": 0.25, "inclusion": 0.70}},
		{"packing", -0.2, map[string]float64{"pinhole": 0.05, "inclusion": 0.05}},
		{"audit", 0.3, map[string]float64{"pinhole": 0.02, "inclusion": 0.02}},
	}
	other := map[string]string{"pinhole": "inclusion", "inclusion": "pinhole"}

	r := newDraw(2)
	l := long{sep: ";", head: "# Invented data: coated covers, one line a call; an empty call was not made.\n", prefix: "C", trials: 2}
	for _, k := range []struct {
		kind string
		n    int
	}{{"good", 26}, {"run", 7}, {"pinhole", 10}, {"inclusion", 10}, {"scratch", 7}} {
		l.reference = append(l.reference, slices.Repeat([]string{k.kind}, k.n)...)
	}
	shuffle(r, l.reference)
	for _, s := range stations {
		l.appraisers = append(l.appraisers, s.name)
	}
	plain := make([]float64, len(l.reference))
	looks := make([]string, len(l.reference)) // what a blemish or defect is
	for p, ref := range l.reference {
		plain[p], looks[p] = 1.8+0.9*r.NormFloat64(), ref
		if ref == "good" {
			plain[p], looks[p] = -1.8+0.8*r.NormFloat64(), kinds[r.IntN(len(kinds))]
		}
	}
	missing := map[int]bool{77: true, 214: true, 215: true, 391: true}
	made := 0
	return l.write(r, func(part, station int) string {
		made++
		s, kind := stations[station], looks[part]
		seen := plain[part]+s.eye+0.5*r.NormFloat64() > 0
		confused := r.Float64() < s.confused[kind]
		switch {
		case missing[made]:
			return ""
		case !seen:
			return "good"
		case confused:
			return other[kind]
		}
		return kind
	})
}
