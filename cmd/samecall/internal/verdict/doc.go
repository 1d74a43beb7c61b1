// Package verdict decides whether an inspection is fit for use: it holds each
// figure against its criterion, says how far the data carry the answer, reads
// causes from the pattern of the errors, and names what to do next. Its rules
// are those of docs/verdict.md.
package verdict
