package figure

import (
	"fmt"
	"html"
	"io"
	"strconv"
	"strings"
	"unicode"
)

// palette gives each role its fill or stroke, in light and in dark.
var palette = []struct {
	role        Role
	light, dark string
}{
	{Paper, "#ffffff", "#15181d"},
	{Ink, "#1b1f24", "#e8eaed"},
	{Muted, "#57606a", "#a8b0b9"},
	{Rule, "#d0d7de", "#3d444d"},
	{Field, "#f3f5f7", "#22272e"},
	{Zone, "#e3e0d8", "#3a3830"},
	{Limit, "#1b1f24", "#e8eaed"},
	{Right, "#1f6fb2", "#6cb0ea"},
	{Wrong, "#c4580a", "#f2994a"},
	{Band, "#c9def0", "#24435e"},
	{Thin, "#4d87b5", "#5f97c5"},
	{Accept, "#d6e6f4", "#2b4963"},
	{Reject, "#6d7b88", "#8a97a5"},
	{kindRoles[0], "#dfeaf4", "#22384b"},
	{kindRoles[1], "#bdd2e4", "#2f5070"},
	{kindRoles[2], "#97b4cc", "#4a6d8c"},
	{kindRoles[3], "#7592ad", "#6f8da8"},
	{kindRoles[4], "#56708a", "#97aec2"},
	{kindRoles[5], "#3b4f62", "#c3d0db"},
}

// Style is the style sheet of figures, for a page that holds them.
func Style() string {
	var light, dark strings.Builder
	for _, p := range palette {
		fmt.Fprintf(&light, "--f-%s:%s;", p.role, p.light)
		fmt.Fprintf(&dark, "--f-%s:%s;", p.role, p.dark)
	}
	var s strings.Builder
	fmt.Fprintf(&s, ":root{%s}\n@media screen and (prefers-color-scheme:dark){:root{%s}}\n", light.String(), dark.String())
	// Fonts as wide as the one that places were measured with come first.
	s.WriteString("svg.figure{font-family:'Liberation Sans',Arimo,Arial,Helvetica,system-ui,sans-serif}\n")
	fmt.Fprintf(&s, "svg.figure .halo{paint-order:stroke;stroke:var(--f-%s);stroke-width:3px;stroke-linejoin:round}\n", Paper)
	for _, p := range palette {
		fmt.Fprintf(&s, ".f-%s{fill:var(--f-%s)}.s-%s{stroke:var(--f-%s);fill:none}\n", p.role, p.role, p.role, p.role)
	}
	return s.String()
}

// SVG writes the figure as a file of its own.
func (f *Figure) SVG(w io.Writer) error {
	_, err := io.WriteString(w, `<?xml version="1.0" encoding="UTF-8"?>`+"\n"+f.markup(true)+"\n")
	return err
}

// Inline returns the figure for a page that has Style.
func (f *Figure) Inline() string { return f.markup(false) }

func (f *Figure) markup(alone bool) string {
	var s strings.Builder
	id := "figure-" + f.Name
	fmt.Fprintf(&s, `<svg xmlns="http://www.w3.org/2000/svg" class="figure" role="img" aria-labelledby="%s-title %s-desc" viewBox="0 0 %s %s" width="%s" height="%s">`,
		id, id, num(f.Width), num(f.Height), num(f.Width), num(f.Height))
	fmt.Fprintf(&s, "\n<title id=\"%s-title\">%s</title>\n<desc id=\"%s-desc\">%s</desc>\n", id, escape(f.Title), id, escape(f.Alt))
	if alone {
		fmt.Fprintf(&s, "<style>%s</style>\n", Style())
		// A viewer's own ground may be light or dark; the texts are not for both.
		Mark{Role: Paper, Rect: &Rect{W: f.Width, H: f.Height}}.markup(&s)
		s.WriteByte('\n')
	}
	for _, m := range f.Marks {
		m.markup(&s)
		s.WriteByte('\n')
	}
	s.WriteString("</svg>")
	return s.String()
}

func (m Mark) markup(s *strings.Builder) {
	stroke := fmt.Sprintf(`class="s-%s" stroke-width="%s"`, m.Role, num(m.strokeWidth()))
	if d := dashes[m.Dash]; d != nil {
		stroke += fmt.Sprintf(` stroke-dasharray="%s"`, strings.Trim(fmt.Sprint(d), "[]"))
	}
	fill := fmt.Sprintf(`class="f-%s"`, m.Role)
	switch {
	case m.Rect != nil:
		style := fill
		if m.Rect.Outline {
			style = stroke
		}
		fmt.Fprintf(s, `<rect %s x="%s" y="%s" width="%s" height="%s"/>`, style, num(m.Rect.X), num(m.Rect.Y), num(m.Rect.W), num(m.Rect.H))
	case m.Line != nil:
		fmt.Fprintf(s, `<line %s x1="%s" y1="%s" x2="%s" y2="%s"/>`, stroke, num(m.Line.X1), num(m.Line.Y1), num(m.Line.X2), num(m.Line.Y2))
	case m.Path != nil:
		fmt.Fprintf(s, `<polyline %s points="%s"/>`, stroke, points(m.Path))
	case m.Area != nil:
		fmt.Fprintf(s, `<polygon %s points="%s"/>`, fill, points(m.Area))
	case m.Dot != nil:
		style := fill
		if m.Dot.Outline {
			style = stroke
		}
		fmt.Fprintf(s, `<circle %s cx="%s" cy="%s" r="%s"/>`, style, num(m.Dot.X), num(m.Dot.Y), num(m.Dot.R))
	case m.Text != nil:
		t := m.Text
		turn, weight := "", ""
		if t.Turn {
			turn = fmt.Sprintf(` transform="rotate(-90 %s %s)"`, num(t.X), num(t.Y))
		}
		if m.Heavy {
			weight = ` font-weight="600"`
		}
		class := "f-" + string(m.Role)
		if t.Halo {
			class += " halo"
		}
		fmt.Fprintf(s, `<text class="%s" x="%s" y="%s" font-size="%s" text-anchor="%s"%s%s>%s</text>`,
			class, num(t.X), num(t.Y), num(t.Size), [...]string{"start", "middle", "end"}[t.Anchor], weight, turn, escape(t.Text))
	}
}

func (m Mark) strokeWidth() float64 {
	switch {
	case m.Heavy:
		return 2.25
	case m.Role == Thin: // a dashed curve has less ink
		return 1.4
	}
	return 1
}

func points(path []Point) string {
	var s strings.Builder
	for i, p := range path {
		if i > 0 {
			s.WriteByte(' ')
		}
		s.WriteString(num(p.X) + "," + num(p.Y))
	}
	return s.String()
}

// num writes a coordinate; a hundredth of a pixel is nothing to see.
func num(x float64) string {
	s := strconv.FormatFloat(x, 'f', 2, 64)
	s = strings.TrimRight(strings.TrimRight(s, "0"), ".")
	if s == "-0" {
		return "0"
	}
	return s
}

// escape makes a text safe for SVG alone and in a page: markup is text, and
// characters that XML does not have are made visible.
func escape(s string) string {
	return html.EscapeString(strings.Map(func(r rune) rune {
		switch {
		case r < ' ' && r != '\t' && r != '\n' && r != '\r', r == '\ufffe', r == '\uffff':
			return unicode.ReplacementChar
		}
		return r
	}, s))
}
