package verdict

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"
	"testing/fstest"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/judge"
	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

// The studies of these tests are drawn from a model and have the fault that
// the model has, and no other. All of it is invented.

// limits of every drawn study with values.
const lower, upper = 10.0, 11.0

// person is how one appraiser calls: it sees the value with a normal error of
// standard deviation sigma, and accepts between cuts beside the limits.
type person struct {
	sigma                float64
	lowerShift, upShift  float64
	slips                map[int]bool // parts called wrong on every trial
	lapse                float64      // share of calls made at random
	mistakes             func(r *rand.Rand, ref int) int
	neverSeesTheUpperEnd bool
}

var good = person{sigma: 0.02}

// drawn is a model of a study.
type drawn struct {
	people      []person
	parts       int
	trials      int
	from, to    float64 // values of the parts
	clear       float64 // no value is closer to a limit
	values      bool
	noReference bool
	standard    float64 // by which the reference's limits lie beside those that all call by, without values
	settings    string  // further lines of the study file
	categories  []string
	names       []string
}

func three(p ...person) []person {
	out := []person{good, good, good}
	copy(out, p)
	return out
}

var names = []string{"Ash", "Birch", "Cedar", "Dogwood", "Elm", "Fir", "Gorse", "Hazel", "Ivy", "Juniper", "Larch", "Maple"}

// files draws a study.
func (d drawn) files(seed uint64) fstest.MapFS {
	r := rand.New(rand.NewPCG(seed, 7))
	if d.parts == 0 {
		d.parts = 60
	}
	if d.trials == 0 {
		d.trials = 3
	}
	if d.to == 0 {
		d.from, d.to = lower-0.4, upper+0.4
	}
	if d.names == nil {
		d.names = names
	}
	var b strings.Builder
	b.WriteString("part,appraiser,trial,call")
	if !d.noReference {
		b.WriteString(",reference")
	}
	if d.values {
		b.WriteString(",value")
	}
	b.WriteByte('\n')
	step := (d.to - d.from) / float64(d.parts)
	for part := range d.parts {
		x := d.from + (float64(part)+r.Float64())*step // one at random in each step
		for _, limit := range []float64{lower, upper} {
			if math.Abs(x-limit) < d.clear {
				x = limit + math.Copysign(d.clear, x-limit)
			}
		}
		x = math.Round(x*1e4) / 1e4
		ref := 0
		if x >= lower+d.standard && x <= upper+d.standard {
			ref = 1
		}
		if d.categories != nil {
			ref = part % len(d.categories)
		}
		for a, p := range d.people {
			for trial := range d.trials {
				call := 0
				switch seen := x + p.sigma*r.NormFloat64(); {
				case d.categories != nil:
					call = p.mistakes(r, ref)
				case p.slips[part]:
					call = 1 - ref
				case r.Float64() < p.lapse:
					call = r.IntN(2)
				case seen >= lower+p.lowerShift && (seen <= upper+p.upShift || p.neverSeesTheUpperEnd):
					call = 1
				}
				fmt.Fprintf(&b, "P%02d,%s,%d,%s", part+1, d.names[a], trial+1, d.word(call))
				if !d.noReference {
					fmt.Fprintf(&b, ",%s", d.word(ref))
				}
				if d.values {
					fmt.Fprintf(&b, ",%.4f", x)
				}
				b.WriteByte('\n')
			}
		}
	}
	toml := "calls = \"calls.csv\"\n"
	if d.values {
		toml += fmt.Sprintf("unit = \"mm\"\nlower = %v\nupper = %v\n", lower, upper)
	}
	return fstest.MapFS{"study.toml": {Data: []byte(toml + d.settings)}, "calls.csv": {Data: []byte(b.String())}}
}

func (d drawn) word(category int) string {
	if d.categories != nil {
		return d.categories[category]
	}
	return []string{"reject", "accept"}[category]
}

// decide puts a study through the program and returns its verdict.
func decide(t testing.TB, files fstest.MapFS) (*judge.Result, *Verdict) {
	t.Helper()
	s, err := study.Read(study.Source{Path: "study.toml", FS: files}, study.Settings{})
	if err != nil {
		t.Fatal(err)
	}
	return decideStudy(t, s)
}

func decideStudy(t testing.TB, s *study.Study) (*judge.Result, *Verdict) {
	t.Helper()
	opt := agreement.DefaultOptions()
	opt.Resamples = 0 // the linearised intervals do, and are faster
	if opt.Confidence = s.Settings.Confidence; opt.Confidence == 0 {
		opt.Confidence = study.DefaultConfidence
	}
	r, err := judge.Run(s, opt, signal.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return r, Decide(r)
}
