package report_test

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io/fs"
	"math"
	"os"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"
	"testing/fstest"
	"unicode"

	"samecall/agreement"
	"samecall/agreement/interval"
	"samecall/cmd/samecall/internal/example"
	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
	"samecall/cmd/samecall/internal/report"
	"samecall/cmd/samecall/internal/study"
	"samecall/cmd/samecall/internal/verdict"
	"samecall/signal"
)

// place says under which heads of --full a part of the JSON is found: one of
// these heads will do. Without a head it is not found, for the reason given.
type place struct {
	path  string // of keys, "[]" for each element of a list; a regular expression
	match *regexp.Regexp
	heads []string
	why   string
}

const (
	pairTables     = "Between appraisers: the calls of each two"
	whoRejects     = "Between appraisers: who rejects more?"
	eachTwo        = "Between appraisers: each two"
	criteria       = "Criteria"
	atEachLimit    = "Acceptance curve at each limit"
	inProgramsOnly = "a standard error beside an interval tells a reader nothing more: the JSON, the CSV and the workbook have it"
	anywhere       = "" // the words before the first table, or below the tables
)

// places are looked through from the top; the first that fits counts.
var places = []place{
	{path: `^schema$|\.code$|^verdict\.cause_codes\[\]`, why: "for programs; the same is said in words"},
	{path: `^study\.trial_numbers`, why: "1, 2 and so on of all, where the table of what was studied has no line on the trials of each"},
	{path: `^zone\.curve\.warnings`, why: "said in other words under the table of the grey zone"},
	{path: `^between\.pairs\[\]\.agreement$`, why: "there as the count of calls alike, of so many"},
	{path: `^between\.pairs\[\]\.rejects\.(first|second)$`, why: "there as a share, and as the sum of two columns"},
	{path: `^against\.appraisers\[\]\.(d_prime|criterion)$`, why: "once more, with its interval"},

	{path: `\.reason$`, heads: []string{anywhere}},
	{path: `\.method$`, heads: []string{"How the intervals were found"}},
	{path: `^zone.*\.standard_error$`, why: inProgramsOnly},
	{path: `\.standard_error$`, why: inProgramsOnly},

	{path: `^study\.|^settings\.`, heads: []string{"What was studied"}},
	{path: `^within\[\]\.mixed|^against\..*\.(wrong_every_time|mixed)`, heads: []string{"Parts to look at"}},
	{path: `^within\[\]`, heads: []string{"Within appraiser"}},
	{path: `^between\.pairs\[\]\.table`, heads: []string{whoRejects, pairTables}},
	{path: `^between\.pairs\[\]\.rejects`, heads: []string{whoRejects}},
	{path: `\.kappa_(linear|quadratic)`, heads: []string{"Kappa weighted"}},
	{path: `^between\.pairs\[\]`, heads: []string{eachTwo}},
	{path: `^between\.categories`, heads: []string{"Kappa of each category"}},
	{path: `^between\.`, heads: []string{"All appraisers together"}},
	{path: `^against\..*\.table`, heads: []string{"Calls by reference"}},
	{path: `^against\..*\.(count|of|effective)$`, heads: []string{"Counts behind the rates"}},
	{path: `^against\..*\.tests`, heads: []string{"Do the errors lean one way?"}},
	{path: `^against\..*\.categories\[\]\.category$`, heads: []string{"What was studied"}},
	{path: `^against\..*\.categories`, heads: []string{"Kappa of each category"}},
	{path: `^against\..*(_interval|roc_area)`, heads: []string{"How well bad is told from good"}},
	{path: `^against\.`, heads: []string{"Against the reference"}},

	{path: `^zone\.unanimous\.`, heads: []string{"Unanimous zone"}},
	{path: `^zone\.curve.*\.(status|gap)`, heads: []string{"Limits where rejected and accepted parts do not overlap"}},
	{path: `^zone\.curve\.(link|loglik|lack_of_fit|tests)`, heads: []string{"How well the acceptance curve fits"}},
	{path: `^zone\.curve\.outliers`, heads: []string{"══ Grey zone"}},
	{path: `^zone\.curve\.appraisers\[\]\.appraiser$`, heads: []string{"What was studied"}},
	{path: `^zone\.curve\.appraisers\[\]\.(lower|upper)\.offset`, heads: []string{"Which appraiser cuts where", atEachLimit}},
	{path: `^zone\.curve\.appraisers\[\]\.(lower|upper)\.accepted`, heads: []string{"Which appraiser cuts where", atEachLimit}},
	{path: `^zone\.curve\.appraisers\[\]\.(lower|upper)\.cut`, why: "there as cut − limit, with the limit in the table of all appraisers"},
	{path: `^zone\.curve\.appraisers\[\]\.(lower|upper)\.share_of_tolerance`, why: "there as σ and as the width, in the unit: the same but for a factor"},
	{path: `^zone\.curve\.appraisers\[\]\.(lower|upper)\.(sigma|from|to)`, heads: []string{"How wide each appraiser's", atEachLimit}},
	{path: `^zone\.curve\.`, heads: []string{atEachLimit}},

	{path: `^verdict\.(overall|evidence)`, heads: []string{"What was studied"}},
	{path: `^verdict\.(reasons|carry|causes|next|cautions)|^warnings`, heads: []string{anywhere}},
	{path: `^verdict\.appraisers\[\]\.(verdict|evidence)`, heads: []string{"Against the reference"}},
	{path: `^verdict\..*(one_sided|kind|parts)$`, heads: []string{"The other one-sided limits", criteria}},
	{path: `^verdict\.(appraisers\[\]\.criteria|between)`, heads: []string{criteria}},
	{path: `appraisers?(\[\])?$`, heads: []string{"What was studied"}},
}

// Everything that the JSON says stands in --full too: every number and every
// text of it is looked for under the head where a reader looks for it, in the
// row of its appraiser.
func TestFullSaysWhatTheJSONSays(t *testing.T) {
	records := map[string]*report.Record{
		"the manual's study": fileRecord(t, os.DirFS("../../../../testdata/reference"), "msa-manual-50x3x3.csv", study.Settings{Lower: new45, Upper: new545, Unit: "mm"}),
	}
	for _, e := range example.Names() {
		files, err := example.FS(e.Name)
		if err != nil {
			t.Fatal(err)
		}
		records["example "+e.Name] = fileRecord(t, files, "study.toml", study.Settings{})
	}
	for _, p := range plans() {
		if p.parts < 2000 && len(p.appraisers) < 20 {
			records[p.name] = p.record(t)
		}
	}
	far := plan{appraisers: some(6), parts: 60}.filled()
	everyOther := regexp.MustCompile(`(?m)^30,(.*),([13]),accept,`) // good, and far from the limits
	records["a far error"] = fileRecord(t, fstest.MapFS{"calls.csv": {Data: everyOther.ReplaceAll([]byte(far.csv()), []byte("30,$1,$2,reject,"))}}, "calls.csv", far.settings())
	for i := range places {
		places[i].match = regexp.MustCompile(places[i].path)
	}
	used := make([]bool, len(places))
	for name, r := range records {
		var doc any
		d := json.NewDecoder(bytes.NewReader(output(t, r, report.JSON)))
		d.UseNumber()
		if err := d.Decode(&doc); err != nil {
			t.Fatal(err)
		}
		f := &finder{t: t, name: name, r: r, used: used, text: answer(t, r, true)}
		for block := range strings.SplitSeq(f.text, "\n\n") {
			head, _, _ := strings.Cut(block, "\n")
			f.blocks = append(f.blocks, [2]string{head, block})
		}
		f.look("", doc, nil)
		if f.found < 100 && !strings.Contains(name, "one appraiser") {
			t.Errorf("%s: only %d numbers and texts were looked for", name, f.found)
		}
	}
	for i, p := range places {
		if !used[i] {
			t.Errorf("nothing in any JSON is at %s", p.path)
		}
	}
}

var new45, new545 = pointer(0.45), pointer(0.545)

func pointer(x float64) *float64 { return &x }

// fileRecord judges a study in files.
func fileRecord(t *testing.T, files fs.FS, path string, set study.Settings) *report.Record {
	t.Helper()
	st, err := study.Read(study.Source{Path: path, FS: files}, set)
	if err != nil {
		t.Fatal(err)
	}
	opt := agreement.DefaultOptions()
	opt.Confidence, opt.Resamples = st.Settings.Confidence, 200
	result, err := judge.Run(st, opt, signal.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return &report.Record{Result: result, Verdict: verdict.Decide(result), Version: "v0.0.0", Command: "samecall judge " + path}
}

type finder struct {
	t      *testing.T
	name   string
	r      *report.Record
	used   []bool
	text   string
	blocks [][2]string // head and all of each
	found  int
}

// look goes through a part of the document. who are the appraisers whose it is,
// as the rows of tables name them.
func (f *finder) look(path string, v any, who []string) {
	switch v := v.(type) {
	case map[string]any:
		switch a := v["appraiser"].(type) {
		case string:
			who = []string{a}
		default:
			if strings.HasPrefix(path, "against.all") && len(f.r.Study.Appraisers) > 1 {
				who = []string{"all together"}
			}
		}
		if list, ok := v["appraisers"].([]any); ok && strings.HasSuffix(path, "pairs[]") {
			who = []string{list[0].(string), list[1].(string)}
		}
		for key, x := range v {
			at := key
			if path != "" {
				at = path + "." + key
			}
			if !f.withheld(path, key, v) {
				f.look(at, x, who)
			}
		}
	case []any:
		for _, x := range v {
			f.look(path+"[]", x, who)
		}
	case bool: // in words, as the widening of intervals
	case json.Number:
		x, err := v.Float64()
		if err != nil {
			f.t.Fatal(err)
		}
		f.find(path, v.String(), who, func(line string) bool {
			return slices.ContainsFunc(f.written(x), func(s string) bool { return standsIn(line, s) })
		})
	case string:
		if v == "" {
			return
		}
		f.find(path, v, who, func(line string) bool { return strings.Contains(plainly(line), plainly(said(path, v))) })
	}
}

var atLimit = regexp.MustCompile(`^zone\.curve.*\.(lower|upper)$`)

// withheld are figures that --full leaves out although the JSON has them, since
// a reader would take them for more than they are.
func (f *finder) withheld(path, key string, v map[string]any) bool {
	switch {
	case atLimit.MatchString(path) && slices.Contains([]string{"sigma", "share_of_tolerance", "from", "to", "cut", "offset", "accepted_at_limit"}, key):
		// Where calls do not overlap, or σ lacks a bound, a fit gives numbers
		// without a meaning: tables say "not known", or less than what.
		sigma, _ := v["sigma"].(map[string]any)
		bounded := sigma["lower"] != nil && sigma["upper"] != nil
		if e, _ := v[key].(map[string]any); key != "sigma" && key != "share_of_tolerance" && e != nil {
			return (!bounded || key == "accepted_at_limit") && e["lower"] == nil && e["upper"] == nil
		}
		return v["status"] != "fitted" || !bounded
	case key == "status":
		return v[key] == "fitted" // what is not listed is
	case strings.HasPrefix(path, "verdict.appraisers[]") && f.r.Agreement.All == nil:
		return true // nothing is known of any of these, and the verdict says so
	case path == "study" && key == "trial_numbers" && !strings.Contains(f.text, "trials of each"):
		return true
	case strings.HasSuffix(path, ".share") || strings.HasSuffix(path, ".effectiveness") || strings.HasSuffix(path, ".miss") || strings.HasSuffix(path, ".false_alarm"):
		return v["estimate"] == nil && (key == "count" || key == "of") // 0 of 0
	case key == "mixed_parts":
		return v["reason"] != nil
	case key == "mixed" || key == "wrong_every_time":
		list, _ := v[key].([]any)
		return len(list) > 40 // cut, with how many more
	case path == "study" && key == "missing":
		return v[key] == json.Number("0") // only what is missing is told
	case path == "verdict.between" && f.r.Agreement.Between.DifferentAppraisers.Absent != nil:
		return key != "reason"
	case v["reason"] != nil && strings.Contains(path, "criteria[]"):
		return !slices.Contains([]string{"reason", "name", "accept", "conditional", "met"}, key)
	case key == "categories" && path != "study":
		list, _ := v[key].([]any)
		return len(list) == 2 // the kappa of either is the kappa of the whole
	case path == "settings" && key == "seed":
		return f.r.Agreement.Intervals.Resampled == 0 // nothing was drawn
	}
	return false
}

// said is a word of the JSON as people read it.
func said(path, s string) string {
	switch {
	case strings.HasSuffix(path, "criteria[].name") || path == "verdict.between.name":
		return map[string]string{"miss": "miss rate", "false_alarm": "false-alarm rate"}[s] + map[string]string{"effectiveness": s, "kappa": s}[s]
	case strings.HasSuffix(path, "evidence") && s == "contradicted":
		return "shown"
	case path == "verdict.evidence" && s == "shown":
		return "the data show it"
	}
	return s
}

// find looks for something where its place says.
func (f *finder) find(path, what string, who []string, in func(line string) bool) {
	f.t.Helper()
	for i, p := range places {
		if !p.match.MatchString(path) {
			continue
		}
		f.used[i] = true
		if p.why != "" {
			return
		}
		f.found++
		for _, b := range f.blocks {
			if !slices.ContainsFunc(p.heads, func(h string) bool { return strings.HasPrefix(b[0], h) }) {
				continue
			}
			if slices.Equal(p.heads, []string{anywhere}) && in(strings.ReplaceAll(b[1], "\n", " ")) {
				return
			}
			for line := range strings.Lines(b[1]) {
				about := plainly(b[0] + " " + line)
				whose := !slices.ContainsFunc(who, func(w string) bool { return !strings.Contains(about, plainly(w)) })
				shared := strings.HasPrefix(path, "zone.") && len(f.r.Study.Appraisers) == 1 || // of whom the curve of all is
					slices.Contains([]string{"What was studied", "How the intervals were found"}, b[0])
				if (whose || shared) && in(line) {
					return
				}
			}
		}
		f.t.Errorf("%s: %s of %v, %s, is not in --full under %q", f.name, path, who, what, p.heads)
		return
	}
	f.t.Errorf("%s: %s has no place in --full: add where it stands", f.name, path)
}

// plainly is a text without what a table or a terminal does to it.
func plainly(s string) string {
	return strings.Map(func(r rune) rune {
		if unicode.IsSpace(r) {
			return -1
		}
		return r
	}, strings.ToLower(format.Plain(s)))
}

// written are the ways in which a number may be written.
func (f *finder) written(x float64) []string {
	s := f.r.Scale()
	minus := func(s string) string { return strings.ReplaceAll(s, "-", "−") }
	out := []string{s.Value(x), s.Signed(x), format.Number(x), format.Short(x), format.Figure(x), minus(fmt.Sprintf("%.2f", x)), minus(fmt.Sprintf("%.1f", x))}
	if x == math.Trunc(x) {
		out = append(out, format.Count(int(x)), strconv.Itoa(int(x)))
	}
	if x >= 0 { // a grey zone may be wider than the tolerance
		out = append(out, format.Percent(x), strings.Trim(format.PercentRange(interval.Interval{Lower: x, Upper: x}), "()"), format.Probability(x), format.Confidence(x))
		low, _, _ := strings.Cut(strings.Trim(format.PercentRange(interval.Interval{Lower: x, Upper: x}), "()"), "–")
		out = append(out, low)
	}
	if x > 1 && x < 1000 { // %GRR
		out = append(out, fmt.Sprintf("%.0f %%", x))
	}
	for digits := 4; digits < 17; digits++ { // beside a level
		out = append(out, minus(strconv.FormatFloat(x, 'g', digits, 64)), minus(strconv.FormatFloat(100*x, 'g', digits, 64))+" %")
	}
	return out
}

// standsIn reports whether a number stands in a line, not as a part of another.
func standsIn(line, number string) bool {
	for from := 0; ; {
		i := strings.Index(line[from:], number)
		if i < 0 {
			return false
		}
		i += from
		before, after := line[:i], line[i+len(number):]
		digit := func(s string) bool { return s != "" && s[0] >= '0' && s[0] <= '9' }
		if !(len(before) > 0 && (digit(before[len(before)-1:]) || before[len(before)-1] == '.')) &&
			!digit(after) && !(strings.HasPrefix(after, ".") && digit(after[1:])) {
			return true
		}
		from = i + 1
	}
}
