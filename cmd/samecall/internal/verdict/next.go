package verdict

import (
	"errors"
	"fmt"
	"slices"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/judge"
)

// largerStudy is how many times the present number of parts may be asked for.
const largerStudy = 3

// next returns what to do now: what may be wrong with the reference, what the
// causes ask for, then what the study lacks.
func next(r *judge.Result, v *Verdict) []string {
	var out []string
	add := func(s string) {
		if s != "" && !slices.Contains(out, s) {
			out = append(out, s)
		}
	}
	add(doubtfulReference(r, v))
	// The gauge and the records come before the people.
	for _, c := range v.Causes {
		if c.beforePeople() {
			add(c.Do)
		}
	}
	if !v.peopleOnly() {
		add(containment(r, v))
	}
	for _, c := range v.Causes {
		add(c.Do)
	}
	add(containment(r, v))
	for _, text := range missedKinds(r, v) {
		add(text)
	}
	for _, text := range wrongCallsOf(r, v) {
		add(text)
	}
	if s := lacks(r, v); len(s) > 0 {
		for _, text := range s {
			add(text)
		}
	} else {
		add(moreParts(r, v))
	}
	add(repeatTrials(r))
	if len(out) == 0 {
		add("Nothing is to be fixed. Repeat the study when the gauge, the people or the parts change.")
	}
	return out
}

// doubtfulReference names parts on which every call of all appraisers was
// wrong, other than those that a shifted gauge or standard explains.
func doubtfulReference(r *judge.Result, v *Verdict) string {
	if r.Agreement.All == nil || len(r.Study.Appraisers) < 2 || has(v.Causes, Everyone, codeStandard, codeKinds, codeGrades, codeAlike, codeReversed) {
		return ""
	}
	parts := slices.DeleteFunc(slices.Clone(r.Agreement.All.WrongEveryTime), func(part int) bool { return expected(r, part) })
	if len(parts) == 0 {
		return ""
	}
	return fmt.Sprintf("Every call on %s was wrong: check the reference of %s before anything else.", theParts(r.Study.Parts, parts), this(len(parts), "part"))
}

// expected reports whether the acceptance curve expects the wrong calls on a
// part: its value lies between limit and cut.
func expected(r *judge.Result, part int) bool {
	if r.Zone == nil || r.Zone.Curves == nil || !r.Study.HasValue[part] {
		return false
	}
	x := r.Study.Values[part]
	return (plain(r.Zone.Curves.Pooled).Accept(x) > 0.5) != r.Zone.Limits.Inside(x)
}

// lacks says what the study lacks for its figures to be known.
func lacks(r *judge.Result, v *Verdict) []string {
	if r.Agreement.All == nil {
		if r.Study.Values != nil && !r.Study.PassFail && (r.Study.Settings.Lower != nil || r.Study.Settings.Upper != nil) {
			return []string{"Give each part a reference in a column of that name: values and limits tell good from bad only, and the calls have more than two categories. If they are to have two, list the words of both with accept and reject."}
		}
		return []string{"Give each part a reference: a column reference, or values and limits."}
	}
	if !r.Study.Ratings.HasAccept() {
		return []string{"Say which categories a part may have to be used (accept): without them there are no misses and no false alarms."}
	}
	var out []string
	for _, name := range []string{Miss, FalseAlarm} {
		for _, a := range v.Appraisers {
			c := a.criterion(name)
			if c.Met != NotShown {
				continue
			}
			kind := "bad part"
			if name == FalseAlarm {
				kind = "good part"
			}
			out = append(out, stop(fmt.Sprintf("%sThen the %s is known%s", noneOf(r, v, name, kind, a.Name), c.Label(), shows(c, kind, r.Options.Confidence))))
			break
		}
	}
	return out
}

// noneOf says that the study holds no part of a kind, or who called none, and
// asks for some.
func noneOf(r *judge.Result, v *Verdict, name, kind, who string) string {
	add := fmt.Sprintf("Add %ss, %s. ", kind, hard(r))
	for _, a := range v.Appraisers {
		if a.criterion(name).Met != NotShown {
			return stop(who+" called no "+kind) + " " + add
		}
	}
	s := r.Study.Ratings
	for part := range r.Study.Parts {
		if ref := s.Reference(part); ref != agreement.Missing && s.Accepts(ref) == (name == FalseAlarm) {
			return "Nobody called any " + kind + ". " + add
		}
	}
	return "The study holds no " + kind + ". " + add
}

// hard says which parts a study needs most.
func hard(r *judge.Result) string {
	if r.Study.Settings.Lower == nil && r.Study.Settings.Upper == nil {
		return "some of them hard to call"
	}
	return "some of them close to the limits"
}

// shows says how many parts without an error show the levels of a criterion.
func shows(c Criterion, kind string, confidence float64) string {
	n := withoutError(c.Levels[0], confidence)
	if n == 0 {
		return ""
	}
	return fmt.Sprintf(". %s without an error show a %s of at most %s", format.Counted(n, kind), c.Label(), c.Level(c.Levels[0]))
}

// scarcest are the kinds of parts that figures rest on, the scarcest first.
var scarcest = []string{"bad part", "good part", "part"}

// moreParts says how many parts more would settle what is open.
func moreParts(r *judge.Result, v *Verdict) string {
	if v.Overall == Reject {
		return settleReject(r, v)
	}
	need := make(map[string]Criterion)
	whose := make(map[string][]string)
	for _, a := range v.Appraisers {
		for _, c := range a.Criteria {
			switch most := need[c.Kind]; {
			case !c.counts() || c.Evidence != Open || c.More == 0:
			case c.More > most.More:
				need[c.Kind], whose[c.Kind] = c, []string{a.Name}
			case c.More == most.More && c.Name == most.Name:
				whose[c.Kind] = append(whose[c.Kind], a.Name)
			}
		}
	}
	for _, kind := range scarcest {
		c, who := need[kind], some(whose[kind])
		switch {
		case c.More == 0:
			continue
		case c.errorFree():
			return fmt.Sprintf("To show that the %s of %s is %s, add %s, %s; all must be called right.", c.Label(), who, c.claim(), format.Counted(c.More, kind), hard(r))
		case c.More > largerStudy*c.Parts:
			return fmt.Sprintf("To show that the %s of %s is %s would take %s more: rather than enlarge the study, bring the errors down.", c.Label(), who, c.claim(), format.Counted(c.More, kind))
		}
		return fmt.Sprintf("To show that the %s of %s is %s, add %s like those of the study.", c.Label(), who, c.claim(), format.Counted(c.More, kind))
	}
	return ""
}

// settleReject says what would settle a rejection that the data leave open,
// and what a study after the correction takes.
func settleReject(r *judge.Result, v *Verdict) string {
	var best *ground
	for _, g := range v.grounds() {
		if g.c.Evidence == Contradicted {
			return repeatStudy(r, v)
		}
		if g.c.More > 0 && (best == nil || g.c.More < best.c.More) {
			best = &g
		}
	}
	if best == nil || best.c.More > largerStudy*best.c.Parts {
		return repeatStudy(r, v)
	}
	return fmt.Sprintf("To settle the rejection, which is open, add %s like those of the study (%s).", format.Counted(best.c.More, best.c.Kind), best.c.of(best.who))
}

// repeatStudy says what a new study takes to show the miss rate, where the
// present one has too few bad parts for that. Where nothing was found that
// could be corrected and the rejection is open, it is too few that it is about.
func repeatStudy(r *judge.Result, v *Verdict) string {
	c := v.Appraisers[0].criterion(Miss)
	for _, a := range v.Appraisers {
		if other := a.criterion(Miss); other.Parts < c.Parts {
			c = other
		}
	}
	again := "After the correction, repeat the study."
	if contradicted := func(g ground) bool { return g.c.Evidence == Contradicted }; c.Parts > 0 && len(v.Causes) == 0 && !slices.ContainsFunc(v.grounds(), contradicted) {
		again = fmt.Sprintf("The rejection is open, and rests on %s: repeat the study with more.", format.Counted(c.Parts, "bad part"))
	}
	accept, conditional := withoutError(c.Levels[0], r.Options.Confidence), withoutError(c.Levels[1], r.Options.Confidence)
	switch {
	case accept == 0 || c.meets(c.Best, c.Levels[0]):
		return again
	case conditional == 0 || conditional == accept:
		return fmt.Sprintf("%s It takes %s without a miss to show a miss rate of at most %s.", again, format.Counted(accept, "bad part"), c.Level(c.Levels[0]))
	}
	return fmt.Sprintf("%s It takes %s without a miss to show a miss rate of at most %s, and %s for %s.", again,
		format.Counted(conditional, "bad part"), c.Level(c.Levels[1]), format.Count(accept), c.Level(c.Levels[0]))
}

// repeatTrials names the appraisers who called no part twice.
func repeatTrials(r *judge.Result) string {
	var who []string
	oneTrial := true
	for a, w := range r.Agreement.Within {
		if w.Share.Absent != nil {
			who = append(who, r.Study.Appraisers[a])
			oneTrial = oneTrial && r.Study.Ratings.Trials(a) == 1
		}
	}
	switch {
	case len(who) == 0:
		return ""
	case oneTrial:
		return fmt.Sprintf("Have %s call the parts a second and a third time: with one trial nobody knows whether the calls repeat.", some(who))
	}
	return fmt.Sprintf("Have %s call the same parts a second and a third time: no part was called twice, and nobody knows whether the calls repeat.", some(who))
}

// criterion returns one criterion of an appraiser by its name.
func (a Appraiser) criterion(name string) Criterion {
	for _, c := range a.Criteria {
		if c.Name == name {
			return c
		}
	}
	return Criterion{Name: name, Met: NotShown, Estimate: agreement.Estimate{Absent: errors.New("no such criterion")}}
}

// this points at one or several things that were named.
func this(n int, noun string) string {
	if n == 1 {
		return "this " + noun
	}
	return "these " + noun + "s"
}
