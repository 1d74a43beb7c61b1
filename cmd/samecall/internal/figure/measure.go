package figure

import (
	"strings"
	"sync"

	"codeberg.org/go-fonts/liberation/liberationsansregular"
	"github.com/rivo/uniseg"
	"golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"
)

// typeface is the font that figures are set in: that of the PNG, and the
// first choice of the SVG, where one with the same or nearly the same widths
// takes its place.
var typeface = sync.OnceValue(func() *sfnt.Font {
	f, err := sfnt.Parse(liberationsansregular.TTF)
	if err != nil {
		panic(err) // the font is part of the program
	}
	return f
})

// spare is how much wider than the typeface another sans-serif may run.
const spare = 1.15

// textWidth bounds the width of a text from above.
func textWidth(s string, size float64) float64 {
	w := 0.0
	for g := uniseg.NewGraphemes(s); g.Next(); {
		w += clusterWidth(g) * size
	}
	return w
}

// clusterWidth bounds the width of what is read as one character, in ems.
func clusterWidth(g *uniseg.Graphemes) float64 {
	w := 0.0
	for _, r := range g.Runes() {
		advance, ok := advance(r)
		if !ok {
			// Another font sets it: an ideograph fills an em, an emoji some more.
			return 0.7 * max(1, float64(g.Width()))
		}
		w += advance
	}
	return w * spare
}

// advance is the width of a character of the typeface, in ems; false if it
// has none.
func advance(r rune) (float64, bool) {
	const em = 2048
	var b sfnt.Buffer
	f := typeface()
	i, err := f.GlyphIndex(&b, r)
	if err != nil || i == 0 {
		return 0, false
	}
	a, err := f.GlyphAdvance(&b, i, fixed.I(em), font.HintingNone)
	if err != nil {
		return 0, false
	}
	return float64(a) / 64 / em, true
}

// shorten cuts a text to a width, an ellipsis at its end.
func shorten(s string, size, width float64) string {
	if textWidth(s, size) <= width {
		return s
	}
	const ellipsis = "…"
	room := width - textWidth(ellipsis, size)
	if room < 0 {
		return ""
	}
	var out strings.Builder
	for g := uniseg.NewGraphemes(s); g.Next(); {
		room -= clusterWidth(g) * size
		if room < 0 {
			break
		}
		out.WriteString(g.Str())
	}
	return strings.TrimRight(out.String(), " ") + ellipsis
}

// wrap breaks a text into at most so many lines of a width, the last one
// shortened. A word wider than a line is broken.
func wrap(s string, size, width float64, lines int) []string {
	var out []string
	rest := s
	for len(out) < lines-1 && textWidth(rest, size) > width {
		n := lineBreak(rest, size, width)
		out = append(out, strings.TrimSpace(rest[:n]))
		rest = strings.TrimSpace(rest[n:])
	}
	return append(out, shorten(rest, size, width))
}

// lineBreak returns how many bytes of a text go on a line: up to where it may
// be broken last, else as many characters as there is room for, at least one.
func lineBreak(s string, size, width float64) int {
	fits, at, may := 0, 0, 0
	room, state := width, -1
	for rest := s; len(rest) > 0; {
		cluster, after, boundaries, next := uniseg.StepString(rest, state)
		g := uniseg.NewGraphemes(cluster)
		g.Next()
		room -= clusterWidth(g) * size
		if room < 0 && at > 0 && strings.TrimSpace(cluster) != "" {
			break
		}
		at += len(cluster)
		fits = at
		if boundaries&uniseg.MaskLine != uniseg.LineDontBreak {
			may = at
		}
		rest, state = after, next
	}
	if may > 0 {
		return may
	}
	return fits
}
