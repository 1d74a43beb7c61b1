package report

import (
	"encoding/json"
	"fmt"
	"io"
	"unicode"
	"unicode/utf8"
)

// encode writes a document as JSON, on many lines or on one.
func encode(w io.Writer, document any, indent bool) error {
	e := json.NewEncoder(plainJSON{w})
	if indent {
		e.SetIndent("", "  ")
	}
	e.SetEscapeHTML(false)
	return e.Encode(document)
}

// plainJSON passes JSON on that does no harm on a terminal and holds no
// negative zero: in texts it escapes the controls that package json leaves as
// they are and the characters that turn the direction of what follows, and it
// takes the minus from -0. Each Write gets a whole document, as from an
// Encoder.
type plainJSON struct{ w io.Writer }

func (p plainJSON) Write(document []byte) (int, error) {
	out := make([]byte, 0, len(document)+len(document)/64)
	quoted := false
	for i := 0; i < len(document); {
		c := document[i]
		switch {
		case quoted && c == '\\':
			out = append(out, c, document[i+1])
			i += 2
			continue
		case c == '"':
			quoted = !quoted
		case quoted && c >= 0x7f:
			r, size := utf8.DecodeRune(document[i:])
			if unicode.IsControl(r) || unicode.Is(unicode.Bidi_Control, r) {
				out = fmt.Appendf(out, "\\u%04x", r)
			} else {
				out = append(out, document[i:i+size]...)
			}
			i += size
			continue
		case !quoted && c == '-' && document[i+1] == '0' && document[i+2] != '.':
			i++
			continue
		}
		out = append(out, c)
		i++
	}
	if _, err := p.w.Write(out); err != nil {
		return 0, err
	}
	return len(document), nil
}
