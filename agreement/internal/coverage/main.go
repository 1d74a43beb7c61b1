// Command coverage simulates studies whose true rates are known and prints
// how often the intervals of package agreement hold them: the table of
// docs/coverage.md. Run it from the top of the module:
//
//	go run ./agreement/internal/coverage > docs/coverage.md
//
// Parts differ in difficulty: on each part, calls are wrong with a
// probability of its own, drawn from a beta distribution, so that the calls
// on one part are correlated. The correlation is stated beside each row.
package main

import (
	"flag"
	"fmt"
	"os"
)

func main() {
	studies := flag.Int("studies", 1000, "simulated studies for each row")
	resamples := flag.Int("resamples", 1000, "resamples for each study")
	quick := flag.Bool("quick", false, "fewer rows")
	flag.Parse()
	rows, err := simulate(*studies, *resamples, *quick)
	if err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
	page(os.Stdout, rows, *studies, *resamples)
}
