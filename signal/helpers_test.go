package signal

import (
	"encoding/csv"
	"encoding/json"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"
)

const referenceDir = "../testdata/reference/"

// reference decodes one key (or path, separated by dots) of expected-r.json.
func reference(t testing.TB, path string, into any) {
	t.Helper()
	raw, err := os.ReadFile(referenceDir + "expected-r.json")
	if err != nil {
		t.Fatal(err)
	}
	for key := range strings.SplitSeq(path, ".") {
		var m map[string]json.RawMessage
		if err := json.Unmarshal(raw, &m); err != nil {
			t.Fatal(err)
		}
		var ok bool
		if raw, ok = m[key]; !ok {
			t.Fatalf("expected-r.json has no %s", path)
		}
	}
	if err := json.Unmarshal(raw, into); err != nil {
		t.Fatal(err)
	}
}

// table reads a published data set, without its header.
func table(t testing.TB, name string) [][]float64 {
	t.Helper()
	f, err := os.Open(referenceDir + name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var out [][]float64
	for _, row := range rows[1:] {
		var xs []float64
		for _, s := range row {
			x, err := strconv.ParseFloat(s, 64)
			if err != nil {
				t.Fatal(err)
			}
			xs = append(xs, x)
		}
		out = append(out, xs)
	}
	return out
}

// near checks got against want, absolutely below 1 and relatively above.
func near(t testing.TB, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance*math.Max(1, math.Abs(want))) {
		t.Errorf("%s: got %.12g, want %.12g (off by %.2g)", what, got, want, got-want)
	}
}

// nearRel checks got against want relatively.
func nearRel(t testing.TB, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance*math.Abs(want)) {
		t.Errorf("%s: got %.12g, want %.12g (relative %.2g)", what, got, want, (got-want)/want)
	}
}
