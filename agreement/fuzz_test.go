package agreement

import (
	"math"
	"testing"
)

// reader hands out the bytes of a fuzz input, then zeros.
type reader []byte

func (r *reader) next() byte {
	if len(*r) == 0 {
		return 0
	}
	b := (*r)[0]
	*r = (*r)[1:]
	return b
}

func (r *reader) flag() bool { return r.next()%2 == 1 }

func FuzzAnalyse(f *testing.F) {
	f.Add([]byte{})
	f.Add([]byte{12, 1, 3, 2, 2, 2, 0, 1, 1, 0, 1, 7, 0, 1, 0, 1, 1, 0, 0, 1, 2, 1})
	f.Add([]byte{2, 2, 2, 1, 3, 1, 1, 1, 1, 1, 200, 0, 1, 2, 3, 255, 0, 1, 2, 250, 3, 0, 1, 2, 1})
	f.Fuzz(func(t *testing.T, data []byte) {
		in := reader(data)
		parts, categories := int(in.next()%24), 1+int(in.next()%7)
		trials := make([]int, in.next()%6)
		for a := range trials {
			trials[a] = 1 + int(in.next()%4)
		}
		r, err := New(parts, categories, trials)
		if err != nil {
			t.Fatal(err)
		}
		opt := DefaultOptions()
		opt.Pairing = Pairing(in.next() % 2)
		opt.Ordered, opt.Independent = in.flag(), in.flag()
		opt.Resamples = []int{0, 1, 110}[in.next()%3]
		opt.Confidence = (float64(in.next()) + 1) / 257
		referenced, split := in.flag(), in.flag()
		valid := true
		call := func() Category {
			b := in.next()
			if int(b) < categories || b == 255 {
				return b
			}
			if b > 252 { // no category: SetReference or Analyse must say so
				valid = false
				return b
			}
			return b % Category(categories)
		}
		if split {
			accept := make([]bool, categories)
			for k := range accept {
				accept[k] = in.flag()
			}
			if err := r.SetAccept(accept); err != nil {
				t.Fatal(err)
			}
		}
		ref := make([]Category, parts)
		for part := range parts {
			if referenced {
				ref[part] = call()
			}
			for i := range r.Row(part) {
				r.Row(part)[i] = call()
			}
		}
		if referenced {
			if err := r.SetReference(ref); err != nil {
				if valid {
					t.Fatal(err)
				}
				return
			}
		}
		a, err := Analyse(r, opt)
		if (err == nil) != valid {
			t.Fatalf("valid %v: %v", valid, err)
		}
		if err == nil {
			sound(t, a)
		}
	})
}

func FuzzTable(f *testing.F) {
	f.Add([]byte{2, 2, 9, 1, 3, 8})
	f.Add([]byte{3, 3, 9, 1, 3, 8, 0, 0, 1, 200, 5})
	f.Add([]byte{4, 3, 255, 255, 255, 255, 255, 255, 255})
	f.Fuzz(func(t *testing.T, data []byte) {
		in := reader(data)
		table := make(Table, in.next()%7)
		width := len(table)
		if in.next() == 255 {
			width++ // not square
		}
		for j := range table {
			table[j] = make([]int, width)
			for k := range table[j] {
				switch b := in.next(); b {
				case 255:
					table[j][k] = math.MaxInt
				case 254:
					table[j][k] = -1
				case 253:
					table[j][k] = 1 << 40
				default:
					table[j][k] = int(b)
				}
			}
		}
		in01 := func(what string, low, x float64, err error) {
			t.Helper()
			if err != nil {
				if x != 0 || err.Error() == "" {
					t.Fatalf("%s: %v and an error, %q", what, x, err)
				}
			} else if !(x >= low-rounding && x <= 1+rounding) {
				t.Fatalf("%v: %s is %v", table, what, x)
			}
		}
		for _, w := range []Weights{Nominal, Linear, Quadratic} {
			kappa, err := table.Kappa(w)
			in01("kappa", -1, kappa, err)
			if err == nil {
				other, err := transposed(table).Kappa(w)
				near(t, "kappa of the sides exchanged", other, kappa, 1e-9)
				if err != nil {
					t.Fatal(err)
				}
			}
			se, none, err := table.Kappa1969(w)
			if err == nil && !(se >= 0 && none >= 0 && !math.IsInf(se, 0) && !math.IsInf(none, 0)) {
				t.Fatalf("%v: standard errors %v, %v", table, se, none)
			}
		}
		for what, test := range map[string]func() (Test, error){
			"McNemar": table.McNemar, "Bowker": table.Bowker, "Stuart-Maxwell": table.StuartMaxwell,
		} {
			r, err := test()
			in01(what, 0, r.P, err)
			if !(r.Statistic >= 0 && !math.IsInf(r.Statistic, 0)) || r.DF < 0 {
				t.Fatalf("%v: %s %+v", table, what, r)
			}
		}
		counts := Counts(table)
		for what, coefficient := range map[string]func() (float64, error){
			"Fleiss": counts.FleissKappa, "AC1": counts.AC1, "alpha": counts.Alpha,
		} {
			if x, err := coefficient(); err == nil && !(x <= 1+rounding && !math.IsInf(x, 0)) {
				t.Fatalf("%v: %s %v", counts, what, x)
			}
		}
		for k := range width {
			if x, err := counts.CategoryKappa(k); err == nil && !(x <= 1+rounding && !math.IsInf(x, 0)) {
				t.Fatalf("%v: kappa of category %d is %v", counts, k, x)
			}
		}
		if se, of, err := counts.Fleiss1979(); err == nil && !(se >= 0 && of >= 0 && !math.IsInf(se, 0)) {
			t.Fatalf("%v: standard errors %v, %v", counts, se, of)
		}
	})
}
