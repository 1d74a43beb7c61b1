// Package interval gives confidence intervals for shares of parts, for rates
// over calls that come several to a part, and for coefficients by resampling
// whole parts.
//
// In all of them the part is the sampled unit. A confidence is a fraction, at
// least 0 and below 1: 0.95 for 95 %. Limits are fractions too.
//
// Intervals are two-sided. Each limit of one stands for itself, as a one-sided
// limit, at the higher confidence that [EachSide] turns about: of misses over
// calls on bad parts, KornGraubard(misses, EachSide(0.95)).Upper is the miss
// rate that is not exceeded, at 95 %.
//
// # Errors and panics
//
// A confidence that is no fraction and counts that cannot be, negative or of
// more events than there are calls, are mistakes of the program: every
// function panics on them, in words that name the argument. So check what a
// user may enter. What data can bring about is an error instead: a coefficient
// that is NaN in some resampled study, a single part. No function returns
// NaN.
package interval
