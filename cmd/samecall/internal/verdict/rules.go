package verdict

import (
	"fmt"
	"slices"
	"strings"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
	"samecall/signal"
)

// Codes of the causes.
const (
	codeInconsistent = "inconsistent"         // an appraiser does not repeat its own calls
	codeFar          = "far_errors"           // wrong calls where nobody should be in doubt
	codeGauge        = "gauge_shifted"        // all cut beside the limit alike
	codeCut          = "appraiser_shifted"    // one appraiser cuts beside the limit
	codeStandard     = "standard_shifted"     // all are wrong about the same parts, every time
	codeSteady       = "consistently_wrong"   // one appraiser is wrong about the same parts, every time
	codeApart        = "consistent_different" // each repeats its calls, and they differ
	codeKinds        = "kinds_confused"       // two kinds of category are taken for each other
	codeGrades       = "grades_lean"          // grades too strict or too lenient
	codeNear         = "wide_grey_zone"       // nothing but the width of the grey zone
)

// inconsistent: kappa over an appraiser's own trials is below the accept
// level of kappa. If that goes for most of several appraisers, it is not the
// person.
func inconsistent(r *judge.Result, _ []pattern, levels map[string]Levels) []Cause {
	var out []Cause
	level := levels[Kappa][0]
	n := len(r.Study.Appraisers)
	for a, w := range r.Agreement.Within {
		if w.Kappa.Absent != nil || w.Kappa.Value >= level {
			continue
		}
		out = append(out, Cause{
			Code: codeInconsistent, Appraiser: a,
			Text: fmt.Sprintf("%s does not repeat its own calls: kappa over its trials %s against %s, %s mixed.",
				r.Study.Appraisers[a], format.Kappa(w.Kappa), format.Figure(level), format.Counted(len(w.Mixed), "part")),
			Do: fmt.Sprintf("Go through the mixed parts with %s (%s): lighting, handling, what counts as a yes. Then repeat its trials.",
				r.Study.Appraisers[a], list(r, w.Mixed)),
		})
	}
	if n > 1 && 2*len(out) > n {
		mixed := commonMixed(r)
		return []Cause{{
			Code: codeInconsistent, Appraiser: Everyone,
			Text: fmt.Sprintf("%d of %d appraisers do not repeat their own calls (kappa over their trials below %s): that points to the method or the gauge, not to one person.", len(out), n, format.Figure(level)),
			Do:   "Look at the method first: the gauge and its fixture, lighting, the written standard for the call. Parts mixed for most: " + list(r, mixed) + ".",
		}}
	}
	return out
}

// commonMixed returns the parts that are mixed for at least half of the
// appraisers.
func commonMixed(r *judge.Result) []int {
	times := make(map[int]int)
	for _, w := range r.Agreement.Within {
		for _, part := range w.Mixed {
			times[part]++
		}
	}
	var out []int
	for part, n := range times {
		if 2*n >= len(r.Agreement.Within) {
			out = append(out, part)
		}
	}
	slices.Sort(out)
	return out
}

// farErrors: calls that the acceptance curve through all others cannot
// explain, on parts where nobody should be in doubt.
func farErrors(r *judge.Result, _ []pattern, _ map[string]Levels) []Cause {
	if r.Zone == nil || r.Zone.Curves == nil {
		return nil
	}
	c := r.Zone.Curves.Pooled
	if len(c.Outliers) == 0 {
		return nil
	}
	s := r.Scale()
	var names []string
	for _, i := range c.Outliers {
		names = append(names, fmt.Sprintf("%s at %s (accepted in %d of %d)", c.Parts[i].Name, s.WithUnit(s.Value(c.Parts[i].Value)), c.Parts[i].Accepted, c.Parts[i].Calls))
	}
	return []Cause{{
		Code: codeFar, Appraiser: Everyone,
		Text: fmt.Sprintf("Wrong calls where nobody should be in doubt, far from any limit: %s. Width and position of the grey zone do not explain them.", strings.Join(names, ", ")),
		Do:   "Check these parts and their records first: mixed-up parts, slips in writing down, a defect that the value does not tell of; then attention and handling.",
	}}
}

// shiftedCut: the calls turn beside the limit. For all alike it is the gauge
// or the standard, for one appraiser its own standard.
func shiftedCut(r *judge.Result, _ []pattern, _ map[string]Levels) []Cause {
	if r.Zone == nil || r.Zone.Curves == nil {
		return nil
	}
	all := r.Zone.Curves
	var out []Cause
	sameCut := !all.SameCut.Done || all.SameCut.P >= different
	for _, pooled := range []*signal.LimitFit{all.Pooled.Lower, all.Pooled.Upper} {
		if sameCut && shifted(pooled) {
			out = append(out, Cause{
				Code: codeGauge, Appraiser: Everyone,
				Text: shiftText(r, "All appraisers", pooled),
				Do:   fmt.Sprintf("Check the %s limit of the gauge or the standard: calibrated size, wear, setting. Then correct it and repeat the parts near that limit.", pooled.Side),
			})
		}
	}
	if sameCut {
		return out
	}
	for a, own := range all.Each {
		if own == nil {
			continue
		}
		for _, l := range []*signal.LimitFit{own.Lower, own.Upper} {
			if shifted(l) {
				out = append(out, Cause{
					Code: codeCut, Appraiser: a,
					Text: shiftText(r, r.Study.Appraisers[a], l),
					Do:   fmt.Sprintf("Compare the gauge and the standard of %s at the %s limit with those of the others.", r.Study.Appraisers[a], l.Side),
				})
			}
		}
	}
	return out
}

// shifted reports whether a cut lies beside its limit, for certain and by
// enough to matter.
func shifted(l *signal.LimitFit) bool {
	if !l.Known() || !l.HasLimit || !l.Offset.HasLower || !l.Offset.HasUpper {
		return false
	}
	certain := l.Offset.Lower > 0 || l.Offset.Upper < 0
	return certain && max(l.Offset.Value, -l.Offset.Value) >= offsetOfSigma*l.Sigma.Value
}

func shiftText(r *judge.Result, who string, l *signal.LimitFit) string {
	s := r.Scale()
	where, low, high := "above", l.Offset.Lower, l.Offset.Upper
	if l.Offset.Value < 0 {
		where, low, high = "below", -high, -low
	}
	wrong := "good parts are rejected"
	if (l.Side == signal.Lower) == (l.Offset.Value < 0) { // outside the limit
		wrong = "bad parts are accepted"
	}
	cut := "cut"
	if who != "All appraisers" {
		cut = "cuts"
	}
	return fmt.Sprintf("%s %s %s (%s to %s) %s the %s limit, so that %s there: a worn or mis-set gauge, or a shifted standard.",
		who, cut, s.WithUnit(s.Value(max(l.Offset.Value, -l.Offset.Value))), s.Value(low), s.Value(high), where, l.Side, wrong)
}

// steadyErrors: wrong about the same parts every time. Shared by all it is
// the standard (or the reference itself), otherwise the appraiser's own.
func steadyErrors(r *judge.Result, p []pattern, found []Cause) []Cause {
	var out []Cause
	var common []int
	for a := range p {
		if len(p[a].steady) < steadyParts || float64(p[a].steadyCalls) < steadyShare*float64(p[a].wrong) {
			continue
		}
		if has(found, a, codeCut, codeKinds, codeGrades, codeInconsistent) {
			continue
		}
		out = append(out, Cause{
			Code: codeSteady, Appraiser: a,
			Text: fmt.Sprintf("%s repeats its calls but is wrong about the same parts every time: %d of its %d wrong calls, on %s (%s).",
				r.Study.Appraisers[a], p[a].steadyCalls, p[a].wrong, format.Counted(len(p[a].steady), "part"), way(p[a].steadyMisses, p[a].steadyCalls-p[a].steadyMisses)),
			Do: fmt.Sprintf("Go through %s with %s beside the standard: the own standard is shifted, not the attention.", list(r, p[a].steady), r.Study.Appraisers[a]),
		})
	}
	if r.Agreement.All != nil {
		common = r.Agreement.All.WrongEveryTime
	}
	if len(p) > 1 && len(out) == len(p) && len(common) >= steadyParts {
		misses := 0
		for _, part := range common {
			if !r.Study.Ratings.Accepts(r.Study.Ratings.Reference(part)) {
				misses++
			}
		}
		return []Cause{{
			Code: codeStandard, Appraiser: Everyone,
			Text: fmt.Sprintf("All appraisers are wrong about the same %s every time (%s): a shifted standard or gauge, or a wrong reference.",
				format.Counted(len(common), "part"), way(misses, len(common)-misses)),
			Do: fmt.Sprintf("Measure or judge the reference of %s again; if it holds, correct the standard or gauge that all work by.", list(r, common)),
		}}
	}
	return out
}

// way says which way errors go.
func way(misses, others int) string {
	switch {
	case others == 0:
		return "bad ones accepted"
	case misses == 0:
		return "good ones rejected"
	}
	return "both ways"
}

// apart: each appraiser repeats its calls, and they differ from each other.
func apart(r *judge.Result, levels map[string]Levels) []Cause {
	b := r.Agreement.Between
	same, other := b.SameAppraiser, b.DifferentAppraisers
	if same.Absent != nil || other.Absent != nil || same.Value < levels[Kappa][0] || same.Value-other.Value < kappaGap {
		return nil
	}
	text := fmt.Sprintf("Each appraiser repeats the own calls (kappa %s), but they differ from each other (kappa %s).", format.Kappa(same), format.Kappa(other))
	who := standsApart(r)
	if who != Everyone {
		text += " " + r.Study.Appraisers[who] + " stands apart: the others agree with each other."
	}
	return []Cause{{
		Code: codeApart, Appraiser: who, Text: text,
		Do: "Let the appraisers call the parts on which they differ together, beside one standard: " + list(r, differing(r)) + ".",
	}}
}

// standsApart returns the appraiser with whom every pair agrees less, by the
// gap of kappas that counts, than every pair without; Everyone if there is no
// such one.
func standsApart(r *judge.Result) int {
	n := len(r.Study.Appraisers)
	if n < 3 {
		return Everyone
	}
	for a := range n {
		bestWith, worstWithout := -1.0, 1.0
		for _, p := range r.Agreement.Between.Pairs {
			switch {
			case p.Kappa.Absent != nil:
				return Everyone
			case p.A == a || p.B == a:
				bestWith = max(bestWith, p.Kappa.Value)
			default:
				worstWithout = min(worstWithout, p.Kappa.Value)
			}
		}
		if bestWith < worstWithout-kappaGap {
			return a
		}
	}
	return Everyone
}

// differing returns the parts that no appraiser is mixed on and on which
// appraisers differ.
func differing(r *judge.Result) []int {
	mixed := make(map[int]bool)
	for _, w := range r.Agreement.Within {
		for _, part := range w.Mixed {
			mixed[part] = true
		}
	}
	var out []int
	for part := range r.Study.Parts {
		if mixed[part] {
			continue
		}
		first := agreement.Missing
		for _, c := range r.Study.Ratings.Row(part) {
			if c == agreement.Missing {
				continue
			}
			if first == agreement.Missing {
				first = c
			} else if c != first {
				out = append(out, part)
				break
			}
		}
	}
	return out
}

// confusedKinds: two kinds without an order are taken for each other.
func confusedKinds(r *judge.Result, p []pattern, _ map[string]Levels) []Cause {
	if len(r.Study.Categories) < 3 || r.Options.Ordered || p == nil {
		return nil
	}
	var out []Cause
	for a, g := range r.Agreement.Against {
		for j := range g.Table {
			for k := range j {
				n := g.Table[j][k] + g.Table[k][j]
				onBoth := 0 // calls on parts of the two kinds
				for call := range g.Table {
					onBoth += g.Table[call][j] + g.Table[call][k]
				}
				if n < confusedCalls || float64(n) < confusedShare*float64(p[a].wrong) || float64(n) < confusedRate*float64(onBoth) {
					continue
				}
				x, y := r.Study.Categories[k], r.Study.Categories[j]
				out = append(out, Cause{
					Code: codeKinds, Appraiser: a,
					Text: fmt.Sprintf("%s confuses %s and %s: %d of its %d wrong calls (%d called %s where it was %s, %d the other way).",
						r.Study.Appraisers[a], x, y, n, p[a].wrong, g.Table[k][j], x, y, g.Table[j][k]),
					Do: fmt.Sprintf("Show %s the two beside each other: a boundary sample of %s and one of %s, and what tells them apart.", r.Study.Appraisers[a], x, y),
				})
			}
		}
	}
	return out
}

// leaningGrades: grades are given too strictly or too leniently.
func leaningGrades(r *judge.Result, p []pattern, _ map[string]Levels) []Cause {
	if !r.Options.Ordered || p == nil {
		return nil
	}
	var out []Cause
	for a, g := range r.Agreement.Against {
		worse := 0 // calls further down the order than the reference
		for call := range g.Table {
			for ref := range call {
				worse += g.Table[call][ref]
			}
		}
		n := max(worse, p[a].wrong-worse)
		calls, _ := g.Table.Total()
		if float64(n) < leaningRate*float64(calls) || float64(n) < leaningShare*float64(p[a].wrong) {
			continue
		}
		lean := "strictly"
		if n != worse {
			lean = "leniently"
		}
		out = append(out, Cause{
			Code: codeGrades, Appraiser: a,
			Text: fmt.Sprintf("%s grades too %s: %d of its %d wrong calls go that way.", r.Study.Appraisers[a], lean, n, p[a].wrong),
			Do:   fmt.Sprintf("Set the grades of %s against the reference panel again, at each boundary between two grades.", r.Study.Appraisers[a]),
		})
	}
	return out
}

// nearLimits: no other cause, criteria missed, and every wrong call in the
// grey zone: the zone itself is too wide for the tolerance.
func nearLimits(r *judge.Result, p []pattern, levels map[string]Levels) []Cause {
	if r.Zone == nil || r.Zone.Curves == nil || p == nil {
		return nil
	}
	wrong := 0
	missed := false
	for a := range p {
		wrong += p[a].wrong
		missed = missed || worst(appraiserCriteria(r, a, levels)) != Accept
	}
	if wrong == 0 || !missed {
		return nil
	}
	s := r.Scale()
	var widths []string
	wide := false
	for _, l := range []*signal.LimitFit{r.Zone.Curves.Pooled.Lower, r.Zone.Curves.Pooled.Upper} {
		if !l.Known() {
			continue
		}
		text := fmt.Sprintf("%s at the %s limit", s.WithUnit(s.Value(l.Width.Value)), l.Side)
		if l.HasShare {
			text += " (" + format.Percent(l.Share.Value) + " of the tolerance)"
			wide = wide || l.Share.Value > wideZone
		}
		widths = append(widths, text)
	}
	if len(widths) == 0 {
		return nil
	}
	text := "The wrong calls lie near the limits only, and no shift explains them: the grey zone is " + strings.Join(widths, " and ") + "."
	if wide {
		text += " That is wide for this tolerance."
	}
	return []Cause{{
		Code: codeNear, Appraiser: Everyone, Text: text,
		Do: "Make the call surer: a better gauge or fixture, a measured value for parts near the limits, or limits moved inwards by a guard band (see risk).",
	}}
}

// manyNames is how many parts a sentence names.
const manyNames = 8

// list names parts in a sentence.
func list(r *judge.Result, parts []int) string {
	if len(parts) == 0 {
		return "none"
	}
	var names []string
	for i, part := range parts {
		if i == manyNames {
			return strings.Join(names, ", ") + fmt.Sprintf(" and %s more", format.Count(len(parts)-manyNames))
		}
		names = append(names, r.Study.Parts[part])
	}
	return strings.Join(names, ", ")
}
