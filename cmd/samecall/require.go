package main

import (
	"fmt"

	"samecall/cmd/samecall/internal/verdict"
)

// requirement is the verdict that --require asks for; nil asks for nothing.
type requirement []verdict.Level

func parseRequirement(s string) (requirement, error) {
	switch s {
	case "":
		return nil, nil
	case "accept":
		return requirement{verdict.Accept}, nil
	case "conditional":
		return requirement{verdict.Accept, verdict.Conditional}, nil
	}
	return nil, fmt.Errorf("--require is %q; expected accept or conditional", s)
}

func (r requirement) reached(l verdict.Level) bool {
	for _, good := range r {
		if l == good {
			return true
		}
	}
	return r == nil
}
