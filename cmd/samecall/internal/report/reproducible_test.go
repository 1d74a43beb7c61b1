package report_test

import (
	"archive/zip"
	"bytes"
	"io"
	"testing"

	"samecall/cmd/samecall/internal/report"
)

// The same input and settings give the same bytes, from the reading on.
func TestReproducible(t *testing.T) {
	writers := map[string]func(io.Writer, *report.Record) error{
		"HTML": report.HTML, "JSON": report.JSON, "Markdown": report.Markdown, "CSV": report.CSV, "workbook": report.XLSX,
		"text": func(w io.Writer, r *report.Record) error {
			return report.Text(w, r, report.Terminal{Width: 100}, true)
		},
		"figures": func(w io.Writer, r *report.Record) error {
			for _, f := range report.Figures(r) {
				if err := f.SVG(w); err != nil {
					return err
				}
				if err := f.PNG(w); err != nil {
					return err
				}
			}
			return nil
		},
	}
	for _, p := range []plan{{name: "values"}, {name: "grades", categories: []string{"A", "B", "C"}, ordered: true, noValues: true, appraisers: some(5), missing: 0.1}, hostilePlan()} {
		first := make(map[string][]byte)
		for range 3 {
			r := p.record(t)
			for name, write := range writers {
				out := output(t, r, write)
				switch {
				case first[name] == nil:
					first[name] = out
				case !bytes.Equal(first[name], out):
					t.Errorf("%s: the %s differs from run to run", p.name, name)
				}
			}
		}
	}
}

// A workbook says nothing of when it was written.
func TestWorkbookHasNoTime(t *testing.T) {
	out := output(t, plan{}.record(t), report.XLSX)
	z, err := zip.NewReader(bytes.NewReader(out), int64(len(out)))
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range z.File {
		// 1979-11-30 is what a time of zero reads as.
		if f.Modified.Year() > 1980 {
			t.Errorf("%s is of %v", f.Name, f.Modified)
		}
	}
}
