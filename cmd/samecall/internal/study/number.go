package study

import (
	"bytes"
	"errors"
	"math"
	"strconv"
)

// maxNumber is the length of the longest number that makes sense.
const maxNumber = 400

var (
	errNotNumber = errors.New("write the number alone, without unit")
	errThousands = errors.New("write the number without separators of thousands")
	errComma     = errors.New("in a table separated by commas the decimal separator is a point")
	errNoValue   = errors.New("leave the field empty where there is no value")
	errTooLarge  = errors.New("the number is too large (expected at most 1e100 in size)")
	errTooSmall  = errors.New("the number is too small (expected 0, or at least 1e-100 in size)")
	errNotFinite = errors.New("expected a finite number")
)

// smallest and largest are sizes beyond which no number is taken, 0 aside.
const smallest, largest = 1e-100, 1e100

// CheckNumber refuses a number that is not finite or of a size that nothing
// measured has: squares and quotients of such numbers leave what a float64
// can hold.
func CheckNumber(x float64) error {
	switch size := math.Abs(x); {
	case math.IsNaN(x) || math.IsInf(x, 0):
		return errNotFinite
	case size > largest:
		return errTooLarge
	case size > 0 && size < smallest:
		return errTooSmall
	}
	return nil
}

// minus is the sign that a printed number has.
var minus = []byte("−")

// parseNumber reads a finite decimal number; comma says that the decimal
// separator may be a comma.
func parseNumber(b []byte, comma bool) (float64, error) {
	points, commas := 0, 0
	for _, c := range b {
		switch {
		case c == '.':
			points++
		case c == ',':
			commas++
		case c >= '0' && c <= '9', c == '+', c == '-', c == 'e', c == 'E':
		case bytes.Contains(b, minus):
			return parseNumber(bytes.ReplaceAll(b, minus, []byte{'-'}), comma)
		default:
			return 0, errNotNumber
		}
	}
	switch {
	case points+commas > 1 && commas > 0:
		return 0, errThousands
	case commas == 1 && !comma:
		return 0, errComma
	case commas == 1:
		b = bytes.Replace(b, []byte{','}, []byte{'.'}, 1)
	}
	x, err := strconv.ParseFloat(string(b), 64)
	if math.IsInf(x, 0) {
		return 0, errTooLarge
	}
	if err != nil {
		return 0, errNotNumber
	}
	return x + 0, CheckNumber(x) // never −0
}

// wholeNumber reads a trial number from 1 on. A spreadsheet or a data frame
// may have written 1 as 1.0.
func wholeNumber(b []byte) (int, bool) {
	if len(b) == 1 && b[0] > '0' && b[0] <= '9' {
		return int(b[0] - '0'), true
	}
	digits, rest, hasPoint := bytes.Cut(b, []byte{'.'})
	if hasPoint && (len(rest) == 0 || len(bytes.Trim(rest, "0")) > 0) {
		return 0, false
	}
	n := 0
	for _, c := range digits {
		if c < '0' || c > '9' || n > maxTrial {
			return 0, false
		}
		n = 10*n + int(c-'0')
	}
	return n, n >= 1 && n <= maxTrial
}
