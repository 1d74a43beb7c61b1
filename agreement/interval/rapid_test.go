package interval

import "flag"

// Properties are checked on the same cases in every run, so that a change is
// judged by what it does. For other cases: -rapid.seed=0 (DEVELOPERS.md).
func init() {
	if err := flag.Set("rapid.seed", "1"); err != nil {
		panic(err)
	}
}
