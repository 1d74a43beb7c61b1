package study

import "testing"

func TestManual(t *testing.T) {
	lo, hi := 0.45, 0.545
	s, err := Read(Source{Path: "../../../../testdata/reference/msa-manual-50x3x3.csv"}, Settings{Lower: &lo, Upper: &hi})
	if err != nil {
		t.Fatal(err)
	}
	t.Log(s.Parts, s.Appraisers, s.TrialNames, s.Categories, s.Reference, s.Notes, s.Inputs, s.Values[:3], s.Ratings.Row(3))
}
