package figure

import (
	"strings"
	"testing"
	"unicode/utf8"

	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/font/liberation"
	"gonum.org/v1/plot/vg"
	"pgregory.net/rapid"
)

// names draws names as files have them: Latin, other scripts, signs, spaces.
func names() *rapid.Generator[string] {
	return rapid.OneOf(
		rapid.StringMatching(`[A-Za-z0-9 ,./\-]{0,80}`),
		rapid.StringN(0, 60, -1),
		rapid.SampledFrom([]string{"", "W", "דנה כהן", "検査員一号", "👩🏽‍🔧 Ada", strings.Repeat("x", 500), "i i i i i i"}),
	)
}

// The bound on widths is checked against the widths that the plotting library
// gives for the same typeface.
func TestTextWidthIsABound(t *testing.T) {
	face := font.NewCache(liberation.Collection()).Lookup(font.Font{Typeface: "Liberation", Variant: "Sans", Size: 100}, 100)
	rapid.Check(t, func(t *rapid.T) {
		s := rapid.StringMatching(`[ -~äöüßéÀ-ž]{0,60}`).Draw(t, "s")
		if got, least := textWidth(s, 100), float64(face.Width(s)/vg.Points(1)); got < least {
			t.Fatalf("%q: bounded by %v, is %v wide", s, got, least)
		}
	})
}

func TestShorten(t *testing.T) {
	for _, c := range []struct {
		s     string
		width float64
		want  string
	}{
		{"Early 1", 100, "Early 1"},
		{"", 100, ""},
		{"Early 1", 0, ""},
		{"Early shift", textWidth("Early…", 12) + 0.01, "Early…"},
		{"Early shift", textWidth("Early …", 12) + 0.01, "Early…"}, // no space before the ellipsis
	} {
		if got := shorten(c.s, 12, c.width); got != c.want {
			t.Errorf("shorten(%q, %v) is %q; want %q", c.s, c.width, got, c.want)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		s, width := names().Draw(t, "s"), rapid.Float64Range(0, 300).Draw(t, "width")
		got := shorten(s, 12, width)
		if got != s && textWidth(got, 12) > width {
			t.Fatalf("%q is %v wide; there is room for %v", got, textWidth(got, 12), width)
		}
		if !utf8.ValidString(got) && utf8.ValidString(s) {
			t.Fatalf("%q is cut within a character: %q", s, got)
		}
	})
}

func TestWrap(t *testing.T) {
	for _, c := range []struct {
		s     string
		lines int
		want  string
	}{
		{"Early 1", 3, "Early 1"},
		{"", 3, ""},
		{"CAMERA STATION 14", 3, "CAMERA|STATION|14"},
		{"CAMERA STATION 14", 2, "CAMERA|STATION…"},
	} {
		width := textWidth("STATION…", 12) + 0.01
		if got := strings.Join(wrap(c.s, 12, width, c.lines), "|"); got != c.want {
			t.Errorf("wrap(%q) is %q; want %q", c.s, got, c.want)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		s, width, lines := names().Draw(t, "s"), rapid.Float64Range(20, 300).Draw(t, "width"), rapid.IntRange(1, 4).Draw(t, "lines")
		got := wrap(s, 12, width, lines)
		if len(got) > lines {
			t.Fatalf("%d lines; at most %d", len(got), lines)
		}
		for _, line := range got {
			if textWidth(line, 12) > width && utf8.RuneCountInString(line) > 1 {
				t.Fatalf("%q is %v wide; there is room for %v", line, textWidth(line, 12), width)
			}
		}
	})
}
