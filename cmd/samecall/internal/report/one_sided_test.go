package report_test

import (
	"encoding/json"
	"fmt"
	"slices"
	"strconv"
	"strings"
	"testing"

	"samecall/cmd/samecall/internal/report"
)

// Whoever has the table of criteria can compute "shown" and "open" again: the
// one-sided limit that each answer rests on stands beside the level, as a
// number for programs, and in every other output as people read it.
func TestEvidenceCanBeRecomputed(t *testing.T) {
	words := make(map[string]int)
	for name, r := range map[string]*report.Record{
		"good":   plan{parts: 200, sharp: true}.record(t),
		"three":  plan{parts: 60}.record(t),
		"random": plan{random: 0.3, parts: 200}.record(t),
		"twelve": plan{appraisers: some(12), random: 0.03}.record(t),
	} {
		rows := csvTable(t, r, "Criteria")
		column := func(head string) int {
			i := slices.Index(rows[0], head)
			if i < 0 {
				t.Fatalf("%s: the CSV has no column %q: %q", name, head, rows[0])
			}
			return i
		}
		const head = "one-sided 95 % limit"
		least, most := column(head+", lower"), column(head+", upper")
		for _, row := range rows[1:] {
			number := func(i int) float64 {
				x, err := strconv.ParseFloat(row[i], 64)
				if err != nil {
					t.Fatalf("%s: %q is no number", name, row)
				}
				return x
			}
			errors := strings.HasSuffix(row[column("figure")], "rate")
			meets := func(x, level float64) bool {
				if errors {
					return x <= level+1e-12
				}
				return x >= level-1e-12
			}
			met, data := row[column("by estimate")], row[column("data")]
			level := number(column("conditional"))
			if met == "accept" {
				level = number(column("accept"))
			}
			limit := least
			if errors == (met != "reject") {
				limit = most
			}
			if other := least + most - limit; row[other] != "" {
				t.Errorf("%s: two limits in %q", name, row)
			}
			if data == "set aside" {
				continue
			}
			want := "open"
			if meets(number(limit), level) == (met != "reject") {
				want = "shown"
			}
			words[met+" "+data]++
			if data != want {
				t.Errorf("%s: from what stands in %q it is %s", name, row, want)
			}
		}
		for out, table := range map[string][][]string{"CSV": rows, "xlsx": sheet(t, r, "criteria")} {
			if slices.ContainsFunc(table, func(row []string) bool { return slices.Contains(row, head) }) {
				t.Errorf("%s: %s has the limits as texts beside the numbers", name, out)
			}
		}
		read := pageRows(t, r, "table-criteria")
		shown := slices.Index(read[0], head)
		for out, table := range map[string][][]string{
			"HTML": read, "Markdown": barRows(output(t, r, report.Markdown), "Criteria"), "--full": textRows(answer(t, r, true), "Criteria"),
		} {
			if !slices.ContainsFunc(table, func(row []string) bool { return slices.Contains(row, head) }) {
				t.Errorf("%s: %s has no column %q: %q", name, out, head, table)
			}
			for _, row := range read[1:] {
				limit := row[shown]
				if !slices.ContainsFunc(table, func(r []string) bool {
					return len(r) > 5 && r[0] == row[0] && r[1] == row[1] && slices.Contains(r, limit)
				}) {
					t.Errorf("%s: %s lacks the limit %q of %q", name, out, limit, row[:2])
				}
			}
		}
	}
	for _, w := range []string{"accept shown", "accept open", "conditional open", "reject shown"} {
		if words[w] == 0 {
			t.Errorf("no study has a criterion that is %s: %v", w, words)
		}
	}
}

// The limit in the table is the one of the JSON.
func TestOneSidedLimitIsThatOfTheJSON(t *testing.T) {
	r := plan{parts: 60}.record(t)
	var d struct {
		Verdict struct {
			Appraisers []struct {
				Appraiser string
				Criteria  []struct {
					Name     string
					LowerOne float64 `json:"lower_one_sided"`
					UpperOne float64 `json:"upper_one_sided"`
				}
			}
		}
	}
	if err := json.Unmarshal(output(t, r, report.JSON), &d); err != nil {
		t.Fatal(err)
	}
	rows := csvTable(t, r, "Criteria")[1:]
	i := 0
	for _, a := range d.Verdict.Appraisers {
		for _, c := range a.Criteria {
			found := false
			for _, cell := range rows[i] {
				found = found || cell == fmt.Sprint(c.LowerOne) || cell == fmt.Sprint(c.UpperOne)
			}
			if !found {
				t.Errorf("%s, %s: %v or %v is not in %q", a.Appraiser, c.Name, c.LowerOne, c.UpperOne, rows[i])
			}
			i++
		}
	}
}
