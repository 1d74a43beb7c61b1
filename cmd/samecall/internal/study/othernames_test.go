package study

import (
	"slices"
	"strings"
	"testing"
)

// The columns that a usual name may mean, of those that the table lacks.
func TestAlsoCalled(t *testing.T) {
	all := []string{"appraiser", "call", "part", "reference", "trial", "value"}
	for name, want := range map[string]string{
		"Measured": "value", "Measurement": "value", "Size": "value", "Dimension": "value", "Messwert": "value", "Meßwert": "value", "Mesure": "value",
		"Measured value (mm)": "value", "Value [mm]": "value", "BORE_DIAMETER": "value", "Result": "call value",
		"Operator": "appraiser", "Inspector": "appraiser", "Operator name": "appraiser", "Prüfer": "appraiser",
		"Sample": "part", "No.": "part", "Part No.": "part", "part_id": "part", "Serial number": "part", "Teil-Nr.": "part",
		"Run": "trial", "Replicate": "trial", "Trial no": "trial", "Decision": "call", "Judgement": "call",
		"Standard": "reference", "Master": "reference",
		"Remark": "", "Date": "", "": "", "(mm)": "", "Inspected": "", "1": "",
	} {
		if got := strings.Join(alsoCalled(name, all), " "); got != want {
			t.Errorf("%q: %q, want %q", name, got, want)
		}
	}
	if got := alsoCalled("Result", []string{"part", "value"}); !slices.Equal(got, []string{"value"}) {
		t.Errorf("call is there: %q", got)
	}
	for c, names := range otherNames {
		for _, n := range names {
			if n != fold(n) || slices.Contains(all, n) || columnHolds[c] == "" {
				t.Errorf("%s: %q", c, n)
			}
		}
	}
}
