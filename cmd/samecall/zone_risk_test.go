package main

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

// answer runs a command with --json - and returns what it wrote.
func answer(t *testing.T, args ...string) map[string]any {
	t.Helper()
	var out, errs bytes.Buffer
	args = append(args, "--json", "-")
	if status := run(args, strings.NewReader(""), &out, &errs); status != exitDone {
		t.Fatalf("samecall %s: status %d\n%s", strings.Join(args, " "), status, &errs)
	}
	return decoded(t, out.Bytes())
}

func relative(t *testing.T, what string, got, want any, tolerance float64) {
	t.Helper()
	w, _ := want.(float64)
	same(t, what, got, want, tolerance*math.Abs(w))
}

var manualFlags = []string{filepath.Join(reference, "msa-manual-50x3x3.csv"), "--lower", "0.45", "--upper", "0.545"}

// The manual's own figures of the unanimous zone (testdata/reference/README.md)
// and R's maximum-likelihood fit of its data (expected-r.json).
func TestZoneOfTheManual(t *testing.T) {
	r := at(t, expected(t, "expected-r.json"), "msa_manual")
	z := answer(t, append([]string{"zone"}, manualFlags...)...)
	for path, want := range map[string]float64{"lower": 0.024135, "upper": 0.023448} {
		same(t, path+" d", at(t, z, "unanimous", path, "width"), want, 1e-9)
	}
	same(t, "mean d", at(t, z, "unanimous", "mean_width"), 0.0237915, 1e-9)
	same(t, "%GRR", at(t, z, "unanimous", "percent_grr"), 29., 0.5)
	one := at(t, r, "curve_common_sigma")
	relative(t, "lower cut", at(t, z, "curve", "lower", "cut", "estimate"), at(t, one, "lower_cut"), 1e-5)
	relative(t, "upper cut", at(t, z, "curve", "upper", "cut", "estimate"), at(t, one, "upper_cut"), 1e-5)
	relative(t, "σ", at(t, z, "curve", "lower", "sigma", "estimate"), at(t, one, "sigma"), 1e-5)
	relative(t, "log-likelihood", at(t, z, "curve", "loglik"), at(t, one, "loglik"), 1e-5)
	same(t, "parts", float64(len(at(t, z, "parts").([]any))), 50., 0)

	two := at(t, r, "curve_two_sigmas")
	z = answer(t, append([]string{"zone", "--two-sigmas"}, manualFlags...)...)
	for _, side := range []string{"lower", "upper"} {
		relative(t, side+" cut", at(t, z, "curve", side, "cut", "estimate"), at(t, two, side+"_cut"), 1e-5)
		relative(t, side+" σ", at(t, z, "curve", side, "sigma", "estimate"), at(t, two, "sigma_"+side), 1e-5)
	}

	z = answer(t, append([]string{"zone", "--spread", "6"}, manualFlags...)...)
	same(t, "σ by 6", at(t, z, "unanimous", "sigma"), 0.0237915/6, 1e-9)
}

// A limit without a mixed part: R's bias-reduced fit (expected-r.json,
// separated), probit and logit.
func TestZoneSeparated(t *testing.T) {
	r := at(t, expected(t, "expected-r.json"), "separated")
	var b strings.Builder
	b.WriteString("part,value,appraiser,trial,call\n")
	values := at(t, r, "data", "value").([]any)
	for i, v := range values {
		accepted := at(t, r, "data", "accepted", i).(float64)
		for trial := range 10 {
			fmt.Fprintf(&b, "%d,%v,a,%d,%d\n", i+1, v, trial+1, int(accepted/10))
		}
	}
	file := filepath.Join(t.TempDir(), "calls.csv")
	if err := os.WriteFile(file, []byte(b.String()), 0o666); err != nil {
		t.Fatal(err)
	}
	sd := map[string]float64{"probit": 1, "logit": math.Pi / math.Sqrt(3)} // of the standard distribution
	for _, link := range []string{"probit", "logit"} {
		z := answer(t, "zone", file, "--lower", "10", "--link", link)
		l := at(t, z, "curve", "lower")
		relative(t, link+" cut", at(t, l, "cut", "estimate"), at(t, r, link, "cut"), 1e-5)
		relative(t, link+" slope", sd[link]/at(t, l, "sigma", "estimate").(float64), at(t, r, link, "slope"), 1e-5)
		same(t, "gap", []any{at(t, l, "gap", "reject"), at(t, l, "gap", "accept")}, []any{10., 10.02}, 0)
	}
}

// Risk of gauges taken as known, by R's integrate (expected-r.json, risk).
func TestRiskOfKnownGauges(t *testing.T) {
	cases, _ := expected(t, "expected-r.json")["risk"].([]any)
	if len(cases) == 0 {
		t.Fatal("no cases")
	}
	for _, c := range cases {
		n := func(key string) string { return strconv.FormatFloat(at(t, c, key).(float64), 'g', -1, 64) }
		got := answer(t, "risk", "--lower", n("lower"), "--upper", n("upper"), "--cut-lower", n("cut_lower"), "--cut-upper", n("cut_upper"),
			"--sigma", n("sigma_gauge"), "--mean", n("mu"), "--sd", n("sigma_process"))
		for key, want := range map[string]string{"bad": "bad_share", "accepted": "accepted_share", "escape": "escape_share",
			"false_reject": "false_reject_share", "bad_among_accepted": "bad_among_accepted", "good_among_rejected": "good_among_rejected"} {
			relative(t, key, at(t, got, "risk", key, "estimate"), at(t, c, want), 1e-8)
		}
		both := at(t, got, "risk", "escape_lower", "estimate").(float64) + at(t, got, "risk", "escape_upper", "estimate").(float64)
		relative(t, "escapes by limit", both, at(t, got, "risk", "escape", "estimate"), 1e-12)
	}
}

// A capable process is the normal one that its definition says: Cp 1 and Cpk
// 0.8 towards the lower limit of 0.45 to 0.545 have a standard deviation of
// 0.095/6 and a mean 2.4 of these above the limit.
func TestRiskCapability(t *testing.T) {
	sd := 0.095 / 6
	by := answer(t, append([]string{"risk", "--cp", "1", "--cpk", "0.8", "--towards", "lower"}, manualFlags...)...)
	direct := answer(t, append([]string{"risk", "--mean", fmt.Sprint(0.45 + 2.4*sd), "--sd", fmt.Sprint(sd)}, manualFlags...)...)
	for _, key := range []string{"estimate", "lower", "upper"} {
		relative(t, "escapes", at(t, by, "risk", "escape", key), at(t, direct, "risk", "escape", key), 1e-9)
	}
	same(t, "Cpk", at(t, direct, "process", "cpk"), 0.8, 1e-9)
}

// A process of two values, one on a cut: half a call in two accepts it.
func TestRiskOfValues(t *testing.T) {
	file := filepath.Join(t.TempDir(), "v.csv")
	if err := os.WriteFile(file, []byte("value\n9,9\n10,0\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	got := answer(t, "risk", "--lower", "9.95", "--cut-lower", "9.9", "--sigma", "0.001", "--process-values", file)
	same(t, "escapes", at(t, got, "risk", "escape", "estimate"), 0.25, 1e-12)
	same(t, "false rejects", at(t, got, "risk", "false_reject", "estimate"), 0., 1e-12)
	same(t, "bad", at(t, got, "risk", "bad", "estimate"), 0.5, 1e-12)
	same(t, "bad among accepted", at(t, got, "risk", "bad_among_accepted", "estimate"), 1./3, 1e-12)
}

// The guard band found holds the target, and a narrower one does not; the
// cheapest costs no more than its neighbours.
func TestRiskGuardBandsFound(t *testing.T) {
	base := append([]string{"risk", "--mean", "0.4975", "--sd", "0.02"}, manualFlags...)
	got := answer(t, append(base, "--escape-target", "100", "--cost-escape", "500", "--cost-reject", "4")...)
	band := at(t, got, "escape_target", "guard_band").(float64)
	relative(t, "escapes", at(t, got, "escape_target", "risk", "escape", "estimate"), 100e-6, 1e-6)
	at99 := func(b float64) (escape, reject float64) {
		row := at(t, answer(t, append(base, "--guard", strconv.FormatFloat(b, 'g', -1, 64))...), "guard_bands", 0, "risk")
		return at(t, row, "escape", "estimate").(float64), at(t, row, "false_reject", "estimate").(float64)
	}
	if e, _ := at99(0.99 * band); e <= 100e-6 {
		t.Errorf("a guard band of %v is more than is needed: %v escape with less", band, e)
	}
	cheapest := at(t, got, "cost", "guard_band").(float64)
	least := at(t, got, "cost", "per_part").(float64)
	for _, f := range []float64{0, 0.95, 1.05, 2} {
		e, r := at99(f * cheapest)
		if cost := 500*e + 4*r; cost < least {
			t.Errorf("%v costs %v, less than %v at %v", f*cheapest, cost, least, cheapest)
		}
	}
	shown := answer(t, append(base, "--escape-target", "100", "--shown")...)
	relative(t, "upper bound", at(t, shown, "escape_target", "risk", "escape", "upper"), 100e-6, 1e-4)
}

// The manual's short study (from memory) read off probability paper: cut
// about −0.0123, bias 0.0023, repeatability 0.0073; tolerance 0.0007
// (testdata/reference/README.md).
func TestShortOfTheManual(t *testing.T) {
	got := answer(t, "short", filepath.Join(reference, "short-study-one-limit.csv"), "--limit", "-0.010", "--side", "lower")
	for key, want := range map[string]float64{"cut": -0.0123, "bias": 0.0023, "repeatability": 0.0073} {
		same(t, key, at(t, got, "analytic", key), want, 0.0007)
	}
	bias, repeatability := at(t, got, "analytic", "bias").(float64), at(t, got, "analytic", "repeatability").(float64)
	relative(t, "t", at(t, got, "analytic", "t"), 31.3*bias/repeatability, 1e-12)
	// t(0.975, 19) of printed tables.
	same(t, "t critical", at(t, got, "analytic", "t_critical"), 2.093, 5e-4)
	same(t, "significant", at(t, got, "analytic", "significant"), true, 0)
	same(t, "all met", at(t, got, "all_met"), true, 0)
	// The same study mirrored to an upper limit has the same bias.
	data, err := os.ReadFile(filepath.Join(reference, "short-study-one-limit.csv"))
	if err != nil {
		t.Fatal(err)
	}
	file := filepath.Join(t.TempDir(), "upper.csv")
	if err := os.WriteFile(file, bytes.ReplaceAll(data, []byte("\n-"), []byte("\n")), 0o666); err != nil {
		t.Fatal(err)
	}
	mirrored := answer(t, "short", file, "--limit", "0.010", "--side", "upper")
	for _, path := range [][]any{{"analytic", "bias"}, {"maximum_likelihood", "bias", "estimate"}, {"maximum_likelihood", "bias", "lower"}, {"maximum_likelihood", "bias", "upper"}} {
		relative(t, fmt.Sprint(path), at(t, mirrored, path...), at(t, got, path...), 1e-6)
	}
}

// Bliss's beetles (1935): the dose as the size of a flaw. a50 and a90 follow
// from R's probit fit over the logarithm (expected-r.json, beetles).
func TestFlawOfTheBeetles(t *testing.T) {
	data, err := os.ReadFile(filepath.Join(reference, "beetles-1935.csv"))
	if err != nil {
		t.Fatal(err)
	}
	var b strings.Builder
	b.WriteString("size,looks,found\n")
	for _, line := range strings.Split(strings.TrimSpace(string(data)), "\n")[1:] {
		f := strings.Split(line, ",")
		x, err := strconv.ParseFloat(f[0], 64)
		if err != nil {
			t.Fatal(err)
		}
		fmt.Fprintf(&b, "%v,%s,%s\n", math.Pow(10, x), f[1], f[2])
	}
	file := filepath.Join(t.TempDir(), "beetles.csv")
	if err := os.WriteFile(file, []byte(b.String()), 0o666); err != nil {
		t.Fatal(err)
	}
	r := at(t, expected(t, "expected-r.json"), "beetles")
	got := answer(t, "flaw", file)
	ld50, slope := at(t, r, "probit", "ld50").(float64), at(t, r, "probit", "slope").(float64)
	relative(t, "a50", at(t, got, "a50", "estimate"), math.Pow(10, ld50), 1e-5)
	// 1.2815515655446004 is the normal quantile of 0.9.
	relative(t, "a90", at(t, got, "a90", "estimate"), math.Pow(10, ld50+1.2815515655446004/slope), 1e-5)
	bound := at(t, got, "a90_95", "estimate").(float64)
	if a90 := at(t, got, "a90", "estimate").(float64); !(bound > a90) {
		t.Errorf("a90/95 %v is not above a90 %v", bound, a90)
	}
	ld50 = at(t, r, "logit", "ld50").(float64)
	relative(t, "a50 logit", at(t, answer(t, "flaw", "--link", "logit", file), "a50", "estimate"), math.Pow(10, ld50), 1e-5)
}

// No JSON holds a figure that is not a number, whatever the study: JSON has no
// way to write one, so that it would be an error.
func TestZoneAndRiskOfExtremes(t *testing.T) {
	for name, calls := range map[string]string{
		"separated":         "part,value,a-1,a-2\n1,9,0,0\n2,9.9,0,0\n3,10.1,1,1\n4,11,1,1\n",
		"one mixed":         "part,value,a-1,a-2\n1,9,0,0\n2,9.9,0,1\n3,10.1,1,1\n4,11,1,1\n",
		"all accepted":      "part,value,a-1,a-2\n1,9,1,1\n2,9.9,1,1\n3,10.1,1,1\n",
		"wrong way":         "part,value,a-1,a-2\n1,9,1,1\n2,9.9,1,1\n3,10.1,0,0\n4,11,0,0\n",
		"one value":         "part,value,a-1,a-2\n1,10,1,1\n2,10,0,1\n",
		"outlier":           "part,value,a-1,a-2\n1,9,0,0\n2,9.5,0,0\n3,9.9,0,1\n4,10,1,0\n5,10.1,1,1\n6,10.5,1,1\n7,11,1,1\n8,12,1,1\n9,13,0,0\n",
		"a part not called": "part,value,a-1,a-2\n1,9,0,0\n2,9.9,0,1\n3,10.1,1,1\n4,11,,\n",
	} {
		file := filepath.Join(t.TempDir(), "calls.csv")
		if err := os.WriteFile(file, []byte(calls), 0o666); err != nil {
			t.Fatal(err)
		}
		for _, args := range [][]string{
			{"zone", file, "--lower", "10"}, {"zone", file, "--lower", "10", "--upper", "12", "--lapse", "--two-sigmas"}, {"zone", file, "--upper", "10", "--link", "logit"},
			{"risk", file, "--lower", "10", "--mean", "10.5", "--sd", "0.2", "--escape-target", "1", "--cost-escape", "5", "--cost-reject", "1"},
		} {
			for _, extra := range [][]string{nil, {"--json", "-"}} {
				var out, errs bytes.Buffer
				status := run(append(args, extra...), strings.NewReader(""), &out, &errs)
				text := out.String() + errs.String()
				switch {
				case status != exitDone && status != exitWrongData:
					t.Errorf("%s: %v: status %d: %s", name, args, status, text)
				case status == exitWrongData && out.Len() > 0:
					t.Errorf("%s: %v: half an answer", name, args)
				case strings.Contains(text, "NaN") || strings.Contains(text, "Inf"):
					t.Errorf("%s: %v: %s", name, args, text)
				case status == exitDone && extra != nil && !json.Valid(out.Bytes()):
					t.Errorf("%s: %v: no JSON", name, args)
				}
			}
		}
	}
}

// The keys that docs/json.md promises of the four schemas.
func TestZoneAndRiskContractKeys(t *testing.T) {
	estimate := []string{"estimate", "lower", "upper", "method"}
	bore := []string{"--example", "bore"}
	short := filepath.Join(reference, "short-study-one-limit.csv")
	flaws := filepath.Join(t.TempDir(), "flaws.csv")
	if err := os.WriteFile(flaws, []byte("size,found,looks\n1,0,5\n2,1,5\n3,3,5\n4,4,5\n5,5,5\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		schema string
		args   []string
		paths  [][]any
		E      [][]any // estimates with an interval
	}{
		{"samecall/zone/1", append([]string{"zone"}, bore...), [][]any{
			{"study", "parts"}, {"settings", "confidence"}, {"settings", "link"}, {"settings", "two_sigmas"}, {"settings", "lapse"}, {"settings", "spread"},
			{"unanimous", "lower", "width"}, {"unanimous", "percent_grr"}, {"curve", "loglik"}, {"curve", "loglik_of_calls"}, {"curve", "parameters"},
			{"curve", "deviance"}, {"curve", "lack_of_fit", "p"}, {"curve", "appraisers", 2, "upper", "cut"}, {"curve", "tests", "same_cut", "p"},
			{"methods", 1, "limit"}, {"methods", 0, "unanimous", "sigma"}, {"methods", 0, "curve", "percent_grr"}, {"why_they_differ", 0},
			{"parts", 59, "part"}, {"parts", 0, "value"}, {"parts", 0, "accepted"}, {"parts", 0, "calls"}, {"parts", 0, "fitted"}, {"parts", 0, "residual"},
			{"parts", 0, "tail"}, {"parts", 0, "leverage"}, {"parts", 0, "limit"}, {"parts", 0, "cut_change"}, {"parts", 0, "sigma_change"},
			{"parts", 0, "drives_the_fit"}, {"parts", 0, "outlier"}, {"gauge_sizes", 0, "finding"}, {"gauge_sizes", 0, "worn"}, {"gauge_sizes", 1, "deviation"},
			{"cautions", 0}, {"warnings"},
		}, [][]any{{"curve", "lower", "offset"}, {"curve", "upper", "share_of_tolerance"}, {"curve", "upper", "accepted_at_limit"}, {"methods", 0, "curve", "width"},
			{"gauge_sizes", 0, "offset"}, {"gauge_sizes", 0, "remainder"}}},
		{"samecall/risk/1", append([]string{"risk", "--mean", "10.018", "--sd", "0.006", "--escape-target", "50", "--cost-escape", "9", "--cost-reject", "1"}, bore...), [][]any{
			{"study", "title"}, {"limits", "unit"}, {"process", "kind"}, {"process", "sd"}, {"process", "cp"}, {"process", "cpk"}, {"gauge", "known"}, {"gauge", "link"},
			{"gauge", "upper", "cut"}, {"gauge", "lower", "sigma"}, {"gauge", "lapse"}, {"guard_bands", 6, "sigmas"}, {"guard_bands", 0, "guard_band"},
			{"escape_target", "target"}, {"escape_target", "guard_band"}, {"cost", "per_part"}, {"cost", "per_part_now"}, {"cost", "at_edge"}, {"cautions", 0}, {"warnings"},
		}, [][]any{{"risk", "escape"}, {"risk", "escape_lower"}, {"risk", "false_reject_upper"}, {"risk", "accepted"}, {"risk", "bad"}, {"risk", "bad_among_accepted"},
			{"risk", "good_among_rejected"}, {"guard_bands", 3, "risk", "escape"}, {"escape_target", "risk", "escape"}, {"cost", "risk", "false_reject"}}},
		{"samecall/short/1", []string{"short", short, "--limit", "-0.010", "--side", "lower"}, [][]any{
			{"input", "sha256"}, {"limit"}, {"side"}, {"preconditions", 4, "met"}, {"preconditions", 0, "need"}, {"preconditions", 0, "have"}, {"preconditions", 0, "name"},
			{"analytic", "intercept"}, {"analytic", "slope"}, {"analytic", "sigma"}, {"maximum_likelihood", "loglik"}, {"maximum_likelihood", "link"},
			{"maximum_likelihood", "curve", "status"}, {"parts", 8, "used"}, {"parts", 0, "adjusted"}, {"parts", 0, "z"}, {"parts", 0, "fitted"}, {"conclusion", 0}, {"cautions", 0},
		}, [][]any{{"maximum_likelihood", "bias"}, {"maximum_likelihood", "curve", "cut"}}},
		{"samecall/flaw/1", []string{"flaw", flaws}, [][]any{
			{"input", "file"}, {"flaws"}, {"looks"}, {"found"}, {"a90_95", "estimate"}, {"a90_95", "method"}, {"maximum_likelihood", "loglik"}, {"sizes", 4, "fitted"},
			{"outliers"}, {"notes", 0}, {"assumes", 0}, {"cautions", 0},
		}, [][]any{{"a50"}, {"a90"}, {"sigma_log"}}},
	} {
		got := answer(t, c.args...)
		same(t, "schema", at(t, got, "schema"), c.schema, 0)
		for _, p := range c.paths {
			if at(t, got, p...) == nil {
				t.Errorf("%s: %v is null", c.schema, p)
			}
		}
		for _, p := range c.E {
			for _, key := range estimate {
				at(t, got, append(append([]any{}, p...), key)...)
			}
		}
	}
}
