package main

import (
	"fmt"
	"io"
)

// page prints the whole of docs/coverage.md.
func page(w io.Writer, rows []row, studies, resamples int) {
	fmt.Fprintf(w, `# Coverage of the intervals

An interval is right when it covers. Studies with known true rates were simulated, %d for each row, and
the tables say in what percentage of them the nominal 95 %% interval held the true value. The number in
brackets is the coverage of the usual interval that treats every call as independent: Clopper–Pearson on
the calls for rates, Fleiss, Cohen & Everitt (1969) for Cohen's kappa, Fleiss, Nee & Landis (1979) for
Fleiss' kappa.

Half of the parts are bad, unless it says otherwise. On each part, calls are wrong with a probability of its
own, drawn from a beta distribution: its mean is the column "wrong calls" (the true miss rate and the true
false-alarm rate alike), and "correlation" is the correlation of two calls on one part being wrong, 0 when all
parts are equally difficult. Figures named in the singular are those of the first appraiser, or of the first pair;
"all" pools the calls of all. Kappas were resampled %d times in each study. The standard error of a
figure in the tables is about 0.7 at 95 %%.

Below %d is set in bold. This page is what

    go run ./agreement/internal/coverage > docs/coverage.md

prints.

## Shares of parts and rates over calls

`, studies, resamples, floor)
	write(w, rows, []int{0, 1, 2, 3, 4, 5})
	fmt.Fprint(w, `
Shares of parts are exact, and cover by construction. The limits of rates are never surer than the number
of parts allows (the exact limits of no error on so many parts): where nearly all errors sit on very few
difficult parts, Korn and Graubard's interval alone falls short, the more so the more calls there are on each
part, since a study then often holds too few of those parts. Intervals that treat calls as independent fall
short wherever calls on a part are correlated.

## Kappas

`)
	write(w, rows, []int{6, 7, 8, 9})
	fmt.Fprint(w, `
Kappas are resampled by whole parts (BCa), at the confidence expanded for few parts, and are never
narrower than the exact interval of the share of parts that disagree. The second matters where few parts
disagree; resampling alone covered as little as 88 to 92 % there. With 2000 parts they are linearised, and
where so few parts are bad that resampled studies often hold hardly one. With 1 % wrong calls most small
studies show no disagreement at all; the interval then is the exact one, and covers nearly always.
`)
}
