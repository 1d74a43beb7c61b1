// Package study reads a study, calls and settings, from the files that people
// keep, and refuses what is wrong with it in words that say where.
//
// A study is the same whatever file it came in: long or wide, CSV or .xlsx,
// in any order of rows and columns, in any of the encodings that spreadsheets
// write. Parts and appraisers are put in natural order, trials in the order
// of their numbers, so that equal data gives equal results to the byte.
//
// How the reading works, from the file to the Study:
//
//	source.go    which files, their bytes, their SHA-256
//	text.go      encoding, line ends; the text cut into chunks at line ends
//	rows.go      a chunk into rows of fields, directly or through encoding/csv
//	xlsx.go      a sheet into rows of fields
//	header.go    the header into a layout, long or wide
//	builder.go   rows into numbers, one builder for each worker
//	records.go   the calls, packed
//	intern.go    part names into numbers
//	merge.go     what the builders hold into one Study
//	words.go     spellings of calls into categories
//	fill.go      calls into agreement.Ratings; calls given twice
//	reference.go the reference, given or derived
//	check.go     what a study holds and can show
package study
