// Package agreement tells how far the calls of a pass/fail or graded
// inspection agree: each appraiser with itself, appraisers with each other,
// and all with the reference.
//
// The part is the sampled unit throughout: several calls on one part are not
// several parts, and every interval says so. The package computes; it does
// not print and does not read files.
package agreement
