// Package interval gives confidence intervals for shares of parts, for rates
// over calls that come several to a part, and for coefficients by resampling
// whole parts.
//
// In all of them the part is the sampled unit. A confidence is a fraction,
// 0.95 for 95 %, and a limit is a fraction too.
package interval
