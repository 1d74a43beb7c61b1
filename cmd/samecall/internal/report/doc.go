// Package report says a result in words and tables: for the terminal, for
// programs, for the file.
package report
