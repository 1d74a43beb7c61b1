package figure

import (
	"math"
	"strconv"
	"strings"

	"github.com/jedib0t/go-pretty/v6/text"
)

// textWidth bounds the width of a text from above, without knowing the font.
func textWidth(s string, size float64) float64 {
	const perCell = 0.6 // of the size: Latin letters of a sans-serif are narrower on average
	return float64(text.StringWidthWithoutEscSequences(s)) * perCell * size
}

// shorten cuts a text to a width, an ellipsis at its end.
func shorten(s string, size, width float64) string {
	cells := int(width / (0.6 * size))
	if cells < 1 {
		return ""
	}
	return text.Snip(s, cells, "…")
}

// ticks returns round values within a range, some n of them, and the decimals
// that tell them apart.
func ticks(low, high float64, n int) (at []float64, decimals int) {
	if !(high > low) || n < 1 {
		return nil, 0
	}
	raw := (high - low) / float64(n)
	power := math.Pow(10, math.Floor(math.Log10(raw)))
	step := 10 * power
	for _, m := range []float64{1, 2, 5} {
		if m*power >= raw {
			step = m * power
			break
		}
	}
	decimals = max(0, -int(math.Floor(math.Log10(step)+1e-9)))
	const slack = 1e-9
	for i := math.Ceil(low/step - slack); i*step <= high+slack*step; i++ {
		at = append(at, i*step)
	}
	return at, decimals
}

// fixed writes a number with so many decimals and a true minus.
func fixed(x float64, decimals int) string {
	if x == 0 {
		x = 0 // not −0
	}
	return strings.Replace(strconv.FormatFloat(x, 'f', decimals, 64), "-", "−", 1)
}

// axis maps values to pixels, on a straight line.
type axis struct{ low, high, from, to float64 }

func (a axis) at(x float64) float64 {
	return a.from + (x-a.low)/(a.high-a.low)*(a.to-a.from)
}

// clamp is at for values that may lie beyond the axis.
func (a axis) clamp(x float64) float64 { return a.at(min(max(x, a.low), a.high)) }
