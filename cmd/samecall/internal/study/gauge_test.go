package study

import (
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
)

func TestGaugeSizes(t *testing.T) {
	want := GaugeSizes{
		Lower: &GaugeMember{Size: 9.997, Uncertainty: 0.0008, WearLimit: 9.999, HasWear: true},
		Upper: &GaugeMember{Size: 10.0361, Uncertainty: 0.0008, WearsLarger: true},
	}
	same := func(t *testing.T, got GaugeSizes) {
		t.Helper()
		if diff := cmp.Diff(want, got, cmpopts.IgnoreUnexported(GaugeMember{})); diff != "" {
			t.Error(diff)
		}
	}
	for name, text := range map[string]string{
		"inline": "[gauge_sizes]\nlower = {size = 9.997, uncertainty = 0.0008, wear_limit = 9.999}\nupper = {size = 10.0361, uncertainty = 0.0008}\n",
		"tables": "[gauge_sizes.lower]\nsize = 9.997\nuncertainty = 0.0008\nwear_limit = 9.999\n[gauge_sizes.upper]\nsize = 10.0361\nuncertainty = 0.0008\n",
		"worded": "[gauge_sizes]\nlower = {size = 9.997, uncertainty = 0.0008, wear_limit = 9.999, wears = 'smaller'}\nupper = {size = 10.0361, uncertainty = 0.0008}\n",
	} {
		t.Run(name, func(t *testing.T) {
			s, err := parseSettings("s.toml", []byte(text))
			if err != nil {
				t.Fatal(err)
			}
			same(t, s.GaugeSizes)
		})
	}
	// Flags win member by member.
	lower, err := ParseGaugeMember("size=9.997, uncertainty=0.0008,wear_limit=9.999", false)
	if err != nil {
		t.Fatal(err)
	}
	file, err := parseSettings("s.toml", []byte("[gauge_sizes]\nlower = {size = 1, uncertainty = 0}\nupper = {size = 10.0361, uncertainty = 0.0008}\n"))
	if err != nil {
		t.Fatal(err)
	}
	same(t, file.Merge(Settings{GaugeSizes: GaugeSizes{Lower: lower}}).GaugeSizes)
}

func TestGaugeSizesWrong(t *testing.T) {
	for text, want := range map[string]string{
		"[gauge_sizes]\nlower = 9.997\n":                                                   "s.toml:2: found 9.997, expected a table, {size = NUMBER, uncertainty = NUMBER}",
		"[gauge_sizes]\nlower = {size = 9.997}\n":                                          "s.toml:2: found no uncertainty, expected {size",
		"[gauge_sizes]\n\nupper = {sise = 9.997, uncertainty = 0}\n":                       `s.toml:3: found the unknown key "sise", expected size, uncertainty, wear_limit or wears`,
		"[gauge_sizes]\nlower = {size = '9.997', uncertainty = 0}\n":                       `s.toml:2: found the text "9.997", expected a number for size`,
		"[gauge_sizes]\nlower = {size = 9.997, uncertainty = -1}\n":                        "s.toml:2: gauge_sizes.lower: the uncertainty is -1; expected 0 or more",
		"[gauge_sizes]\nlower = {size = nan, uncertainty = 0}\n":                           "s.toml:2: gauge_sizes.lower: found NaN: expected a finite number",
		"[gauge_sizes]\nlower = {size = 1, uncertainty = 0, wears = 'up', wear_limit=1}\n": `expected "smaller" or "larger" for wears`,
		"[gauge_sizes]\nlower = {size = 1, uncertainty = 0, wears = 'larger'}\n":           "wears is given without wear_limit",
		"gauge_sizes = 3\n":                "s.toml:1: found the key gauge_sizes with a value, expected a table",
		"[gauge_sizes]\nmiddle = 3\n":      `s.toml:2: found the unknown key "gauge_sizes.middle"`,
		"[criteria]\nlower = 12\n":         "lower belongs above the first [table]",
		"effectiveness = [0.9, 0.8]\n":     "effectiveness belongs under [criteria]",
		"[gauge_sizes]\nunit = 'mm'\n":     "unit belongs above the first [table]",
		"gauge_sizes.lower = {size = 1}\n": "found no uncertainty",
	} {
		_, err := parseSettings("s.toml", []byte(text))
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: error %v\nexpected: %s", text, err, want)
		}
	}
	for flag, want := range map[string]string{
		"9.997":                             `found "9.997", expected size=NUMBER,uncertainty=NUMBER`,
		"size=9.997":                        "found no uncertainty",
		"size=a,uncertainty=0":              `found the text "a", expected a number for size`,
		"size=1,size=1":                     "found size twice",
		"size=1,uncertainty=-1":             "the uncertainty is -1",
		"size=1,uncertainty=0,x=1":          `found the unknown key "x"`,
		"size=1e999,uncertainty=0":          `found 1e999: the number is too large (expected at most 1e100 in size)`,
		"":                                  `found ""`,
		"size=1,uncertainty=0,wears=larger": "wears is given without wear_limit",
	} {
		if _, err := ParseGaugeMember(flag, false); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%q: error %v, expected %s", flag, err, want)
		}
	}
}
