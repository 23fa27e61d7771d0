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
	var whole *big.Rat
	switch rule {
	case "truncate":
		whole, _ = truncated(q)
	case "half-even":
		whole = roundHalfEven(q)
	case "up":
		var rest *big.Rat
		whole, rest = truncated(q)
		whole.Add(whole, big.NewRat(int64(rest.Sign()), 1))
	default:
		panic("decision: internal error: rounding " + rule)
	}
	out, _ := whole.Mul(whole, unit).Float64()
	return out
}

// truncated cuts q towards zero and returns what is left, which has the sign of q.
func truncated(q *big.Rat) (whole, rest *big.Rat) {
	whole = new(big.Rat).SetInt(new(big.Int).Quo(q.Num(), q.Denom()))
	return whole, new(big.Rat).Sub(q, whole)
}

func roundHalfEven(q *big.Rat) *big.Rat {
	whole, rest := truncated(q)
	sign := int64(rest.Sign())
	if half := rest.Abs(rest).Cmp(big.NewRat(1, 2)); half > 0 || half == 0 && whole.Num().Bit(0) == 1 {
		whole.Add(whole, big.NewRat(sign, 1))
	}
	return whole
}

// The exact arithmetic of limits: shortest decimals in, the nearest double out.
func mul(a, b float64) (float64, bool) { r := decimal(a); return r.Mul(r, decimal(b)).Float64() }
func add(a, b float64) (float64, bool) { r := decimal(a); return r.Add(r, decimal(b)).Float64() }
func sub(a, b float64) (float64, bool) { r := decimal(a); return r.Sub(r, decimal(b)).Float64() }
