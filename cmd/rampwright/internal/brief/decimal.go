package brief

import (
	"math"
	"strconv"
	"strings"
)

// decimal reads a plain decimal: the number grammar of JSON, such as 12, -0.5
// or 1e-3. The hint says what is wrong when it is not one.
func decimal(text string) (value float64, hint string, ok bool) {
	if !isDecimal(text) {
		return 0, decimalHint(text), false
	}
	value, err := strconv.ParseFloat(text, 64)
	if err != nil {
		return 0, "the number is too large", false
	}
	return value + 0, "", true // + 0 turns -0 into 0
}

// isDecimal reports whether text is -?(0|[1-9][0-9]*)(.[0-9]+)?([eE][+-]?[0-9]+)?
func isDecimal(text string) bool {
	rest := strings.TrimPrefix(text, "-")
	whole := digits(rest)
	if whole == 0 || whole > 1 && rest[0] == '0' {
		return false
	}
	rest = rest[whole:]
	if strings.HasPrefix(rest, ".") {
		fraction := digits(rest[1:])
		if fraction == 0 {
			return false
		}
		rest = rest[1+fraction:]
	}
	if rest != "" && (rest[0] == 'e' || rest[0] == 'E') {
		rest = rest[1:]
		if rest != "" && (rest[0] == '+' || rest[0] == '-') {
			rest = rest[1:]
		}
		exponent := digits(rest)
		return exponent > 0 && exponent == len(rest)
	}
	return rest == ""
}

// digits counts the digits text begins with.
func digits(text string) int {
	n := 0
	for n < len(text) && text[n] >= '0' && text[n] <= '9' {
		n++
	}
	return n
}

// decimalHint says why text is no plain decimal.
func decimalHint(text string) string {
	lower := strings.ToLower(text)
	bare := strings.TrimLeft(lower, "+-")
	switch {
	case strings.HasPrefix(bare, "0x") || strings.HasPrefix(bare, "0o") || strings.HasPrefix(bare, "0b"):
		return "write the number in decimal"
	case strings.Contains(bare, "inf") || bare == ".nan" || bare == "nan":
		return "a number here is finite"
	case bare == "" || !(bare[0] >= '0' && bare[0] <= '9' || bare[0] == '.'):
		return ""
	case strings.HasPrefix(lower, "+"):
		return "leave out the plus sign"
	case strings.Contains(bare, "_"):
		return "leave out the underscores"
	case strings.Contains(bare, ","):
		return "the decimal mark is a point"
	case bare[0] == '.':
		return "write the zero before the point"
	case strings.HasSuffix(bare, "."):
		return "leave out the point at the end"
	case len(bare) > 1 && bare[0] == '0' && digits(bare[1:]) > 0:
		return "leave out the leading zero"
	default:
		return "write the number alone; its unit is in the name of the key"
	}
}

// exactNumber prints the shortest decimal that reads back to v.
func exactNumber(v float64) string {
	if size := math.Abs(v); size != 0 && (size < 1e-6 || size >= 1e17) {
		return strconv.FormatFloat(v, 'e', -1, 64)
	}
	return strconv.FormatFloat(v, 'f', -1, 64)
}

// shortNumber prints v for a message, at most six digits unless it is whole.
func shortNumber(v float64) string {
	if v == math.Trunc(v) && math.Abs(v) < 1<<53 {
		return strconv.FormatFloat(v, 'f', -1, 64)
	}
	return strconv.FormatFloat(v, 'g', 6, 64)
}
