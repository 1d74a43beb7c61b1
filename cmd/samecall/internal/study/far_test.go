package study

import (
	"fmt"
	"strings"
	"testing"
)

// farNotes reads a wide table of values and returns what is noted of values
// that lie far outside the others.
func farNotes(t *testing.T, values string, s Settings) string {
	t.Helper()
	var b strings.Builder
	b.WriteString("part,value,a-1\n")
	for i, v := range strings.Split(values, " ") {
		fmt.Fprintf(&b, "P%d,%s,go\n", i+1, v)
	}
	var notes [2][]string
	for i, chunk := range []int{0, 16} {
		study, err := Read(Source{Path: "-", Stdin: strings.NewReader(b.String()), chunk: chunk}, s)
		if err != nil {
			t.Fatal(err)
		}
		for _, n := range study.Notes {
			if n.Code == "far_value" {
				notes[i] = append(notes[i], n.Text)
			}
		}
	}
	whole, cut := strings.Join(notes[0], "\n"), strings.Join(notes[1], "\n")
	if whole != cut {
		t.Errorf("in small chunks: %s\nwhole: %s", cut, whole)
	}
	return whole
}

func TestFarValues(t *testing.T) {
	const asks = ". Is the decimal sign where it belongs? Nothing is left out."
	bore := Settings{Lower: ptr(20), Upper: ptr(20.033)}
	for _, c := range []struct {
		name, values string
		settings     Settings
		want         string
	}{
		{"a decimal point too late", "19.998 20.001 20.004 20.03 200.04 20.031 20.036", bore,
			`The value 200.04 of part "P5" (line 6) lies far outside the others, which go from 19.998 to 20.036` + asks},
		{"without limits", "19.998 20.001 20.004 20.03 200.04 20.031 20.036", Settings{},
			`The value 200.04 of part "P5" (line 6) lies far outside the others, which go from 19.998 to 20.036` + asks},
		{"too early, and none", "19.998 20.001  20.03 2.0004 20.031 20.036", bore,
			`The value 2.0004 of part "P5" (line 6) lies far outside the others, which go from 19.998 to 20.036` + asks},
		{"several", "1000 1 1.1 1.2 0.9 0.8 1 1.1 1.2 0.9 0.8 1 1.1 1.2 0.9 0.8 1 1.1 1.2 0.9 0.8 1 1.1 1.2 0.9 0.8 1 1.1 1.2 0.9 0.8 1 1.1 1.2 0.9 0.8 -100 99 98 1", Settings{},
			`The values 1000 of part "P1" (line 2), −100 of part "P37" (line 38), 99 of part "P38" (line 39) and 1 more lie far outside the others, which go from 0.8 to 1.2` + asks},
		{"a part far out of tolerance", "19.998 20.001 20.004 20.03 20.3 20.031 20.036", bore, ""},
		{"within the limits", "1 1.01 1.02 1 1.01 1.02 5", Settings{Lower: ptr(0), Upper: ptr(6)}, ""},
		{"two kinds of parts", "1 1.1 1.2 1 100 101 102 100", Settings{}, ""},
		{"too few", "1 1.1 1.2 1 100", Settings{}, ""},
		{"all alike", "1 1 1 1 1 1 1 2", Settings{}, ""},
		{"huge", "1e100 -1e100 1e99 -1e99 1 2 3", Settings{}, ""},
	} {
		if got := farNotes(t, c.values, c.settings); got != c.want {
			t.Errorf("%s: %s\nwant %s", c.name, got, c.want)
		}
	}
	// Values of a large study are looked at in part only.
	var many []string
	for i := range 3 * farSample {
		many = append(many, fmt.Sprint(1+float64(i%7)/10))
	}
	many[20000] = "11"
	if got := farNotes(t, strings.Join(many, " "), Settings{}); !strings.Contains(got, `The value 11 of part "P20001" (line 20002) lies far`) {
		t.Errorf("many values: %s", got)
	}
	// In a workbook the cell is named.
	cells := map[string]any{"A1": "value", "B1": "part", "C1": "a-1"}
	for i, v := range []float64{1, 1.1, 1.2, 1.3, 130, 1} {
		row := i + 2
		cells[fmt.Sprint("A", row)], cells[fmt.Sprint("B", row)], cells[fmt.Sprint("C", row)] = v, row, "go"
	}
	study, err := Read(Source{Path: "-", Stdin: strings.NewReader(string(workbook(t, cells)))}, Settings{Sheet: "Calls"})
	if err != nil || !strings.HasPrefix(study.Notes[0].Text, `The value 130 of part "6" (cell Calls!A6) lies far`) {
		t.Errorf("workbook: %v, %v", study, err)
	}
}
