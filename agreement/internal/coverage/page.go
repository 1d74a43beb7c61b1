package main

import (
	"fmt"
	"io"
)

// page prints the whole of docs/coverage.md.
func page(w io.Writer, rows []row, studies, resamples int) {
	fmt.Fprintf(w, `# Coverage of the intervals

An interval is right when it covers. Studies with known true rates were simulated, %[1]d for each row, and
the tables say in what percentage of them the nominal 95 %% interval held the true value; the last table says
it of the one-sided limits at 95 %% that decide whether a study shows a criterion to be met. The number in
brackets is the coverage of the usual interval that treats every call as independent: Clopper–Pearson on
the calls for rates, Fleiss, Cohen & Everitt (1969) for Cohen's kappa, Fleiss, Nee & Landis (1979) for
Fleiss' kappa.

Half of the parts are bad, unless it says otherwise. On each part, calls are wrong with a probability of its
own, drawn from a beta distribution: its mean is the column "wrong calls" (the true miss rate and the true
false-alarm rate alike), and "correlation" is the correlation of two calls on one part being wrong, 0 when all
parts are equally difficult. Appraisers are alike; where they are unequal, the second is wrong half as often on each
part as the first, the third a quarter as often, and "wrong calls" are those of the first. Figures named in the
singular are those of the first appraiser, or of the first pair; "all" pools the calls of all. Kappas were
resampled %[2]d times in each study.

The standard error of a figure in the tables is about %.1[4]f at 95 %%. Below %[3]d is set in bold. This page is what

    go run ./agreement/internal/coverage > docs/coverage.md

prints; tests hold that what the simulation takes for true is (`+"`TestTruth`"+`).

## In short

Every figure over all rows of the tables that follow.

`, studies, resamples, floor, standardError(studies))
	summary(w, rows)
	fmt.Fprint(w, `
One kind of limit falls short of 93 % time and again: the lower one-sided limit of kappa against the reference with 20
parts, 15 % wrong calls and parts that differ in difficulty, which covers in 92.4 to 94.8 %. Of so few parts, one study
in fourteen happens to hold hardly any difficult one; it looks better than the process is, and nothing in it tells. A
level that is shown there is shown at 92 to 95 rather than at 95 %; with 50 parts the limit covers in 94 to 96 %. A single
figure a little below the mark elsewhere is what chance leaves, among so many, of a coverage of 94 to 95 %.

## Shares of parts and rates over calls

`)
	write(w, rows, 0)
	fmt.Fprint(w, `
Shares of parts are exact, and cover by construction. The limits of rates are never surer than the number
of parts allows (the exact limits of no error on so many parts): where nearly all errors sit on very few
difficult parts, Korn and Graubard's interval alone falls short, the more so the more calls there are on each
part, since a study then often holds too few of those parts. Intervals that treat calls as independent fall
short wherever calls on a part are correlated.

## Kappas of one appraiser and of a pair

`)
	write(w, rows, 1)
	fmt.Fprint(w, `
Kappas are resampled by whole parts (BCa), at the confidence expanded for few parts, and are never
narrower than the exact interval of the share of parts that disagree. The second matters where few parts
disagree; resampling alone covered as little as 88 to 92 % there. With 2000 parts they are linearised, and
where so few parts are bad that resampled studies often hold hardly one. With 1 % wrong calls most small
studies show no disagreement at all; the interval then is the exact one, and covers nearly always.

## Kappas of all appraisers

`)
	write(w, rows, 2)
	fmt.Fprint(w, `
The kappa between appraisers that a verdict rests on is that of calls by different appraisers, the one within them
that of calls by the same. All five have their intervals as the kappas above.

## One-sided limits

A criterion is shown to be met where the one-sided limit meets it: ≥ stands for a lower limit, ≤ for an upper one.
The true value should lie on the side that the limit says in 95 % of studies.

`)
	write(w, rows, 3)
	fmt.Fprint(w, `
A one-sided limit is that of the two-sided interval at 90 %. The two sides of it miss unequally: with few parts that
differ in difficulty the lower limit of kappa against the reference misses more often than 5 % (why, see above), the
upper one seldom, so that the two-sided interval of the same studies covers in 98 to 99 %.
`)
}
