package trace

import (
	"math"
	"strconv"
)

// Decimal reads a number as raw files write them: a sign, digits with a point, an exponent; digits on at least one side of the point.
// Infinities, not-a-number, other bases, digit separators, spaces and numbers beyond 64 bits are refused (ok is false).
func Decimal(text string) (value float64, ok bool) {
	rest := sign(text)
	whole := digits(rest)
	rest = rest[whole:]
	fraction := 0
	if rest != "" && rest[0] == '.' {
		fraction = digits(rest[1:])
		rest = rest[1+fraction:]
	}
	if whole+fraction == 0 {
		return 0, false
	}
	if rest != "" && (rest[0] == 'e' || rest[0] == 'E') {
		rest = sign(rest[1:])
		n := digits(rest)
		if n == 0 {
			return 0, false
		}
		rest = rest[n:]
	}
	if rest != "" {
		return 0, false
	}
	value, err := strconv.ParseFloat(text, 64)
	if err != nil || math.IsInf(value, 0) {
		return 0, false
	}
	return value, true
}

// sign drops a leading sign.
func sign(s string) string {
	if s != "" && (s[0] == '+' || s[0] == '-') {
		return s[1:]
	}
	return s
}

// digits counts the decimal digits that s begins with.
func digits(s string) int {
	n := 0
	for n < len(s) && s[n] >= '0' && s[n] <= '9' {
		n++
	}
	return n
}
