package format

import (
	"math"
	"strconv"
)

// PPM writes a share in parts per million, without the unit: three digits, 0
// for none only.
func PPM(share float64) string {
	x := 1e6 * share
	switch {
	case x == 0:
		return "0"
	case x < 0.001:
		return "< 0.001"
	case x >= 999.5:
		return Count(int(round3(x)))
	}
	x = round3(x)
	decimals := max(0, 2-int(math.Floor(math.Log10(x))))
	return strconv.FormatFloat(x, 'f', min(decimals, 3), 64)
}

// round3 rounds to three digits.
func round3(x float64) float64 {
	unit := math.Pow10(int(math.Floor(math.Log10(x))) - 2)
	return math.Round(x/unit) * unit
}
