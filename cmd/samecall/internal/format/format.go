// Package format writes the figures of a study as people read them.
package format

import (
	"math"
	"strconv"
	"strings"
	"unicode"

	"samecall/agreement"
	"samecall/agreement/interval"
)

// Percent writes a share in percent. 0 and 100 are written for none and all
// only, never for nearly so. What is not a share of calls may be above 100.
func Percent(share float64) string { return digits(share, 19.95) + " %" }

// Confidence writes a confidence level in percent, with the digits it has.
func Confidence(level float64) string {
	return strconv.FormatFloat(100*level, 'g', 6, 64) + " %"
}

// digits writes a share in percent, with one decimal below the percentage given.
func digits(share, oneDecimal float64) string {
	p := 100 * share
	decimals := func(n int) string {
		scale := math.Pow10(n)
		return strconv.FormatFloat(math.Round(p*scale)/scale, 'f', n, 64)
	}
	switch {
	case p == 0 || share == 1:
		return decimals(0)
	case p < 0.005:
		return "<0.01"
	case p < 0.095:
		return strconv.FormatFloat(p, 'f', 2, 64)
	case p < oneDecimal:
		return decimals(1)
	case share > 1 || p <= 99:
		return decimals(0)
	case 100-p < 0.005: // as near to all as others are to none
		return ">99.99"
	case 100-p < 0.095:
		return strconv.FormatFloat(p, 'f', 2, 64)
	default:
		return decimals(1)
	}
}

// PercentApart returns how to write an estimate of a share and the ends of its
// interval in percent: with as many decimals as tell them apart, six at most.
func PercentApart(value, lower, upper float64) func(share float64) string {
	apart := func(write func(float64) string) bool {
		return (write(value) != write(lower) || value == lower) && (write(value) != write(upper) || value == upper)
	}
	if apart(Percent) {
		return Percent
	}
	const most = 6
	for decimals := 1; ; decimals++ {
		write := func(share float64) string {
			text := strconv.FormatFloat(100*share, 'f', decimals, 64)
			switch x, _ := strconv.ParseFloat(text, 64); {
			case share == 0 || share == 1:
				return Percent(share)
			case x == 0: // none and all are for none and all only
				text = "<" + strconv.FormatFloat(math.Pow10(-decimals), 'f', decimals, 64)
			case x == 100:
				text = ">" + strconv.FormatFloat(100-math.Pow10(-decimals), 'f', decimals, 64)
			}
			return text + " %"
		}
		if decimals == most || apart(write) {
			return write
		}
	}
}

// PercentRange writes the limits of an interval of a share, in percent.
func PercentRange(i interval.Interval) string {
	to, upper := "–", digits(i.Upper, 9.95)
	if upper[0] == '>' { // which would read as an arrow
		to = " to "
	}
	return "(" + digits(i.Lower, 9.95) + to + upper + ")"
}

// Figure writes a kappa: two digits, a true minus, and 1.00 for 1 only.
func Figure(x float64) string {
	if x < 1 && x > 0.99 {
		x = 0.99
	}
	s := strconv.FormatFloat(math.Abs(x), 'f', 2, 64)
	if x < 0 && s != "0.00" {
		s = "−" + s
	}
	return s
}

func FigureRange(i interval.Interval) string {
	to := "–"
	if i.Lower < 0 {
		to = " to "
	}
	return "(" + Figure(i.Lower) + to + Figure(i.Upper) + ")"
}

// Dash stands for a figure that is absent.
const Dash = "–"

// Share writes a share with its interval.
func Share(s agreement.Share) string {
	if s.Absent != nil {
		return Dash
	}
	return Percent(s.Value) + " " + PercentRange(s.Interval)
}

// Kappa writes a coefficient with its interval.
func Kappa(e agreement.Estimate) string {
	switch {
	case e.Absent != nil:
		return Dash
	case e.Unbounded != nil:
		return Figure(e.Value)
	}
	return Figure(e.Value) + " " + FigureRange(e.Interval)
}

// Probability writes a p-value.
func Probability(p float64) string {
	if p < 0.0005 {
		return "< 0.001"
	}
	return strconv.FormatFloat(p, 'f', 3, 64)
}

// Number writes a value of the study as short as it can be read back.
func Number(x float64) string {
	return decimal(x, -1)
}

// Short writes a value with three digits.
func Short(x float64) string {
	if rounded, err := strconv.ParseFloat(strconv.FormatFloat(x, 'g', 3, 64), 64); err == nil {
		x = rounded
	}
	return Number(x)
}

// decimal writes a number with so many decimals, −1 for as many as it has.
// One with more digits than anybody reads is written with a power of ten.
func decimal(x float64, decimals int) string {
	const readable = 20
	s := strconv.FormatFloat(x, 'f', decimals, 64)
	if strings.Trim(s, "-0.") == "" {
		s = strings.TrimPrefix(s, "-")
	}
	if len(s) > readable {
		s = strings.Replace(strconv.FormatFloat(x, 'g', 6, 64), "e+", "e", 1)
	}
	return strings.ReplaceAll(s, "-", "−")
}

// Alike writes values of one kind with the same number of decimals: those of
// the one that needs most.
func Alike(values ...float64) []string {
	decimals := 0
	for _, v := range values {
		_, after, _ := strings.Cut(strconv.FormatFloat(v, 'f', -1, 64), ".")
		decimals = max(decimals, len(after))
	}
	out := make([]string, len(values))
	for i, v := range values {
		out[i] = decimal(v, decimals)
	}
	return out
}

// Count writes a number of things, in groups of three digits.
func Count(n int) string {
	s := strconv.Itoa(n)
	for i := len(s) - 3; i > 0; i -= 3 {
		s = s[:i] + "\u00a0" + s[i:]
	}
	return s
}

// Counted writes a number with its noun: 1 part, 2 parts.
func Counted(n int, noun string) string {
	if n != 1 {
		noun += "s"
	}
	return Count(n) + " " + noun
}

// Plain makes a text from a user's file safe to print on one line: control
// characters, which could move the cursor or hide what stands there, and
// those that turn the direction of what follows, are made visible.
func Plain(s string) string {
	return strings.Map(func(r rune) rune {
		switch {
		case r == '\t' || r == '\n' || r == '\r' || r == '\u2028' || r == '\u2029':
			return ' '
		case unicode.IsControl(r), r >= '\u202a' && r <= '\u202e', r >= '\u2066' && r <= '\u2069':
			return unicode.ReplacementChar
		}
		return r
	}, s)
}
