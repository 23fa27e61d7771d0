package units

import (
	"fmt"
	"math"
	"math/big"
	"strconv"
	"strings"
)

// maxDigits bounds the length of a number; no measured quantity comes near it.
const maxDigits = 64

// Parse reads a quantity into the family's base unit. The error says what was found and what would be accepted.
func (f Family) Parse(text string) (float64, error) {
	refused := fmt.Errorf("got %q, want %s", text, f.Want())
	m := quantity.FindStringSubmatch(strings.TrimSpace(text))
	if m == nil {
		return 0, refused
	}
	value, symbol := m[1], m[2]
	if symbol == "" && f.bare && bare.MatchString(value) {
		return ParseNumber(value)
	}
	u, ok := f.unit(symbol)
	if !ok || !number.MatchString(value) {
		return 0, refused
	}
	return scale(value, u)
}

// ParseIn reads a plain decimal number that is in the given unit of the family, into the base unit.
func (f Family) ParseIn(text, symbol string) (float64, error) {
	u, ok := f.unit(symbol)
	if !ok {
		return 0, fmt.Errorf("got unit %q, want %s", symbol, f.Want())
	}
	return scale(text, u)
}

// ParseNumber reads a plain decimal number: no other base, no underscores, no infinity.
func ParseNumber(text string) (float64, error) { return scale(text, unit{"", 1, 1, 0}) }

// scale is text·num/den·10^exp, rounded once. What is not zero does not become zero, and nothing becomes infinite.
func scale(text string, u unit) (float64, error) {
	if !number.MatchString(text) {
		return 0, fmt.Errorf("got %q, want a decimal number such as 12.5", text)
	}
	if len(text) > maxDigits {
		return 0, fmt.Errorf("got a number of %d characters, want at most %d", len(text), maxDigits)
	}
	r, ok := new(big.Rat).SetString(text)
	if !ok {
		panic("units: internal error: number " + strconv.Quote(text))
	}
	v, _ := r.Mul(r, ratio(u)).Float64()
	if math.IsInf(v, 0) || (v == 0) != (r.Sign() == 0) {
		return 0, fmt.Errorf("got %q, want a number within the range of a double", text)
	}
	return v, nil
}

// ratio is what one of the unit is in the base unit.
func ratio(u unit) *big.Rat {
	r := big.NewRat(u.num, u.den)
	ten := new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(u.exp, -u.exp))), nil)
	if u.exp < 0 {
		return r.Quo(r, new(big.Rat).SetInt(ten))
	}
	return r.Mul(r, new(big.Rat).SetInt(ten))
}
