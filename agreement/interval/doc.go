// Package interval gives confidence intervals for shares of parts, for rates
// over calls that come several to a part, and for coefficients by resampling
// whole parts.
//
// In all of them the part is the sampled unit. A confidence is a fraction
// between 0 and 1, both excluded: 0.95 for 95 %. Limits are fractions too.
// Counts are not negative, and no count of events is above what it is a count
// of. The functions take that as given and do not check it: check what a user
// may enter.
package interval
