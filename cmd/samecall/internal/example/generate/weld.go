package main

import (
	"bytes"
	"fmt"
)

// weld draws 45 seams judged by a camera in three trials and by two
// inspectors in two. A seam has a flaw of some size, in units of what the
// inspectors tolerate. The camera hardly ever contradicts itself and is
// stricter; the inspectors agree with each other but for noise.
func weld() []byte {
	judges := []struct {
		name       string
		trials     int
		cut, sigma float64
	}{{"camera", 3, 0.65, 0.03}, {"inspector A", 2, 1, 0.10}, {"inspector B", 2, 1.05, 0.17}}

	r := newDraw(4)
	flaws := shuffle(r, spread(r, 45, 0, 1.9))
	var b bytes.Buffer
	b.WriteString("# Invented data: weld seams, one line a part, a column for each judge and trial.\npart")
	for _, j := range judges {
		for trial := range j.trials {
			fmt.Fprintf(&b, ",%s-%d", j.name, trial+1)
		}
	}
	b.WriteByte('\n')
	for i, flaw := range flaws {
		fmt.Fprintf(&b, "S%02d", i+1)
		for _, j := range judges {
			for range j.trials {
				call := "ok"
				if flaw+j.sigma*r.NormFloat64() > j.cut {
					call = "nok"
				}
				b.WriteString("," + call)
			}
		}
		b.WriteByte('\n')
	}
	return b.Bytes()
}
