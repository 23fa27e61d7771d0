package decision

import (
	"math"
	"math/big"
	"strconv"
	"strings"
)

// decimal is the shortest decimal that reads back to v: the number that people see in the record. Rounding starts from it, so
// that no binary residue decides.
func decimal(v float64) *big.Rat {
	r, ok := new(big.Rat).SetString(strconv.FormatFloat(v, 'e', -1, 64))
	if !ok {
		panic("decision: internal error: not a finite number")
	}
	return r
}

// significant is 10 to the power of the last of n significant digits of v.
func significant(v float64, n int) *big.Rat {
	text := strconv.FormatFloat(math.Abs(v), 'e', -1, 64)
	exp, _ := strconv.Atoi(text[strings.IndexByte(text, 'e')+1:])
	return power10(exp - n + 1)
}

func power10(e int) *big.Rat {
	p := new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(e, -e))), nil)
	if e < 0 {
		return new(big.Rat).SetFrac(big.NewInt(1), p)
	}
	return new(big.Rat).SetInt(p)
}

// roundValue applies a rounding rule exactly: "truncate" towards zero, "half-even", "up" away from zero, or "none".
func roundValue(v float64, rule string, digits int) float64 {
	if rule == "none" || v == 0 {
		return v
	}
	unit := significant(v, digits)
	q := new(big.Rat).Quo(decimal(v), unit)
	whole := new(big.Int).Quo(q.Num(), q.Denom()) // towards zero
	rest := new(big.Rat).Sub(q, new(big.Rat).SetInt(whole))
	sign := int64(rest.Sign())
	rest.Abs(rest)
	switch half := rest.Cmp(big.NewRat(1, 2)); {
	case rule == "up" && sign != 0,
		rule == "half-even" && (half > 0 || half == 0 && whole.Bit(0) == 1):
		whole.Add(whole, big.NewInt(sign))
	}
	out, _ := new(big.Rat).Mul(new(big.Rat).SetInt(whole), unit).Float64()
	return out
}

// Text writes v for people with at most a number of significant digits, rounded half to even, without an exponent from 0.0001 to
// 10^9. A value that has fewer digits is written as it is: 5, not 5.00.
func Text(v float64, digits int) string {
	if v == 0 {
		return "0"
	}
	if short := strconv.FormatFloat(v, 'f', -1, 64); len(strings.Trim(strings.Replace(strings.TrimLeft(short, "-0."), ".", "", 1), "0")) < digits && math.Abs(v) >= 1e-4 && math.Abs(v) < 1e9 {
		return short
	}
	r := roundValue(v, "half-even", digits)
	if a := math.Abs(r); a < 1e-4 || a >= 1e9 {
		return strconv.FormatFloat(r, 'e', digits-1, 64)
	}
	return fixed(r, places(r, digits))
}

// places is the number of decimals that leave digits significant digits of r, none for large numbers.
func places(r float64, digits int) int {
	text := strconv.FormatFloat(math.Abs(r), 'e', -1, 64)
	exp, _ := strconv.Atoi(text[strings.IndexByte(text, 'e')+1:])
	return max(0, digits-1-exp)
}

func fixed(v float64, decimals int) string { return decimal(v).FloatString(decimals) }

// TextWithU writes a value and its uncertainty for people: the uncertainty to two significant digits and the value to the same
// place (GUM 7.2.6).
func TextWithU(v, u float64) (value, uncertainty string) {
	if !(u > 0) {
		return Text(v, 3), Text(u, 2)
	}
	ru := roundValue(u, "half-even", 2)
	unit := significant(ru, 2)
	q := new(big.Rat).Quo(decimal(v), unit)
	rounded := new(big.Rat).Mul(roundHalfEven(q), unit)
	decimals := places(ru, 2)
	return rounded.FloatString(decimals), fixed(ru, decimals)
}

func roundHalfEven(q *big.Rat) *big.Rat {
	whole := new(big.Int).Quo(q.Num(), q.Denom())
	rest := new(big.Rat).Sub(q, new(big.Rat).SetInt(whole))
	sign := int64(rest.Sign())
	if half := rest.Abs(rest).Cmp(big.NewRat(1, 2)); half > 0 || half == 0 && whole.Bit(0) == 1 {
		whole.Add(whole, big.NewInt(sign))
	}
	return new(big.Rat).SetInt(whole)
}
