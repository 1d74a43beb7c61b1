package example

import (
	"path/filepath"
	"slices"
	"testing"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

func read(t *testing.T, name string) (*study.Study, *agreement.Analysis) {
	t.Helper()
	files, err := FS(name)
	if err != nil {
		t.Fatal(err)
	}
	s, err := study.Read(study.Source{Path: StudyFile, FS: files}, study.Settings{})
	if err != nil {
		t.Fatalf("%s cannot be read:\n%v", name, err)
	}
	opt := agreement.DefaultOptions()
	opt.Resamples = 0
	opt.Ordered = len(s.Settings.Order) > 0
	a, err := agreement.Analyse(s.Ratings, opt)
	if err != nil {
		t.Fatal(err)
	}
	return s, a
}

func appraiser(t *testing.T, s *study.Study, name string) int {
	t.Helper()
	i := slices.Index(s.Appraisers, name)
	if i < 0 {
		t.Fatalf("no appraiser %q among %q", name, s.Appraisers)
	}
	return i
}

func TestEveryExampleIsReadWithoutNotes(t *testing.T) {
	for _, e := range Names() {
		s, _ := read(t, e.Name)
		for _, n := range s.Notes {
			t.Errorf("%s: %s: %s", e.Name, n.Code, n.Text)
		}
		if s.Settings.Title != e.Title || len(s.Inputs) != 2 {
			t.Errorf("%s: title %q, inputs %v", e.Name, s.Settings.Title, s.Inputs)
		}
	}
}

// A written example reads as the built-in one.
func TestWrittenExampleIsRead(t *testing.T) {
	for _, e := range Names() {
		paths, err := WriteTo(t.TempDir(), e.Name)
		if err != nil {
			t.Fatal(err)
		}
		dir := filepath.Dir(paths[0])
		s, err := study.Read(study.Source{Path: filepath.Join(dir, StudyFile)}, study.Settings{})
		if err != nil {
			t.Fatal(err)
		}
		in, _ := read(t, e.Name)
		for k := range s.Inputs {
			if s.Inputs[k].SHA256 != in.Inputs[k].SHA256 {
				t.Errorf("%s: %s differs", e.Name, s.Inputs[k].File)
			}
		}
	}
}

// TestBore and its like below hold each example to what it is there to show;
// the model that it was drawn from says what that is.
func TestBore(t *testing.T) {
	s, a := read(t, "bore")
	if s.Reference != study.Derived || !s.PassFail {
		t.Errorf("reference %v, pass/fail %v", s.Reference, s.PassFail)
	}
	lower, upper := *s.Settings.Lower, *s.Settings.Upper
	bad := 0
	byShift := make([][]signal.Part, len(s.Appraisers))
	for shift, name := range s.Appraisers {
		low, high := 0, 0
		for p, x := range s.Values {
			part := signal.Part{Name: s.Parts[p], Value: x}
			for _, c := range s.Ratings.Calls(p, shift) {
				part.Calls++
				if s.Ratings.Accepts(c) {
					part.Accepted++
				}
			}
			byShift[shift] = append(byShift[shift], part)
			switch {
			case x < lower:
				low += part.Accepted
			case x > upper:
				high += part.Accepted
			}
			if shift == 0 && (x < lower || x > upper) {
				bad++
			}
		}
		if low <= 2*high {
			t.Errorf("%s: %d misses below the lower limit, %d above the upper", name, low, high)
		}
	}
	if n := len(s.Parts); n < 50 || n > 60 || bad < n/4 || bad > n*2/5 {
		t.Errorf("%d of %d parts are bad", bad, n)
	}
	early, late, night := appraiser(t, s, "early"), appraiser(t, s, "late"), appraiser(t, s, "night")
	for _, steady := range []int{early, late} {
		if n, m := len(a.Within[steady].Mixed), len(a.Within[night].Mixed); m < 2*n {
			t.Errorf("%s has %d mixed parts, night %d", s.Appraisers[steady], n, m)
		}
	}

	f, err := signal.FitAppraisers(byShift, signal.Between(lower, upper), signal.Options{})
	if err != nil {
		t.Fatal(err)
	}
	const worn = -0.003 // mm, as drawn
	offset := f.Pooled.Lower.Offset
	if offset.Lower > worn || offset.Upper < worn || offset.Upper > worn/2 {
		t.Errorf("offset at the lower limit: %+v", offset)
	}
	if o := f.Pooled.Upper.Offset; o.Lower > 0 || o.Upper < 0 {
		t.Errorf("offset at the upper limit: %+v", o)
	}
	for shift, c := range f.Each {
		if c == nil || c.Lower.Status != signal.Fitted || c.Upper.Status != signal.Fitted || len(c.Outliers) > 0 {
			t.Errorf("%s has no plain fit: %v", s.Appraisers[shift], f.Errors[shift])
		}
	}
	if f.SameCut.P < 0.05 || f.SameSigma.P > 0.001 {
		t.Errorf("same cut p = %v, same σ p = %v", f.SameCut.P, f.SameSigma.P)
	}
}

func TestSurface(t *testing.T) {
	s, a := read(t, "surface")
	if _, missing := s.Ratings.Count(); missing != 4 {
		t.Errorf("%d calls are missing", missing)
	}
	if s.Reference != study.Given || s.PassFail || len(s.Categories) != 5 {
		t.Errorf("reference %v, categories %q", s.Reference, s.Categories)
	}
	pinhole, inclusion := slices.Index(s.Categories, "pinhole"), slices.Index(s.Categories, "inclusion")
	confuser := appraiser(t, s, "booth 2")
	for i, against := range a.Against {
		swapped := against.Table[pinhole][inclusion] + against.Table[inclusion][pinhole]
		if right := against.Table[inclusion][inclusion]; (swapped > right) != (i == confuser) {
			t.Errorf("%s: %d swapped, %d inclusions called right", s.Appraisers[i], swapped, right)
		}
		if against.Miss.Value > 0.1 || against.FalseAlarm.Value > 0.1 {
			t.Errorf("%s: miss %v, false alarm %v: the confusion should be what stands out", s.Appraisers[i], against.Miss.Value, against.FalseAlarm.Value)
		}
	}
}

func TestShade(t *testing.T) {
	s, a := read(t, "shade")
	if s.Reference != study.Given || !slices.Equal(s.Categories, s.Settings.Order) || len(s.Categories) != 4 {
		t.Errorf("reference %v, categories %q", s.Reference, s.Categories)
	}
	strict := appraiser(t, s, "dispatch")
	for i, against := range a.Against {
		milder, stricter := 0, 0
		for call, row := range against.Table { // best grade first
			for ref, n := range row {
				if call < ref {
					milder += n
				} else if call > ref {
					stricter += n
				}
			}
		}
		if (stricter > 10*max(milder, 1)) != (i == strict) {
			t.Errorf("%s: %d calls stricter than the reference, %d milder", s.Appraisers[i], stricter, milder)
		}
		if share := a.Within[i].Share.Value; share < 0.85 {
			t.Errorf("%s is not steady: %v", s.Appraisers[i], share)
		}
	}
}

func TestWeld(t *testing.T) {
	s, a := read(t, "weld")
	if s.Reference != study.None || a.Against != nil || !s.PassFail {
		t.Errorf("reference %v, pass/fail %v", s.Reference, s.PassFail)
	}
	camera := appraiser(t, s, "camera")
	if n := s.Ratings.Trials(camera); n != 3 {
		t.Errorf("camera has %d trials", n)
	}
	for _, p := range a.Between.Pairs {
		apart := p.A == camera || p.B == camera
		if (p.Kappa.Value < 0.75) != apart {
			t.Errorf("%s and %s: kappa %v", s.Appraisers[p.A], s.Appraisers[p.B], p.Kappa.Value)
		}
	}
}
