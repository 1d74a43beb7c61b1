package report

import "testing"

// A spreadsheet that separates fields by semicolons ends one there also within
// quotes, since these do not begin one of its fields.
func TestHarmless(t *testing.T) {
	for in, want := range map[string]string{
		"":                    "",
		"part 7; left":        "part 7; left",
		"=1+1":                "'=1+1",
		" \u00a0=1+1":         "' \u00a0=1+1",
		"x;=1+1":              "x;'=1+1",
		"x; -1;y;@a;":         "x;' -1;y;'@a;",
		"x\t+1":               "x\t'+1",
		"\u200b=1+1":          "'\u200b=1+1",
		"\ufeff＝1":            "'\ufeff＝1",
		"\u2060\u200e@SUM(1)": "'\u2060\u200e@SUM(1)",
		"\u3164=1":            "'\u3164=1",
		"a=1":                 "a=1",
	} {
		if got := harmless(in); got != want {
			t.Errorf("%q: %q, want %q", in, got, want)
		}
	}
}
