package main

import (
	"bytes"
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"samecall/cmd/samecall/internal/example"
)

// judged runs judge on a study and returns its JSON.
func judged(t *testing.T, args ...string) []byte {
	t.Helper()
	var out, errs bytes.Buffer
	args = append([]string{"judge", "--json", "-"}, args...)
	if status := run(args, strings.NewReader(""), &out, &errs); status != exitDone {
		t.Fatalf("samecall %s: status %d\n%s", strings.Join(args, " "), status, &errs)
	}
	return out.Bytes()
}

func decoded(t *testing.T, data []byte) map[string]any {
	t.Helper()
	var doc map[string]any
	if err := json.Unmarshal(data, &doc); err != nil {
		t.Fatal(err)
	}
	return doc
}

func expected(t *testing.T, file string) map[string]any {
	t.Helper()
	data, err := os.ReadFile(filepath.Join(reference, file))
	if err != nil {
		t.Fatal(err)
	}
	return decoded(t, data)
}

// at follows keys and indices into a decoded document.
func at(t *testing.T, doc any, path ...any) any {
	t.Helper()
	here := doc
	for _, p := range path {
		switch k := p.(type) {
		case string:
			object, ok := here.(map[string]any)
			if !ok {
				t.Fatalf("%v: %q is looked for in what is no object", path, k)
			}
			if here, ok = object[k]; !ok {
				t.Fatalf("%v: there is no key %q", path, k)
			}
		case int:
			list, ok := here.([]any)
			if !ok || k >= len(list) {
				t.Fatalf("%v: there is no element %d", path, k)
			}
			here = list[k]
		}
	}
	return here
}

// named returns the element of a list of objects whose key has the value.
func named(t *testing.T, list any, key, value string) any {
	t.Helper()
	elements, _ := list.([]any)
	for _, e := range elements {
		if at(t, e, key) == value {
			return e
		}
	}
	t.Fatalf("no element has the %s %q", key, value)
	return nil
}

// same compares a number, or numbers in lists, to a tolerance.
func same(t *testing.T, what string, got, want any, tolerance float64) {
	t.Helper()
	switch w := want.(type) {
	case []any:
		g, ok := got.([]any)
		if !ok || len(g) != len(w) {
			t.Errorf("%s is %v, expected %v", what, got, want)
			return
		}
		for i := range w {
			same(t, what, g[i], w[i], tolerance)
		}
	case float64:
		if g, ok := got.(float64); !ok || math.Abs(g-w) > tolerance {
			t.Errorf("%s is %v, expected %v", what, got, want)
		}
	default:
		if got != want {
			t.Errorf("%s is %v, expected %v", what, got, want)
		}
	}
}

// manual is the attribute study of the measurement systems analysis manual
// (testdata/reference/README.md).
func manual(t *testing.T) map[string]any {
	t.Helper()
	return decoded(t, judged(t, filepath.Join(reference, "msa-manual-50x3x3.csv"),
		"--lower", "0.45", "--upper", "0.545", "--unit", "mm", "--title", "manual"))
}

// TestContractKeys holds the JSON to the contract: each key by its name and
// type. E and S are an estimate and a share.
func TestContractKeys(t *testing.T) {
	const E, S = "E", "S"
	contract := map[string]any{
		"schema": "",
		"study": map[string]any{
			"title": "", "parts": 0., "appraisers": []any{""}, "trials": 0., "calls": 0., "missing": 0.,
			"categories": []any{""}, "accept": []any{""}, "reference": "",
			"limits": map[string]any{"lower": 0., "upper": 0., "unit": ""},
			"inputs": []any{map[string]any{"file": "", "sha256": ""}},
		},
		"settings": map[string]any{"confidence": 0., "resamples": 0., "seed": 0., "pairing": ""},
		"within":   []any{map[string]any{"appraiser": "", "share": S, "kappa": E}},
		"between": map[string]any{
			"share":  S,
			"pairs":  []any{map[string]any{"appraisers": []any{""}, "table": []any{[]any{0.}}, "agreement": 0., "kappa": E}},
			"fleiss": E, "categories": []any{map[string]any{"category": "", "kappa": E}},
			"same_appraiser": E, "different_appraisers": E, "ac1": E, "alpha": E,
		},
		"against": map[string]any{
			"appraisers": []any{map[string]any{
				"appraiser": "", "effectiveness": S, "table": []any{[]any{0.}}, "kappa": E, "miss": S, "false_alarm": S,
				"wrong_every_time": []any{""}, "mixed": []any{""}, "d_prime": 0., "criterion": 0.,
			}},
			"all": map[string]any{"effectiveness": S, "kappa": E, "miss": S, "false_alarm": S},
		},
		"verdict": map[string]any{
			"overall": "",
			"appraisers": []any{map[string]any{"appraiser": "", "verdict": "",
				"criteria": []any{map[string]any{"name": "", "estimate": 0., "met": "", "evidence": ""}}}},
			"causes": []any{""}, "next": []any{""},
		},
		"warnings": []any{map[string]any{"code": "", "text": ""}},
	}
	doc := manual(t)
	var hold func(path string, want, got any)
	hold = func(path string, want, got any) {
		switch w := want.(type) {
		case map[string]any:
			object, ok := got.(map[string]any)
			if !ok {
				t.Errorf("%s is no object", path)
				return
			}
			for key, v := range w {
				member, ok := object[key]
				if !ok {
					t.Errorf("%s.%s is not there", path, key)
					continue
				}
				hold(path+"."+key, v, member)
			}
		case []any:
			list, ok := got.([]any)
			if !ok {
				t.Errorf("%s is no list", path)
				return
			}
			for _, e := range list {
				hold(path+"[]", w[0], e)
			}
		case string:
			switch w {
			case E, S:
				keys := map[string]any{"estimate": 0., "lower": 0., "upper": 0., "method": ""}
				if w == S {
					keys["count"], keys["of"] = 0., 0.
				}
				hold(path, keys, got)
			default:
				if _, ok := got.(string); !ok {
					t.Errorf("%s is no text", path)
				}
			}
		case float64:
			if _, ok := got.(float64); !ok {
				t.Errorf("%s is no number", path)
			}
		}
	}
	hold("", contract, doc)

	for _, c := range []struct {
		want any
		path []any
	}{
		{"samecall/judge/1", []any{"schema"}},
		{"manual", []any{"study", "title"}},
		{50., []any{"study", "parts"}},
		{[]any{"A", "B", "C"}, []any{"study", "appraisers"}},
		{3., []any{"study", "trials"}},
		{450., []any{"study", "calls"}},
		{0., []any{"study", "missing"}},
		{[]any{"reject", "accept"}, []any{"study", "categories"}},
		{[]any{"accept"}, []any{"study", "accept"}},
		{"given", []any{"study", "reference"}},
		{0.45, []any{"study", "limits", "lower"}},
		{0.545, []any{"study", "limits", "upper"}},
		{"mm", []any{"study", "limits", "unit"}},
		// sha256sum of the file
		{"51887fd9ffdc9036aed292632b5b7e2449d6ea2ebbd098e158f552ae9d2a1c5d", []any{"study", "inputs", 0, "sha256"}},
		{0.95, []any{"settings", "confidence"}},
		{2000., []any{"settings", "resamples"}},
		{"matched", []any{"settings", "pairing"}},
	} {
		got := at(t, doc, c.path...)
		if list, ok := c.want.([]any); ok {
			same(t, c.path[len(c.path)-1].(string), got, list, 0)
		} else if got != c.want {
			t.Errorf("%v is %v, expected %v", c.path, got, c.want)
		}
	}
}

// closed is the tolerance of figures in closed form, printed is that of R's
// results, which are written with 11 significant digits.
const closed = 1e-9

// TestContractWithinAndBetween compares with statsmodels, scikit-learn and
// plain published formulas (expected-py.json), with R's psych and vcd and
// with the manual's printed tables (expected-r.json).
func TestContractWithinAndBetween(t *testing.T) {
	doc := manual(t)
	py := at(t, expected(t, "expected-py.json"), "msa_manual")
	r := at(t, expected(t, "expected-r.json"), "msa_manual")
	for _, name := range []string{"A", "B", "C"} {
		w := named(t, at(t, doc, "within"), "appraiser", name)
		same(t, "within kappa of "+name, at(t, w, "kappa", "estimate"), at(t, py, "fleiss_within", name), closed)
		share(t, "within share of "+name, at(t, w, "share"), at(t, r, "within", name))
	}
	for i, name := range []string{"A-B", "A-C", "B-C"} {
		p := at(t, doc, "between", "pairs", i)
		want := at(t, r, "cohen_between_matched", name)
		a, b, _ := strings.Cut(name, "-")
		same(t, "appraisers of pair", at(t, p, "appraisers"), []any{a, b}, 0)
		same(t, "table of "+name, at(t, p, "table"), at(t, want, "table"), 0)
		same(t, "agreement of "+name, at(t, p, "agreement"), at(t, want, "percent_agreement"), closed)
		same(t, "kappa of "+name, at(t, p, "kappa", "estimate"), at(t, py, "cohen_between_matched_sklearn", name), closed)
		// R's survey: the standard error linearised over parts
		same(t, "standard error of "+name, at(t, p, "kappa", "standard_error"), at(t, r, "clustered", "kappa_between", name, "se"), 1e-6)
	}
	between := at(t, doc, "between")
	share(t, "between share", at(t, between, "share"), at(t, r, "between_all"))
	for key, want := range map[string]string{
		"fleiss": "fleiss_all_nine_calls", "alpha": "alpha_nominal_all_nine", "ac1": "ac1_all_nine",
	} {
		same(t, key, at(t, between, key, "estimate"), at(t, py, want), closed)
	}
	same(t, "agreement", at(t, between, "agreement"), at(t, py, "percent_agreement_all_nine"), closed)
	same(t, "same_appraiser", at(t, between, "same_appraiser", "estimate"), at(t, py, "pairs", "within_kappa_pooled_margin"), closed)
	same(t, "different_appraisers", at(t, between, "different_appraisers", "estimate"), at(t, py, "pairs", "between_kappa_pooled_margin"), closed)

	all := decoded(t, judged(t, filepath.Join(reference, "msa-manual-50x3x3.csv"), "--pairing", "all"))
	for i, name := range []string{"A-B", "A-C", "B-C"} {
		p, want := at(t, all, "between", "pairs", i), at(t, r, "cohen_between_all_trial_pairs", name)
		same(t, "table over all trial pairs of "+name, at(t, p, "table"), at(t, want, "table"), 0)
		same(t, "kappa over all trial pairs of "+name, at(t, p, "kappa", "estimate"), at(t, want, "kappa"), closed)
	}
}

// TestContractAgainst compares with R's psych, base and survey.
func TestContractAgainst(t *testing.T) {
	doc := manual(t)
	r := at(t, expected(t, "expected-r.json"), "msa_manual")
	for _, name := range []string{"A", "B", "C"} {
		a := named(t, at(t, doc, "against", "appraisers"), "appraiser", name)
		want := at(t, r, "cohen_vs_reference", name)
		same(t, "table of "+name, at(t, a, "table"), at(t, want, "table"), 0)
		same(t, "kappa of "+name, at(t, a, "kappa", "estimate"), at(t, want, "kappa"), closed)
		same(t, "standard error of "+name, at(t, a, "kappa", "standard_error"), at(t, r, "clustered", "kappa_vs_reference", name, "se"), 1e-6)
		share(t, "effectiveness of "+name, at(t, a, "effectiveness"), at(t, r, "effectiveness", name))
		for key, expected := range map[string]string{"miss": "miss_rate_calls", "false_alarm": "false_alarm_rate_calls"} {
			want := at(t, r, expected, name)
			same(t, key+" of "+name, at(t, a, key, "estimate"), at(t, want, "estimate"), closed)
			same(t, key+" count of "+name, at(t, a, key, "count"), at(t, want, "x"), 0)
			same(t, key+" calls of "+name, at(t, a, key, "of"), at(t, want, "n"), 0)
		}
	}
	// The effective number of C's calls is below the real one, and not capped:
	// survey's limits are those of the method.
	c := named(t, at(t, doc, "against", "appraisers"), "appraiser", "C")
	for _, key := range []string{"miss", "false_alarm"} {
		want := at(t, r, "clustered", key, "C")
		same(t, key+" lower of C", at(t, c, key, "lower"), at(t, want, "lower"), 1e-6)
		same(t, key+" upper of C", at(t, c, key, "upper"), at(t, want, "upper"), 1e-6)
		same(t, key+" effective of C", at(t, c, key, "effective"), at(t, want, "effective_calls"), 1e-6)
	}
	share(t, "effectiveness of all", at(t, doc, "against", "all", "effectiveness"), at(t, r, "all_vs_reference"))
}

// share compares an S with the x of n, the estimate and the exact limits that
// R gives.
func share(t *testing.T, what string, got, want any) {
	t.Helper()
	for key, as := range map[string]string{"count": "x", "of": "n", "estimate": "estimate", "lower": "lower", "upper": "upper"} {
		same(t, what+", "+key, at(t, got, key), at(t, want, as), closed)
	}
}

// TestContractZone compares with the manual's widths (0.024135 and 0.023448,
// mean 0.0237915, 29 % of the tolerance; testdata/reference/README.md) and
// with the fit of R's optim (expected-r.json).
func TestContractZone(t *testing.T) {
	zone := at(t, manual(t), "zone")
	unanimous := at(t, zone, "unanimous")
	same(t, "width at the lower limit", at(t, unanimous, "lower", "width"), 0.024135, closed)
	same(t, "width at the upper limit", at(t, unanimous, "upper", "width"), 0.023448, closed)
	same(t, "mean width", at(t, unanimous, "mean_width"), 0.0237915, closed)
	same(t, "sigma", at(t, unanimous, "sigma"), 0.0237915/5.15, closed)
	same(t, "percent_grr", at(t, unanimous, "percent_grr"), 29., 0.5) // printed as a whole number
	for _, limit := range []string{"lower", "upper"} {
		at(t, unanimous, limit, "reject")
		at(t, unanimous, limit, "accept")
	}

	curve := at(t, zone, "curve")
	want := at(t, expected(t, "expected-r.json"), "msa_manual", "curve_common_sigma")
	const fitted = 1e-5
	same(t, "link", at(t, curve, "link"), "probit", 0)
	same(t, "loglik", at(t, curve, "loglik"), at(t, want, "loglik"), 23*fitted)
	sigma := at(t, want, "sigma").(float64)
	for limit, value := range map[string]float64{"lower": 0.45, "upper": 0.545} {
		l, cut := at(t, curve, limit), at(t, want, limit+"_cut").(float64)
		same(t, "cut", at(t, l, "cut", "estimate"), cut, cut*fitted)
		same(t, "offset", at(t, l, "offset", "estimate"), cut-value, cut*fitted)
		same(t, "sigma", at(t, l, "sigma", "estimate"), sigma, sigma*fitted)
		// 0.5 to 99.5 % acceptance: 2.5758 is the normal quantile of 0.995
		from, to := at(t, l, "from").(float64), at(t, l, "to").(float64)
		same(t, "width of the zone", to-from, 2*2.5758293035489*sigma, sigma*fitted)
		same(t, "middle of the zone", (from+to)/2, cut, cut*fitted)
		for _, figure := range []string{"cut", "offset", "sigma"} {
			e := at(t, l, figure)
			if !(at(t, e, "lower").(float64) < at(t, e, "estimate").(float64) && at(t, e, "estimate").(float64) < at(t, e, "upper").(float64)) {
				t.Errorf("%s of the %s limit lies not inside its interval: %v", figure, limit, e)
			}
			at(t, e, "method")
		}
	}
}

// TestContractVerdict holds the verdict to the criteria of the manual, which
// prints the effectiveness, miss and false-alarm rate of its three appraisers
// (84, 90, 80 %; 6.3, 6.3, 12.5 %; 4.9, 2.0, 8.8 %; testdata/reference/README.md):
// accept, conditional or reject by each level of 90/80, 2/5, 5/10 % and, for
// kappa (0.88, 0.92, 0.77), 0.75/0.40.
func TestContractVerdict(t *testing.T) {
	verdict := at(t, manual(t), "verdict")
	for name, want := range map[string]map[string]string{
		"A": {"effectiveness": "conditional", "miss": "reject", "false_alarm": "accept", "kappa": "accept"},
		"B": {"effectiveness": "accept", "miss": "reject", "false_alarm": "accept", "kappa": "accept"},
		"C": {"effectiveness": "conditional", "miss": "reject", "false_alarm": "conditional", "kappa": "accept"},
	} {
		a := named(t, at(t, verdict, "appraisers"), "appraiser", name)
		for criterion, met := range want {
			c := named(t, at(t, a, "criteria"), "name", criterion)
			same(t, criterion+" of "+name, at(t, c, "met"), met, 0)
		}
		same(t, "verdict of "+name, at(t, a, "verdict"), "reject", 0)
	}
	same(t, "overall", at(t, verdict, "overall"), "reject", 0)
	for _, key := range []string{"causes", "next"} {
		if list, ok := at(t, verdict, key).([]any); !ok || len(list) == 0 {
			t.Errorf("the verdict has no %s", key)
		}
	}
}

// Every key that the JSON can have is explained in docs/json.md.
func TestContractIsDocumented(t *testing.T) {
	page, err := os.ReadFile("../../docs/json.md")
	if err != nil {
		t.Fatal(err)
	}
	undocumented := make(map[string]bool)
	var look func(v any)
	look = func(v any) {
		switch v := v.(type) {
		case []any:
			for _, e := range v {
				look(e)
			}
		case map[string]any:
			for key, member := range v {
				if !bytes.Contains(page, []byte("`"+key+"`")) {
					undocumented[key] = true
				}
				look(member)
			}
		}
	}
	for _, e := range example.Names() {
		look(decoded(t, judged(t, "--example", e.Name, "--independent")))
	}
	for _, e := range extremes() {
		args := append([]string{write(t, "calls.csv", text(e.rows)), "--resamples", "0"}, e.args...)
		if e.name != "200 appraisers" { // which has the keys of the others, many times
			look(decoded(t, judged(t, args...)))
		}
	}
	for key := range undocumented {
		t.Errorf("docs/json.md does not explain the key `%s`", key)
	}
}

// warningCode is where the code of a warning or a note stands in the source.
var warningCode = regexp.MustCompile(`(?:Note\{+|Warning\{+|\.note\()"([a-z_]+)"`)

// Every code that a warning can have is in the document for programs.
func TestWarningCodesAreDocumented(t *testing.T) {
	read := func(file string) string {
		data, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		return string(data)
	}
	_, list, _ := strings.Cut(read("../../docs/json.md"), "\n## `warnings`\n")
	list, _, _ = strings.Cut(list, "\n## ")
	found := make(map[string]bool)
	for _, pattern := range []string{"../../agreement/*.go", "*.go", "internal/*/*.go"} {
		files, err := filepath.Glob(pattern)
		if err != nil {
			t.Fatal(err)
		}
		for _, file := range files {
			if strings.HasSuffix(file, "_test.go") {
				continue
			}
			for _, m := range warningCode.FindAllStringSubmatch(read(file), -1) {
				if found[m[1]] = true; !strings.Contains(list, "`"+m[1]+"`") {
					t.Errorf("%s gives the warning %s, which docs/json.md does not list", file, m[1])
				}
			}
		}
	}
	for _, m := range regexp.MustCompile("`([a-z_]+)`").FindAllStringSubmatch(list, -1) {
		if !found[m[1]] && m[1] != "code" && m[1] != "text" {
			t.Errorf("docs/json.md lists the warning %s, which nothing gives", m[1])
		}
	}
}
