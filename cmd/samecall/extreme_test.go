package main

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"regexp"
	"slices"
	"strings"
	"testing"

	goprettytext "github.com/jedib0t/go-pretty/v6/text"

	"samecall/cmd/samecall/internal/example"
)

// extreme is a study at the edge of what there can be, as a long table.
type extreme struct {
	name string
	args []string
	rows [][]string
}

func extremes() []extreme {
	// study draws a table; call tells what an appraiser says of a part.
	type caller func(part, appraiser, trial int) string
	study := func(parts, appraisers, trials int, reference func(part int) string, call caller) [][]string {
		rows := [][]string{{"part", "reference", "appraiser", "trial", "call"}}
		for p := range parts {
			for a := range appraisers {
				for t := range trials {
					rows = append(rows, []string{fmt.Sprint("P", p+1), reference(p), fmt.Sprint("insp ", a+1), fmt.Sprint(t + 1), call(p, a, t)})
				}
			}
		}
		return rows
	}
	half := func(p int) string { return []string{"go", "nogo"}[p%2] }
	always := func(w string) func(int) string { return func(int) string { return w } }
	other := map[string]string{"go": "nogo", "nogo": "go"}
	// slips is right but for a call here and there, always the same ones
	slips := func(reference func(int) string) caller {
		return func(p, a, t int) string {
			if w := reference(p); (7*p+3*a+5*t)%11 != 0 {
				return w
			} else {
				return other[w]
			}
		}
	}
	right := func(reference func(int) string) caller { return func(p, _, _ int) string { return reference(p) } }
	renamed := func(rows [][]string, names ...string) [][]string {
		for _, row := range rows[1:] {
			for i, n := range names {
				if row[2] == fmt.Sprint("insp ", i+1) {
					row[2] = n
					break
				}
			}
		}
		return rows
	}
	without := func(rows [][]string, drop func(row []string) bool) [][]string {
		return slices.DeleteFunc(rows, func(row []string) bool { return row[0] != "part" && drop(row) })
	}
	valued := func(rows [][]string, value func(part string) string) [][]string {
		for i, row := range rows {
			if rows[i] = append(row, "value"); i > 0 {
				rows[i][5] = value(row[0])
			}
		}
		return rows
	}
	number := func(part string) (n int) { _, _ = fmt.Sscanf(part, "P%d", &n); return n }
	kind := func(n int) string { return fmt.Sprintf("kind %d", n) }
	kinds := func(k int) (list string) {
		var all []string
		for i := range k {
			all = append(all, kind(i))
		}
		return strings.Join(all, ",")
	}

	return []extreme{
		{"one appraiser", nil, study(20, 1, 3, half, slips(half))},
		{"one trial", nil, study(20, 3, 1, half, slips(half))},
		{"one appraiser, one trial", nil, study(20, 1, 1, half, slips(half))},
		{"one part, good", nil, study(1, 3, 3, half, slips(half))},
		{"one part, bad", nil, study(1, 3, 3, always("nogo"), slips(half))},
		{"one call", nil, study(1, 1, 1, half, right(half))},
		{"two bad parts, one of them hard", nil, study(5, 2, 2, func(p int) string { return []string{"nogo", "nogo", "go", "go", "go"}[p] },
			func(p, a, t int) string { return []string{"go", "nogo"}[btoi(p == 0 && t == 0)] })},
		{"two parts", nil, study(2, 2, 2, half, slips(half))},
		{"no bad part", nil, study(20, 3, 3, always("go"), slips(always("go")))},
		{"no good part", nil, study(20, 3, 3, always("nogo"), slips(always("nogo")))},
		{"always right", nil, study(20, 3, 3, half, right(half))},
		{"always wrong", nil, study(20, 3, 3, half, func(p, _, _ int) string { return other[half(p)] })},
		{"all calls alike", nil, study(20, 3, 3, half, func(_, _, _ int) string { return "go" })},
		{"all calls alike, one appraiser and one trial", nil, study(20, 1, 1, half, func(_, _, _ int) string { return "nogo" })},
		{"no part like another", nil, study(20, 2, 2, half, func(p, a, t int) string { return []string{"go", "nogo"}[(p+a+t)%2] })},
		{"a single category", []string{"--categories", "good", "--accept", "good"}, study(20, 3, 3, always("good"), right(always("good")))},
		{"a single kind, nothing good", []string{"--categories", "scratch"}, study(20, 3, 3, always("scratch"), right(always("scratch")))},
		{"200 appraisers", nil, study(20, 200, 2, half, slips(half))},
		{"30 trials", nil, study(10, 2, 30, half, slips(half))},
		{"40 categories", []string{"--categories", kinds(40), "--accept", kind(0)}, study(80, 3, 2, func(p int) string { return kind(p % 40) },
			func(p, a, t int) string { return kind((p + (p+a+t)%7/6) % 40) })},
		{"40 grades", []string{"--order", kinds(40), "--accept", kind(0)}, study(80, 2, 2, func(p int) string { return kind(p % 40) },
			func(p, a, t int) string { return kind((p + (p+a+t)%5/4) % 40) })},
		{"40 categories, none good", []string{"--categories", kinds(40)}, study(40, 2, 2, func(p int) string { return kind(p % 40) }, func(p, _, _ int) string { return kind(p % 40) })},
		{"one listed category is never used", []string{"--categories", "a,b,c,d", "--accept", "d"}, study(20, 2, 2, func(p int) string { return []string{"a", "b"}[p%2] },
			func(p, a, _ int) string { return []string{"a", "b"}[(p+a*p/10)%2] })},
		{"no reference", nil, without(study(20, 3, 2, always(""), slips(half)), func([]string) bool { return false })},
		{"a reference for one part", nil, study(20, 3, 2, func(p int) string { return []string{"nogo", ""}[min(p, 1)] }, slips(half))},
		{"ragged trials", nil, without(study(20, 3, 3, half, slips(half)), func(row []string) bool {
			return row[2] == "insp 2" && row[3] > "1" || row[2] == "insp 3" && row[3] == "2"
		})},
		{"appraisers who never met a part", nil, without(study(20, 2, 2, half, slips(half)), func(row []string) bool { return (number(row[0]) < 10) == (row[2] == "insp 1") })},
		{"appraisers without a trial in common", nil, without(study(20, 2, 2, half, slips(half)), func(row []string) bool { return (row[3] == "1") == (row[2] == "insp 1") })},
		{"most calls missing", nil, without(study(30, 3, 3, half, slips(half)), func(row []string) bool { return number(row[0])*7%10 != 0 || row[2] == "insp 2" && row[3] != "1" })},
		{"names that are hard to print", nil, renamed(study(20, 6, 2, half, slips(half)),
			"  two  words ", `quote " and ' comma, semicolon;`, "emoji 👩🏽\u200d🔧🔍", "بازرس صبح", "tab\tand\nline", "\u202eturned\u202c 检验员")},
		{"names that look like something else", nil, renamed(study(20, 6, 2, half, slips(half)), "%d %s %!", "NaN", "null", "reference", "all together", "\x1b[31mred")},
		{"a very long name", nil, renamed(study(20, 3, 2, half, slips(half)), strings.Repeat("long name ", 60), strings.Repeat("x", 300))},
		{"a single value", []string{"--lower", "1"}, valued(study(20, 2, 2, always(""), right(half)), func(string) string { return "1" })},
		{"values far apart", []string{"--lower", "0", "--upper", "1e99"}, valued(study(20, 2, 2, always(""), slips(half)), func(p string) string {
			return fmt.Sprint((float64(number(p)%3) - 1) * 1e100)
		})},
		{"values close together", []string{"--lower", "10.00000001"}, valued(study(20, 2, 2, always(""), slips(half)), func(p string) string {
			return fmt.Sprintf("10.000000%02d", number(p))
		})},
		{"values without order", []string{"--lower", "5.5", "--upper", "15.5"}, valued(study(20, 3, 3, always(""), slips(half)), func(p string) string { return fmt.Sprint(number(p)) })},
		{"values that part the calls", []string{"--upper", "10.2"}, valued(study(20, 3, 3, always(""), func(p, _, _ int) string { return []string{"go", "nogo"}[min(p/10, 1)] }),
			func(p string) string { return fmt.Sprint(number(p)) })},
		{"values below zero", []string{"--lower", "-20", "--upper", "-10"}, valued(study(30, 3, 3, always(""), func(p, a, t int) string {
			return []string{"go", "nogo"}[btoi(p < 10+(a+t)%2 || p > 20-(a+2*t)%3)]
		}), func(p string) string { return fmt.Sprint(number(p) - 30) })},
	}
}

func btoi(b bool) int {
	if b {
		return 1
	}
	return 0
}

// answered runs a command and returns what it prints.
func answered(t *testing.T, args ...string) string {
	t.Helper()
	var out, errs bytes.Buffer
	if status := run(args, strings.NewReader(""), &out, &errs); status != exitDone {
		t.Fatalf("samecall %q: status %d\n%s", args, status, &errs)
	}
	return out.String()
}

// Whatever the study, every figure is a number or has its reason, and the
// answer in words says nothing that only a machine would say.
func TestExtremeStudies(t *testing.T) {
	type subject struct {
		name string
		args []string
	}
	var all []subject
	for _, e := range example.Names() {
		all = append(all, subject{"example " + e.Name, []string{"--example", e.Name}})
	}
	for _, e := range extremes() {
		all = append(all, subject{e.name, append([]string{write(t, "calls.csv", text(e.rows)), "--title", "extreme"}, e.args...)})
	}
	for _, s := range all {
		t.Run(s.name, func(t *testing.T) {
			for _, more := range [][]string{nil, {"--pairing", "all", "--resamples", "0", "--independent"}} {
				doc := decoded(t, judged(t, slices.Concat(s.args, more)...))
				walk(t, "", doc)
			}
			for _, c := range []struct {
				columns int
				command []string
			}{
				{80, []string{"judge", "--resamples", "0"}},
				{100, []string{"judge", "--resamples", "0"}},
				{100, []string{"judge", "--resamples", "0", "--full"}},
				{100, []string{"check"}},
			} {
				t.Setenv("COLUMNS", fmt.Sprint(c.columns))
				out := answered(t, slices.Concat(c.command, s.args)...)
				// Figures are not cut, so that a table of very many may be
				// too wide with --full or on a narrow screen; the answer on
				// the screen that it is meant for is not.
				readable(t, out, c.columns, c.columns == 100 && !slices.Contains(c.command, "--full"))
			}
			t.Setenv("COLUMNS", "5000") // where no table is cut
			everyDashHasAReason(t, answered(t, slices.Concat([]string{"judge", "--resamples", "0", "--full"}, s.args)...))
		})
	}
}

// walk holds every estimate of a document to its shape.
func walk(t *testing.T, path string, v any) {
	t.Helper()
	switch v := v.(type) {
	case nil:
		t.Errorf("%s is null; a key without a value is left out", path)
	case float64:
		if math.IsNaN(v) || math.IsInf(v, 0) {
			t.Errorf("%s is %v", path, v)
		}
	case []any:
		for i, e := range v {
			walk(t, fmt.Sprintf("%s[%d]", path, i), e)
		}
	case map[string]any:
		if isEstimate(path, v) {
			estimate(t, path, v)
		}
		for key, member := range v {
			walk(t, path+"."+key, member)
		}
	}
}

// figures are the keys of the contract whose values are estimates.
var figures = []string{"share", "kappa", "kappa_linear", "kappa_quadratic", "fleiss", "same_appraiser", "different_appraisers", "ac1", "alpha",
	"effectiveness", "miss", "false_alarm", "d_prime_interval", "criterion_interval", "cut", "offset"}

func isEstimate(path string, v map[string]any) bool {
	if strings.Contains(path, ".verdict") {
		return false
	}
	_, given := v["estimate"]
	return given || slices.Contains(figures, path[strings.LastIndexByte(path, '.')+1:])
}

func estimate(t *testing.T, path string, v map[string]any) {
	t.Helper()
	get := func(key string) (float64, bool) { x, ok := v[key].(float64); return x, ok }
	x, given := get("estimate")
	lower, hasLower := get("lower")
	upper, hasUpper := get("upper")
	reason, _ := v["reason"].(string)
	method, _ := v["method"].(string)
	switch {
	case !given && (reason == "" || hasLower || hasUpper || method != ""):
		t.Errorf("%s is absent, and its reason is %q: %v", path, reason, v)
	case given && (!hasLower || !hasUpper) && reason == "":
		t.Errorf("%s lacks a limit without a reason: %v", path, v)
	case given && (hasLower || hasUpper) && method == "":
		t.Errorf("%s has limits without a method: %v", path, v)
	case hasLower && lower > x, hasUpper && upper < x:
		t.Errorf("%s lies outside its limits: %v", path, v)
	case hasLower && hasUpper && lower == upper:
		t.Errorf("%s has an interval without a width: %v", path, v)
	}
	if count, ok := get("count"); ok {
		of, _ := get("of")
		switch {
		case count < 0 || count > of:
			t.Errorf("%s: %v of %v", path, count, of)
		case given && math.Abs(x-count/of) > 1e-12:
			t.Errorf("%s is %v, yet %v of %v", path, x, count, of)
		case !given && of != 0:
			t.Errorf("%s is absent, yet %v of %v", path, count, of)
		case given && (lower < 0 || upper > 1):
			t.Errorf("%s: the limits of a share are %v and %v", path, lower, upper)
		}
	}
}

// dashInTable is a cell of a table, or half of one, that holds a dash.
var dashInTable = regexp.MustCompile(`(?m)(  |· |\[)–( ·|\]|  |$)`)

// everyDashHasAReason holds tables to saying why there is a dash in them: below
// each, every reason once.
func everyDashHasAReason(t *testing.T, out string) {
	t.Helper()
	for _, table := range strings.Split(out, "\n\n") {
		_, body, isTable := strings.Cut(table, "───\n")
		if !isTable || strings.HasPrefix(table, "Every call\n") { // its note explains the dash
			continue
		}
		said := make(map[string]bool)
		for line := range strings.Lines(body) {
			if !strings.HasPrefix(line, "–: ") {
				continue
			}
			if said[line] {
				t.Errorf("a reason is told twice:\n%s", table)
			}
			said[line] = true
		}
		if dashInTable.MatchString(body) != (len(said) > 0) {
			t.Errorf("the dashes and their reasons do not go together:\n%s", table)
		}
	}
}

// tooSmall is a figure of which nobody wants the digits.
var tooSmall = regexp.MustCompile(`[0-9]e-[0-9]+`)

// readable holds a text to what a reader can expect of it.
func readable(t *testing.T, out string, columns int, fits bool) {
	t.Helper()
	for _, odd := range []string{"Inf", "%!", "<nil>", "+Inf", "\x1b", "\t", "\r", "panic", "[]"} {
		if strings.Contains(strings.NewReplacer("%d %s %!", "", "\ufffd[31mred", "").Replace(out), odd) {
			t.Errorf("the answer says %q:\n%s", odd, out)
		}
	}
	if n := strings.Count(out, "NaN"); n > 0 && !strings.Contains(out, "null") { // an appraiser is called so
		t.Errorf("the answer says NaN:\n%s", out)
	}
	if odd := tooSmall.FindString(out); odd != "" {
		t.Errorf("the answer says %q:\n%s", odd, out)
	}
	if !strings.HasSuffix(out, "\n") || strings.HasSuffix(out, "\n\n") {
		t.Errorf("the answer does not end with one line end")
	}
	for line := range strings.Lines(out) {
		if line = strings.TrimSuffix(line, "\n"); strings.TrimRight(line, " ") != line {
			t.Errorf("spaces at the end of %q", line)
		}
		if width := goprettytext.StringWidthWithoutEscSequences(line); fits && width > columns {
			t.Errorf("a line is %d columns wide in a terminal of %d:\n%s", width, columns, line)
		}
	}
}

// failing fails after some bytes, as a full disk does.
type failing struct{ left int }

func (f *failing) Write(p []byte) (int, error) {
	if f.left -= len(p); f.left < 0 {
		return 0, io.ErrShortWrite
	}
	return len(p), nil
}

// Output that cannot be written is an error, wherever it breaks off.
func TestOutputBreaksOff(t *testing.T) {
	for _, args := range [][]string{
		{"judge", "--example", "bore"}, {"judge", "--example", "bore", "--full"}, {"judge", "--example", "bore", "--json", "-"},
		{"check", "--example", "bore"}, {"example"}, {"example", "bore"},
	} {
		for _, left := range []int{0, 30} {
			var errs bytes.Buffer
			if status := run(args, strings.NewReader(""), &failing{left}, &errs); status != exitUsage || errs.Len() == 0 {
				t.Errorf("samecall %q to a full disk after %d bytes: status %d, %q", args, left, status, &errs)
			}
		}
	}
}
