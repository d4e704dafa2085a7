package report

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

const (
	digits      = 5 // significant digits of a number in text
	fixedDigits = 6 // at most, in a column of fixed decimals
)

// none stands for a missing value in a table.
const none = "-"

// noise is the size below which a number is shown as zero: the exact routes
// place points and close balances within it.
const noise = 1e-9

// residue is what a search leaves of a value at the end of a range that starts at
// zero.
const residue = 1e-12

// significant writes a number with the digits of text, fewer where leading zeros
// take their place.
func significant(v float64) string {
	size := math.Abs(v)
	switch {
	case math.IsNaN(v):
		return none
	case math.IsInf(v, 0):
		return fmt.Sprint(v)
	case size < noise:
		return "0"
	case size < 1e-3:
		return shortExponent(strconv.FormatFloat(v, 'e', digits-2, 64))
	case size >= 1e6:
		return shortExponent(strconv.FormatFloat(v, 'e', digits-1, 64))
	}
	return strconv.FormatFloat(v, 'f', min(digits, decimals(size)), 64)
}

// decimals is how many decimals show size with the digits of text.
func decimals(size float64) int {
	text := strconv.FormatFloat(size, 'e', digits-1, 64) // rounds before it counts
	exponent, _ := strconv.Atoi(text[strings.IndexByte(text, 'e')+1:])
	return max(0, digits-1-exponent)
}

// shortExponent turns 1.5e+07 into 1.5e7.
func shortExponent(text string) string {
	mantissa, exponent, found := strings.Cut(text, "e")
	if !found {
		return text
	}
	n, _ := strconv.Atoi(exponent)
	return fmt.Sprintf("%se%d", mantissa, n)
}

// fixed writes numbers of one column with the same decimals: as many as asked, or
// fewer so that the largest has at most fixedDigits.
func fixed(values []float64, asked int) []string {
	largest := 1.0
	for _, v := range values {
		if finite(v) {
			largest = math.Max(largest, math.Abs(v))
		}
	}
	cells := make([]string, len(values))
	for i, v := range values {
		if cells[i] = none; finite(v) {
			cells[i] = unsigned(strconv.FormatFloat(v, 'f', min(asked, decimals(largest)+fixedDigits-digits), 64))
		}
	}
	return cells
}

// unsigned drops the sign of a zero.
func unsigned(text string) string {
	if strings.Trim(text, "-0.") == "" {
		return strings.TrimPrefix(text, "-")
	}
	return text
}

// plain writes a number as a person would state it: few digits, no exponent for
// everyday sizes, zero for what a search leaves of it.
func plain(v float64) string {
	if math.Abs(v) < residue {
		return "0"
	}
	return shortExponent(strconv.FormatFloat(v, 'g', fixedDigits, 64))
}

// bounds writes the sides of a limit.
func bounds(low, high float64) string {
	switch {
	case math.IsInf(low, -1) && math.IsInf(high, 1):
		return "no bound"
	case math.IsInf(high, 1):
		return ">= " + plain(low)
	case math.IsInf(low, -1):
		return "<= " + plain(high)
	}
	return plain(low) + " .. " + plain(high)
}

// aboutText writes a size with two digits.
func aboutText(v float64) string {
	short := strconv.FormatFloat(v, 'e', 1, 64)
	if v < 1e-6 || v >= 1e6 {
		return shortExponent(short)
	}
	rounded, _ := strconv.ParseFloat(short, 64) // written just above
	return strconv.FormatFloat(rounded, 'f', -1, 64)
}
