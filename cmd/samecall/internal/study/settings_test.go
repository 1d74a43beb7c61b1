package study

import (
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

const wholeStudyFile = `title = "Bore 12 H7 of the pump body"
characteristic = "bore diameter"
unit = "mm"
gauge = "plug gauge 12 H7"
lower = 12
upper = 12.018
accept = ["go"]
reject = ["nogo"]
order = []
ignore = ["comment"]
calls = "calls.csv"
sheet = "Calls"
confidence = 0.9
[criteria]
effectiveness = [0.90, 0.80]
miss = [0.02, 0.05]
false_alarm = [0.05, 0.10]
kappa = [0.75, -0.40]
`

func TestReadSettings(t *testing.T) {
	got, err := parseSettings("study.toml", []byte("\ufeff"+wholeStudyFile))
	if err != nil {
		t.Fatal(err)
	}
	want := Settings{
		Title: "Bore 12 H7 of the pump body", Characteristic: "bore diameter", Unit: "mm", Gauge: "plug gauge 12 H7",
		Lower: ptr(12), Upper: ptr(12.018), Accept: []string{"go"}, Reject: []string{"nogo"}, Ignore: []string{"comment"},
		Calls: "calls.csv", Sheet: "Calls", Confidence: 0.9,
		Criteria: Criteria{&[2]float64{0.9, 0.8}, &[2]float64{0.02, 0.05}, &[2]float64{0.05, 0.1}, &[2]float64{0.75, -0.4}},
	}
	if d := cmp.Diff(want, got); d != "" {
		t.Error(d)
	}
}

func TestReadSettingsWrong(t *testing.T) {
	for _, c := range []struct{ in, want string }{
		{"title = \"x\"\nuper = 3\n", `s.toml:2: found the unknown key "uper"; did you mean upper?`},
		{"miss = [0.1, 0.2]\n", `s.toml:1: found the unknown key "miss"; miss belongs under [criteria]`},
		{"[criteria]\n\nmis = [0.1, 0.2]\n", `s.toml:3: found the unknown key "criteria.mis"; did you mean criteria.miss?`},
		{"[criteria]\nlower = 2\n", `s.toml:2: found the unknown key "criteria.lower"; lower belongs above the first [table]`},
		{"lower = \"12\"\ntitle = 5\naccept = \"go\"\nreject = [1]", `s.toml:1: found the text "12", expected a number without quotes, with a decimal point; the key is lower
s.toml:2: found 5, expected text in quotes; the key is title
s.toml:3: found the text "go", expected a list of words in quotes, such as ["go", "pass"]; the key is accept
s.toml:4: found 1, expected a list of words in quotes, such as ["go", "pass"]; the key is reject`},
		{"confidence = 95\n", `s.toml:1: found 95, expected a number from 0.5 to 0.9999, such as 0.95; the key is confidence`},
		{"lower = 3\nupper = 3\n", `s.toml:2: lower is 3 and upper is 3; lower must be less than upper`},
		{"lower = nan\n", `s.toml:1: lower is NaN: expected a finite number; leave it out where there is no such limit`},
		{"lower = 1e101\n", `s.toml:1: lower is 1e+101: the number is too large (expected at most 1e100 in size); leave it out where there is no such limit`},
		{"lower = 3e-320\n", `s.toml:1: lower is 3e-320: the number is too small (expected 0, or at least 1e-100 in size); leave it out where there is no such limit`},
		{"lower = 1e-100\nupper = 1.5e-100\n", `s.toml:2: lower is 1e-100 and upper is 1.5e-100; the tolerance between them is too small (expected at least 1e-100)`},
		{"confidence = 0.4999\n", `s.toml:1: found 0.4999, expected a number from 0.5 to 0.9999, such as 0.95; the key is confidence`},
		{"[gauge_sizes]\nlower = {size = 1e308, uncertainty = 1}\n", `s.toml:2: gauge_sizes.lower: found 1e+308: the number is too large (expected at most 1e100 in size)`},
		{"upper = inf\n", `s.toml:1: upper is +Inf: expected a finite number; leave it out where there is no such limit`},
		{"[criteria]\neffectiveness = [0.8, 0.9]\nmiss = [0.05, 0.02]\nkappa = [2, 0]\nfalse_alarm = [0.1]\n",
			`s.toml:5: found a list of 1 value, expected the accept and the conditional level, such as [0.90, 0.80]; the key is criteria.false_alarm`},
		{"[criteria]\neffectiveness = [0.8, 0.9]\nmiss = [0.05, 0.02]\nkappa = [2, 0]\n",
			`s.toml:2: criteria.effectiveness is [0.8, 0.9]; the accept level stands first and must not be below the conditional level
s.toml:3: criteria.miss is [0.05, 0.02]; the accept level stands first and must not be above the conditional level
s.toml:4: criteria.kappa is [2, 0]; expected two numbers from -1 to 1`},
		{"criteria = 3\n", `s.toml:1: found the key criteria with a value, expected a table; write [criteria] on its own line and the levels below it`},
		{"order = [\"a\"]\ncategories = [\"b\"]\n", `s.toml:2: order and categories are both given; use order for grades from best to worst, categories for kinds without an order`},
		{"categories = [\"a\", \"A\"]\naccept = [\"b\", \"\"]\n", `s.toml:1: categories names "A" twice (words are matched without case)
s.toml:2: accept holds an empty word
s.toml:2: accept names "b", which categories does not list`},
	} {
		_, err := parseSettings("s.toml", []byte(c.in))
		if err == nil {
			t.Errorf("%q: no error", c.in)
			continue
		}
		if d := cmp.Diff(c.want, err.Error()); d != "" {
			t.Errorf("%q: %s", c.in, d)
		}
	}
	_, err := parseSettings("s.toml", []byte("title = \"x\"\nlower = \n"))
	if err == nil || !strings.HasPrefix(err.Error(), "s.toml:2:") || !strings.Contains(err.Error(), "not valid TOML") {
		t.Errorf("syntax: %v", err)
	}
}

// The hint stands behind the message of the TOML library, the line before it.
func TestSyntaxHints(t *testing.T) {
	for _, c := range []struct{ in, want string }{
		{"title = \"x\"\nunit = mm\n", `text needs quotes, as in unit = "mm"`},
		{"title = 12 bolts\r\n", `text needs quotes, as in unit = "mm"`},
		{"lower = 10,000\nupper = 11\n", "the decimal sign is a point, not a comma"},
		{"[gauge_sizes]\nlower = {size = 9,997, uncertainty = 1}\n", "the decimal sign is a point, not a comma"},
		{"accept = [go]\n", "words need quotes, each its own"},
		{"upper = 10.5 mm\n", "a number stands alone, without a unit"},
		{"upper = .5\n", ""},
		{"title = \"x, 3\n", ""},
	} {
		_, err := parseSettings("s.toml", []byte(c.in))
		if err == nil {
			t.Errorf("%q: no error", c.in)
			continue
		}
		_, hint, _ := strings.Cut(err.Error(), "; ")
		if hint != c.want || !strings.Contains(err.Error(), "not valid TOML: ") {
			t.Errorf("%q: %v, want the hint %q", c.in, err, c.want)
		}
	}
}

func TestMerge(t *testing.T) {
	file, err := parseSettings("s.toml", []byte(wholeStudyFile))
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(file, file.Merge(Settings{})); d != "" {
		t.Errorf("nothing over it: %s", d)
	}
	if d := cmp.Diff(file, Settings{}.Merge(file)); d != "" {
		t.Errorf("over nothing: %s", d)
	}
	got := file.Merge(Settings{Upper: ptr(13), Accept: []string{"ok"}, Confidence: 0.99, Criteria: Criteria{Miss: &[2]float64{0, 0.1}}})
	want := file
	want.Upper, want.Accept, want.Confidence, want.Criteria.Miss = ptr(13), []string{"ok"}, 0.99, &[2]float64{0, 0.1}
	if d := cmp.Diff(want, got); d != "" {
		t.Error(d)
	}
}
