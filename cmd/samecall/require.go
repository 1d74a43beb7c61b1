package main

import (
	"errors"
	"fmt"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/verdict"
)

// requirement is the verdict that --require asks for.
type requirement struct {
	asked bool
	level verdict.Level // Accept or Conditional
	shown bool          // the data must show it: --shown
}

func parseRequirement(level string, shown bool) (requirement, error) {
	switch {
	case level == "" && shown:
		return requirement{}, errors.New("--shown goes with --require")
	case level == "":
		return requirement{}, nil
	case level == "accept":
		return requirement{true, verdict.Accept, shown}, nil
	case level == "conditional":
		return requirement{true, verdict.Conditional, shown}, nil
	}
	return requirement{}, fmt.Errorf("--require is %q; expected accept or conditional", level)
}

// check returns the exit status of a verdict that is not as good as required.
// The answer tells why at length; a log of commands shows the one line only.
func (r requirement) check(v *verdict.Verdict, confidence float64) error {
	switch {
	case !r.asked:
		return nil
	case v.Overall > r.level: // not shown, too, is worse than conditional
		why := ""
		if missed := v.Missed(r.level); missed != "" {
			why = ": " + missed
		}
		return statusError{exitShort, fmt.Errorf("--require %s: the verdict is %s%s", r.level, v.Overall, why)}
	case !r.shown:
		return nil
	}
	if open := v.Unshown(r.level); open != "" {
		return statusError{exitShort, fmt.Errorf("--require %s --shown: at %s confidence the data do not show that level for: %s", r.level, format.Confidence(confidence), open)}
	}
	return nil
}
