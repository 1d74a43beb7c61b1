package report_test

import (
	"bytes"
	"strings"
	"testing"

	"samecall/cmd/samecall/internal/judge"
	"samecall/cmd/samecall/internal/report"
	"samecall/signal"
)

// A σ that the calls do not tell is not opened with as if they did.
func TestRiskOnUnknownSigma(t *testing.T) {
	for name, c := range map[string]struct {
		r       *report.Record
		unknown int
	}{"separated": {plan{sharp: true}.record(t), 2}, "fitted": {plan{random: 0.02, parts: 60}.record(t), 0}} {
		normal, err := signal.NormalProcess(12.009, 0.003)
		if err != nil {
			t.Fatal(err)
		}
		risks, err := judge.NewRisks(c.r.Zone.Curves.Pooled, judge.RiskAsk{Process: normal}, "mm")
		if err != nil {
			t.Fatal(err)
		}
		var out bytes.Buffer
		if err := report.Risk(&out, risks, c.r, report.Terminal{Width: 100}); err != nil {
			t.Fatal(err)
		}
		text := strings.Join(strings.Fields(out.String()), " ")
		if n := strings.Count(text, "assumed (bias-reduced)"); n != c.unknown || strings.Count(text, "σ not known, 0.") != c.unknown {
			t.Errorf("%s: σ is called assumed %d times: %.300s", name, n, text)
		}
	}
}
