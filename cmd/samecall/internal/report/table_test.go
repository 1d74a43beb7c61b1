package report_test

import (
	"bytes"
	"strings"
	"testing"

	pretty "github.com/jedib0t/go-pretty/v6/text"

	"samecall/cmd/samecall/internal/report"
)

// Every table of every kind of study fits, whatever the names are.
func TestWidthOfStudies(t *testing.T) {
	for _, p := range append(plans(), hostilePlan()) {
		r := p.record(t)
		for _, width := range []int{60, 80, 100} {
			for _, full := range []bool{false, true} {
				var out bytes.Buffer
				if err := report.Text(&out, r, report.Terminal{Width: width}, full); err != nil {
					t.Fatal(err)
				}
				for line := range strings.Lines(out.String()) {
					if w := pretty.StringWidthWithoutEscSequences(strings.TrimSuffix(line, "\n")); w > width {
						t.Errorf("%s: %d columns in %d: %q", p.name, w, width, line)
						break
					}
				}
			}
		}
	}
}

// No line ends at a space that holds a number together.
func TestLinesKeepNumbersWhole(t *testing.T) {
	text := "false rejects 127\u00a0000 (115\u202f000 to 141\u00a0000) ppm, 5 % of σ at cut − limit"
	for width := 20; width < 80; width++ {
		lines := strings.Split(report.Lines(text, width, ""), "\n")
		if strings.Join(lines, " ") != text {
			t.Fatalf("the text changed in %d columns: %q", width, lines)
		}
		for _, l := range lines {
			if strings.HasPrefix(l, "%") || strings.HasPrefix(l, "−") || strings.HasSuffix(l, "−") || strings.HasPrefix(l, "000") || strings.HasSuffix(l, "(115") {
				t.Errorf("broken in %d columns: %q", width, lines)
			}
		}
	}
}
