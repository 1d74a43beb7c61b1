package verdict

import "testing"

// The verdict on the whole is shown by the rule for one appraiser: a rejection
// if it is shown of one of them, or of the kappa between them, anything else if
// it is shown of all.
func TestVerdictShown(t *testing.T) {
	acceptShown, acceptOpen := rate(0.001, 0, 0.015), rate(0.01, 0, 0.03)
	rejectShown, rejectOpen := rate(0.20, 0.10, 0.30), rate(0.07, 0.04, 0.30)
	for _, c := range []struct {
		name    string
		each    []Criterion // one of each appraiser
		between *Criterion
		verdict Level
		shown   bool
	}{
		{"all shown", []Criterion{acceptShown, acceptShown}, nil, Accept, true},
		{"one open", []Criterion{acceptShown, acceptOpen}, nil, Accept, false},
		{"the appraisers shown, what is between them open", []Criterion{acceptShown, acceptShown}, &acceptOpen, Accept, false},
		{"one rejection shown", []Criterion{acceptOpen, rejectOpen, rejectShown}, nil, Reject, true},
		{"a rejection that is open", []Criterion{acceptShown, rejectOpen}, nil, Reject, false},
		{"a rejection shown between them", []Criterion{acceptShown, rejectOpen}, &rejectShown, Reject, true},
	} {
		v := &Verdict{Between: c.between}
		for _, x := range c.each {
			a := Appraiser{Criteria: []Criterion{x}, Verdict: worst([]Criterion{x})}
			v.Appraisers = append(v.Appraisers, a)
			v.Overall = max(v.Overall, a.Verdict)
		}
		if c.between != nil {
			v.Overall = max(v.Overall, c.between.Met)
		}
		if v.Overall != c.verdict || v.Shown() != c.shown {
			t.Errorf("%s: %v, shown: %v; want %v, %v", c.name, v.Overall, v.Shown(), c.verdict, c.shown)
		}
	}
	if v := (&Verdict{Overall: NotShown}); v.Shown() {
		t.Error("what is not known is shown")
	}
}
