// Package agreement tells how far the calls of a pass/fail or graded
// inspection agree: each appraiser with itself, appraisers with each other,
// and all with the reference.
//
// The part is the sampled unit throughout: several calls on one part are not
// several parts, and every interval says so. The package computes; it does
// not print and does not read files.
//
// # Errors and panics
//
// What data can bring about comes back as an error: from [New] and the Set
// methods, from [Analyse], from the coefficients of [Counts] and [Table]. A
// figure that a study cannot give is absent and carries its reason, likewise
// an error; there is no NaN to stand for it. Only a part, an appraiser, a trial
// or a [Pairing] that there is none of, given to a method of [Ratings], panics,
// as an index out of range does. Errors count parts, appraisers and trials as
// Ratings does, from 0.
package agreement
