package figure

import (
	"bytes"
	"encoding/xml"
	"errors"
	"fmt"
	"image/png"
	"io"
	"math"
	"strconv"
	"testing"
)

// contrast is that of two colours by WCAG 2.2 (relative luminance).
func contrast(t *testing.T, a, b string) float64 {
	t.Helper()
	light := func(hex string) float64 {
		rgb, err := strconv.ParseUint(hex[1:], 16, 32)
		if err != nil {
			t.Fatal(err)
		}
		channel := func(shift int) float64 {
			v := float64(rgb>>shift&0xff) / 255
			if v <= 0.04045 {
				return v / 12.92
			}
			return math.Pow((v+0.055)/1.055, 2.4)
		}
		return 0.2126*channel(16) + 0.7152*channel(8) + 0.0722*channel(0)
	}
	x, y := light(a), light(b)
	return (max(x, y) + 0.05) / (min(x, y) + 0.05)
}

// The formula, against values that the standard and its tools name: black on
// white is 21 to 1, #767676 on white the lightest grey that passes 4.5 to 1.
func TestContrast(t *testing.T) {
	for _, c := range []struct {
		a, b string
		want float64
	}{{"#000000", "#ffffff", 21}, {"#ffffff", "#ffffff", 1}, {"#767676", "#ffffff", 4.54}} {
		if got := contrast(t, c.a, c.b); math.Abs(got-c.want) > 0.005 {
			t.Errorf("contrast of %s and %s is %.3f; want %v", c.a, c.b, got, c.want)
		}
	}
}

// Text is told from its ground (WCAG 2.2, 1.4.3), marks from what they lie
// beside (1.4.11), in light and in dark.
func TestPalette(t *testing.T) {
	colours := map[bool]map[Role]string{false: {}, true: {}}
	for _, p := range palette {
		colours[false][p.role], colours[true][p.role] = p.light, p.dark
	}
	const text, mark = 4.5, 3
	for _, c := range []struct {
		role, ground Role
		least        float64
	}{
		{Ink, Paper, text}, {Ink, Field, text}, {Ink, Band, text}, {Ink, Zone, text},
		{Muted, Paper, text}, {Muted, Field, text},
		{Right, Paper, mark}, {Right, Field, mark}, {Right, Zone, mark}, {Right, Band, mark}, {Right, Rule, mark},
		{Wrong, Paper, mark}, {Wrong, Zone, mark}, {Wrong, Accept, mark}, {Field, Wrong, mark}, // a mark on a wrong call
		{Reject, Accept, mark}, {Limit, Paper, mark}, {Limit, Zone, mark},
	} {
		for dark, of := range colours {
			if got := contrast(t, of[c.role], of[c.ground]); got < c.least {
				t.Errorf("%s on %s, dark %v: %.2f to 1; at least %v", c.role, c.ground, dark, got, c.least)
			}
		}
	}
	for dark, of := range colours {
		for i := 1; i < len(kindRoles); i++ {
			if got := contrast(t, of[kindRoles[i]], of[kindRoles[i-1]]); got < 1.25 {
				t.Errorf("the shades %d and %d, dark %v, are nearly alike: %.2f to 1", i, i+1, dark, got)
			}
		}
	}
}

// Whatever is drawn is XML, and every role that is used has a colour.
func TestMarkup(t *testing.T) {
	f := &Figure{Name: "x", Title: `<&"'>`, Alt: "\x00\ufffe", Width: 100, Height: 50}
	for _, p := range palette {
		f.rect(p.role, 0, 0, 10, 10)
		f.outline(p.role, 0, 0, 10, 10, true, Dashed)
		f.line(p.role, 0, 0, 1e9, math.SmallestNonzeroFloat64)
		f.dot(p.role, math.Copysign(0, -1), 1, 2)
		f.turned(p.role, 1, 1, 12, Middle, "]]><script>")
		f.bold(p.role, 1, 1, 12, End, "דנה 2 検 👩🏽‍🔧")
		f.Marks = append(f.Marks, Mark{Role: p.role, Path: []Point{{1, 2}, {3, 4}}}, Mark{Role: p.role, Area: []Point{{1, 2}, {3, 4}, {5, 6}}},
			Mark{Role: p.role, Text: &Text{X: 1, Y: 1, Size: 12, Text: "halo", Halo: true}})
	}
	var svg, picture bytes.Buffer
	if err := f.SVG(&svg); err != nil {
		t.Fatal(err)
	}
	d := xml.NewDecoder(&svg)
	for {
		if _, err := d.Token(); errors.Is(err, io.EOF) {
			break
		} else if err != nil {
			t.Fatal(err)
		}
	}
	if err := f.PNG(&picture); err != nil {
		t.Fatal(err)
	}
	got, err := png.DecodeConfig(&picture)
	if err != nil {
		t.Fatal(err)
	}
	if size := fmt.Sprint(got.Width, "×", got.Height); size != "200×100" { // two dots to a pixel
		t.Errorf("the PNG is %s", size)
	}
}

func TestNum(t *testing.T) {
	for _, c := range []struct {
		x    float64
		want string
	}{{0, "0"}, {-0.001, "0"}, {1.50, "1.5"}, {100, "100"}, {-2.345, "-2.35"}, {1e-9, "0"}} {
		if got := num(c.x); got != c.want {
			t.Errorf("num(%v) is %q; want %q", c.x, got, c.want)
		}
	}
}

// The order in which the bidirectional algorithm (UAX #9) shows a text.
func TestVisual(t *testing.T) {
	for _, c := range []struct{ s, want string }{
		{"Early 1", "Early 1"},
		{"אבג", "גבא"},
		{"A אב", "A בא"},
		{"検 A", "□ A"},
		{"", ""},
	} {
		if got := visual(c.s); got != c.want {
			t.Errorf("visual(%q) is %q; want %q", c.s, got, c.want)
		}
	}
}
