package report

import (
	"bytes"
	"encoding/json"
	"math"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"
)

func TestEncode(t *testing.T) {
	document := map[string]any{
		"text":    "a\u009bb \u202ec\u202c \u2066d\u200f e\x7f\x1b \\\"-0, -0\" ü 检",
		"zero":    math.Copysign(0, -1),
		"half":    -0.5,
		"small":   -1e-9,
		"list":    []float64{math.Copysign(0, -1), -0.25, 0},
		"-0":      "-0",
		"pointer": new(float64),
	}
	for _, indent := range []bool{false, true} {
		var b bytes.Buffer
		if err := encode(&b, document, indent); err != nil {
			t.Fatal(err)
		}
		for _, want := range []string{`a\u009bb \u202ec\u202c \u2066d\u200f e\u007f\u001b \\\"-0, -0\" ü 检`, `"-0":`, "-0.5", "-1e-9", "-0.25"} {
			if !strings.Contains(b.String(), want) {
				t.Errorf("%q is not in\n%s", want, b.String())
			}
		}
		var back map[string]any
		if err := json.Unmarshal(b.Bytes(), &back); err != nil {
			t.Fatal(err)
		}
		list, _ := back["list"].([]any)
		for _, zero := range []any{back["zero"], list[0]} {
			if x, ok := zero.(float64); !ok || x != 0 || math.Signbit(x) {
				t.Errorf("-0 became %v", zero)
			}
		}
		if back["text"] != document["text"] || back["-0"] != "-0" {
			t.Errorf("texts changed: %q", back)
		}
	}
}

// A table for spreadsheets holds no negative zero.
func TestFlatHasNoNegativeZero(t *testing.T) {
	minus := math.Copysign(0, -1)
	table := Table{Columns: []Column{{Name: "a"}}, Rows: [][]Cell{{{Text: "0", Value: minus, Bounded: true, Lower: minus, Upper: minus}}}}
	_, rows := table.flat()
	for _, c := range rows[0] {
		if x, ok := c.Value.(float64); !ok || math.Signbit(x) {
			t.Errorf("a cell holds %v", c.Value)
		}
	}
}

func TestWorkbookTooLong(t *testing.T) {
	f := excelize.NewFile()
	defer f.Close()
	table := Table{Name: "calls", Rows: make([][]Cell, excelize.TotalRows-headRow)}
	err := writeSheet(f, "Sheet1", table, look{})
	if err == nil || !strings.Contains(err.Error(), "a sheet of a workbook holds 1\u00a0048\u00a0576") {
		t.Errorf("error %v", err)
	}
}
