package format

import (
	"math"
	"strconv"
	"strings"

	"samecall/signal"
)

// Scale writes values of one characteristic with the digits that their
// spread deserves.
type Scale struct {
	Decimals int
	Unit     string
}

// NewScale gives two digits to the smallest spread, and never fewer decimals
// than one of the limits has. Nil limits are absent.
func NewScale(unit string, limits []*float64, spreads ...float64) Scale {
	s := Scale{Unit: unit}
	for _, l := range limits {
		if l != nil {
			_, after, _ := strings.Cut(strconv.FormatFloat(*l, 'f', -1, 64), ".")
			s.Decimals = max(s.Decimals, len(after))
		}
	}
	for _, spread := range spreads {
		if spread > 0 {
			s.Decimals = max(s.Decimals, 1-int(math.Floor(math.Log10(spread))))
		}
	}
	s.Decimals = min(s.Decimals, 12)
	return s
}

// Value writes a value without its unit.
func (s Scale) Value(x float64) string {
	text := decimal(math.Abs(x), s.Decimals)
	if x < 0 && strings.Trim(text, "0.") != "" {
		return "−" + text
	}
	return text
}

// RoundUp returns the least number that Value writes in full and that is not
// less than x, but for the noise of x's last digits.
func (s Scale) RoundUp(x float64) float64 {
	unit := math.Pow10(s.Decimals)
	return math.Ceil(x*unit-1e-6) / unit
}

// Signed writes a difference of values with its sign.
func (s Scale) Signed(x float64) string {
	text := s.Value(x)
	if !strings.HasPrefix(text, "−") {
		text = "+" + text
	}
	return text
}

// WithUnit puts the unit, if there is one, behind a text.
func (s Scale) WithUnit(text string) string {
	if s.Unit == "" {
		return text
	}
	return text + " " + s.Unit
}

// Estimate writes an estimate and its interval, each number by write. A limit
// that does not exist is left open.
func (s Scale) Estimate(e signal.Estimate, write func(float64) string) string {
	bound := func(has bool, x float64) string {
		if !has {
			return "…"
		}
		return write(x)
	}
	return write(e.Value) + " (" + bound(e.HasLower, e.Lower) + " to " + bound(e.HasUpper, e.Upper) + ")"
}
