package main

import (
	"io"
	"os"
	"strconv"

	"golang.org/x/term"

	"samecall/cmd/samecall/internal/report"
)

const (
	usualWidth = 100 // when the answer does not go to a terminal
	leastWidth = 60
)

// terminal tells what w is: the width from COLUMNS, the terminal or the
// usual one; colour on a terminal only, and not with NO_COLOR.
func terminal(w io.Writer) report.Terminal {
	t := report.Terminal{Width: usualWidth}
	if f, ok := asTerminal(w); ok {
		if width, _, err := term.GetSize(int(f.Fd())); err == nil && width > 0 {
			t.Width = width
		}
		t.Colour = os.Getenv("NO_COLOR") == "" && os.Getenv("TERM") != "dumb"
	}
	if n, err := strconv.Atoi(os.Getenv("COLUMNS")); err == nil && n > 0 {
		t.Width = n
	}
	t.Width = max(t.Width, leastWidth)
	return t
}

func asTerminal(w io.Writer) (*os.File, bool) {
	f, ok := w.(*os.File)
	return f, ok && term.IsTerminal(int(f.Fd()))
}
