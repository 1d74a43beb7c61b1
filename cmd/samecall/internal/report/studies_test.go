package report_test

import (
	"encoding/csv"
	"fmt"
	"math/rand/v2"
	"slices"
	"strconv"
	"strings"
	"testing"
	"testing/fstest"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/figure"
	"samecall/cmd/samecall/internal/judge"
	"samecall/cmd/samecall/internal/report"
	"samecall/cmd/samecall/internal/study"
	"samecall/cmd/samecall/internal/verdict"
	"samecall/signal"
)

// plan is a study to be made up. The zero plan has 30 parts with values
// about two limits, called by three appraisers in three trials, some calls
// near the limits mixed.
type plan struct {
	name       string
	parts      int
	trials     int
	appraisers []string
	part       func(i int) string

	noValues, noReference bool
	noLower, noUpper      bool
	sharp                 bool                  // no call is ever mixed
	wrong                 func(int) bool        // of part i: every call is wrong
	lenient               bool                  // the second appraiser accepts parts just beyond the lower limit
	missing               float64               // share of calls
	ragged                bool                  // each appraiser has one trial less than the one before
	categories            []string              // of a study that is not pass/fail: grades if ordered, else kinds
	ordered               bool                  //
	random                float64               // share of calls that are drawn without looking
	change                func(*study.Settings) // the last word
	file                  string                // of the calls
}

const (
	lowerLimit, upperLimit = 12.000, 12.018
	softness               = 0.0012 // sd of the appraisers' doubt, in mm
)

// some returns so many names of appraisers, invented.
func some(n int) []string {
	if n > 12 {
		var out []string
		for i := range n {
			out = append(out, fmt.Sprintf("Inspector %d", i+1))
		}
		return out
	}
	all := []string{"Early 1", "Early 2", "Late 1", "Late 2", "Night 1", "Night 2", "Camera A", "Camera B", "Goods in", "Lab", "Weekend", "Temp"}
	return all[:n]
}

func (p plan) filled() plan {
	if p.parts == 0 {
		p.parts = 30
	}
	if p.trials == 0 {
		p.trials = 3
	}
	if p.appraisers == nil {
		p.appraisers = some(3)
	}
	if p.part == nil {
		p.part = func(i int) string { return strconv.Itoa(i + 1) }
	}
	if p.file == "" {
		p.file = "calls.csv"
	}
	return p
}

// csv makes the calls up, the same ones each time.
func (p plan) csv() string {
	random := rand.New(rand.NewPCG(7, uint64(p.parts)))
	var out strings.Builder
	w := csv.NewWriter(&out)
	head := []string{"part", "appraiser", "trial", "call"}
	if !p.noReference {
		head = append(head, "reference")
	}
	if !p.noValues {
		head = append(head, "value")
	}
	_ = w.Write(head)
	kinds := []string{"reject", "accept"}
	if p.categories != nil {
		kinds = p.categories
	}
	for i := range p.parts {
		// Over two tolerances, so that half of the parts are bad.
		value := lowerLimit - 0.009 + 0.036*(float64(i)+0.5)/float64(p.parts)
		good := (value >= lowerLimit || p.noLower) && (value <= upperLimit || p.noUpper)
		truth := i % len(kinds)
		if p.categories == nil {
			truth = 0
			if good {
				truth = 1
			}
		}
		for a, name := range p.appraisers {
			trials := p.trials
			if p.ragged {
				trials = max(1, trials-a)
			}
			for t := range trials {
				call := truth
				switch {
				case p.wrong != nil:
					if p.wrong(i) {
						call = (truth + 1) % len(kinds)
					}
				case p.sharp:
				case p.categories != nil:
					if random.Float64() < 0.15 {
						call = min(max(truth+1-2*random.IntN(2), 0), len(kinds)-1)
					}
				default:
					seen := value + softness*random.NormFloat64()*(1+0.2*float64(a))
					if p.lenient && a == 1 {
						seen += 3 * softness
					}
					call = 0
					if (seen >= lowerLimit || p.noLower) && (seen <= upperLimit || p.noUpper) {
						call = 1
					}
				}
				if random.Float64() < p.random {
					call = random.IntN(len(kinds))
				}
				row := []string{p.part(i), name, strconv.Itoa(t + 1), kinds[call]}
				if random.Float64() < p.missing {
					row[3] = ""
				}
				if !p.noReference {
					row = append(row, kinds[truth])
				}
				if !p.noValues {
					row = append(row, strconv.FormatFloat(value, 'f', 5, 64))
				}
				_ = w.Write(row)
			}
		}
	}
	w.Flush()
	return out.String()
}

func (p plan) settings() study.Settings {
	lower, upper := lowerLimit, upperLimit
	s := study.Settings{Title: "Bore of a pump body", Characteristic: "bore diameter", Gauge: "plug gauge 12 H7"}
	if !p.noValues {
		s.Unit = "mm"
		if !p.noLower {
			s.Lower = &lower
		}
		if !p.noUpper {
			s.Upper = &upper
		}
	}
	if p.categories != nil {
		s = study.Settings{Title: "Marks on a housing"}
		if p.ordered {
			s.Order = p.categories
		} else {
			s.Categories = p.categories
		}
	}
	if p.change != nil {
		p.change(&s)
	}
	return s
}

// record judges the study that was made up.
func (p plan) record(t testing.TB) *report.Record {
	t.Helper()
	p = p.filled()
	files := fstest.MapFS{p.file: &fstest.MapFile{Data: []byte(p.csv())}}
	st, err := study.Read(study.Source{Path: p.file, FS: files}, p.settings())
	if err != nil {
		t.Fatalf("%s: %v", p.name, err)
	}
	opt := agreement.DefaultOptions()
	opt.Confidence = st.Settings.Confidence
	opt.Resamples = 200
	result, err := judge.Run(st, opt, signal.Options{})
	if err != nil {
		t.Fatalf("%s: %v", p.name, err)
	}
	return &report.Record{Result: result, Verdict: verdict.Decide(result), Version: "v0.0.0", Command: "samecall judge " + p.file}
}

// plans are studies of every kind and size that a record must stand.
func plans() []plan {
	none := func(int) bool { return false }
	every := func(int) bool { return true }
	long := []string{
		"Maria-Magdalena Hohenwaldenburg-Silberstein, second inspection station, early shift",
		"Donaudampfschifffahrtsgesellschaftskapitänsmützenprüferin",
		"CAMERA STATION 14 / LINE B / WEST WING / UPPER FLOOR / WINDOW SIDE",
	}
	return []plan{
		{name: "one appraiser", appraisers: some(1)},
		{name: "three appraisers"},
		{name: "twelve appraisers", appraisers: some(12), parts: 50},
		{name: "twelve close appraisers", appraisers: some(12), parts: 20, wrong: func(i int) bool { return i == 4 || i == 11 }},
		{name: "thirty appraisers", appraisers: some(30), parts: 20, trials: 2},
		{name: "ten parts", parts: 10},
		{name: "two hundred parts", parts: 200},
		{name: "two thousand parts", parts: 2000, trials: 2},
		{name: "long names", appraisers: long, part: func(i int) string {
			return fmt.Sprintf("pump body cast at the second foundry, tray %d, place %d of the pallet", i/10+1, i%10+1)
		}, change: func(s *study.Settings) {
			s.Title = "Bore 12 H7 of the pump body with the long flange, after the change of the supplier of raw castings, second repetition"
		}},
		{name: "long names, no reference", appraisers: long, noReference: true, noValues: true},
		{name: "right to left", appraisers: []string{"דנה כהן", "أحمد الخطيب", "Rivka רבקה 2"}, part: func(i int) string { return fmt.Sprintf("חלק %d", i+1) },
			change: func(s *study.Settings) { s.Title, s.Unit = "קוטר הקדח של גוף המשאבה", "מ״מ" }},
		{name: "emoji and ideographs", appraisers: []string{"👩🏽‍🔧 Ada", "検査員一号", "검사원 둘"}, part: func(i int) string { return fmt.Sprintf("零件 %d 🔩", i+1) },
			change: func(s *study.Settings) { s.Title = "泵体内孔 12 H7 的检验" }},
		{name: "kinds", categories: []string{"scratch", "dent", "stain", "none"}, noValues: true},
		{name: "grades", categories: []string{"A", "B", "C", "D", "E"}, ordered: true, noValues: true, appraisers: some(5)},
		{name: "many kinds, long", categories: []string{"scratch across the visible face", "dent larger than half a millimetre", "stain of cooling lubricant", "burr along the inner edge", "porosity open to the sealing face", "tool mark beyond the master sample", "none"},
			noValues: true, appraisers: some(4), parts: 42},
		{name: "no values", noValues: true},
		{name: "no reference", noReference: true, noValues: true},
		{name: "one appraiser, no reference, one trial", noReference: true, noValues: true, trials: 1, appraisers: some(1)},
		{name: "lower limit only", noUpper: true},
		{name: "upper limit only", noLower: true},
		{name: "separated", sharp: true},
		{name: "all right", wrong: none, noValues: true},
		{name: "all wrong", wrong: every},
		{name: "missing calls", missing: 0.2},
		{name: "ragged trials", ragged: true, appraisers: some(4), trials: 4},
		{name: "by chance", random: 1},
	}
}

// Every figure has a name that is known, and every name a figure.
func TestFigureNames(t *testing.T) {
	found := make(map[string]bool)
	for _, f := range report.Figures(plan{}.record(t)) {
		found[f.Name] = true
		if !slices.Contains(figure.Names(), f.Name) {
			t.Errorf("the figure %s is not among the names", f.Name)
		}
	}
	if len(found) != len(figure.Names()) {
		t.Errorf("a study with everything has the figures %v; expected %v", found, figure.Names())
	}
}

// hostile are texts that mean something to what reads the outputs: a page, a
// spreadsheet, a terminal, a formatter.
var hostile = []string{
	`<script>alert(1)</script>`,
	`"><img src=x onerror=alert(1)>`,
	`</style></svg></table><h1>&lt;&amp;`,
	`javascript:alert('1')`,
	`=1+1`, `+cmd|' /C calc'!A0`, `-2+3`, `@SUM(A1)`, `=HYPERLINK("http://example.com","x")`,
	"tab\tand\nbreak\r\nin it",
	"\x1b[31mred\x1b[0m \x1b]0;title\x07",
	"\u202eevil\u202c \u2066x\u2069",
	`%s %d %!v(MISSING) {{.}} ${x} $(x)`,
	"*bold* _it_ `code` [a](javascript:x) | # ~~x~~ $x$ <b>",
	`\\`, `'; DROP TABLE parts; --`,
	strings.Repeat("W", 500),
	"\ufffe\uffff",
	"1. one", "2) two", "- dash", "> quote", "    code", "http://example.com/x", "www.example.com", "a@example.com", "[^1]: note", "---", "| - |",
}

// hostilePlan is a study with every hostile text as a name, and some more as
// its title, unit and so on.
func hostilePlan() plan {
	return plan{
		name:       "hostile text",
		parts:      36,
		trials:     2,
		appraisers: append([]string{hostile[0], hostile[4], hostile[9], hostile[16], hostile[13], hostile[12]}, hostile[17:27]...),
		part:       func(i int) string { return hostile[i%len(hostile)] + strings.Repeat(" ", 1) + strconv.Itoa(i) },
		file:       `=a&b "<i>" 'c' $(x).csv`,
		change: func(s *study.Settings) {
			s.Title, s.Characteristic, s.Gauge, s.Unit = hostile[1]+hostile[16], hostile[2], hostile[8], hostile[0]
		},
	}
}
